import { normalTwoSided } from './normal.js';

/** Mann and Kendall's test: does one quantity rise or fall with another, whatever the shape and the outliers? */

export interface Kendall {
  /** Sum over pairs of weight x sign: positive when y rises with t. */
  readonly s: number;
  /** Variance of `s` if y were dealt to t at random. */
  readonly variance: number;
  /** Deviate, continuity taken off. */
  readonly z: number;
  /** Two-sided p-value: exact where `exact`, else normal. [0..1] */
  readonly p: number;
  readonly exact: boolean;
}

/**
 * Mann-Kendall test, ties allowed, pairs weighted where weights are given.
 *
 *   S = sum over i < j of w_ij sgn(t_j - t_i) sgn(y_j - y_i)
 *
 * The variance is that over all ways to deal the points (value and weight together) to the times [3]; without weights
 * it is the known n(n-1)(2n+5)/18 less the terms of ties [1]. The p-value is exact without ties and weights up to 30
 * points (number of inversions [2]) and by all permutations up to 7; otherwise normal with Z = (S -+ c)/sd, c = half the
 * step of S: 1, or the mean weight.
 *
 * @param t      Times, or any covariate.
 * @param y      Values, as many.
 * @param weight Weight of the pair of points i and j, symmetric, 1 when left out. [> 0]
 * @param cleared How many covariates t and y have been cleared of. Residuals keep n - 1 - cleared directions of n - 1, so
 *   S scatters by the root of (n - 1)/(n - 1 - cleared) more, as a partial correlation does [4]: it is shrunk by that.
 * @returns The test; p is 1 where nothing can be told (fewer than 3 points, no spread).
 *
 * [1] M. G. Kendall, Rank Correlation Methods, 4th ed. 1970, chapters 1, 4 and 5.
 * [2] H. B. Mann, Nonparametric tests against trend, Econometrica 13, 1945.
 * [3] H. E. Daniels, The relation between measures of correlation in the universe of sample permutations, Biometrika
 *     33, 1944 (checked here against enumeration).
 * [4] R. A. Fisher, The distribution of the partial correlation coefficient, Metron 3, 1924 (from memory).
 * @example
 * mannKendall([1, 2, 3, 4], [5, 6, 8, 9]).s; // => 6
 */
export function mannKendall(
  t: ArrayLike<number>,
  y: ArrayLike<number>,
  weight?: (i: number, j: number) => number,
  cleared = 0,
): Kendall {
  const n = t.length;
  if (n < 3) return { s: 0, variance: NaN, z: 0, p: 1, exact: false };
  const sums = pairSums(t, y, weight);
  const variance = permutationVariance(n, sums);
  const s = sums.s * Math.sqrt(Math.max(0, n - 1 - cleared) / (n - 1));
  const step = weight ? sums.meanWeight : 1;
  const z = variance > 0 ? (Math.sign(s) * Math.max(0, Math.abs(s) - step)) / Math.sqrt(variance) : 0;
  const exactP = exactProbability(t, y, s, sums.ties, weight);
  return { s, variance, z, p: Number.isNaN(exactP) ? normalTwoSided(z) : exactP, exact: !Number.isNaN(exactP) };
}

interface PairSums {
  readonly s: number;
  readonly ties: boolean;
  readonly meanWeight: number;
  /** Sums over all ordered pairs of squares, and of squared row sums, for y (weighted) and t. */
  readonly squaresY: number;
  readonly rowsY: number;
  readonly squaresT: number;
  readonly rowsT: number;
}

function pairSums(t: ArrayLike<number>, y: ArrayLike<number>, weight?: (i: number, j: number) => number): PairSums {
  const n = t.length;
  const rowY = new Float64Array(n);
  const rowT = new Float64Array(n);
  const total = { s: 0, weights: 0, squaresY: 0, squaresT: 0 };
  let ties = false;
  for (let i = 0; i < n; i++) {
    for (let j = i + 1; j < n; j++) {
      const w = weight ? weight(i, j) : 1;
      const a = w * Math.sign(y[j] - y[i]);
      const b = Math.sign(t[j] - t[i]);
      if (a === 0 || b === 0) ties = true;
      total.s += a * b;
      total.weights += w;
      total.squaresY += 2 * a * a;
      total.squaresT += 2 * b * b;
      rowY[i] += a;
      rowY[j] -= a;
      rowT[i] += b;
      rowT[j] -= b;
    }
  }
  return {
    s: total.s,
    ties,
    meanWeight: total.weights / ((n * (n - 1)) / 2),
    squaresY: total.squaresY,
    rowsY: sumOfSquares(rowY),
    squaresT: total.squaresT,
    rowsT: sumOfSquares(rowT),
  };
}

function sumOfSquares(values: Float64Array): number {
  let sum = 0;
  for (const value of values) sum += value * value;
  return sum;
}

/** Variance of S over all permutations [3]; a quarter of that of the sum over ordered pairs. */
function permutationVariance(n: number, sums: PairSums): number {
  const common = (sums.rowsY - sums.squaresY) * (sums.rowsT - sums.squaresT);
  const both = (4 * common) / (n * (n - 1) * (n - 2)) + (2 * sums.squaresY * sums.squaresT) / (n * (n - 1));
  return both / 4;
}

function exactProbability(
  t: ArrayLike<number>,
  y: ArrayLike<number>,
  s: number,
  ties: boolean,
  weight?: (i: number, j: number) => number,
): number {
  if (!ties && !weight && t.length <= 30) return inversionProbability(t.length, s);
  return t.length <= 7 ? enumeratedProbability(t, y, s, weight) : NaN;
}

/** Two-sided chance of |S| at least |s|, from the number of permutations of n with each number of inversions. */
function inversionProbability(n: number, s: number): number {
  const pairs = (n * (n - 1)) / 2;
  let chance = new Float64Array(pairs + 1);
  chance[0] = 1;
  for (let k = 2; k <= n; k++) {
    const next = new Float64Array(pairs + 1);
    for (let d = 0; d <= (k * (k - 1)) / 2; d++) {
      for (let e = Math.max(0, d - k + 1); e <= d; e++) next[d] += chance[e] / k;
    }
    chance = next;
  }
  let p = 0;
  for (let d = 0; d <= pairs; d++) if (Math.abs(pairs - 2 * d) >= Math.abs(s)) p += chance[d];
  return Math.min(1, p);
}

/** The same by dealing the points to the times in every order. */
function enumeratedProbability(
  t: ArrayLike<number>,
  y: ArrayLike<number>,
  s: number,
  weight: (i: number, j: number) => number = () => 1,
): number {
  const n = t.length;
  const least = Math.abs(s) * (1 - 1e-12);
  const order: number[] = [];
  const used = new Array<boolean>(n).fill(false);
  let hits = 0;
  let count = 0;
  const place = (sum: number): void => {
    if (order.length === n) {
      count++;
      if (Math.abs(sum) >= least) hits++;
      return;
    }
    const at = order.length;
    for (let item = 0; item < n; item++) {
      if (used[item]) continue;
      let add = 0;
      order.forEach((other, k) => {
        add += weight(other, item) * Math.sign(y[item] - y[other]) * Math.sign(t[at] - t[k]);
      });
      used[item] = true;
      order.push(item);
      place(sum + add);
      order.pop();
      used[item] = false;
    }
  };
  place(0);
  return hits / count;
}
