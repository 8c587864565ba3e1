/** Means, spread, and what is left of them when neighbours resemble each other. */

/**
 * Mean in two passes: the second takes out the rounding of the first.
 *
 * @param values Values; NaN makes the mean NaN.
 * @returns Mean [unit of the values]; NaN when there is nothing.
 * @example
 * mean([1, 2, 6]); // => 3
 */
export function mean(values: ArrayLike<number>): number {
  const n = values.length;
  let sum = 0;
  for (let i = 0; i < n; i++) sum += values[i];
  const first = sum / n;
  let rest = 0;
  for (let i = 0; i < n; i++) rest += values[i] - first;
  return first + rest / n;
}

/**
 * Mean with weights.
 *
 * @param values  Values.
 * @param weights Weights, not all zero. [>= 0]
 * @returns Mean [unit of the values]; NaN when the weights sum to zero.
 * @example
 * weightedMean([1, 4], [2, 1]); // => 2
 */
export function weightedMean(values: ArrayLike<number>, weights: ArrayLike<number>): number {
  let sum = 0;
  let total = 0;
  for (let i = 0; i < values.length; i++) {
    sum += weights[i] * values[i];
    total += weights[i];
  }
  return total > 0 ? sum / total : NaN;
}

/**
 * Autocovariance of a series about its mean.        c_k = sum over i of (x_i - m)(x_{i+k} - m) / n
 *
 * @param values Series in order.
 * @param lag    Steps apart. [0, 1, ...]
 * @returns Autocovariance [unit squared], with divisor n; NaN when the series is not longer than the lag.
 *
 * [1] G. E. P. Box, G. M. Jenkins, Time Series Analysis, 1976, chapter 2.
 * @example
 * autocovariance([1, 3, 1, 3], 1); // => -0.75
 */
export function autocovariance(values: ArrayLike<number>, lag: number): number {
  const n = values.length;
  if (n <= lag) return NaN;
  const centre = mean(values);
  let sum = 0;
  for (let i = 0; i + lag < n; i++) sum += (values[i] - centre) * (values[i + lag] - centre);
  return sum / n;
}

/**
 * Variance with divisor n - 1.
 *
 * @param values Values.
 * @returns Variance [unit squared]; NaN for fewer than two.
 * @example
 * variance([1, 3]); // => 2
 */
export function variance(values: ArrayLike<number>): number {
  const n = values.length;
  return n < 2 ? NaN : (autocovariance(values, 0) * n) / (n - 1);
}

/**
 * Standard deviation with divisor n - 1.
 *
 * @param values Values.
 * @returns Standard deviation [unit of the values]; NaN for fewer than two.
 * @example
 * standardDeviation([1, 2, 3]); // => 1
 */
export function standardDeviation(values: ArrayLike<number>): number {
  return Math.sqrt(variance(values));
}

/**
 * Lag-1 autocorrelation.                                        r = c_1 / c_0
 *
 * @param values Series in order.
 * @returns Correlation of neighbours [-1..1], biased low by about (1 + 3 r)/n; NaN for fewer than two or no spread.
 * @example
 * lagOneCorrelation([1, 3, 1, 3]); // => -0.75
 */
export function lagOneCorrelation(values: ArrayLike<number>): number {
  return autocovariance(values, 1) / autocovariance(values, 0);
}

/**
 * How many independent values a series is worth for its mean, if its neighbours correlate as in a first-order
 * autoregression.                                             n' = n (1 - r)/(1 + r)
 *
 * @param n Length of the series.
 * @param r Lag-1 correlation. [-1..1]
 * @returns Effective number of values; more than n when r is negative.
 *
 * [1] G. V. Bayley, J. M. Hammersley, The "effective" number of independent observations in an autocorrelated time
 *     series, Supplement to the Journal of the Royal Statistical Society 8, 1946 (large n).
 * @example
 * effectiveSampleSize(90, 0.8); // => 9.999999999999998
 */
export function effectiveSampleSize(n: number, r: number): number {
  return (n * (1 - r)) / (1 + r);
}

/**
 * The same without the limit of large n.   n' = n / (1 + 2 sum over k of (1 - k/n) r^k),  k = 1 .. n - 1
 *
 * @param n Length of the series.
 * @param r Lag-1 correlation. [-1..1]
 * @returns Effective number of values.
 *
 * [1] Bayley and Hammersley 1946, as above.
 * @example
 * effectiveSampleSizeExact(2, 0.5); // => 1.3333333333333333
 */
export function effectiveSampleSizeExact(n: number, r: number): number {
  let sum = 0;
  let power = 1;
  for (let k = 1; k < n; k++) {
    power *= r;
    sum += (1 - k / n) * power;
  }
  return n / (1 + 2 * sum);
}
