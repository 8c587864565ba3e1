/**
 * Directions and angles. Everything here is in degrees; this is the only file that adds, subtracts or averages
 * directions. NaN in gives NaN out.
 */

export const RAD = Math.PI / 180;
export const DEG = 180 / Math.PI;

/**
 * The same direction in the compass range.
 *
 * @param angle Any angle. [deg]
 * @returns The angle in [0, 360). [deg]
 * @example
 * wrap360(-10); // => 350
 */
export function wrap360(angle: number): number {
  const wrapped = angle - 360 * Math.floor(angle / 360);
  // Rounding can leave a tiny negative angle below 0 or at 360.
  return wrapped >= 360 || wrapped < 0 ? 0 : wrapped;
}

/**
 * The same angle in the signed range.
 *
 * @param angle Any angle. [deg]
 * @returns The angle in [-180, 180). [deg]
 * @example
 * wrap180(270); // => -90
 */
export function wrap180(angle: number): number {
  return wrap360(angle + 180) - 180;
}

/**
 * The turn that takes one direction to another, the short way round.
 *
 * @param from First direction. [deg]
 * @param to   Second direction. [deg]
 * @returns Turn, positive clockwise, in [-180, 180). [deg]
 * @example
 * turn(350, 10); // => 20
 */
export function turn(from: number, to: number): number {
  return wrap180(to - from);
}

/**
 * The angle between two directions, without a sign.
 *
 * @param a First direction. [deg]
 * @param b Second direction. [deg]
 * @returns Angle in [0, 180]. [deg]
 * @example
 * angleBetween(10, 350); // => 20
 */
export function angleBetween(a: number, b: number): number {
  return Math.abs(wrap180(b - a));
}

/**
 * Compass direction of a vector.
 *
 * @param east  East component. [any unit]
 * @param north North component. [the same unit]
 * @returns Direction the vector points to, clockwise from north, in [0, 360). [deg]
 * @example
 * directionOf(1, 0); // => 90
 */
export function directionOf(east: number, north: number): number {
  return wrap360(DEG * Math.atan2(east, north));
}

/** East component of a unit vector that points to `direction` [deg]. */
export function eastOf(direction: number): number {
  return Math.sin(RAD * direction);
}

/** North component of a unit vector that points to `direction` [deg]. */
export function northOf(direction: number): number {
  return Math.cos(RAD * direction);
}

export interface CircularMean {
  /** Mean direction in [0, 360); NaN when there is none (no data, or opposite directions that cancel). [deg] */
  readonly mean: number;
  /** Mean resultant length, 0 (spread all round) to 1 (all alike). */
  readonly resultant: number;
  /** How many directions were counted (NaN skipped). */
  readonly n: number;
}

/**
 * Mean of directions as unit vectors, optionally weighted. NaN entries are skipped.
 *
 * @param directions Directions. [deg]
 * @param weights    Weight of each, 1 when left out.
 * @returns Mean, resultant length and count.
 *
 * [1] K. V. Mardia, P. E. Jupp, Directional Statistics, 2000, section 2.2.
 * @example
 * circularMean([350, 10]).mean; // => 0
 */
export function circularMean(directions: ArrayLike<number>, weights?: ArrayLike<number>): CircularMean {
  let east = 0;
  let north = 0;
  let total = 0;
  let n = 0;
  for (let i = 0; i < directions.length; i++) {
    const direction = directions[i];
    const weight = weights ? weights[i] : 1;
    if (!Number.isFinite(direction) || !Number.isFinite(weight)) continue;
    east += weight * eastOf(direction);
    north += weight * northOf(direction);
    total += weight;
    n++;
  }
  const resultant = total > 0 ? Math.hypot(east, north) / total : NaN;
  const mean = resultant > 1e-9 ? roundTiny(directionOf(east, north)) : NaN;
  return { mean, resultant, n };
}

/**
 * Circular mean over a window around each direction, as circularMean of that window would have it.
 *
 * @param directions Directions. [deg]
 * @param half       Entries either side that count.
 * @returns Mean of each window in [0, 360); NaN where the entry itself is absent. [deg]
 * @example
 * Array.from(runningMean([350, 10, NaN, 20], 1)); // => [0, 0, NaN, 20]
 */
export function runningMean(directions: ArrayLike<number>, half: number): Float64Array {
  const n = directions.length;
  const east = new Float64Array(n);
  const north = new Float64Array(n);
  const there = new Uint8Array(n);
  for (let i = 0; i < n; i++) {
    if (!Number.isFinite(directions[i])) continue;
    east[i] = eastOf(directions[i]);
    north[i] = northOf(directions[i]);
    there[i] = 1;
  }
  const out = new Float64Array(n).fill(NaN);
  for (let i = 0; i < n; i++) {
    if (there[i] === 0) continue;
    const to = Math.min(n, i + half + 1);
    let [x, y, count] = [0, 0, 0];
    for (let k = Math.max(0, i - half); k < to; k++) {
      x += east[k];
      y += north[k];
      count += there[k];
    }
    if (Math.hypot(x, y) > 1e-9 * count) out[i] = roundTiny(directionOf(x, y));
  }
  return out;
}

/** 360 minus a rounding error is north, not 359.999...: keeps means such as {350, 10} at 0. */
function roundTiny(direction: number): number {
  return 360 - direction < 1e-9 || direction < 1e-9 ? 0 : direction;
}

/**
 * Directions as a continuous series: each is moved by whole turns to be nearest to the one before it.
 *
 * @param directions Directions. [deg]
 * @returns A new array without jumps over north; NaN stay NaN and are stepped over. [deg]
 * @example
 * Array.from(unwrap([350, 10, 20])); // => [350, 370, 380]
 */
export function unwrap(directions: ArrayLike<number>): Float64Array {
  const out = new Float64Array(directions.length);
  let last = NaN;
  for (let i = 0; i < directions.length; i++) {
    const direction = directions[i];
    const value = Number.isNaN(last) ? direction : last + turn(last, direction);
    out[i] = value;
    if (!Number.isNaN(value)) last = value;
  }
  return out;
}
