import { autocovariance } from '../math/stats.js';

/** What correlated blocks are worth. */

/**
 * How many blocks one independent block is worth: n Var(mean)/variance of a block.
 *   J = 1 + 2 sum over k of (1 - k/n) r_k
 *
 * @param n            Blocks.
 * @param correlations At lags 1, 2, ...
 * @returns J [>= 1]
 */
export function redundancy(n: number, correlations: readonly number[]): number {
  let sum = 1;
  correlations.forEach((r, index) => {
    if (index + 1 < n) sum += 2 * (1 - (index + 1) / n) * r;
  });
  return sum;
}

/**
 * Variance of the mean of blocks whose correlations are known.
 *   v = c J/n,   c = c_0/(1 - J/n)
 * c_0, the mean square about their own mean, is low by v itself, which is given back.
 *
 * @param values       One value a block, in order of time.
 * @param correlations At lags 1, 2, ...
 * @returns v [unit squared]; NaN for nothing.
 */
export function varianceOfMean(values: readonly number[], correlations: readonly number[]): number {
  const share = redundancy(values.length, correlations) / values.length;
  return (autocovariance(values, 0) * share) / Math.max(0.2, 1 - share);
}
