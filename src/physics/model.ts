/**
 * A boat as forces: what its numbers say about rig, hull, foils and stability, put together for the balance.
 */
import { RAD } from '../math/angles.js';
import { dryAirDensity } from './air.js';
import { balance, balanceSheeted, type ForceModel, type SailingState } from './balance.js';
import type { BoatSpec, FoilSpec } from './boat-spec.js';
import { inducedDrag, leewayOf, mirroredAspectRatio, whickerFehlnerSlope } from './foils.js';
import { hullCurve } from './hull.js';
import { rigCurve, stallIncidence } from './rig.js';
import { stabilityOf } from './stability.js';
import { WATER, type Fluid } from './water.js';

export interface ModelOptions {
  /** Crew aboard; default the crew of the boat file. [kg] */
  readonly crewMassKg?: number;
  /** Default fresh water of 15 deg C; sea water is 2.7 % denser. */
  readonly water?: Fluid;
  /** Density of the air; default ISO standard air, 1.225. [kg/m3] */
  readonly airDensity?: number;
}

export interface BoatModel extends ForceModel {
  readonly boat: BoatSpec;
  readonly crewMass: number;
  readonly water: Fluid;
}

/** Share of its own lift slope that a rudder adds in the downwash of the board. Common practice, no source. */
const RUDDER_SHARE = 0.5;
/** Depth of the centre of lateral resistance as a share of the board's span (elliptic loading: 4/(3 pi)). */
const LATERAL_CENTRE = 4 / (3 * Math.PI);
/** Span efficiency of board and rudder together as one lifting surface. Common practice, no source. */
const FOIL_EFFICIENCY = 0.9;

/**
 * Makes the force model of a boat.
 *
 * @param boat    Boat.
 * @param options Crew, water, air.
 * @returns Model for `sail`, `bestUpwind` and the rest.
 */
export function makeModel(boat: BoatSpec, options: ModelOptions = {}): BoatModel {
  const crewMass = options.crewMassKg ?? boat.crew.mass;
  const water = options.water ?? WATER.fresh15;
  const { rig, foils, tuning } = boat;
  const hull = hullCurve(boat, crewMass, water);
  const slope = tuning.foilSlope * lateralSlope(boat);
  const aspectRatio = mirroredAspectRatio(foils.board.span, foils.board.area, foils.gap);
  const span = Math.sqrt(FOIL_EFFICIENCY * aspectRatio * foils.board.area);
  const pressure = (speed: number): number => 0.5 * water.density * speed * speed;
  return {
    boat,
    crewMass,
    water,
    airDensity: options.airDensity ?? dryAirDensity(),
    area: rig.area,
    rig: rigCurve(rig, tuning.rigDrag),
    upright: hull,
    resistance: (upright, speed, side, heel) =>
      upright * (1 + boat.hull.heelDrag * (heel / 30) ** 2) +
      inducedDrag(side / Math.cos(RAD * heel), pressure(speed), span),
    leeway: (speed, side, heel) => leewayOf(side, pressure(speed), slope * Math.cos(RAD * heel) ** 2),
    arm: rig.centre + LATERAL_CENTRE * foils.board.span,
    stability: stabilityOf(boat, crewMass),
    zeroLift: 0,
    stall: stallIncidence(rig),
    sheetingMin: rig.sheetingMin,
    sheetingMax: rig.sheetingMax,
  };
}

/** Lift slope times area of board and rudder. [m2 per rad] */
function lateralSlope(boat: BoatSpec): number {
  const { board, rudder, gap } = boat.foils;
  const slope = (foil: FoilSpec): number =>
    foil.area > 0 ? foil.area * whickerFehlnerSlope(mirroredAspectRatio(foil.span, foil.area, gap), foil.sweep) : 0;
  return slope(board) + RUDDER_SHARE * slope(rudder);
}

/**
 * The boat on a course with the sheeting that makes it fastest.
 *
 * @param model Boat.
 * @param tws   True wind at the rig. [m/s]
 * @param gamma Course to true wind, 0 to 180. [deg]
 * @returns State; its speed is NaN where the boat cannot sail (too close to the wind).
 */
export function sail(model: ForceModel, tws: number, gamma: number): SailingState {
  return balance(model, tws, gamma);
}

/**
 * The boat on a course at a given sheeting angle.
 *
 * @param model    Boat.
 * @param tws      True wind at the rig. [m/s]
 * @param gamma    Course to true wind, 0 to 180. [deg]
 * @param sheeting Boom to centreline, positive to leeward. [deg]
 * @returns State; its speed is NaN where nothing balances.
 */
export function sailWithSheeting(model: ForceModel, tws: number, gamma: number, sheeting: number): SailingState {
  return balanceSheeted(model, tws, gamma, sheeting);
}
