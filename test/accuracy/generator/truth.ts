/** What really happened in an invented race. Angles [deg], speeds [m/s], lengths [m], times UTC seconds. */

export const PHASES = [
  'sail-out',
  'milling',
  'stopped',
  'approach',
  'beat',
  'fetch',
  'run',
  'tack',
  'gybe',
  'full-turn',
  'aborted-tack',
  'capsize',
  'round-up',
  'bear-away',
  'waiting',
  'sail-home',
] as const;
export type Phase = (typeof PHASES)[number];

export type TurnKind = 'tack' | 'gybe' | 'full-turn' | 'aborted-tack' | 'capsize';

export interface TrueTurn {
  readonly kind: TurnKind;
  /** Course through the wind (or through dead downwind); for the others the middle. */
  readonly time: number;
  readonly start: number;
  /** End of the turn itself; the speed recovers until `settled`. */
  readonly end: number;
  readonly settled: number;
  readonly from: 'port' | 'starboard';
  readonly to: 'port' | 'starboard';
  /** Between the gun and the finish. */
  readonly racing: boolean;
  /** Part of a mark rounding (or within 12 s of one): neither found nor missed counts. */
  readonly atMark: boolean;
}

export interface TrueLeg {
  readonly kind: 'upwind' | 'downwind';
  readonly lap: number;
  /** Gun or closest approach to a mark; the last ends at the finish. */
  readonly start: number;
  readonly end: number;
}

/** A part of the day, UTC seconds, end not included. */
export interface TrueWindow {
  readonly what: 'sail-out' | 'milling' | 'race' | 'waiting' | 'sail-home';
  readonly from: number;
  readonly to: number;
}

/** One row a second on whole UTC seconds; row i is at t0 + i. */
export interface TrueBoat {
  readonly name: string;
  readonly t0: number;
  readonly n: number;
  readonly x: Float64Array;
  readonly y: Float64Array;
  /** Over ground, and through the water. East, north. */
  readonly vx: Float64Array;
  readonly vy: Float64Array;
  readonly ux: Float64Array;
  readonly uy: Float64Array;
  /** Course through the water to the true wind (relative to the water), signed, + wind over the starboard side. */
  readonly gamma: Float64Array;
  /** Course through the water to the apparent wind, magnitude. */
  readonly beta: Float64Array;
  readonly speed: Float64Array;
  /** To windward: speed x cos gamma. */
  readonly vmg: Float64Array;
  /** Wind relative to the water at the boat, and relative to the ground. */
  readonly twd: Float64Array;
  readonly tws: Float64Array;
  readonly groundTwd: Float64Array;
  readonly groundTws: Float64Array;
  /** Positive to leeward. */
  readonly leeway: Float64Array;
  readonly heading: Float64Array;
  /** Positive to starboard. */
  readonly heel: Float64Array;
  /** Best speed made good upwind of a clean boat in this wind. */
  readonly bestVmg: Float64Array;
  /** Index into PHASES. */
  readonly phase: Uint8Array;
  /** Close-hauled, between manoeuvres and recovered, not fetching, within an upwind leg. */
  readonly settled: Uint8Array;
  readonly turns: readonly TrueTurn[];
  readonly legs: readonly TrueLeg[];
  readonly windows: readonly TrueWindow[];
  /** What its instruments add to the truth (so the correction is the opposite); null without a masthead log. [deg] */
  readonly compassError: number | null;
  readonly mastheadError: number | null;
  /** Habitual: off the best angle (positive lower), and speed as a fraction of clean. */
  readonly habit: { readonly angle: number; readonly speed: number; readonly sheeting: number };
}

export interface Truth {
  readonly condition: string;
  readonly seed: number;
  readonly gun: number;
  readonly finish: number;
  /** Mean wind of the race at the middle of the course, relative to the ground. */
  readonly twd: number;
  readonly tws: number;
  /** What the station adds to the truth: direction [deg], factor on speed, lateness of its stamps [s]. Null: no station. */
  readonly station: {
    readonly direction: number;
    readonly speed: number;
    readonly late: number;
    readonly x: number;
    readonly y: number;
    /** The wind reaches station and boats at different times; its place is told in the race file. */
    readonly carried: boolean;
    readonly placed: boolean;
  } | null;
  /** Where the water flows to. East, north. [m/s] */
  readonly current: { readonly east: number; readonly north: number };
  readonly frame: { readonly lat: number; readonly lon: number };
  readonly windward: { readonly x: number; readonly y: number };
  readonly leeward: { readonly x: number; readonly y: number };
  readonly boats: readonly TrueBoat[];
}
