/** Sources of wind: sampling, height, shifts that arrive late, offsets, several readings. */
import { describe, expect, it } from 'vitest';
import { angleBetween, circularMean } from '../../src/math/angles.js';
import { logLawFactor } from '../../src/physics/air.js';
import { createRecording } from '../../src/recording/recording.js';
import { estimateCarry, estimateLag, estimateOffset, type CourseBlock } from '../../src/wind/align.js';
import { readAt, uncorrected, windAtBoat } from '../../src/wind/field.js';
import { bisectorOf, windFromLooks } from '../../src/wind/from-tracks.js';
import { placeOf, readWind, type WindSource } from '../../src/wind/source.js';
import { handSource, STATION_WINDOW, stationSource } from '../../src/wind/station.js';
import { chanceOf, swing, wander } from '../accuracy/generator/random.js';

const T0 = 1_777_000_000;

/** A station's log of a wind that is a function of time, one row every `every` seconds. */
function station(
  wind: (time: number) => readonly [twd: number, tws: number],
  {
    every = 1,
    n = 3600,
    from = 0,
    place = null,
    factor = 1,
    offset = 0,
    clockS = 0,
  }: {
    every?: number;
    n?: number;
    from?: number;
    place?: WindSource['place'];
    factor?: number;
    offset?: number;
    clockS?: number;
  } = {},
): WindSource {
  const rows = Math.floor(n / every) + 1;
  const time = Float64Array.from({ length: rows }, (_, i) => T0 + from + every * i);
  const twd = Float64Array.from(time, (t) => ((wind(t - T0)[0] % 360) + 360) % 360);
  const tws = Float64Array.from(time, (t) => wind(t - T0)[1]);
  const recording = createRecording({ time, channels: { twd, tws } });
  return stationSource(recording, {
    file: 's.csv',
    place,
    accuracyDir: 2,
    accuracySpeed: 0.02,
    factor,
    offset,
    clockS,
  })!;
}

/** Shifts as they come: never periodic, 8 degrees either way. */
function shifts(seed: number): (time: number) => number {
  const chance = chanceOf(`shifts/${seed}`);
  const main = swing(chance, 180, 420);
  const eddy = wander(chance, 1.5, 20);
  const column = Float64Array.from({ length: 8000 }, () => 8 * main(1) + eddy(1));
  return (time) => column[Math.max(0, Math.min(7999, Math.round(time + 1000)))];
}

describe('a station', () => {
  it.each([1, 5, 10, 30, 60])('with a row every %d s gives every second, across north', (every) => {
    // 350 to 10 degrees in 600 s, 4 to 6 m/s: straight lines, which sampling leaves alone.
    const source = station((t) => [350 + t / 30, 4 + t / 300], { every, n: 600 });
    for (const time of [100, 299, 300, 433]) {
      const { direction, speed } = readWind(source, T0 + time, STATION_WINDOW);
      expect(angleBetween(direction, 350 + time / 30)).toBeLessThan(0.1);
      expect(Math.abs(speed - (4 + time / 300))).toBeLessThan(0.02);
    }
  });

  it('ten times a second is averaged, not thinned', () => {
    const chance = chanceOf('quick');
    const source = station(() => [90 + 10 * chance.normal(), 5], { every: 0.1, n: 600 });
    const means = Array.from({ length: 25 }, (_, k) => readWind(source, T0 + 30 + 20 * k, 20).direction);
    const { mean } = circularMean(means);
    const spread = Math.sqrt(means.reduce((sum, d) => sum + angleBetween(d, mean) ** 2, 0) / means.length);
    // 200 readings of 10 degrees: 0.7 degree; one reading a second kept would leave 10 / sqrt(20) = 2.2.
    expect(spread).toBeLessThan(1.2);
  });

  it('a hole of ten minutes stays one', () => {
    const time = Float64Array.from({ length: 600 }, (_, i) => T0 + i + (i < 300 ? 0 : 600));
    const twd = new Float64Array(600).fill(200);
    const options = { file: 's', place: null, accuracyDir: 2, accuracySpeed: 0.02, factor: 1, offset: 0, clockS: 0 };
    const source = stationSource(createRecording({ time, channels: { twd, tws: twd } }), options)!;
    expect(readWind(source, T0 + 150, 20).direction).toBeCloseTo(200, 9);
    expect(readWind(source, T0 + 600, 20).direction).toBeNaN();
    expect(readWind(source, T0 + 1100, 20).direction).toBeCloseTo(200, 9);
  });

  it('ends where its log ends', () => {
    const source = station(() => [10, 5], { n: 100 });
    expect(readWind(source, T0 - 30, 20).direction).toBeNaN();
    expect(readWind(source, T0 + 130, 20).direction).toBeNaN();
  });

  it('takes its offset and its clock', () => {
    const plain = station((t) => [100 + t / 60, 5]);
    const moved = station((t) => [100 + t / 60, 5], { offset: 3, clockS: 120 });
    const a = readWind(plain, T0 + 1000, 20).direction;
    expect(readWind(moved, T0 + 1120, 20).direction).toBeCloseTo(a + 3, 6);
  });

  it('is brought to the height of the rig by the log law, where its height is known', () => {
    // ln(z / z0) ratio with z0 = 0.0002 m (WMO-No. 8, 2018, part I, 5.A, open sea): 3 m to 2.5 m and 10 m to 2 m.
    expect(logLawFactor(3, 2.5)).toBeCloseTo(Math.log(2.5 / 0.0002) / Math.log(3 / 0.0002), 9);
    expect(logLawFactor(10, 2)).toBeCloseTo(0.8512, 3);
    expect(logLawFactor(2.5, 2.5)).toBe(1);
    const source = station(() => [10, 6], { factor: logLawFactor(10, 2) });
    expect(readWind(source, T0 + 500, 20).speed).toBeCloseTo(6 * 0.8512, 2);
  });
});

describe('a wind by hand', () => {
  const span = { from: T0, to: T0 + 3600 };
  const at = (source: WindSource, time: number) => readWind(source, T0 + time, 1);

  it('of one reading holds for all times', () => {
    const source = handSource([{ time: null, twd: 215, tws: 6 }], { seDir: 10, seSpeed: 1 }, span);
    for (const time of [0, 1800, 3600]) {
      expect(at(source, time).direction).toBeCloseTo(215, 9);
      expect(at(source, time).speed).toBe(6);
    }
    expect(source).toMatchObject({ accuracyDir: 10, accuracySpeed: 1 / 6 });
  });

  it('of several, in any order, goes in straight lines between them, the short way over north', () => {
    const readings = [
      { time: T0 + 2400, twd: 10, tws: 8 },
      { time: T0 + 1200, twd: 350, tws: 6 },
    ];
    const source = handSource(readings, { seDir: 5, seSpeed: 1 }, span);
    expect(angleBetween(at(source, 600).direction, 350)).toBeLessThan(0.01);
    expect(angleBetween(at(source, 1800).direction, 0)).toBeLessThan(0.1);
    expect(at(source, 1800).speed).toBeCloseTo(7, 1);
    expect(angleBetween(at(source, 3500).direction, 10)).toBeLessThan(0.01);
  });
});

describe('wind at a boat', () => {
  const rows = (x: number, y: number, n = 600) => ({
    t0: T0 + 1200,
    n,
    x: new Float64Array(n).fill(x),
    y: new Float64Array(n).fill(y),
  });

  it('is what a placed station had when it passed there: carried along at wind speed', () => {
    // From about north at 5 m/s, turning a degree in ten minutes. 500 m downwind it is 100 s old: 0.17 degree behind.
    const source = station((t) => [t / 600, 5], { place: { x: 0, y: 0 } });
    const downwind = windAtBoat(0, rows(0, -500), [uncorrected(source)]);
    const upwind = windAtBoat(0, rows(0, 500), [uncorrected(source)]);
    const i = 300;
    expect(angleBetween(downwind.twd[i], (1500 - 100) / 600)).toBeLessThan(0.01);
    expect(angleBetween(upwind.twd[i], (1500 + 100) / 600)).toBeLessThan(0.01);
    expect(downwind.distance[i]).toBeCloseTo(500, 6);
  });

  it('is the same time everywhere where shifts are not carried', () => {
    const source = station((t) => [t / 60, 5], { place: { x: 0, y: 0 } });
    const { twd } = windAtBoat(0, rows(0, -500), [uncorrected(source, 0)]);
    expect(angleBetween(twd[300], 1500 / 60)).toBeLessThan(0.05);
  });

  it('is nearer to the nearer of two stations, and the mean half-way', () => {
    const a = uncorrected(
      station(() => [0, 4], { place: { x: -1000, y: 0 } }),
      0,
    );
    const b = uncorrected(
      station(() => [20, 6], { place: { x: 1000, y: 0 } }),
      0,
    );
    const at = (x: number) => windAtBoat(0, rows(x, 0), [a, b]);
    expect(at(0).twd[0]).toBeCloseTo(10, 6);
    expect(at(0).tws[0]).toBeCloseTo(5, 6);
    expect(at(-900).twd[0]).toBeLessThan(2);
    expect(at(900).twd[0]).toBeGreaterThan(18);
  });

  it('is its own where it has one, and the station where that falls silent', () => {
    const fixed = station(() => [0, 4], { place: { x: 0, y: 0 } });
    const own: WindSource = { ...station(() => [30, 7], { from: 1200, n: 200 }), kind: 'on-board', boat: 0 };
    const { twd, tws } = windAtBoat(0, rows(0, 0), [uncorrected(fixed, 0), uncorrected(own)]);
    expect(twd[100]).toBeCloseTo(30, 6);
    expect(tws[100]).toBeCloseTo(7, 6);
    expect(angleBetween(twd[500], 0)).toBeLessThan(1e-6);
    // Another boat has the average of both.
    const other = windAtBoat(1, rows(0, 0), [uncorrected(fixed, 0), uncorrected(own)]);
    expect(other.twd[100]).toBeGreaterThan(0.1);
    expect(other.twd[100]).toBeLessThan(29.9);
  });

  it('of a moving sensor is where the sensor is', () => {
    const n = 3601;
    const xs = Float64Array.from({ length: n }, (_, i) => i);
    const source = { ...station(() => [0, 5]), place: { xs, ys: new Float64Array(n) } };
    expect(placeOf(source, T0 + 700)).toEqual({ x: 700, y: 0 });
    const { distance } = readAt(uncorrected(source), { x: 700, y: 300, time: T0 + 700 });
    expect(distance).toBeCloseTo(300, 6);
  });
});

/** Settled blocks of two boats that steer by the wind they have, which is the station's of `late` seconds before. */
function steered(seed: number, late: number, carried: boolean): { source: WindSource; blocks: CourseBlock[] } {
  const wind = shifts(seed);
  const chance = chanceOf(`steered/${seed}`);
  const blocks: CourseBlock[] = [];
  for (let boat = 0; boat < 2; boat++) {
    let tack: 1 | -1 = boat === 0 ? 1 : -1;
    for (let k = 0; k < 50; k++) {
      if (k % 4 === 3) tack = -tack as 1 | -1;
      const leg = Math.floor(k / 25);
      const y = 40 * (k % 25) - 500;
      const time = 300 + 45 * k + 20 * boat;
      // Wind from the north at 5 m/s; a boat further up has it earlier.
      const have = wind(time - late + (carried ? y / 5 : 0));
      const course = have - tack * (44 + boat + 1.5 * chance.normal());
      blocks.push({ boat, leg, tack, time: T0 + time, seconds: 30, course: (course + 720) % 360, x: 0, y });
    }
  }
  const source = station((t) => [wind(t), 5], { n: 3000 });
  return { source, blocks };
}

describe('lag', () => {
  it.each([-40, 0, 60, 150])('of %d s is found within 10 s, whether shifts are carried or come at once', (late) => {
    for (const carried of [false, true]) {
      for (const seed of [1, 2, 3, 4, 5]) {
        const { source, blocks } = steered(seed, late, carried);
        const found = estimateLag(source, blocks)!;
        expect(Math.abs(found.lag - late), JSON.stringify({ late, carried, seed })).toBeLessThan(10);
        // Within three of its own errors too.
        expect(Math.abs(found.lag - late)).toBeLessThan(3 * found.se);
        if (Math.abs(late) >= 40) expect(found.used).toBe(true);
      }
    }
  });

  it('tells carried shifts from those that come at once', () => {
    for (const seed of [1, 2, 3]) {
      const carried = steered(seed, 60, true);
      expect(estimateLag(carried.source, carried.blocks)!.carry).toBe(1);
      const placed = (source: WindSource): WindSource => ({ ...source, place: { x: 0, y: 0 } });
      const here = steered(seed, 0, true);
      expect(Math.abs(estimateCarry(placed(here.source), here.blocks) - 1)).toBeLessThan(0.1);
      const atOnce = steered(seed, 0, false);
      expect(estimateCarry(placed(atOnce.source), atOnce.blocks)).toBeLessThanOrEqual(0.25);
    }
  });

  it('takes up an error of the wind speed in the share of the travel time', () => {
    for (const seed of [1, 2, 3]) {
      const { source, blocks } = steered(seed, 0, true);
      const placed: WindSource = { ...source, place: { x: 0, y: 0 } };
      const scaled = { ...placed, sums: { ...source.sums, speed: source.sums.speed.map((sum) => 1.1 * sum) } };
      expect(estimateCarry(scaled, blocks) / estimateCarry(placed, blocks)).toBeCloseTo(1.1, 1);
      expect(estimateCarry(scaled, blocks)).toBeGreaterThan(1.03);
    }
  });

  it('is not used in a wind without shifts, and not sought in a dozen seconds of sailing', () => {
    const { blocks } = steered(1, 0, false);
    const steady = station(() => [0, 5], { n: 3000 });
    const found = estimateLag(steady, blocks);
    expect(found?.used ?? false).toBe(false);
    expect(estimateLag(steady, blocks.slice(0, 6))).toBeNull();
  });
});

describe('offset of a direction from the two tacks', () => {
  const legs = (off: number, boats = 2) =>
    Array.from({ length: 2 * boats }, (_, k) => ({ boat: k % boats, starboard: 45 - off, port: 45 + off }));

  it('is the half difference, less what the prior of the mounting holds back', () => {
    const { offset, se } = estimateOffset(legs(6, 6), 2)!;
    expect(offset).toBeGreaterThan(5.5);
    expect(offset).toBeLessThan(6);
    expect(6 - offset).toBeLessThan(3 * se);
    // Worse mounting, weaker prior.
    expect(estimateOffset(legs(6, 6), 10)!.offset).toBeGreaterThan(5.9);
  });

  it('is nought for boats that sail both tacks alike', () => {
    expect(estimateOffset(legs(0), 2)!.offset).toBeCloseTo(0, 12);
    expect(estimateOffset([], 2)).toBeNull();
  });
});

describe('direction from courses', () => {
  it('bisects the courses of a tack', () => {
    expect(bisectorOf(170, 260)).toBeCloseTo(215, 9);
    expect(angleBetween(bisectorOf(310, 40), 355)).toBeLessThan(1e-9);
  });

  it('passes near every look, smooth between, wider away from them', () => {
    const looks = [0, 600, 1200].map((t, k) => ({ time: T0 + t, direction: [350, 0, 10][k], se: 2 }));
    const { source, se } = windFromLooks(looks, { from: T0 - 600, to: T0 + 1800 })!;
    const at = (t: number): number => readWind(source, T0 + t, 1).direction;
    for (const [t, d] of [
      [0, 350],
      [600, 0],
      [1200, 10],
    ]) {
      expect(angleBetween(at(t), d)).toBeLessThan(1);
    }
    expect(angleBetween(at(300), 355)).toBeLessThan(1);
    expect(angleBetween(at(-600), at(0))).toBeLessThan(1);
    const row = (t: number): number => se[t + 600];
    expect(row(600)).toBeLessThan(row(300));
    expect(row(0)).toBeLessThan(row(-600));
    expect(windFromLooks([], { from: T0, to: T0 + 10 })).toBeNull();
  });
});
