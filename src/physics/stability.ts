/**
 * Stability: what heeling moment hull and crew can hold, and at what heel.
 */
import { RAD } from '../math/angles.js';
import { GRAVITY } from './air.js';
import type { BoatSpec } from './boat-spec.js';

export interface Stability {
  /** Heeling moment at which the sail is eased. [N m] */
  readonly limit: number;
  /** Heel at that limit. [deg] */
  readonly heelLimit: number;
  /** Heel at a heeling moment, rising smoothly to the heel limit and on (trial states in a solve go beyond it). [deg] */
  heel(moment: number): number;
  /** Righting moment of the hull at a heel. [N m] */
  hull(heel: number): number;
  /** Righting moment of the crew with its mass at a distance from the centreline. [N m] */
  crew(lever: number, heel: number): number;
}

/** No trial state heels further than at this many times the moment that can be held. */
const MOST_OVERLOAD = 1.4;

/**
 * Righting moments of a boat. The crew moves so that moment is balanced at the heel
 *
 *     heel = heelLimit (M / M_limit)^n,     M_limit = M_hull(heelLimit) + m g y_max cos heelLimit
 *     M_hull = g mass GM sin heel
 *
 * Wall-sided hull: good to 30 degrees or so.
 *
 * @param boat     Boat.
 * @param crewMass Crew aboard. [kg]
 * @returns Moments [N m] and heel [deg].
 */
export function stabilityOf(boat: BoatSpec, crewMass: number): Stability {
  const { metacentricHeight, heelLimit, heelPower } = boat.stability;
  const factor = boat.tuning.rightingMoment * GRAVITY;
  const hull = (heel: number): number =>
    factor * (boat.hull.mass + crewMass) * metacentricHeight * Math.sin(RAD * heel);
  const crew = (lever: number, heel: number): number => factor * crewMass * lever * Math.cos(RAD * heel);
  const limit = hull(heelLimit) + crew(boat.crew.lever, heelLimit);
  const heel = (moment: number): number =>
    heelLimit * Math.pow(Math.min(Math.max(moment / limit, 0), MOST_OVERLOAD), heelPower);
  return { limit, heelLimit, heel, hull, crew };
}
