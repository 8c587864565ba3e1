/**
 * The wind triangle in the horizontal plane. The boat's course through the water is the x axis; gamma is the angle from
 * that course to where the true wind comes from, beta the angle from the course to the apparent wind. Both count 0 to
 * 180 and carry no side; leeway is inside them. The wind is relative to the water.
 *
 * [1] F. W. Lanchester, Aerodynamics, 1907, Appendix VIII (the course angle to the apparent wind as a sum of gliding
 *     angles). The triangle itself is plane trigonometry.
 */
import { DEG, RAD } from '../math/angles.js';

export interface ApparentWind {
  /** Course to apparent wind, 0 to 180. [deg] */
  readonly beta: number;
  /** Apparent wind speed. [m/s] */
  readonly aws: number;
}

/**
 * Apparent wind of a boat that moves through the water.
 *
 *     V_A cos beta = V_T cos gamma + V_S        V_A sin beta = V_T sin gamma
 *
 * @param speed Speed through the water. [m/s]
 * @param tws   True wind speed. [m/s]
 * @param gamma Course to true wind. A negative angle (wind from port) counts as its magnitude. [deg]
 * @returns Angle from course to apparent wind, 0 to 180 [deg], and apparent wind speed [m/s].
 * @example
 * apparentWind(5, 10, 180).aws; // => 5
 */
export function apparentWind(speed: number, tws: number, gamma: number): ApparentWind {
  const γ = RAD * Math.abs(gamma);
  const across = tws * Math.sin(γ);
  const along = speed + tws * Math.cos(γ);
  return { beta: DEG * Math.atan2(across, along), aws: Math.hypot(along, across) };
}

/**
 * True wind from the apparent wind of a moving boat: the triangle turned round.
 *
 *     V_T cos gamma = V_A cos beta - V_S        V_T sin gamma = V_A sin beta
 *
 * @param speed Speed through the water. [m/s]
 * @param aws   Apparent wind speed. [m/s]
 * @param beta  Course to apparent wind (masthead angle + leeway). [deg]
 * @returns Course to true wind, 0 to 180 [deg], and true wind speed [m/s].
 * @example
 * trueWind(6, 0, 0).tws; // => 6
 */
export function trueWind(speed: number, aws: number, beta: number): { gamma: number; tws: number } {
  const β = RAD * Math.abs(beta);
  const across = aws * Math.sin(β);
  const along = aws * Math.cos(β) - speed;
  return { gamma: DEG * Math.atan2(across, along), tws: Math.hypot(along, across) };
}

/**
 * Angle from course to apparent wind out of the course angle and the ratio of boat speed to wind speed.
 *
 *     tan beta = sin gamma / (V_S/V_T + cos gamma)
 *
 * @param gamma Course to true wind. [deg]
 * @param ratio Speed through the water over true wind speed.
 * @returns Course to apparent wind, 0 to 180. [deg]
 * @example
 * betaOf(60, 1); // => 30
 */
export function betaOf(gamma: number, ratio: number): number {
  return round12(apparentWind(ratio, 1, gamma).beta);
}

/**
 * Boat speed over wind speed that closes the triangle for two given angles.
 *
 *     V_S/V_T = sin(gamma - beta) / sin beta
 *
 * @param gamma Course to true wind. [deg]
 * @param beta  Course to apparent wind, 0 < beta <= gamma. [deg]
 * @returns Speed ratio; NaN for beta outside (0, 180).
 */
export function speedRatio(gamma: number, beta: number): number {
  if (!(beta > 0 && beta < 180)) return NaN;
  return Math.sin(RAD * (gamma - beta)) / Math.sin(RAD * beta);
}

/**
 * Speed made good to windward.
 *
 * @param speed Speed through the water. [m/s]
 * @param gamma Course to true wind. [deg]
 * @returns V_S cos gamma, negative off the wind. [m/s]
 */
export function vmgOf(speed: number, gamma: number): number {
  return speed * Math.cos(RAD * gamma);
}

/**
 * The most any boat can make good to windward at a given angle to the apparent wind: a bound, not a score (a boat that
 * foots off past its best angle comes nearer to it).
 *
 *     VMG/V_T <= (1 - sin beta) / (2 sin beta)
 *
 * Follows from VMG/V_T = cos gamma sin(gamma - beta) / sin beta, greatest over gamma at gamma = 45 deg + beta/2.
 *
 * @param tws  True wind speed. [m/s]
 * @param beta Course to apparent wind, 0 < beta < 180. [deg]
 * @returns Ceiling of the speed made good. [m/s]; NaN outside the range of beta.
 */
export function ceilingVmg(tws: number, beta: number): number {
  if (!(beta > 0 && beta < 180)) return NaN;
  const sinβ = Math.sin(RAD * beta);
  return (tws * (1 - sinβ)) / (2 * sinβ);
}

/**
 * The same bound downwind: VMG/V_T >= -(1 + sin beta) / (2 sin beta), reached at gamma = 135 deg + beta/2.
 *
 * @param tws  True wind speed. [m/s]
 * @param beta Course to apparent wind, 0 < beta < 180. [deg]
 * @returns Ceiling of the speed made good to leeward, positive. [m/s]
 */
export function ceilingVmgDownwind(tws: number, beta: number): number {
  if (!(beta > 0 && beta < 180)) return NaN;
  const sinβ = Math.sin(RAD * beta);
  return (tws * (1 + sinβ)) / (2 * sinβ);
}

/**
 * Course angle at which the ceiling is reached if beta did not depend on the course. A real boat's drag angle grows
 * with its speed, so its own best course is well closer to the wind than this.
 *
 * @param beta Course to apparent wind. [deg]
 * @returns gamma* = 45 deg + beta/2. [deg]
 * @example
 * ceilingCourse(30); // => 60
 */
export function ceilingCourse(beta: number): number {
  return 45 + beta / 2;
}

/**
 * Apparent wind in the plane square to a heeled mast, the effective-angle convention of heeled sail forces.
 *
 *     tan beta_e = tan beta cos phi        V_e/V_A = sqrt(cos^2 beta + sin^2 beta cos^2 phi)
 *
 * From memory of J. E. Kerwin, A velocity prediction program for ocean racing yachts, MIT report 78-11, 1978.
 *
 * @param beta Horizontal angle to the apparent wind. [deg]
 * @param heel Heel. [deg]
 * @returns Effective angle [deg] and the factor on the apparent wind speed.
 */
export function heeledWind(beta: number, heel: number): { beta: number; factor: number } {
  const across = Math.sin(RAD * beta) * Math.cos(RAD * heel);
  const along = Math.cos(RAD * beta);
  return { beta: DEG * Math.atan2(across, along), factor: Math.hypot(along, across) };
}

/** Takes the last bits of floating point off an angle, far below anything measurable. */
function round12(angle: number): number {
  return Math.round(angle * 1e12) / 1e12;
}
