import { describe, expect, it } from 'vitest';
import { createRecording } from '../../src/recording/recording.js';
import type { Track } from '../../src/recording/track.js';
import { attachInstruments } from '../../src/smooth/index.js';

/** A track of n seconds from time 100. */
function track(n: number): Track {
  const column = () => new Float64Array(n);
  return {
    name: '',
    t0: 100,
    n,
    x: column(),
    y: column(),
    vx: column(),
    vy: column(),
    sePosition: column(),
    seVelocity: column(),
  };
}

describe('attachInstruments', () => {
  it('averages what falls within a second, angles round the circle', () => {
    const recording = createRecording({
      time: Float64Array.of(99.6, 100, 100.4, 100.5, 101.2, 102),
      channels: {
        heading: Float64Array.of(350, 0, 10, 355, 5, 90),
        awa: Float64Array.of(-40, -50, -30, 179, -179, 20),
        stw: Float64Array.of(1, 2, 3, 4, 6, 5),
      },
    });
    const { heading, awa, stw } = attachInstruments(track(3), recording);
    expect(heading![0]).toBeCloseTo(0, 9);
    expect([0, 360].some((a) => Math.abs(a - heading![1]) < 1e-9)).toBe(true);
    expect(heading![2]).toBe(90);
    expect(awa![0]).toBeCloseTo(-40, 1);
    expect(Math.abs(awa![1])).toBeCloseTo(180, 9);
    expect(Array.from(stw!)).toEqual([2, 5, 5]);
  });

  it('fills seconds between slow readings within 3 s, not beyond and not across a break', () => {
    const recording = createRecording({
      time: Float64Array.of(100, 104, 111, 112, 114),
      channels: { heading: Float64Array.of(350, 10, 40, 50, 70) },
      breaks: [4],
    });
    const { heading } = attachInstruments(track(15), recording);
    expect(Array.from(heading!.slice(0, 5)).map((a) => Math.round(a))).toEqual([350, 355, 0, 5, 10]);
    expect(Array.from(heading!.slice(5, 11)).every(Number.isNaN)).toBe(true);
    expect(Array.from(heading!.slice(11)).map((a) => Math.round(a))).toEqual([40, 50, NaN, 70]);
  });

  it('takes the second logger where the first is silent, its clock moved', () => {
    const own = createRecording({
      time: Float64Array.of(100, 101, 110),
      channels: { aws: Float64Array.of(5, 5, 5) },
    });
    const mast = createRecording({
      time: Float64Array.from({ length: 11 }, (_, i) => 90 + i),
      channels: { aws: new Float64Array(11).fill(7), heel: new Float64Array(11).fill(-12) },
    });
    const both = attachInstruments(attachInstruments(track(11), own), mast, { clockS: 10 });
    expect(Array.from(both.aws!)).toEqual([5, 5, 7, 7, 7, 7, 7, 7, 7, 7, 5]);
    expect(both.heel!.every((v) => v === -12)).toBe(true);
    expect(both.heading).toBeUndefined();
  });
});
