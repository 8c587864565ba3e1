import { gammaln } from 'simple-statistics';

/** Student's t distribution, by the regularised incomplete beta function. */

/**
 * Regularised incomplete beta function I_x(a, b).
 *
 * Continued fraction [1, 8.17.22], evaluated forwards by Lentz's method; the symmetry I_x(a, b) = 1 - I_{1-x}(b, a)
 * [1, 8.17.4] keeps it where it converges fast. Relative error below 1e-11 for a, b up to 1e4.
 *
 * @param x Upper limit. [0..1]
 * @param a First parameter. [> 0]
 * @param b Second parameter. [> 0]
 * @returns I_x(a, b) [0..1]; NaN for parameters out of range.
 *
 * [1] NIST Digital Library of Mathematical Functions, section 8.17.
 * @example
 * Math.round(1e9 * incompleteBeta(0.5, 2, 3)) / 1e9; // => 0.6875
 */
export function incompleteBeta(x: number, a: number, b: number): number {
  if (!(x >= 0 && x <= 1 && a > 0 && b > 0)) return NaN;
  if (x === 0 || x === 1) return x;
  if (x > (a + 1) / (a + b + 2)) return 1 - incompleteBeta(1 - x, b, a);
  const logFront = a * Math.log(x) + b * Math.log1p(-x) + gammaln(a + b) - gammaln(a) - gammaln(b);
  return Math.exp(logFront) / (a * betaFraction(x, a, b));
}

/** The denominator 1 + d1/(1 + d2/(1 + ...)) of [1, 8.17.22], d as in [1, 8.17.23]. */
function betaFraction(x: number, a: number, b: number): number {
  let value = 1;
  let c = 1;
  let d = 0;
  for (let k = 1; k <= 2000; k++) {
    const m = k >> 1;
    const numerator =
      k % 2 === 0
        ? (m * (b - m) * x) / ((a + 2 * m - 1) * (a + 2 * m))
        : (-(a + m) * (a + b + m) * x) / ((a + 2 * m) * (a + 2 * m + 1));
    d = 1 / nonZero(1 + numerator * d);
    c = nonZero(1 + numerator / c);
    value *= c * d;
    if (Math.abs(c * d - 1) < 1e-15) break;
  }
  return value;
}

function nonZero(value: number): number {
  return Math.abs(value) < 1e-300 ? 1e-300 : value;
}

/**
 * Two-sided p-value of Student's t.                    p = I_{n/(n+t^2)}(n/2, 1/2)
 *
 * @param t       Deviate over its standard error, either sign.
 * @param freedom Degrees of freedom. [> 0]
 * @returns Chance of one at least as far out [0..1]; NaN where there is no freedom.
 *
 * [1] M. Abramowitz, I. A. Stegun, Handbook of Mathematical Functions, 1964, 26.7.1.
 * @example
 * Math.round(1e9 * studentTwoSided(1, 1)) / 1e9; // => 0.5
 */
export function studentTwoSided(t: number, freedom: number): number {
  if (Number.isNaN(t) || !(freedom > 0)) return NaN;
  return incompleteBeta(freedom / (freedom + t * t), freedom / 2, 0.5);
}

/**
 * Half-width of a two-sided interval in standard errors: the t that is exceeded either way with chance 1 - level.
 *
 * @param level   Confidence. [0..1), 0.95 for a 95 % interval
 * @param freedom Degrees of freedom. [> 0]
 * @returns t [>= 0]; NaN out of range.
 * @example
 * Math.round(1000 * studentInterval(0.95, 10)) / 1000; // => 2.228
 */
export function studentInterval(level: number, freedom: number): number {
  if (!(level >= 0 && level < 1 && freedom > 0)) return NaN;
  let high = 1;
  while (studentTwoSided(high, freedom) > 1 - level) high *= 2;
  let low = 0;
  for (let k = 0; k < 100 && high - low > 1e-13 * high; k++) {
    const middle = (low + high) / 2;
    if (studentTwoSided(middle, freedom) > 1 - level) low = middle;
    else high = middle;
  }
  return (low + high) / 2;
}
