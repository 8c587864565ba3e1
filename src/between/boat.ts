/** What a comparison needs to know of each boat: one row a second, aligned columns, NaN = not known. */
export interface BetweenBoat {
  readonly name: string;
  /** UTC epoch second of row 0 (whole). Row i is at t0 + i. */
  readonly t0: number;
  readonly n: number;
  /** Position east and north in the frame all boats share. [m] */
  readonly x: Float64Array;
  readonly y: Float64Array;
  /** Velocity through the water, east and north. [m/s] */
  readonly ux: Float64Array;
  readonly uy: Float64Array;
  /** Wind at the boat: where from [deg true], speed [m/s] (NaN where not known). */
  readonly twd: Float64Array;
  readonly tws: Float64Array;
  /** 1 while settled close-hauled sailing. */
  readonly settled: Uint8Array;
  /** +1 starboard tack, -1 port tack, 0 neither. */
  readonly tack: Int8Array;
  /** What its leeway and sheeting can be told from. Absent: nothing. */
  readonly trim?: TrimSources;
  /** Distance to the windward mark. [m] Absent: not known. */
  readonly toMark?: Float64Array;
  /** Upwind legs, rows [from, to). */
  readonly legs: readonly UpwindLeg[];
  /** Stretches spent in manoeuvres, rows [from, to); `at` is the second through the wind. */
  readonly manoeuvres: readonly ManoeuvreStretch[];
}

/** An instrument that counts from the bow, its offset already added. */
export interface BowAngle {
  /** True heading, or apparent wind off the bow (positive starboard). [deg] */
  readonly angle: Float64Array;
  /** What is left of its offset, one standard error. [deg] */
  readonly offsetSe: number;
}

export interface TrimSources {
  /** Absent where there is none, or where the log does not settle its offset. */
  readonly heading?: BowAngle;
  readonly masthead?: BowAngle;
  /** The boat file's forces. */
  readonly forces?: TrimForces;
}

/** Means of a stretch: speed through the water, true wind at the rig [m/s], course to true wind [deg]. */
export interface SailedState {
  readonly speed: number;
  readonly tws: number;
  readonly gamma: number;
}

/** What a boat file makes of a state as sailed. */
export interface TrimForces {
  /** Boats of one file share what is wrong with it. */
  readonly file: string;
  /** What its leeway is good to, as a share of itself. */
  readonly leewayShare: number;
  /**
   * Leeway that the balance of forces asks for, and one sd of what it leaves open on this boat alone [deg]; null where
   * the boat is faster than the file allows.
   */
  leeway(state: SailedState): { readonly value: number; readonly open: number } | null;
  /** Leeway that goes with a sheeting angle. [deg] */
  leewayAt(state: SailedState, sheeting: number): number;
  /** Where the boom may be before anything is measured, as weights over angles [deg]; null where the model cannot sail. */
  sheetingPrior(state: SailedState): SheetingPrior | null;
}

export interface SheetingPrior {
  readonly mean: number;
  readonly sd: number;
  readonly points: readonly { readonly sheeting: number; readonly weight: number }[];
}

export interface UpwindLeg {
  readonly lap: number;
  readonly from: number;
  readonly to: number;
}

export interface ManoeuvreStretch {
  readonly kind: string;
  readonly from: number;
  readonly at: number;
  readonly to: number;
}

/** Row of a boat at a time, -1 when it has none. */
export function rowAt(boat: BetweenBoat, time: number): number {
  const row = time - boat.t0;
  return row >= 0 && row < boat.n ? row : -1;
}
