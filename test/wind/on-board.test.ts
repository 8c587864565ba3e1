import { describe, expect, it } from 'vitest';
import type { Track } from '../../src/recording/track.js';
import { ASSUMED_LEEWAY, onBoardSource, type Mounting } from '../../src/wind/on-board.js';
import type { WindSource } from '../../src/wind/source.js';

const RAD = Math.PI / 180;

/** A boat of 2.5 m/s on course 45 in a wind of 5 m/s from north, both as vectors (east, north). */
const V = [2.5 * Math.sin(45 * RAD), 2.5 * Math.cos(45 * RAD)] as const;
const APPARENT = [0 - V[0], -5 - V[1]] as const;
const AWS = Math.hypot(...APPARENT);
/** Where the apparent wind comes from. [deg] */
const FROM = (Math.atan2(-APPARENT[0], -APPARENT[1]) / RAD + 360) % 360;

function trackWith(bow: number, heading?: number): Track {
  const n = 30;
  const all = (value: number): Float64Array => new Float64Array(n).fill(value);
  const angle = ((FROM - bow + 540) % 360) - 180;
  const logged = heading === undefined ? {} : { heading: all(heading) };
  const made = { t0: 100, n, x: all(0), y: all(0), vx: all(V[0]), vy: all(V[1]), awa: all(angle), aws: all(AWS) };
  return { ...made, ...logged } as unknown as Track;
}

function meanWind({ sums, n }: WindSource): { direction: number; speed: number } {
  const direction = (Math.atan2(sums.east[n], sums.north[n]) / RAD + 360) % 360;
  return { direction: direction > 180 ? direction - 360 : direction, speed: sums.speed[n] / sums.speeds[n] };
}

describe('apparent wind logged aboard', () => {
  it('becomes the true wind, by the heading or by the course and an assumed leeway', () => {
    // Wind over the port side: the bow is to windward of the course by the leeway.
    for (const track of [trackWith(45 - ASSUMED_LEEWAY, 45 - ASSUMED_LEEWAY), trackWith(45 - ASSUMED_LEEWAY)]) {
      const { direction, speed } = meanWind(onBoardSource(track, 'mast.csv', 0)!);
      expect(direction).toBeCloseTo(0, 6);
      expect(speed).toBeCloseTo(5, 6);
    }
  });

  it('of a coach boat is turned, scaled and trusted as the race file says its sensor is mounted', () => {
    const mounted: Mounting = { accuracyDir: 1, accuracySpeed: 0.01, offset: 6, factor: 1.1 };
    // A motor boat makes no leeway; its vane is mounted 6 degrees to port, so it reads 6 too little.
    const track = trackWith(45 + 6, 45);
    const source = onBoardSource(track, 'coach.csv', -1, mounted)!;
    const { direction, speed } = meanWind(source);
    expect(direction).toBeCloseTo(0, 6);
    expect(speed).toBeCloseTo(5.5, 6);
    expect([source.accuracyDir, source.accuracySpeed]).toEqual([1, 0.01]);
  });

  it('is none without a speed', () => {
    const { aws, ...rest } = trackWith(45);
    expect(aws).toHaveLength(30);
    expect(onBoardSource(rest as Track, 'mast.csv', 0)).toBeNull();
  });
});
