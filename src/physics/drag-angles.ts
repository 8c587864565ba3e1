/**
 * Drag angles: how far a force leans back from square to the flow. The course angle to the apparent wind is the sum of
 * the two.
 *
 * [1] F. W. Lanchester, Aerodynamics, 1907, Appendix VIII: the least angle between course and apparent wind is the sum
 *     of the gliding angles above and below the water.
 */
import { DEG, RAD } from '../math/angles.js';

/**
 * Drag angle.
 *
 *     eps = atan(D / L)
 *
 * @param drag Force along the flow. [N or as a coefficient]
 * @param lift Force across the flow, in the same unit.
 * @returns Drag angle, 0 to 90 for positive drag and lift. [deg]
 * @example
 * dragAngle(1, 1); // => 45
 */
export function dragAngle(drag: number, lift: number): number {
  return DEG * Math.atan2(drag, lift);
}

/**
 * Course angle to the apparent wind out of the two drag angles.
 *
 *     beta = eps_A + eps_H
 *
 * Exact in steady motion, for horizontal components: the air's force and the water's are equal and opposite.
 *
 * @param aero  Drag angle of everything above the water. [deg]
 * @param hydro Drag angle of everything below. [deg]
 * @returns Angle from course to apparent wind. [deg]
 * @example
 * betaFromDragAngles(12, 16); // => 28
 */
export function betaFromDragAngles(aero: number, hydro: number): number {
  return aero + hydro;
}

/** A wing whose drag is a parabola of its lift: CD = cd0 + factor CL^2. */
export interface ParabolicPolar {
  readonly cd0: number;
  /** Viscous part + 1/(pi AR_e). */
  readonly factor: number;
}

/**
 * The least drag angle of a parabolic polar, and the lift at which it is had.
 *
 *     CL* = sqrt(CD0/K)      tan eps_min = 2 sqrt(CD0 K)
 *
 * @param polar CD0 and K of CD = CD0 + K CL^2, both > 0.
 * @returns Lift coefficient, lift over drag there, and the least drag angle [deg].
 */
export function leastDragAngle(polar: ParabolicPolar): { cl: number; liftToDrag: number; angle: number } {
  const tan = 2 * Math.sqrt(polar.cd0 * polar.factor);
  return { cl: Math.sqrt(polar.cd0 / polar.factor), liftToDrag: 1 / tan, angle: DEG * Math.atan(tan) };
}

/**
 * Force along and across the course out of lift and drag on the apparent wind.
 *
 *     C_x = CL sin beta - CD cos beta       C_y = CL cos beta + CD sin beta
 *
 * @param cl   Lift coefficient.
 * @param cd   Drag coefficient.
 * @param beta Course to apparent wind. [deg]
 * @returns Drive (forward) and side (to leeward) coefficients.
 */
export function driveAndSide(cl: number, cd: number, beta: number): { drive: number; side: number } {
  const sinβ = Math.sin(RAD * beta);
  const cosβ = Math.cos(RAD * beta);
  return { drive: cl * sinβ - cd * cosβ, side: cl * cosβ + cd * sinβ };
}
