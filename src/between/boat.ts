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
  /** Distance to the windward mark. [m] Absent: not known. */
  readonly toMark?: Float64Array;
  /** Upwind legs, rows [from, to). */
  readonly legs: readonly UpwindLeg[];
  /** Stretches spent in manoeuvres, rows [from, to); `at` is the second through the wind. */
  readonly manoeuvres: readonly ManoeuvreStretch[];
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
