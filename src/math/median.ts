/**
 * Median, NaN skipped.
 *
 * @param values Any order; not changed.
 * @returns Median, the mean of the middle two where the count is even; NaN when there is nothing.
 * @example
 * median([3, 1, 2, 10]); // => 2.5
 */
export function median(values: ArrayLike<number>): number {
  return quantileOf(values, 0.5);
}

/**
 * Quantile by linear interpolation between order statistics (type 7 of Hyndman and Fan), NaN skipped.
 *
 * @param values Any order; not changed.
 * @param p      Probability. [0..1]
 * @returns Quantile; NaN when there is nothing.
 *
 * [1] R. J. Hyndman, Y. Fan, Sample quantiles in statistical packages, The American Statistician 50(4), 1996.
 * @example
 * quantileOf([1, 2, 3, 4, 5], 0.25); // => 2
 */
export function quantileOf(values: ArrayLike<number>, p: number): number {
  const sorted = Float64Array.from(values)
    .filter((value) => !Number.isNaN(value))
    .sort();
  if (sorted.length === 0) return NaN;
  const h = (sorted.length - 1) * p;
  const low = Math.floor(h);
  const high = Math.min(low + 1, sorted.length - 1);
  return sorted[low] + (h - low) * (sorted[high] - sorted[low]);
}

/**
 * Spread that outliers do not move: 1.4826 x the median distance from the median (the standard deviation, if normal).
 *
 * @param values Any order.
 * @returns Robust standard deviation; NaN when there is nothing.
 * @example
 * Math.round(1000 * robustSpread([1, 2, 3, 4, 100])) / 1000; // => 1.483
 */
export function robustSpread(values: ArrayLike<number>): number {
  const centre = median(values);
  return 1.4826 * median(Array.from(values, (value) => Math.abs(value - centre)));
}
