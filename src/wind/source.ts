import { directionOf, eastOf, northOf } from '../math/angles.js';

export type WindKind = 'station' | 'on-board' | 'tracks' | 'by-hand';

/** Where a wind sensor is, in the local plane: fixed, moving (one entry a row of the source), or not known. [m] */
export type SensorPlace =
  { readonly x: number; readonly y: number } | { readonly xs: Float64Array; readonly ys: Float64Array } | null;

/**
 * One source of true wind on whole UTC seconds. Direction is where the wind comes from; sums allow a mean over any
 * window in constant time.
 */
export interface WindSource {
  readonly kind: WindKind;
  /** Log file, for messages; empty where there is none. */
  readonly file: string;
  /** Index of the boat that carries it; -1: none. */
  readonly boat: number;
  /** UTC epoch second of row 0. */
  readonly t0: number;
  readonly n: number;
  readonly place: SensorPlace;
  /** One standard deviation of mounting [deg] and of calibration [fraction of the speed]. */
  readonly accuracyDir: number;
  readonly accuracySpeed: number;
  /** False where the speed is unknown or not to be believed. */
  readonly hasSpeed: boolean;
  /** Shortest averaging window. [s] */
  readonly window: number;
  readonly sums: WindSums;
}

/** Running sums over rows: entry i is the sum of rows before i. */
export interface WindSums {
  readonly east: Float64Array;
  readonly north: Float64Array;
  readonly directions: Float64Array;
  readonly speed: Float64Array;
  readonly speeds: Float64Array;
}

/**
 * @param direction Where from, NaN = absent. [deg]
 * @param speed     NaN = absent. [m/s]
 */
export function windSums(direction: Float64Array, speed: Float64Array): WindSums {
  const n = direction.length;
  const east = new Float64Array(n + 1);
  const north = new Float64Array(n + 1);
  const directions = new Float64Array(n + 1);
  const sum = new Float64Array(n + 1);
  const speeds = new Float64Array(n + 1);
  for (let i = 0; i < n; i++) {
    const d = direction[i];
    const s = speed[i];
    const hasDirection = Number.isFinite(d);
    const hasSpeed = Number.isFinite(s);
    east[i + 1] = east[i] + (hasDirection ? eastOf(d) : 0);
    north[i + 1] = north[i] + (hasDirection ? northOf(d) : 0);
    directions[i + 1] = directions[i] + (hasDirection ? 1 : 0);
    sum[i + 1] = sum[i] + (hasSpeed ? s : 0);
    speeds[i + 1] = speeds[i] + (hasSpeed ? 1 : 0);
  }
  return { east, north, directions, speed: sum, speeds };
}

export interface WindReading {
  /** Where from. [deg] */
  readonly direction: number;
  /** [m/s] */
  readonly speed: number;
}

const NO_READING: WindReading = { direction: NaN, speed: NaN };

/**
 * Mean wind of a source around a moment: direction as the mean unit vector, speed as the mean speed. NaN when fewer
 * than a third of the window's seconds (at least one) are there.
 *
 * @param time   UTC epoch seconds.
 * @param window Length of the averaging window, centred. [s]
 */
export function readWind(source: WindSource, time: number, window: number): WindReading {
  const centre = time - source.t0;
  const half = Math.max(0.5, window / 2);
  const from = clamp(Math.round(centre - half), 0, source.n);
  const to = clamp(Math.round(centre + half), 0, source.n);
  if (to <= from) return NO_READING;
  const { east, north, directions, speed, speeds } = source.sums;
  const needed = Math.max(1, Math.min(window, 2 * half) / 3);
  const nDirection = directions[to] - directions[from];
  const nSpeed = speeds[to] - speeds[from];
  return {
    direction: nDirection >= needed ? directionOf(east[to] - east[from], north[to] - north[from]) : NaN,
    speed: nSpeed >= needed ? (speed[to] - speed[from]) / nSpeed : NaN,
  };
}

function clamp(value: number, low: number, high: number): number {
  return Math.max(low, Math.min(high, value));
}

/** Place of a sensor at a time; null when not known. [m] */
export function placeOf(source: WindSource, time: number): { x: number; y: number } | null {
  const place = source.place;
  if (!place) return null;
  if ('x' in place) return place;
  const i = clamp(Math.round(time - source.t0), 0, source.n - 1);
  const x = place.xs[i];
  const y = place.ys[i];
  return Number.isNaN(x) ? null : { x, y };
}
