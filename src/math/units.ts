/**
 * Units. Inside: seconds, metres, m/s, degrees. These factors are used only where logs and files come in and where
 * results go out.
 */

/** One knot in m/s: an international nautical mile (1852 m) in an hour. */
export const KNOT = 1852 / 3600;
/** One statute mile an hour in m/s (the international mile is 1609.344 m). */
export const MILE_PER_HOUR = 1609.344 / 3600;
/** One kilometre an hour in m/s. */
export const KILOMETRE_PER_HOUR = 1000 / 3600;
/** One international foot in metres. */
export const FOOT = 0.3048;

/**
 * @param knots Speed. [kn]
 * @returns The same speed. [m/s]
 * @example
 * fromKnots(1); // => 0.5144444444444445
 */
export function fromKnots(knots: number): number {
  return knots * KNOT;
}

/**
 * @param speed Speed. [m/s]
 * @returns The same speed. [kn]
 * @example
 * toKnots(0.5144444444444445); // => 1
 */
export function toKnots(speed: number): number {
  return speed / KNOT;
}
