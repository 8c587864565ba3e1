/** measure() itself: a perfect analyst has no error, a biased one exactly its bias, and nothing left out goes uncounted. */
import { describe, expect, it } from 'vitest';
import { condition, generateRace } from './generator/index.js';
import { measure, QUANTITIES, type Quantity, type Sample } from './measure.js';
import { oracle } from './oracle.js';

const races = [1, 2, 3, 4].map((seed) =>
  generateRace(condition('oracle', { mastheads: 1, calibration: true, current: 0.4 }), seed),
);

function measured(slips: Parameters<typeof oracle>[1]) {
  let all: ReturnType<typeof measure> | undefined;
  for (const { truth } of races) {
    const { result, series } = oracle(truth, slips);
    all = measure(result, series, truth, all);
  }
  return all!;
}

const largest = (samples: readonly Sample[]): number => Math.max(...samples.map((s) => Math.abs(s.error)));
const mean = (samples: readonly Sample[]): number => samples.reduce((sum, s) => sum + s.error, 0) / samples.length;

describe('a perfect analyst', () => {
  const perfect = measured({ se: 1, sys: 2 });

  it.each(QUANTITIES)('has no error in %s', (quantity) => {
    const samples = perfect.quantities[quantity];
    expect(samples.length).toBeGreaterThanOrEqual(15);
    expect(largest(samples)).toBeLessThan(1e-9);
    expect(perfect.nulls[quantity]).toBe(0);
  });

  it('finds every tack and leg at its time', () => {
    expect(perfect.tacks.missed + perfect.tacks.extra).toBe(0);
    expect(perfect.tacks.hits).toBeGreaterThan(40);
    expect(Math.max(...perfect.tacks.timeErrors.map(Math.abs))).toBeLessThan(1e-3);
    expect(perfect.legs).toMatchObject({ found: 32, missed: 0, extra: 0 });
    expect(Math.max(...perfect.legs.endErrors.map(Math.abs))).toBe(0);
  });

  it('has its stated errors carried along', () => {
    for (const sample of perfect.quantities.gamma) expect(sample).toMatchObject({ se: 1, sys: 2 });
    for (const sample of perfect.quantities['vmg %']) expect(sample.se).toBeCloseTo(1, 9);
  });

  it('knows every offset', () => {
    expect(largest(perfect.corrections['station direction'].samples)).toBeLessThan(1e-9);
    expect(perfect.corrections.compass.samples.length).toBe(4);
    expect(perfect.corrections['lag s'].nulls).toBe(4);
  });
});

describe('a biased analyst', () => {
  it.each([
    ['gamma', { gamma: 1.5 }, 1.5],
    ['beta', { beta: -0.8 }, -0.8],
    ['leeway', { leeway: 2 }, 2],
    ['speed %', { speed: 0.03 }, 3],
    ['vmg %', { speed: -0.02 }, -2],
  ] as const)('is found out in %s', (quantity: Quantity, slips, bias) => {
    expect(mean(measured(slips).quantities[quantity])).toBeCloseTo(bias, 6);
  });

  it('is found out in the direction of the wind', () => {
    expect(mean(measured({ direction: 4 }).direction)).toBeCloseTo(4, 6);
  });

  it('has its late, missing and false tacks counted', () => {
    const late = measured({ late: 4 });
    expect(late.tacks.timeErrors.every((e) => Math.abs(e - 4) < 1e-3)).toBe(true);
    expect(measured({ missTack: true }).tacks.missed).toBe(8);
    expect(measured({ falseTack: true }).tacks.extra).toBe(8);
    const tooLate = measured({ late: 11 });
    expect(tooLate.tacks.missed).toBeGreaterThan(0.9 * late.tacks.hits);
  });

  it('has its late and missing legs counted, and their quantities as nulls', () => {
    const late = measured({ legLate: 9 });
    expect(new Set(late.legs.startErrors)).toEqual(new Set([9]));
    const missing = measured({ missLeg: true });
    expect(missing.legs.missed).toBe(8);
    expect(missing.nulls.gamma).toBe(8);
  });
});
