/** One-dimensional solves: a root between two signs, a maximum between two ends. */

export interface SolveOptions {
  /** Absolute tolerance on the argument. */
  readonly tolerance?: number;
  readonly maxRounds?: number;
}

/**
 * A root of a continuous function between two points of opposite sign: bisection, made fast by secant and inverse
 * quadratic steps where these stay inside.
 *
 * @param f Function. It is called at both ends.
 * @param a One end.
 * @param b Other end; f(a) and f(b) have opposite signs, or one of them is zero.
 * @returns The root; NaN when the ends have the same sign or f gives NaN.
 *
 * [1] R. P. Brent, Algorithms for Minimization without Derivatives, 1973, chapter 4.
 */
export function root(f: (x: number) => number, a: number, b: number, options: SolveOptions = {}): number {
  return rootBetween(f, a, f(a), b, f(b), options);
}

/** As `root`, for ends whose values are known already. */
export function rootBetween(
  f: (x: number) => number,
  a: number,
  fa: number,
  b: number,
  fb: number,
  { tolerance = 1e-12, maxRounds = 100 }: SolveOptions = {},
): number {
  if (fa === 0) return a;
  if (fb === 0) return b;
  if (!(fa * fb < 0)) return NaN;
  let [best, fBest, other, fOther] = [b, fb, a, fa];
  let [before, fBefore] = [a, fa];
  let step = b - a;
  let lastStep = step;
  for (let round = 0; round < maxRounds; round++) {
    if (fBest * fOther > 0) {
      [other, fOther] = [before, fBefore];
      lastStep = step = best - before;
    }
    if (Math.abs(fOther) < Math.abs(fBest)) {
      [before, best, other] = [best, other, best];
      [fBefore, fBest, fOther] = [fBest, fOther, fBest];
    }
    const near = 2 * Number.EPSILON * Math.abs(best) + tolerance / 2;
    const half = (other - best) / 2;
    if (Math.abs(half) <= near || fBest === 0) return best;
    const trial = Math.abs(lastStep) >= near && Math.abs(fBefore) > Math.abs(fBest);
    const jump = trial ? interpolatedStep([before, fBefore], [best, fBest], [other, fOther]) : NaN;
    const limit = Math.min(1.5 * Math.abs(half) - near / 2, Math.abs(lastStep) / 2);
    const good = Math.abs(jump) < limit && jump * half > 0;
    lastStep = good ? step : half;
    step = good ? jump : half;
    [before, fBefore] = [best, fBest];
    best += Math.abs(step) > near ? step : near * Math.sign(half);
    fBest = f(best);
    if (Number.isNaN(fBest)) return NaN;
  }
  return best;
}

type Point = readonly [x: number, f: number];

/** Step from `best` to the zero of the inverse parabola through three points, or of the line where two coincide. */
function interpolatedStep(before: Point, best: Point, other: Point): number {
  const s = best[1] / before[1];
  if (before[0] === other[0]) return (-(other[0] - best[0]) * s) / (1 - s);
  const q = before[1] / other[1];
  const r = best[1] / other[1];
  const up = s * ((other[0] - best[0]) * q * (q - r) - (best[0] - before[0]) * (r - 1));
  return -up / ((q - 1) * (r - 1) * (s - 1));
}

const GOLDEN = (3 - Math.sqrt(5)) / 2;

/**
 * The maximum of a function with one peak between two ends: golden section, made fast by parabolas.
 *
 * The argument of a smooth maximum cannot be found better than about the square root of the rounding error (1e-8
 * relative); the value itself is then exact to rounding. A function with several peaks gives one of them.
 *
 * @param f Function.
 * @param a Lower end.
 * @param b Upper end.
 * @returns Where the maximum is, and its value.
 *
 * [1] R. P. Brent, Algorithms for Minimization without Derivatives, 1973, chapter 5.
 */
export function maximum(
  f: (x: number) => number,
  a: number,
  b: number,
  { tolerance = 1e-8, maxRounds = 100 }: SolveOptions = {},
): { at: number; value: number } {
  let [low, high] = [a, b];
  let x = low + GOLDEN * (high - low);
  let [w, v] = [x, x];
  let fx = f(x);
  let [fw, fv] = [fx, fx];
  let step = 0;
  let lastStep = 0;
  for (let round = 0; round < maxRounds; round++) {
    const middle = (low + high) / 2;
    const near = tolerance / 3 + Math.abs(x) * 1e-10;
    if (Math.abs(x - middle) <= 2 * near - (high - low) / 2) break;
    const jump = Math.abs(lastStep) > near ? parabolaStep([v, fv], [w, fw], [x, fx]) : NaN;
    const good = Math.abs(jump) < Math.abs(lastStep) / 2 && x + jump > low && x + jump < high;
    lastStep = good ? step : x < middle ? high - x : low - x;
    step = good ? jump : GOLDEN * lastStep;
    if (good && (x + step - low < 2 * near || high - x - step < 2 * near)) step = x < middle ? near : -near;
    const u = Math.abs(step) >= near ? x + step : x + (step > 0 ? near : -near);
    const fu = f(u);
    if (fu >= fx) {
      if (u < x) high = x;
      else low = x;
      [v, w, x] = [w, x, u];
      [fv, fw, fx] = [fw, fx, fu];
    } else {
      if (u < x) low = u;
      else high = u;
      if (fu >= fw || w === x) [v, fv, w, fw] = [w, fw, u, fu];
      else if (fu >= fv || v === x || v === w) [v, fv] = [u, fu];
    }
  }
  return { at: x, value: fx };
}

/** Step from the third point to the top of the parabola through all three; NaN where they do not make one. */
function parabolaStep(first: Point, second: Point, best: Point): number {
  const r = (best[0] - second[0]) * (best[1] - first[1]);
  const q = (best[0] - first[0]) * (best[1] - second[1]);
  const up = (best[0] - first[0]) * q - (best[0] - second[0]) * r;
  const down = 2 * (q - r);
  return down === 0 ? NaN : -up / down;
}
