/**
 * Arithmetic that gives the same bits on every machine: only +, -, x, / and square roots, which IEEE 754 fixes to the
 * last bit. Library sines may differ in the last place between engines, and a helm that decides would carry that on.
 */

const RADIAN = 0.017453292519943295;

/** Taylor series of the sine, for |x| up to pi/4: the first term left out is below 1e-13. */
function sineSeries(x: number): number {
  const q = x * x;
  return x * (1 - (q / 6) * (1 - (q / 20) * (1 - (q / 42) * (1 - (q / 72) * (1 - q / 110)))));
}

/** The same for the cosine. */
function cosineSeries(x: number): number {
  const q = x * x;
  return 1 - (q / 2) * (1 - (q / 12) * (1 - (q / 30) * (1 - (q / 56) * (1 - (q / 90) * (1 - q / 132)))));
}

/** Sine of an angle. [deg] */
export function sine(angle: number): number {
  const quarter = Math.round(angle / 90);
  const x = (angle - 90 * quarter) * RADIAN;
  const turned = ((quarter % 4) + 4) % 4;
  const value = turned % 2 === 0 ? sineSeries(x) : cosineSeries(x);
  return turned < 2 ? value : -value;
}

/** Cosine of an angle. [deg] */
export const cosine = (angle: number): number => sine(angle + 90);

/** Angle whose tangent is z. [deg], z >= 0. Halved three times, then the series. */
function arcTangent(z: number): number {
  if (z > 1) return 90 - arcTangent(1 / z);
  let x = z;
  for (let i = 0; i < 3; i++) x = x / (1 + Math.sqrt(1 + x * x));
  const q = x * x;
  const series = x * (1 - q * (1 / 3 - q * (1 / 5 - q * (1 / 7 - q * (1 / 9 - q / 11)))));
  return (8 * series) / RADIAN;
}

/** Direction a vector points to, clockwise from north, -180..180. [deg] */
export function bearingOf(east: number, north: number): number {
  if (east === 0 && north === 0) return 0;
  const acute = north === 0 ? 90 : arcTangent(Math.abs(east / north));
  const half = north >= 0 ? acute : 180 - acute;
  return east >= 0 ? half : -half;
}

/** Length of a vector. */
export const lengthOf = (east: number, north: number): number => Math.sqrt(east * east + north * north);

/** Difference of two directions the short way, -180..180. [deg] */
export function apart(from: number, to: number): number {
  const d = (to - from) % 360;
  return d > 180 ? d - 360 : d < -180 ? d + 360 : d;
}

/** Direction in 0..360. [deg] */
export const compass = (angle: number): number => ((angle % 360) + 360) % 360;

export interface Dice {
  /** Uniform in [0, 1). */
  throw(): number;
  /** About normal, mean 0 and standard deviation 1: twelve uniforms, summed. */
  bell(): number;
}

/** Seeded dice: a 32-bit linear congruence (multiplier of Numerical Recipes, 2nd ed., 7.1; from memory), high bits used. */
export function dice(seed: number): Dice {
  let state = seed >>> 0;
  const once = (): number => {
    state = (Math.imul(state, 1664525) + 1013904223) >>> 0;
    return (state >>> 8) / 16777216;
  };
  const bell = (): number => {
    let sum = -6;
    for (let i = 0; i < 12; i++) sum += once();
    return sum;
  };
  return { throw: once, bell };
}

/** Value of a table at x, straight between its points, flat beyond them. */
export function between(points: readonly (readonly [number, number])[], x: number): number {
  let i = 1;
  while (i < points.length - 1 && x > points[i][0]) i++;
  const [x0, y0] = points[i - 1];
  const [x1, y1] = points[i];
  const f = Math.min(1, Math.max(0, (x - x0) / (x1 - x0)));
  return y0 + (y1 - y0) * f;
}
