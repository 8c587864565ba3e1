import type { ManoeuvreKind, Side } from './result.js';

/**
 * The aligned columns behind a result, one row a second: what the page and the tables draw from. Units as inside:
 * seconds, metres, m/s, degrees. NaN = not known at that second (a gap, no wind).
 */
export interface BoatSeries {
  readonly name: string;
  /** UTC epoch second of row 0 (whole). Row i is at t0 + i. */
  readonly t0: number;
  readonly n: number;
  /** Position east and north of the frame's origin. [m] */
  readonly x: Float64Array;
  readonly y: Float64Array;
  /** Velocity through the water (over ground where no current is known), east and north. [m/s] */
  readonly ux: Float64Array;
  readonly uy: Float64Array;
  /** Velocity over ground, east and north. [m/s] */
  readonly vx: Float64Array;
  readonly vy: Float64Array;
  /** Wind at the boat: where from [deg true], and speed at the rig's height [m/s] (NaN when the speed is not known). */
  readonly twd: Float64Array;
  readonly tws: Float64Array;
  /** Signed angle from the course through the water to the true wind, positive: wind over the starboard side. [deg] */
  readonly gamma: Float64Array;
  /** Speed through the water. [m/s] */
  readonly speed: Float64Array;
  /** Speed made good to windward (negative going downwind). [m/s] */
  readonly vmg: Float64Array;
  /** Course to apparent wind, magnitude [deg]; apparent wind speed [m/s]. */
  readonly beta: Float64Array;
  readonly aws: Float64Array;
  /** True heading where logged (corrected), else all NaN. [deg] */
  readonly heading: Float64Array;
  /** Apparent wind off the bow where logged (corrected), positive starboard; left out where it is not. [deg] */
  readonly awa?: Float64Array;
  /** 1 while settled close-hauled sailing. */
  readonly settled: Uint8Array;
  readonly legs: readonly LegSpan[];
  readonly manoeuvres: readonly ManoeuvreSpan[];
  readonly blocks: readonly BlockRow[];
}

/** Row range [from, to) of a leg; `index` is its place in `Result.boats[].legs`. */
export interface LegSpan {
  readonly index: number;
  readonly from: number;
  readonly to: number;
}

export interface ManoeuvreSpan {
  readonly kind: ManoeuvreKind;
  readonly from: Side;
  readonly to: Side;
  /** Rows: start of the window, through the wind, settled again. */
  readonly entry: number;
  readonly at: number;
  readonly exit: number;
  /** Metres of windward distance it cost; NaN where not to be had. */
  readonly loss: number;
}

/** A settled block: means over its rows [from, to). */
export interface BlockRow {
  readonly leg: number;
  readonly from: number;
  readonly to: number;
  readonly tack: Side;
  readonly gamma: number;
  readonly speed: number;
  readonly vmg: number;
  readonly tws: number;
  readonly twd: number;
  readonly beta: number;
}

export interface MarkPlace {
  readonly role: string;
  /** Given in the race file, or found from the tracks. */
  readonly given: boolean;
  /** One place, or two for a gate or line. [m in the frame] */
  readonly places: readonly { readonly x: number; readonly y: number }[];
}

export interface PolarPoint {
  /** Course angle to the true wind [deg] and speed [m/s]. */
  readonly gamma: number;
  readonly speed: number;
}

/** Speed over course angle in one wind, of a boat model or of the reference of the ledgers. */
export interface PolarCurve {
  readonly kind: 'model' | 'best' | 'file';
  /** Boat file, and the places in `boats` of the boats it stands for. */
  readonly boat: string;
  readonly boats: readonly number[];
  /** True wind at the rig: the mean over all settled blocks of the race. [m/s] */
  readonly tws: number;
  /** From a little inside the best upwind course, angle rising: to dead downwind for a model. */
  readonly points: readonly PolarPoint[];
  /** The best upwind and downwind courses; null where the curve does not reach so far. */
  readonly up: PolarPoint;
  readonly down: PolarPoint | null;
}

export interface RaceSeries {
  /** Origin of the local plane, and metres a degree there. */
  readonly frame: {
    readonly lat: number;
    readonly lon: number;
    readonly metresPerDegreeLat: number;
    readonly metresPerDegreeLon: number;
  };
  readonly zone: string | null;
  readonly marks: readonly MarkPlace[];
  readonly boats: readonly BoatSeries[];
  /** Left out where no boat model took part. */
  readonly polars?: readonly PolarCurve[];
}
