/** Smooth curves through given points. */

/**
 * A curve through points that rises where they rise and falls where they fall: piecewise cubic with slopes limited so
 * that nothing overshoots. Beyond the ends it goes on in a straight line with the end's slope.
 *
 * @param x Arguments, strictly increasing, at least two.
 * @param y Values, as many.
 * @returns The curve; NaN in gives NaN out.
 *
 * [1] F. N. Fritsch, J. Butland, A method for constructing local monotone piecewise cubic interpolants, SIAM J. Sci.
 *     Stat. Comput. 5, 1984, 300-304 (harmonic mean of the neighbouring slopes).
 * @example
 * monotoneCurve([0, 1, 3], [0, 2, 6])(2); // => 4
 */
export function monotoneCurve(x: readonly number[], y: readonly number[]): (at: number) => number {
  if (x.length < 2 || x.length !== y.length) throw new Error(`monotoneCurve: ${x.length} and ${y.length} points`);
  for (let i = 1; i < x.length; i++) {
    if (!(x[i] > x[i - 1])) throw new Error(`monotoneCurve: ${x[i]} after ${x[i - 1]}`);
  }
  const slope = monotoneSlopes(x, y);
  const last = x.length - 1;
  return (at) => {
    if (at <= x[0]) return y[0] + slope[0] * (at - x[0]);
    if (at >= x[last]) return y[last] + slope[last] * (at - x[last]);
    const i = intervalOf(x, at);
    if (i < 0) return NaN;
    const h = x[i + 1] - x[i];
    return hermite((at - x[i]) / h, y[i], y[i + 1], slope[i] * h, slope[i + 1] * h);
  };
}

function monotoneSlopes(x: readonly number[], y: readonly number[]): number[] {
  const chord = x.slice(1).map((right, i) => (y[i + 1] - y[i]) / (right - x[i]));
  const slope = x.map((_, i) => {
    if (i === 0 || i === x.length - 1) return NaN;
    const [left, right] = [chord[i - 1], chord[i]];
    if (left * right <= 0) return 0;
    const [hLeft, hRight] = [x[i] - x[i - 1], x[i + 1] - x[i]];
    const weight = (hLeft + 2 * hRight) / (3 * (hLeft + hRight));
    return (left * right) / (weight * right + (1 - weight) * left);
  });
  const last = x.length - 1;
  slope[0] = endSlope(chord[0], slope[1]);
  slope[last] = endSlope(chord[last - 1], slope[last - 1]);
  return slope;
}

/** End slope of a parabola through the end interval, kept within what monotony allows. */
function endSlope(chord: number, next: number): number {
  if (Number.isNaN(next)) return chord;
  const slope = 1.5 * chord - 0.5 * next;
  if (slope * chord <= 0) return 0;
  return Math.abs(slope) > 3 * Math.abs(chord) ? 3 * chord : slope;
}

/** Cubic on [0, 1] with given end values and end slopes (slopes in units of the interval). */
export function hermite(t: number, y0: number, y1: number, slope0: number, slope1: number): number {
  const s = 1 - t;
  return s * s * ((1 + 2 * t) * y0 + t * slope0) + t * t * ((1 + 2 * s) * y1 - s * slope1);
}

/** Index i with x[i] <= at <= x[i + 1]; -1 for NaN. */
export function intervalOf(x: ArrayLike<number>, at: number): number {
  if (Number.isNaN(at)) return -1;
  let low = 0;
  let high = x.length - 1;
  while (high - low > 1) {
    const middle = (low + high) >> 1;
    if (x[middle] <= at) low = middle;
    else high = middle;
  }
  return low;
}
