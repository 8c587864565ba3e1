/**
 * The hull: friction, residuary resistance, heel and waves.
 */
import { monotoneCurve } from '../math/interpolate.js';
import { GRAVITY } from './air.js';
import type { BoatSpec } from './boat-spec.js';
import { frictionResistance, type Fluid } from './water.js';

/**
 * Froude number on the waterline length.
 *
 *     Fn = V / sqrt(g L)
 *
 * @param speed  Speed through the water. [m/s]
 * @param length Waterline length. [m]
 * @returns Froude number.
 */
export function froude(speed: number, length: number): number {
  return speed / Math.sqrt(GRAVITY * length);
}

/**
 * Least-squares fit (in the logarithm) to 294 towed points of 21 hulls, Fn 0.125 to 0.45, of which 0.15 and above count;
 * standard deviation of the residual 0.145 (most of it from hull to hull), mean residual below 2 % at every speed.
 */
export const RESIDUARY_FIT = { level: 3.684, power: 3.8867, hump: 1.1991, humpAt: 0.3938, humpWidth: 0.0261 } as const;
/** Froude number about which the growth ends, and how sharply: planing, outside the measurements. Assumed. */
const PLANING = { at: 0.7, sharpness: 8 } as const;
/** Mean L/volume^(1/3) of the fitted hulls. */
const FITTED_SLENDERNESS = 4.78;
/**
 * How residuary resistance per weight falls with slenderness. The measurements span 4.34 to 5.14 only and do not fix
 * it; thin-ship theory gives 3 for pure wave resistance, full hulls less. Assumed: 2.
 */
const SLENDERNESS_POWER = 2;

/**
 * Residuary resistance per displacement weight.
 *
 *     r(Fn) = A (Fn/0.3)^n exp(H / (1 + exp(-(Fn - F0)/w))) (1 + (Fn/0.7)^8)^(-n/8) (s/4.78)^(-2) / 1000
 *
 * Smooth everywhere. A measured fit up to Fn 0.45 for L/volume^(1/3) about 4.8; beyond that, and for a light dinghy
 * (slenderness about 7.5), an extrapolation that has not been checked against towing: a boat's own table is better.
 *
 * @param fn          Froude number.
 * @param slenderness Waterline length over cube root of displaced volume.
 * @returns Resistance over weight.
 *
 * [1] Delft Ship Hydromechanics Laboratory, Yacht Hydrodynamics data set, UCI Machine Learning Repository, CC BY 4.0.
 *     Two of its 22 hulls carry one and the same resistance column; one of them is left out.
 */
export function residuaryPerWeight(fn: number, slenderness: number): number {
  const { level, power, hump, humpAt, humpWidth } = RESIDUARY_FIT;
  if (!(fn > 0)) return 0;
  const rise = hump / (1 + Math.exp(-(fn - humpAt) / humpWidth));
  const end = Math.pow(1 + Math.pow(fn / PLANING.at, PLANING.sharpness), -power / PLANING.sharpness);
  const slender = Math.pow(slenderness / FITTED_SLENDERNESS, -SLENDERNESS_POWER);
  return (level / 1000) * Math.pow(fn / 0.3, power) * Math.exp(rise) * end * slender;
}

/**
 * Waves grow with the wind: 0 in a calm, 1 - 1/e at 8 m/s (a smooth stand-in for a sea state; assumed).
 */
function seaState(tws: number): number {
  return 1 - Math.exp(-((tws / 8) ** 2));
}

/**
 * Resistance of hull and foils upright and without side force, over speed and wind.
 *
 *     R = (R_F (1 + k) + R_R + R_foils) (1 + w s(V_T))   (heel multiplies by 1 + h (heel/30)^2 elsewhere)
 *
 * With other crew aboard than the boat was described with, the wetted area goes with the root of the displacement, the
 * residuary resistance with displacement and slenderness, a table with the displacement.
 *
 * @param boat     Boat.
 * @param crewMass Crew aboard. [kg]
 * @param water    Water.
 * @returns Function of speed and true wind [m/s] giving resistance [N].
 */
export function hullCurve(boat: BoatSpec, crewMass: number, water: Fluid): (speed: number, tws: number) => number {
  const { hull, tuning } = boat;
  const calm = hull.table ? tableCurve(boat, crewMass) : partsCurve(boat, crewMass, water);
  return (speed, tws) => tuning.hullResistance * calm(speed) * (1 + hull.waveDrag * seaState(tws));
}

function displacement(boat: BoatSpec, crewMass: number): number {
  return boat.hull.mass + crewMass;
}

function partsCurve(boat: BoatSpec, crewMass: number, water: Fluid): (speed: number) => number {
  const { hull, foils, crew } = boat;
  const mass = displacement(boat, crewMass);
  const wetted = hull.wettedArea * Math.sqrt(mass / displacement(boat, crew.mass));
  const slenderness = hull.waterline / Math.cbrt(mass / water.density);
  const foilDrag = 0.5 * water.density * foils.profileDrag * (foils.board.area + foils.rudder.area);
  return (speed) => {
    const friction = hull.formFactor * frictionResistance(speed, hull.waterline, wetted, water);
    const perWeight = hull.residuaryFactor * residuaryPerWeight(froude(speed, hull.waterline), slenderness);
    return friction + perWeight * mass * GRAVITY + foilDrag * speed * speed;
  };
}

/** The boat's own table; below its first speed the resistance goes with the square of the speed. */
function tableCurve(boat: BoatSpec, crewMass: number): (speed: number) => number {
  const { speed, resistance } = boat.hull.table!;
  const factor = displacement(boat, crewMass) / displacement(boat, boat.crew.mass);
  const curve = monotoneCurve([0, ...speed.filter((v) => v > 0)], [0, ...resistance.filter((_, i) => speed[i] > 0)]);
  return (v) => factor * curve(Math.max(v, 0));
}
