import type { BoatSeries, LegSpan } from '../result/series.js';

/** Less of a beat than this between two shifts says nothing of the choice. [s] */
const LEAST = 20;
/** A shift was taken when the boat was on the tack it lifts for more than this share of the time to the next. */
const TAKEN = 0.5;

/**
 * Share of a boat's time on its beats, within a span, on the tack that a shift lifts: starboard when the wind veered, port
 * when it backed.
 *
 * @param boat  One row a second.
 * @param beats Its upwind legs.
 * @param span  From the shift to the next. [UTC s]
 * @param veer  Positive: veered. [deg]
 * @returns Share; NaN where the boat sailed less than 20 s of a beat in the span.
 */
export function liftedShare(
  boat: BoatSeries,
  beats: readonly LegSpan[],
  span: readonly [number, number],
  veer: number,
): number {
  let lifted = 0;
  let n = 0;
  for (const { from, to } of beats) {
    const last = Math.min(to, boat.n, span[1] - boat.t0);
    for (let i = Math.max(from, span[0] - boat.t0); i < last; i++) {
      const angle = boat.gamma[i];
      if (!(Math.abs(angle) < 90)) continue;
      n++;
      if (angle * veer > 0) lifted++;
    }
  }
  return n < LEAST ? NaN : lifted / n;
}

/** Whether a shift was taken; null where that cannot be said. */
export const isTaken = (share: number): boolean | null => (Number.isNaN(share) ? null : share > TAKEN);
