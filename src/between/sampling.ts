import { lagOneCorrelation, variance, weightedMean } from '../math/stats.js';
import { studentInterval, studentTwoSided } from '../math/student.js';

/** The mean of a short, correlated series and how far it can be trusted. */

export interface SamplingMean {
  readonly value: number;
  /** Standard error of the mean as a sample of a long run; NaN for fewer than two blocks. */
  readonly se: number;
  /** Degrees of freedom: merged blocks less one. */
  readonly freedom: number;
  /** Blocks before and after merging. */
  readonly blocks: number;
  readonly merged: number;
  /** Two-sided p-value against a mean of zero; NaN for fewer than the least number of blocks. */
  readonly p: number;
}

/** Below this many blocks nothing is said. */
export const LEAST_BLOCKS = 5;
/** Neighbouring blocks that correlate more than this are merged. */
export const MERGE_ABOVE = 0.2;
/**
 * A series is trusted no further than this share of the variance independent blocks would have: the estimate of a
 * negative covariance from a dozen blocks can by chance promise far more.
 */
const LEAST_SHARE = 0.25;

/**
 * Mean of blocks in order of time, with the error of a correlated sample.
 *
 * Blocks are merged two, three, ... at a time until neighbours correlate below 0.2 or five would not be left. Then
 *   Var(mean) = s^2/n + 2 (n - 1)/n^2 c_1
 * the variance of the mean of a series whose covariance ends at lag 1 [1]. `signed`: c_1 counts with its sign (a
 * receiver's error telescopes: what one block gains the next gives back); otherwise only where it is positive.
 *
 * @param values  One value a block, in order of time.
 * @param seconds Length of each block. [s]
 * @param signed  Whether a negative covariance lowers the error.
 * @returns The mean, its error and the chance of one as far from zero.
 *
 * [1] G. E. P. Box, G. M. Jenkins, Time Series Analysis, 1976, chapter 2.
 */
export function samplingMean(values: readonly number[], seconds: readonly number[], signed: boolean): SamplingMean {
  const value = weightedMean(values, seconds);
  const series = merge(values, seconds);
  const freedom = series.length - 1;
  const se = Math.sqrt(varianceOfMean(series, signed));
  const p = values.length < LEAST_BLOCKS ? NaN : studentTwoSided(value / se, freedom);
  return { value, se, freedom, blocks: values.length, merged: series.length, p };
}

/** Half-width of an interval at a level. */
export function halfWidth(mean: SamplingMean, level: number): number {
  return mean.se * studentInterval(level, mean.freedom);
}

function merge(values: readonly number[], seconds: readonly number[]): number[] {
  let series = [...values];
  for (
    let count = 2;
    correctedCorrelation(series) > MERGE_ABOVE && Math.floor(values.length / count) >= LEAST_BLOCKS;
    count++
  ) {
    series = groups(values, seconds, Math.floor(values.length / count));
  }
  return series;
}

/** Lag-1 correlation; the estimate is low by about 1/n where nothing correlates, which is given back. */
function correctedCorrelation(series: readonly number[]): number {
  return lagOneCorrelation(series) + 1 / series.length;
}

/** As many groups of neighbours as asked, as equal as can be. */
function groups(values: readonly number[], seconds: readonly number[], count: number): number[] {
  return Array.from({ length: count }, (_, k) => {
    const from = Math.round((k * values.length) / count);
    const to = Math.round(((k + 1) * values.length) / count);
    return weightedMean(values.slice(from, to), seconds.slice(from, to));
  });
}

function varianceOfMean(series: readonly number[], signed: boolean): number {
  const n = series.length;
  if (n < 2) return NaN;
  const s2 = variance(series);
  const c1 = s2 * correctedCorrelation(series);
  const whole = s2 / n + ((2 * (n - 1)) / (n * n)) * (signed ? c1 : Math.max(0, c1));
  return Math.max(whole, (LEAST_SHARE * s2) / n);
}
