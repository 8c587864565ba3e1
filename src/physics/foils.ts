/**
 * Foils under the hull: lift slope, drag due to lift, and the leeway that a side force asks for.
 */
import { DEG, RAD } from '../math/angles.js';

/**
 * Lift slope of a straight wing of any aspect ratio.
 *
 *     a = 2 pi AR / (2 + sqrt(AR^2 (1 + tan^2 Lambda) + 4))
 *
 * Tends to pi AR/2 for slender wings and to 2 pi for long ones. Attached flow only: below about 12 degrees.
 *
 * @param aspectRatio Effective aspect ratio, > 0.
 * @param sweep       Sweep of the quarter chord. [deg]
 * @returns Slope. [per rad]
 *
 * [1] H. B. Helmbold, Der unverwundene Ellipsenfluegel als tragende Flaeche, Jahrbuch 1942 der Deutschen
 *     Luftfahrtforschung, I 111-113 (second hand).
 */
export function helmboldSlope(aspectRatio: number, sweep = 0): number {
  const tanΛ = Math.tan(RAD * sweep);
  return (2 * Math.PI * aspectRatio) / (2 + Math.sqrt(aspectRatio ** 2 * (1 + tanΛ ** 2) + 4));
}

/**
 * Lift slope of a low aspect ratio control surface, with the measured lift-curve efficiency of 0.9.
 *
 *     a = 0.9 x 2 pi AR / (1.8 + cos Lambda sqrt(AR^2 / cos^4 Lambda + 4))
 *
 * @param aspectRatio Effective aspect ratio; twice the geometric one for a foil closed by the hull. 0.5 to 6 measured.
 * @param sweep       Sweep of the quarter chord. [deg]
 * @returns Slope. [per rad]
 *
 * [1] L. F. Whicker, L. F. Fehlner, Free-stream characteristics of a family of low-aspect-ratio, all-movable control
 *     surfaces, David Taylor Model Basin report 933, 1958 (formula from memory).
 */
export function whickerFehlnerSlope(aspectRatio: number, sweep = 0): number {
  const cosΛ = Math.cos(RAD * sweep);
  return (1.8 * Math.PI * aspectRatio) / (1.8 + cosΛ * Math.sqrt(aspectRatio ** 2 / cosΛ ** 4 + 4));
}

/**
 * Lift slope of Prandtl's lifting line for an elliptic wing.
 *
 *     a = 2 pi AR / (AR + 2)
 *
 * @param aspectRatio Effective aspect ratio; too steep by more than 10 % below 4.
 * @returns Slope. [per rad]
 */
export function liftingLineSlope(aspectRatio: number): number {
  return (2 * Math.PI * aspectRatio) / (aspectRatio + 2);
}

/**
 * Effective aspect ratio of a foil under a hull that mirrors it.
 *
 *     AR_e = gap x 2 b^2 / A
 *
 * @param span Span below the hull. [m]
 * @param area Planform area. [m2]
 * @param gap  1 for a foil closed by a wide hull, about 0.9 with a slot or near the surface.
 * @returns Effective aspect ratio.
 */
export function mirroredAspectRatio(span: number, area: number, gap = 1): number {
  return (gap * 2 * span * span) / area;
}

/**
 * Drag due to lift.
 *
 *     D_i = L^2 / (q pi b_e^2),  b_e^2 = AR_e A e
 *
 * @param lift          Force across the flow. [N]
 * @param pressure      Dynamic pressure. [Pa]
 * @param effectiveSpan b_e: for a foil mirrored by the hull sqrt(2 e) times its span. [m]
 * @returns Drag. [N]
 */
export function inducedDrag(lift: number, pressure: number, effectiveSpan: number): number {
  return (lift * lift) / (pressure * Math.PI * effectiveSpan * effectiveSpan);
}

/**
 * Leeway that a side force asks for.
 *
 *     lambda = F / (q A a)
 *
 * Linear: good to a few per cent below about 8 degrees of leeway.
 *
 * @param side     Side force on the foils, positive to windward. [N]
 * @param pressure Dynamic pressure. [Pa]
 * @param slope    Lift slope times area, sum over the foils. [m2 per rad]
 * @returns Leeway, positive to leeward. [deg]
 */
export function leewayOf(side: number, pressure: number, slope: number): number {
  return (DEG * side) / (pressure * slope);
}

/**
 * Leeway at which one foil has its best lift over drag, as a measure of a foil's size.
 *
 *     CL* = sqrt(CD0 pi AR e),   lambda* = CL* / a
 *
 * @param cd0         Profile drag per planform area.
 * @param aspectRatio Effective aspect ratio.
 * @param efficiency  Span efficiency e.
 * @returns Lift coefficient, lift over drag, drag angle [deg] and leeway [deg] there, slope by Helmbold.
 */
export function bestFoilLeeway(
  cd0: number,
  aspectRatio: number,
  efficiency: number,
): { cl: number; liftToDrag: number; angle: number; leeway: number } {
  const cl = Math.sqrt(cd0 * Math.PI * aspectRatio * efficiency);
  const liftToDrag = cl / (2 * cd0);
  const angle = DEG * Math.atan(1 / liftToDrag);
  return { cl, liftToDrag, angle, leeway: (DEG * cl) / helmboldSlope(aspectRatio) };
}

/**
 * Leeway from heel and speed, the rule of thumb of keelboat navigation. It says nothing about a dinghy sailed flat.
 *
 *     lambda = k heel / V^n
 *
 * @param heel     Heel. [deg]
 * @param knots    Speed through the water. [kn]
 * @param constant k of the boat: 8 to 16 in use with n = 2.
 * @param power    n.
 * @returns Leeway, positive to leeward. [deg]
 * @example
 * leewayFromHeel(10, 4, 8); // => 5
 *
 * [1] R. Garrett, The Symmetry of Sailing, 1987, section 3.5.3: 464 sin(heel)/V^2, which is k = 8.1 (second hand).
 */
export function leewayFromHeel(heel: number, knots: number, constant: number, power = 2): number {
  return (constant * heel) / Math.pow(knots, power);
}
