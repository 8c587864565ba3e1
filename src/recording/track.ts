/**
 * A boat's smoothed track: one row a second on whole UTC seconds, in a local plane. Rows inside a gap are NaN.
 */
export interface Track {
  readonly name: string;
  /** UTC epoch second of row 0 (whole). Row i is at t0 + i. */
  readonly t0: number;
  readonly n: number;
  /** Position east and north of the frame's origin. [m] */
  readonly x: Float64Array;
  readonly y: Float64Array;
  /** Velocity over ground, east and north. [m/s] */
  readonly vx: Float64Array;
  readonly vy: Float64Array;
  /** One standard error per axis of the smoother. [m], [m/s] */
  readonly sePosition: Float64Array;
  readonly seVelocity: Float64Array;
  /** Channels of the boat's own instruments on the same rows; absent where not logged. Angles [deg], speeds [m/s]. */
  readonly heading?: Float64Array;
  readonly awa?: Float64Array;
  readonly aws?: Float64Array;
  readonly stw?: Float64Array;
  readonly heel?: Float64Array;
}

export type { Frame } from '../math/geo.js';
