import { describe, expect, it } from 'vitest';
import { pooledCorrelations } from '../../src/between/fleet-noise.js';
import { redundancy, varianceOfMean } from '../../src/between/redundancy.js';
import { halfWidth, samplingMean } from '../../src/between/sampling.js';
import { variance } from '../../src/math/stats.js';
import { studentInterval } from '../../src/math/student.js';
import { generator, normal } from './two-boats.js';

/** First-order autoregression of unit variance. */
function autoregression(random: () => number, n: number, r: number): number[] {
  let value = normal(random);
  return Array.from({ length: n }, () => {
    const now = value;
    value = r * value + Math.sqrt(1 - r * r) * normal(random);
    return now;
  });
}

const seconds = (n: number): number[] => new Array<number>(n).fill(30);

describe('what correlated blocks are worth', () => {
  it('n/J is the effective sample size of Bayley and Hammersley 1946: 33.783784 and 11.627907 of 100', () => {
    const powers = (r: number): number[] => Array.from({ length: 99 }, (_, k) => r ** (k + 1));
    expect(100 / redundancy(100, powers(0.5))).toBeCloseTo(33.783784, 5);
    expect(100 / redundancy(100, powers(0.8))).toBeCloseTo(11.627907, 5);
    expect(redundancy(10, [])).toBe(1);
  });
  it('the variance of the mean is right on average: 2,000 series of 18 with r = 0.5', () => {
    const random = generator(1);
    const correlations = Array.from({ length: 17 }, (_, k) => 0.5 ** (k + 1));
    let stated = 0;
    let real = 0;
    for (let k = 0; k < 2000; k++) {
      const values = autoregression(random, 18, 0.5);
      stated += varianceOfMean(values, correlations) / 2000;
      real += (values.reduce((sum, value) => sum + value, 0) / 18) ** 2 / 2000;
    }
    // Exactly 1/6.4 by the finite sum; 2,000 draws leave 3 %.
    expect(real).toBeCloseTo(redundancy(18, correlations) / 18, 1);
    expect(Math.abs(stated / real - 1)).toBeLessThan(0.1);
  });
  it('pooled over 30 pairs of 18 blocks, correlations are those that were dealt', () => {
    const random = generator(2);
    const series = Array.from({ length: 30 }, () => autoregression(random, 18, 0.6));
    const [first, second] = pooledCorrelations(series);
    expect(first).toBeCloseTo(0.6, 0.9);
    expect(Math.abs(first - 0.6)).toBeLessThan(0.1);
    expect(Math.abs(second - 0.36)).toBeLessThan(0.15);
  });
  it('pooled over pairs whose blocks give back what they took, there are none', () => {
    const random = generator(3);
    const series = Array.from({ length: 30 }, () => {
      const errors = Array.from({ length: 19 }, () => normal(random));
      return errors.slice(1).map((error, i) => error - errors[i]);
    });
    expect(pooledCorrelations(series)).toEqual([]);
    expect(pooledCorrelations([[1, 2]])).toEqual([]);
  });
});

describe('the mean of blocks', () => {
  it('of independent blocks is the textbook interval, but for the covariance of neighbours', () => {
    const values = [1.2, 0.4, 0.9, 1.6, 0.2, 1.1, 0.8, 1.3];
    const sample = samplingMean(values, seconds(8), true);
    expect(sample.value).toBeCloseTo(0.9375, 12);
    // s^2/n + 2 (n - 1)/n^2 c_1, c_1 = s^2 (r + 1/n), by hand from the deviations.
    const d = values.map((value) => value - 0.9375);
    const r = d.slice(1).reduce((sum, v, i) => sum + v * d[i], 0) / d.reduce((sum, v) => sum + v * v, 0);
    const s2 = variance(values);
    expect(r).toBeLessThan(-0.3);
    expect(sample.se ** 2).toBeCloseTo(Math.max(s2 / 8 + (14 / 64) * s2 * (r + 1 / 8), (0.25 * s2) / 8), 12);
    expect(halfWidth(sample, 0.95)).toBeCloseTo(sample.se * studentInterval(0.95, 7), 12);
  });
  it('without sign is never surer than a helm that persists', () => {
    const values = [1, -1, 1, -1, 1, -1, 1, -1, 1, -1];
    expect(samplingMean(values, seconds(10), false).se ** 2).toBeGreaterThan(variance(values) / 10);
    expect(samplingMean(values, seconds(10), true).se ** 2).toBeLessThan(variance(values) / 10);
  });
  it('merges blocks that resemble their neighbours', () => {
    const ramp = Array.from({ length: 20 }, (_, i) => Math.floor(i / 4) * (i % 8 < 4 ? 1 : -1));
    const sample = samplingMean(ramp, seconds(20), true);
    expect(sample.merged).toBeLessThan(20);
    expect(sample.merged).toBeGreaterThanOrEqual(5);
    expect(sample.freedom).toBe(sample.merged - 1);
  });
  it('of four blocks has a value and an error but no verdict; of one no error; of none nothing', () => {
    const four = samplingMean([1, 2, 3, 4], seconds(4), true);
    expect([four.value, four.p]).toEqual([2.5, NaN]);
    expect(four.se).toBeGreaterThan(0);
    for (const signed of [true, false]) {
      expect(samplingMean([1], [30], signed).se).toBeNaN();
      expect(samplingMean([], [], signed).value).toBeNaN();
    }
  });
});
