import { mean } from '../math/stats.js';

/** How neighbouring blocks resemble each other, learnt from all pairs of a fleet together. */

/** Sums of products of deviations a lag apart, over all pairs, each series in units of its own spread. */
interface PooledSums {
  readonly products: readonly number[];
  readonly counts: readonly number[];
  readonly length: number;
}

/** Longest lag looked at: 12 blocks, 6 minutes, beyond which a beat holds too few to tell. */
const LONGEST_LAG = 12;

/**
 * Correlations of blocks 1, 2, ... apart, pooled over the pairs of a report, up to the first that is not positive [1].
 *
 * One pair has too few blocks to tell how long its differences persist, and far out in the tails, where the verdicts of
 * many pairs are decided, that matters most. Taking each mean off lowers every covariance by the variance of the mean;
 * that is given back.
 *
 * @param series One series of block values a pair, in order of time.
 * @returns Correlations at lags 1, 2, ...; empty when neighbours do not resemble each other.
 *
 * [1] C. J. Geyer, Practical Markov chain Monte Carlo, Statistical Science 7, 1992 (initial positive sequence).
 */
export function pooledCorrelations(series: readonly (readonly number[])[]): number[] {
  const usable = series.filter((values) => values.length >= 5);
  if (usable.length === 0) return [];
  const sums = poolSums(usable);
  const lags = Math.min(LONGEST_LAG, Math.floor(sums.length / 3));
  let correlations: number[] = [];
  for (let k = 1; k <= lags; k++) {
    const longer = correct(sums, k);
    if (!(longer[k - 1] > 0)) break;
    correlations = longer;
  }
  return correlations;
}

function poolSums(series: readonly (readonly number[])[]): PooledSums {
  const products = new Array<number>(LONGEST_LAG + 1).fill(0);
  const counts = new Array<number>(LONGEST_LAG + 1).fill(0);
  let length = 0;
  for (const values of series) {
    const centre = mean(values);
    const d = values.map((value) => value - centre);
    const spread = mean(d.map((value) => value * value));
    if (!(spread > 0)) continue;
    length += values.length / series.length;
    for (let k = 0; k <= LONGEST_LAG; k++) {
      for (let i = 0; i + k < d.length; i++) {
        products[k] += (d[i] * d[i + k]) / spread;
        counts[k]++;
      }
    }
  }
  return { products, counts, length };
}

/** Correlations up to lag `last`, with the variance of the mean v added to each covariance; v follows from them. */
function correct(sums: PooledSums, last: number): number[] {
  const raw = sums.products.map((sum, k) => (sums.counts[k] > 0 ? sum / sums.counts[k] : 0));
  const n = sums.length;
  let total = raw[0];
  let weight = 1;
  for (let k = 1; k <= last; k++) {
    total += 2 * (1 - k / n) * raw[k];
    weight += 2 * (1 - k / n);
  }
  const v = Math.max(0, total / n / Math.max(0.2, 1 - weight / n));
  return raw.slice(1, last + 1).map((covariance) => (covariance + v) / (raw[0] + v));
}
