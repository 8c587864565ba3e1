import { runningMean, turn } from '../math/angles.js';

/** A change of the wind that lasted: for the eye and for stepping through the race, not for any figure. */
export interface Shift {
  readonly row: number;
  /** Smoothed direction reached. [deg true] */
  readonly twd: number;
  /** How far from the last one, positive veered. [deg] */
  readonly by: number;
}

/** Half a minute either side: shorter swings cannot be sailed to. */
const HALF_WINDOW = 30;
/** Smaller changes are within what a masthead vane wanders (common practice, no source). */
export const SHIFT_DEGREES = 5;

/** Running circular mean over a minute. [deg true] */
export function smoothedWind(twd: Float64Array, half = HALF_WINDOW): Float64Array {
  return runningMean(twd, half);
}

/** Moments at which the smoothed wind has moved by `threshold` since the last such moment. */
export function shiftsOf(twd: Float64Array, threshold = SHIFT_DEGREES): Shift[] {
  const smooth = smoothedWind(twd);
  const out: Shift[] = [];
  let last = NaN;
  for (let i = 0; i < smooth.length; i++) {
    const now = smooth[i];
    if (!Number.isFinite(now)) continue;
    if (Number.isNaN(last)) {
      last = now;
      continue;
    }
    const by = turn(last, now);
    if (Math.abs(by) < threshold) continue;
    out.push({ row: i, twd: now, by });
    last = now;
  }
  return out;
}
