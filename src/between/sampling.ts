import { lagOneCorrelation, variance, weightedMean } from '../math/stats.js';
import { varianceOfMean } from './redundancy.js';
import { studentInterval, studentTwoSided } from '../math/student.js';

/** The mean of a short, correlated series and how far it can be trusted. */

export interface SamplingMean {
  readonly value: number;
  /** Standard error of the mean as a sample of a long run; NaN for fewer than two blocks. */
  readonly se: number;
  /** Degrees of freedom: blocks less one, merged ones where the error is taken from them. */
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
 * How the aim of two helms persists: blocks k apart correlate 0.22 x exp(-30 k/120). On invented beats whose helms
 * wander by a degree with memories of 45 to 150 s this keeps false verdicts at 2 to 9 % where 2 % are meant, and what
 * is estimated from each beat alone, at 5 to 15 %.
 */
const PERSISTENCE = Array.from({ length: 20 }, (_, k) => 0.22 * Math.exp((-30 * (k + 1)) / 120));
/** Where the blocks say that their mean is more uncertain than this many times what the persistence makes it, they count. */
const BELIEVED_ABOVE = 2;

/**
 * Mean of blocks in order of time, with the error of a correlated sample.
 *
 * Blocks are merged two, three, ... at a time until neighbours correlate below 0.2 or five would not be left. Then
 *   Var(mean) = s^2/n + 2 (n - 1)/n^2 c_1
 * the variance of the mean of a series whose covariance ends at lag 1 [1]. `signed` (speed made good): c_1 counts with
 * its sign, as a receiver's error telescopes: what one block gains the next gives back. Otherwise (height and speed
 * apart) c_1 counts only where it is positive, and the error is not less than the usual persistence of a helm's aim
 * makes it: from ten or twenty blocks c_1 is known so badly that chance alone would decide.
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
  const own = varianceFromNeighbours(series, signed);
  const usual = varianceOfMean(values, PERSISTENCE);
  const se = Math.sqrt(signed ? own : Math.max(usual, own / BELIEVED_ABOVE));
  const freedom = (signed ? series.length : values.length) - 1;
  const p = values.length < LEAST_BLOCKS ? NaN : studentTwoSided(value / se, freedom);
  return { value, se: freedom < 1 ? NaN : se, freedom, blocks: values.length, merged: series.length, p };
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

function varianceFromNeighbours(series: readonly number[], signed: boolean): number {
  const n = series.length;
  if (n < 2) return NaN;
  const s2 = variance(series);
  const c1 = s2 * correctedCorrelation(series);
  const whole = s2 / n + ((2 * (n - 1)) / (n * n)) * (signed ? c1 : Math.max(0, c1));
  return Math.max(whole, (LEAST_SHARE * s2) / n);
}
