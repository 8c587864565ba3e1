import { describe, expect, it } from 'vitest';
import { sampleStandardDeviation } from 'simple-statistics';
import { circularMean } from '../../src/math/angles.js';
import { quantileOf } from '../../src/math/median.js';
import {
  autocovariance,
  effectiveSampleSize,
  effectiveSampleSizeExact,
  lagOneCorrelation,
  mean,
  standardDeviation,
  variance,
  weightedMean,
} from '../../src/math/stats.js';

/** NIST Statistical Reference Datasets, univariate: Michelso (speed of light, 1000 km/s), in file order. */
const MICHELSON = `
299.85 299.74 299.90 300.07 299.93 299.85 299.95 299.98 299.98 299.88 300.00 299.98 299.93 299.65 299.76 299.81 300.00
300.00 299.96 299.96 299.96 299.94 299.96 299.94 299.88 299.80 299.85 299.88 299.90 299.84 299.83 299.79 299.81 299.88
299.88 299.83 299.80 299.79 299.76 299.80 299.88 299.88 299.88 299.86 299.72 299.72 299.62 299.86 299.97 299.95 299.88
299.91 299.85 299.87 299.84 299.84 299.85 299.84 299.84 299.84 299.89 299.81 299.81 299.82 299.80 299.77 299.76 299.74
299.75 299.76 299.91 299.92 299.89 299.86 299.88 299.72 299.84 299.85 299.85 299.78 299.89 299.84 299.78 299.81 299.76
299.81 299.79 299.81 299.82 299.85 299.87 299.87 299.81 299.74 299.81 299.94 299.95 299.80 299.81 299.87`
  .trim()
  .split(/\s+/)
  .map(Number);

/** The numerical-accuracy sets of the same collection: first value, then low and high in turn. */
function alternating(first: number, low: number, high: number): number[] {
  return [first, ...Array.from({ length: 1000 }, (_, i) => (i % 2 === 0 ? low : high))];
}

describe('mean, spread and lag-1 correlation against NIST StRD', () => {
  it('Michelso', () => {
    expect(MICHELSON).toHaveLength(100);
    expect(mean(MICHELSON)).toBeCloseTo(299.8524, 11);
    expect(standardDeviation(MICHELSON)).toBeCloseTo(0.0790105478190518, 12);
    expect(lagOneCorrelation(MICHELSON)).toBeCloseTo(0.535199668621283, 11);
  });
  it('NumAcc1', () => {
    const values = [10000001, 10000003, 10000002];
    expect(mean(values)).toBe(10000002);
    expect(standardDeviation(values)).toBe(1);
    expect(lagOneCorrelation(values)).toBe(-0.5);
  });
  it.each([
    ['NumAcc2', 1.2, 1.1, 1.3, 12],
    ['NumAcc3', 1000000.2, 1000000.1, 1000000.3, 8],
    ['NumAcc4', 10000000.2, 10000000.1, 10000000.3, 6],
  ])('%s', (_, first, low, high, digits) => {
    const values = alternating(first, low, high);
    expect(mean(values)).toBeCloseTo(first, 8);
    expect(standardDeviation(values)).toBeCloseTo(0.1, digits);
    expect(lagOneCorrelation(values)).toBeCloseTo(-0.999, digits - 2);
  });
  it('agrees with an independent library on the sample standard deviation', () => {
    expect(standardDeviation(MICHELSON)).toBeCloseTo(sampleStandardDeviation(MICHELSON), 12);
  });
  it('says NaN where there is nothing', () => {
    expect(mean([])).toBeNaN();
    expect(variance([1])).toBeNaN();
    expect(autocovariance([1], 1)).toBeNaN();
    expect(weightedMean([1, 2], [0, 0])).toBeNaN();
    expect(lagOneCorrelation([2, 2, 2])).toBeNaN();
  });
});

describe('effective sample size', () => {
  // n (1 - r)/(1 + r) by hand, and the finite sum added up term by term in another language.
  it.each([
    [0.5, 33.333333, 33.783784],
    [0.8, 11.111111, 11.627907],
    [0.9, 5.263158, 5.813937],
    [0.95, 2.564103, 3.180156],
  ])('of 100 values with r = %d', (r, large, exact) => {
    expect(effectiveSampleSize(100, r)).toBeCloseTo(large, 6);
    expect(effectiveSampleSizeExact(100, r)).toBeCloseTo(exact, 5);
  });
});

describe('the quantile we rely on', () => {
  it('is type 7: Hyndman and Fan 1996, linear between order statistics with h = (n - 1) p + 1', () => {
    const ten = [1, 2, 3, 4, 5, 6, 7, 8, 9, 10];
    // Type 7 gives 1.9 and 3.25; types 5, 6 and 8 give 3, 2.75 and 2.9167 for p = 0.25.
    expect(quantileOf(ten, 0.1)).toBeCloseTo(1.9, 12);
    expect(quantileOf(ten, 0.25)).toBeCloseTo(3.25, 12);
  });
});

describe('circular mean against published examples', () => {
  it('the roulette wheel of Mardia and Jupp 2000, example 1.1', () => {
    const { mean: direction, resultant } = circularMean([43, 45, 52, 61, 75, 88, 88, 279, 357]);
    expect(direction).toBeCloseTo(51, 0);
    expect(resultant).toBeCloseTo(0.711, 3);
    // Recomputed to more digits from C = 4.022614, S = 4.976419.
    expect(direction).toBeCloseTo(51.050177, 5);
  });
  it('the example of a widely used numerical library (circmean, degrees)', () => {
    expect(circularMean([355, 5, 2, 359, 10, 350]).mean).toBeCloseTo(0.167690146, 8);
  });
  it('Zar, Biostatistical Analysis, trees leaning (from memory; recomputed)', () => {
    const { mean: direction, resultant } = circularMean([45, 55, 81, 96, 110, 117, 132, 154]);
    expect(direction).toBeCloseTo(98.987752, 5);
    expect(resultant).toBeCloseTo(0.825218, 5);
  });
});
