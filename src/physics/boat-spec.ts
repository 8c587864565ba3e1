/** A boat in numbers, as a boat file or a built-in boat gives it. Metres, kilograms, m/s, degrees. */

export interface FoilSpec {
  /** Planform area below the hull. [m2] */
  readonly area: number;
  /** Span below the hull. [m] */
  readonly span: number;
  /** Sweep of the quarter chord. [deg] */
  readonly sweep: number;
}

export interface HullSpec {
  /** Waterline length. [m] */
  readonly waterline: number;
  /** All but the crew: hull, foils, ballast, rig. [kg] */
  readonly mass: number;
  /** Wetted area of the bare hull with `crew.mass` aboard. [m2] */
  readonly wettedArea: number;
  /** 1 + k on the friction line. */
  readonly formFactor: number;
  /** Factor on the residuary curve, 1 = as fitted. */
  readonly residuaryFactor: number;
  /** Towed resistance upright, foils down, no side force, `crew.mass` aboard; replaces friction and curve. [m/s], [N] */
  readonly table?: { readonly speed: readonly number[]; readonly resistance: readonly number[] };
  /** Share of the hull's resistance added at 30 degrees of heel, growing with its square. */
  readonly heelDrag: number;
  /** Share of the hull's resistance added by the waves of a fresh wind (above 8 m/s all of it). */
  readonly waveDrag: number;
}

export interface RigSpec {
  /** Sail area, jib included. [m2] */
  readonly area: number;
  /** Of which jib; 0 for a single sail. [m2] */
  readonly jibArea: number;
  /** Top of the sail above the water. [m] */
  readonly head: number;
  /** Centre of effort above the water. [m] */
  readonly centre: number;
  /** Span efficiency of the whole rig. */
  readonly efficiency: number;
  /** Greatest lift coefficient. */
  readonly clMax: number;
  /** Incidence that the camber of a full sail is worth: twice the depth in radians for a circular arc. [deg] */
  readonly camber: number;
  /** Viscous drag due to lift, k in CD = CD0 + k CL^2 + CL^2/(pi AR_e). */
  readonly viscous: number;
  /** Parasite drag of the sail, per sail area. */
  readonly parasite: number;
  /** Drag area of mast, rigging, crew and hull above the water. [m2] */
  readonly windage: number;
  /** Closest and widest sheeting. [deg] */
  readonly sheetingMin: number;
  readonly sheetingMax: number;
}

export interface Tuning {
  /** Factors, 1 = as the facts say: hull resistance, rig drag, righting moment, foil lift slope. */
  readonly hullResistance: number;
  readonly rigDrag: number;
  readonly rightingMoment: number;
  readonly foilSlope: number;
}

export interface BoatSpec {
  readonly name: string;
  readonly description: string;
  readonly hull: HullSpec;
  readonly foils: {
    readonly board: FoilSpec;
    readonly rudder: FoilSpec;
    /** How well the hull mirrors the foils: 1 closed, 0.9 usual. */
    readonly gap: number;
    /** Profile drag per planform area. */
    readonly profileDrag: number;
  };
  readonly rig: RigSpec;
  readonly crew: {
    /** The crew the boat was described with. [kg] */
    readonly mass: number;
    /** Farthest the crew's centre of mass gets from the centreline. [m] */
    readonly lever: number;
  };
  readonly stability: {
    /** Metacentric height with the crew amidships. [m] */
    readonly metacentricHeight: number;
    /** Heel at which the sail is eased. [deg] */
    readonly heelLimit: number;
    /** How late the heel comes as the moment grows to its limit: 1 in proportion (keelboat), 3 sailed flat (dinghy). */
    readonly heelPower: number;
  };
  readonly tuning: Tuning;
}

export const UNTUNED: Tuning = { hullResistance: 1, rigDrag: 1, rightingMoment: 1, foilSlope: 1 };

/** True when no multiplier differs from 1. */
export function isUntuned(tuning: Tuning): boolean {
  return Object.values(tuning).every((factor) => factor === 1);
}

/**
 * The boat as one line of JSON with sorted keys: equal boats give equal text, whatever file they came from. For
 * digests.
 */
export function canonicalBoat(spec: BoatSpec): string {
  return JSON.stringify(sorted(spec));
}

function sorted(value: unknown): unknown {
  if (Array.isArray(value)) return value.map(sorted);
  if (typeof value !== 'object' || value === null) return value;
  const entries = Object.entries(value).filter(([, item]) => item !== undefined);
  entries.sort(([a], [b]) => (a < b ? -1 : a > b ? 1 : 0));
  return Object.fromEntries(entries.map(([key, item]) => [key, sorted(item)]));
}
