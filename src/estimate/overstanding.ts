import { angleBetween, directionOf } from '../math/angles.js';
import type { Manoeuvre } from '../segment/manoeuvres.js';
import type { RowRange, Sailing } from '../segment/sailing.js';
import { LABEL, type LegRows } from '../segment/spells.js';

/** Course angles closer than this to the close-hauled one are not below it, whatever the stated error. [deg] */
const LEAST_MARGIN = 2;

/**
 * Share of the low sailing after a beat's last tack that overstanding explains: all of it when at that tack the mark
 * already bore as far below the close-hauled course as was then sailed, none when it did not yet (a later lift).
 *
 *     share = (angle of the mark off the wind at the tack - own) / (course angle sailed to the mark - own), 0..1
 *
 * @param own   The boat's own close-hauled course angle. [deg]
 * @param se    Its standard error. [deg]
 * @param mark  Where the mark is, in the local plane. [m]
 */
export function overstoodShare(
  sailing: Sailing,
  leg: RowRange,
  rows: LegRows,
  manoeuvres: readonly Manoeuvre[],
  own: number,
  se: number,
  mark: { readonly x: number; readonly y: number },
): number {
  const last = manoeuvres.filter((m) => m.kind === 'tack' && m.at > leg.from && m.at < leg.to).at(-1);
  if (!last) return 0;
  const at = Math.min(last.at, sailing.n - 1);
  const bearing = directionOf(mark.x - sailing.x[at], mark.y - sailing.y[at]);
  const below = angleBetween(bearing, sailing.twd[at]) - own;
  if (!(below > Math.max(LEAST_MARGIN, 2 * se))) return 0;
  let sum = 0;
  let n = 0;
  rows.labels.forEach((label, k) => {
    const gamma = Math.abs(sailing.gamma[leg.from + k]);
    if (label !== LABEL.fetching || Number.isNaN(gamma)) return;
    sum += gamma;
    n++;
  });
  const sailed = n > 0 ? sum / n - own : NaN;
  return sailed > 0 ? Math.min(1, below / sailed) : 0;
}
