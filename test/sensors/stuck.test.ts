import { describe, expect, it } from 'vitest';
import { createRecording, type Channel, type Recording } from '../../src/recording/recording.js';
import { findFreezes, findStuckWind, runsOf, withoutMasked } from '../../src/sensors/stuck.js';
import { normal } from '../smooth/synthetic.js';

/** Seconds on the clock. */
const clock = (n: number, step = 1) => Float64Array.from({ length: n }, (_, i) => i * step);

/** A slowly wandering value with gusts, rounded to a resolution. */
function wander(n: number, seed: number, mean: number, spread: number, correlation: number, resolution: number) {
  const random = normal(seed);
  const keep = Math.exp(-1 / correlation);
  let value = spread * random();
  return Float64Array.from({ length: n }, () => {
    value = keep * value + spread * Math.sqrt(1 - keep * keep) * random();
    return Math.round((mean + value) / resolution) * resolution;
  });
}

function log(channels: Partial<Record<Channel, Float64Array>>, step = 1): Recording {
  const n = Object.values(channels)[0].length;
  return createRecording({ time: clock(n, step), channels });
}

describe('runsOf', () => {
  it('counts equal readings and steps over missing ones', () => {
    const column = Float64Array.of(1, 1, NaN, 1, 2, NaN, NaN, 3, 3);
    expect([...runsOf(clock(9), column)]).toEqual([
      { first: 0, last: 3, readings: 3, seconds: 3, value: 1 },
      { first: 4, last: 4, readings: 1, seconds: 0, value: 2 },
      { first: 7, last: 8, readings: 2, seconds: 1, value: 3 },
    ]);
  });
});

describe('findStuckWind', () => {
  it.each([1, 2, 3, 4, 5])('finds a vane frozen for ten minutes in mid-race, seed %s', (seed) => {
    const awa = wander(3600, seed, -38, 5, 8, 1);
    const aws = wander(3600, seed + 50, 7, 0.7, 8, 0.1);
    awa.fill(awa[1500], 1500, 2100);
    const { issues, masks } = findStuckWind(log({ awa, aws }), 'mast.csv');
    expect(issues).toMatchObject([{ code: 'wind-stuck', file: 'mast.csv' }]);
    const masked = Array.from(masks.awa!.keys()).filter((i) => masks.awa![i]);
    expect(Math.abs(masked[0] - 1501)).toBeLessThanOrEqual(3);
    expect(Math.abs(masked[masked.length - 1] - 2099)).toBeLessThanOrEqual(3);
    expect(masks.aws).toBeUndefined();
    const cleaned = withoutMasked(log({ awa, aws }), masks);
    expect(cleaned.channels.awa![1800]).toBeNaN();
    expect(cleaned.channels.awa![100]).toBe(awa[100]);
  });

  it('finds cups frozen at a speed, and two freezes in one log', () => {
    const tws = wander(4000, 7, 6, 0.8, 15, 0.1);
    const twd = wander(4000, 8, 215, 6, 15, 1);
    tws.fill(tws[500], 500, 800);
    tws.fill(tws[2500], 2500, 2900);
    const { issues, masks } = findStuckWind(log({ twd, tws }));
    expect(issues.map(({ code }) => code)).toEqual(['wind-stuck']);
    expect(masks.tws!.reduce((sum, m) => sum + m, 0)).toBeGreaterThan(690);
    expect(masks.tws!.reduce((sum, m) => sum + m, 0)).toBeLessThan(710);
  });

  it.each([1, 2, 3, 4, 5, 6])('leaves a steady wind and coarse instruments alone, seed %s', (seed) => {
    // Half a degree and a few centimetres a second of wander, instruments that round to 5 degrees and half a knot.
    const steady = log({
      twd: wander(5400, seed, 215, 1.5, 60, 5),
      tws: wander(5400, seed + 9, 4, 0.15, 60, 0.257),
    });
    expect(findStuckWind(steady).issues).toEqual([]);
    // The same logged ten times a second by an instrument that speaks once a second.
    const held = (column: Float64Array) =>
      Float64Array.from({ length: 10 * column.length }, (_, i) => column[Math.floor(i / 10)]);
    const fast = log(
      { twd: held(wander(900, seed, 215, 5, 10, 1)), tws: held(wander(900, seed, 5, 0.6, 10, 0.1)) },
      0.1,
    );
    expect(findStuckWind(fast).issues).toEqual([]);
  });

  it('leaves a vane that rests in a calm alone', () => {
    const tws = wander(3600, 3, 4, 0.5, 20, 0.1);
    const twd = wander(3600, 4, 100, 8, 20, 1);
    tws.fill(0, 1000, 1600);
    for (let i = 900; i < 1000; i++) tws[i] = Math.round((1000 - i) * 0.4) / 10 / 4;
    for (let i = 1600; i < 1700; i++) tws[i] = Math.round((i - 1600) * 0.4) / 10 / 4;
    twd.fill(twd[1000], 1000, 1600);
    expect(findStuckWind(log({ twd, tws })).issues).toEqual([]);
  });

  it('tells of a channel that never changes, and uses it', () => {
    const tws = wander(1800, 5, 5, 0.5, 10, 0.1);
    const { issues, masks } = findStuckWind(log({ twd: new Float64Array(1800).fill(200), tws }));
    expect(issues.map(({ code }) => code)).toEqual(['wind-stuck']);
    expect(masks).toEqual({});
    // Hand readings every ten minutes are few, and alike is all right.
    expect(findStuckWind(log({ twd: new Float64Array(6).fill(200) }, 600)).issues).toEqual([]);
  });

  it('finds dead cups, and the true wind computed from them', () => {
    const n = 900;
    const awa = wander(n, 6, -50, 4, 10, 0.1);
    const stw = wander(n, 7, 2.6, 0.15, 20, 0.05);
    const aws = new Float64Array(n);
    const derived = findStuckWind(log({ awa, aws, stw, tws: stw.slice(), twd: wander(n, 1, 20, 3, 10, 0.1) }));
    expect(derived.issues.map(({ code }) => code)).toEqual(['wind-dead']);
    expect(Object.keys(derived.masks).sort()).toEqual(['aws', 'twd', 'tws']);
    // A true wind of its own stays.
    const own = findStuckWind(
      log({ awa, aws, stw, tws: wander(n, 2, 7, 0.5, 10, 0.1), twd: wander(n, 1, 20, 3, 10, 0.1) }),
    );
    expect(Object.keys(own.masks)).toEqual(['aws']);
    // In a flat calm the vane rests too.
    expect(findStuckWind(log({ awa: new Float64Array(n).fill(30), aws })).masks).toEqual({});
  });
});

describe('findFreezes', () => {
  it('cries wolf in none of 200 ordinary logs', () => {
    let found = 0;
    for (let seed = 1; seed <= 200; seed++) {
      const resolution = [0.1, 1, 2, 5][seed % 4];
      const column = wander(2000, seed, 200, 3 + (seed % 5), 2 + (seed % 40), resolution);
      found += findFreezes(clock(2000), column).length;
    }
    expect(found).toBe(0);
  });
});
