/** What a boat model does, in a table for people: the facts that the built-in boats are described by. */
import { fromKnots, toKnots } from '../math/units.js';
import type { BoatSpec } from './boat-spec.js';
import { makeModel } from './model.js';
import { bestUpwind } from './optimum.js';

export interface BoatFacts {
  readonly name: string;
  readonly description: string;
  readonly sailArea: number;
  readonly jibArea: number;
  readonly crewMass: number;
  /** Heeling moment that can be held. [N m] */
  readonly rightingLimit: number;
  /** Best upwind sailing in winds of 6, 10 and 16 kn. */
  readonly upwind: readonly {
    readonly windKn: number;
    readonly speedKn: number;
    readonly vmgKn: number;
    readonly gamma: number;
    readonly leeway: number;
    readonly sheeting: number;
  }[];
}

/**
 * Facts of a boat, worked out with its model.
 *
 * @param boat Boat.
 * @returns Facts; speeds in knots, areas in m2, mass in kg, angles in degrees.
 */
export function boatFacts(boat: BoatSpec): BoatFacts {
  const model = makeModel(boat);
  const upwind = [6, 10, 16].map((windKn) => {
    const { speed, vmg, gamma, leeway, sheeting } = bestUpwind(model, fromKnots(windKn));
    return { windKn, speedKn: toKnots(speed), vmgKn: toKnots(vmg), gamma, leeway, sheeting };
  });
  return {
    name: boat.name,
    description: boat.description,
    sailArea: boat.rig.area,
    jibArea: boat.rig.jibArea,
    crewMass: boat.crew.mass,
    rightingLimit: model.stability?.limit ?? NaN,
    upwind,
  };
}
