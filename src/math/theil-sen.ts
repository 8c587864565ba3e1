import { mannKendall } from './kendall.js';
import { median } from './median.js';
import { normalUpperQuantile } from './normal.js';

/** Theil and Sen's line: the median of the slopes of all pairs of points. */

export interface TheilSen {
  /** [unit of y per unit of t] */
  readonly slope: number;
  /** Interval of the slope at the level asked for; infinite where so few pairs cannot bear it. */
  readonly low: number;
  readonly high: number;
  /** Median of y less slope x median of t. [unit of y] */
  readonly intercept: number;
  /** Pairs with different t. */
  readonly pairs: number;
}

/**
 * Theil-Sen slope and interval.
 *
 * Without errors: the median of all pairwise slopes [1], and the slopes at ranks M and N + 1 - M, where
 * M = (N - z sd(S))/2 rounded and S is Kendall's sum [2]. With a standard error for each point every pair counts
 * (t_j - t_i)/sqrt(e_i^2 + e_j^2): the weighted median [3], and ranks become shares of the weight.
 *
 * @param t      Times, or any covariate.
 * @param y      Values, as many.
 * @param level  Confidence of the interval. [0..1)
 * @param errors Standard error of each value. [unit of y, > 0]
 * @returns The line; all NaN where no two t differ.
 *
 * [1] H. Theil, A rank-invariant method of linear and polynomial regression analysis, 1950.
 * [2] P. K. Sen, Estimates of the regression coefficient based on Kendall's tau, JASA 63, 1968.
 * [3] G. L. Sievers, Weighted rank statistics for simple linear regression, JASA 73, 1978.
 * @example
 * theilSen([0, 1, 2], [0, 1, 1]).slope; // => 0.5
 */
export function theilSen(
  t: ArrayLike<number>,
  y: ArrayLike<number>,
  level = 0.95,
  errors?: ArrayLike<number>,
): TheilSen {
  const { slopes, weights } = pairwise(t, y, errors);
  const pairs = slopes.length;
  if (pairs === 0) return { slope: NaN, low: NaN, high: NaN, intercept: NaN, pairs };
  const slope = weights ? weightedMedian(slopes, weights) : middleOf(slopes);
  const z = normalUpperQuantile((1 - level) / 2);
  const { low, high } = weights
    ? weightedLimits(slopes, weights, z * Math.sqrt(weightedVariance(t, errors!)))
    : limits(slopes, z * Math.sqrt(mannKendall(t, y).variance));
  return { slope, low, high, intercept: median(y) - slope * median(t), pairs };
}

interface Pairs {
  /** In ascending order. */
  readonly slopes: Float64Array;
  readonly weights: Float64Array | null;
}

function pairwise(t: ArrayLike<number>, y: ArrayLike<number>, errors?: ArrayLike<number>): Pairs {
  const n = t.length;
  const slopes = new Float64Array((n * (n - 1)) / 2);
  const weights = new Float64Array(errors ? slopes.length : 0);
  let k = 0;
  for (let i = 0; i < n; i++) {
    for (let j = i + 1; j < n; j++) {
      const run = t[j] - t[i];
      if (run === 0) continue;
      if (errors) weights[k] = Math.abs(run) / Math.hypot(errors[i], errors[j]);
      slopes[k++] = (y[j] - y[i]) / run;
    }
  }
  if (!errors) return { slopes: slopes.subarray(0, k).sort(), weights: null };
  const order = new Uint32Array(k).map((_, index) => index).sort((a, b) => slopes[a] - slopes[b]);
  return {
    slopes: Float64Array.from(order, (index) => slopes[index]),
    weights: Float64Array.from(order, (index) => weights[index]),
  };
}

function middleOf(sorted: Float64Array): number {
  const half = sorted.length >> 1;
  return sorted.length % 2 === 1 ? sorted[half] : (sorted[half - 1] + sorted[half]) / 2;
}

function limits(sorted: Float64Array, c: number): { low: number; high: number } {
  const rank = Math.round((sorted.length - c) / 2);
  if (!(rank >= 1)) return { low: -Infinity, high: Infinity };
  return { low: sorted[rank - 1], high: sorted[sorted.length - rank] };
}

/** Where half the weight lies below; between two values when it falls between them. */
function weightedMedian(sorted: Float64Array, weights: Float64Array): number {
  const half = sum(weights) / 2;
  let below = 0;
  for (let k = 0; k < sorted.length; k++) {
    below += weights[k];
    if (Math.abs(below - half) <= 1e-12 * half) return (sorted[k] + sorted[Math.min(k + 1, sorted.length - 1)]) / 2;
    if (below > half) return sorted[k];
  }
  return sorted[sorted.length - 1];
}

/**
 * Variance of sum w_ij sgn(t_j - t_i) sgn(y_j - y_i) without trend: signs of two pairs that share a point correlate 1/3.
 *   (sum over i of (sum over j of d_ij)^2 + sum over i < j of d_ij^2)/3,   d_ij = w_ij sgn(t_j - t_i)
 */
function weightedVariance(t: ArrayLike<number>, errors: ArrayLike<number>): number {
  const rows = new Float64Array(t.length);
  let squares = 0;
  for (let i = 0; i < t.length; i++) {
    for (let j = i + 1; j < t.length; j++) {
      const d = (t[j] - t[i]) / Math.hypot(errors[i], errors[j]);
      rows[i] += d;
      rows[j] -= d;
      squares += d * d;
    }
  }
  return (rows.reduce((total, row) => total + row * row, 0) + squares) / 3;
}

/** `c` is z x the standard deviation of the weighted sum of signs. */
function weightedLimits(sorted: Float64Array, weights: Float64Array, c: number): { low: number; high: number } {
  const edge = (sum(weights) - c) / 2;
  if (!(edge > 0)) return { low: -Infinity, high: Infinity };
  return {
    low: atShare(sorted, weights, edge),
    high: -atShare(sorted.map((v) => -v).reverse(), weights.slice().reverse(), edge),
  };
}

function atShare(sorted: Float64Array, weights: Float64Array, edge: number): number {
  let below = 0;
  for (let k = 0; k < sorted.length; k++) {
    below += weights[k];
    if (below > edge) return sorted[k];
  }
  return NaN;
}

function sum(values: Float64Array): number {
  let total = 0;
  for (const value of values) total += value;
  return total;
}
