import { directionOf, turn } from '../math/angles.js';
import { lengthOf } from '../math/length.js';

/** One boat's sailing on a 1 Hz grid, as segmentation sees it. NaN = not known at that second. */
export interface Sailing {
  /** UTC epoch second of row 0. Row i is at t0 + i. */
  readonly t0: number;
  readonly n: number;
  /** Position in the local plane. [m] */
  readonly x: Float64Array;
  readonly y: Float64Array;
  /** Velocity through the water, east and north. [m/s] */
  readonly ux: Float64Array;
  readonly uy: Float64Array;
  /** Speed through the water. [m/s] */
  readonly speed: Float64Array;
  /** Wind at the boat, where from. [deg] */
  readonly twd: Float64Array;
  /** Signed angle from the course to the wind, positive: wind over the starboard side. [deg, -180..180] */
  readonly gamma: Float64Array;
  /** Signed angle from the bow to the wind, where heading is logged; else absent. [deg] */
  readonly bow?: Float64Array;
}

/** Builds the segmentation's view from water velocities and wind. */
export function makeSailing(parts: {
  t0: number;
  x: Float64Array;
  y: Float64Array;
  ux: Float64Array;
  uy: Float64Array;
  twd: Float64Array;
  heading?: Float64Array;
}): Sailing {
  const n = parts.x.length;
  const speed = new Float64Array(n);
  const gamma = new Float64Array(n);
  for (let i = 0; i < n; i++) {
    speed[i] = lengthOf(parts.ux[i], parts.uy[i]);
    gamma[i] = turn(directionOf(parts.ux[i], parts.uy[i]), parts.twd[i]);
  }
  const { t0, x, y, ux, uy, twd, heading } = parts;
  const rows = { t0, n, x, y, ux, uy, speed, twd, gamma };
  if (!heading || !isMostlyThere(heading, speed)) return rows;
  return { ...rows, bow: Float64Array.from(heading, (h, i) => turn(h, twd[i])) };
}

/** Heading counts when at least nine in ten of the sailed seconds have it: half a log would make half the tacks. */
function isMostlyThere(heading: Float64Array, speed: Float64Array): boolean {
  let there = 0;
  let sailed = 0;
  for (let i = 0; i < speed.length; i++) {
    if (Number.isNaN(speed[i])) continue;
    sailed++;
    if (!Number.isNaN(heading[i])) there++;
  }
  return sailed > 0 && there >= 0.9 * sailed;
}

/** A range of rows [from, to). */
export interface RowRange {
  readonly from: number;
  readonly to: number;
}

export type Tack = 'port' | 'starboard';

/** Starboard tack is wind over the starboard side: a positive angle to the wind. */
export function tackOf(angle: number): Tack {
  return angle >= 0 ? 'starboard' : 'port';
}

/** +1 on starboard tack, -1 on port tack. */
export function tackSign(tack: Tack): 1 | -1 {
  return tack === 'starboard' ? 1 : -1;
}
