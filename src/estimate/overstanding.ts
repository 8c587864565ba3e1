import { directionOf, RAD, turn } from '../math/angles.js';
import type { Manoeuvre } from '../segment/manoeuvres.js';
import type { RowRange, Sailing } from '../segment/sailing.js';

/** Course angles closer than this to the close-hauled one are not below it, whatever the stated error. [deg] */
const LEAST_MARGIN = 2;
/** From the wind's eye until a boat is round on the new tack. [s] */
const ROUND = 6;

/** A stretch sailed after a tack from beyond the lay line. */
export interface Overstood extends RowRange {
  /** Share (0..1) of the low sailing in it that the place of the tack explains. */
  readonly share: number;
  /** Distance of the tack beyond the lay line of the new tack. [m] */
  readonly past: number;
}

/**
 * Stretches of a beat that were sailed from beyond the lay line: those after a tack at which the mark already bore below
 * the close-hauled course of the new tack by more than 2 degrees and two standard errors, up to the next tack. Of the low
 * sailing there the place of the tack explains all, when the mark then bore as far below that course as was sailed, and
 * none, when it did not bear below it yet (a later lift).
 *
 *     share = (angle of the mark off the wind at the tack - own) / (course angle sailed - own), 0..1
 *     past  = distance of the mark x sin (angle of the mark off the wind - own)
 *
 * @param own   The boat's own close-hauled course angle. [deg]
 * @param se    Its standard error. [deg]
 * @param mark  Where the mark is, in the local plane. [m]
 * @returns In time order; none where nothing was overstood. Errors: past is good to distance x se.
 */
export function overstoodStretches(
  sailing: Sailing,
  leg: RowRange,
  manoeuvres: readonly Manoeuvre[],
  own: number,
  se: number,
  mark: { readonly x: number; readonly y: number },
): Overstood[] {
  const tacks = manoeuvres.filter((m) => m.kind === 'tack' && m.at > leg.from && m.at < leg.to);
  return tacks.flatMap((tack, k): Overstood[] => {
    const from = Math.min(tack.at + ROUND, leg.to);
    const to = Math.min(tacks[k + 1]?.entry ?? leg.to, leg.to);
    const at = Math.min(tack.at, sailing.n - 1);
    const [dx, dy] = [mark.x - sailing.x[at], mark.y - sailing.y[at]];
    const off = turn(directionOf(dx, dy), sailing.twd[at]) * (tack.to === 'starboard' ? 1 : -1);
    const below = off - own;
    if (!(below > Math.max(LEAST_MARGIN, 2 * se)) || to <= from) return [];
    const sailed = meanGamma(sailing, from, to) - own;
    const share = sailed > 0 ? Math.min(1, below / sailed) : 0;
    return [{ from, to, share, past: Math.hypot(dx, dy) * Math.sin(Math.min(90, below) * RAD) }];
  });
}

function meanGamma(sailing: Sailing, from: number, to: number): number {
  let sum = 0;
  let n = 0;
  for (let i = from; i < to; i++) {
    if (Number.isNaN(sailing.gamma[i])) continue;
    sum += Math.abs(sailing.gamma[i]);
    n++;
  }
  return sum / n;
}
