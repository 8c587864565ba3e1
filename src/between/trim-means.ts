import { directionOf, turn } from '../math/angles.js';
import type { BetweenBoat, SailedState } from './boat.js';

/** Means of one boat over a block, from which its leeway can be told. NaN = not known. */
export interface TrimMeans extends SailedState {
  /** From the bow to the course through the water, positive to leeward. [deg] */
  readonly drift: number;
  /** Apparent wind off the bow, positive where it blows over the weather side. [deg] */
  readonly awa: number;
}

/**
 * @param boat    The boat.
 * @param row     Its first row of the block.
 * @param seconds Rows.
 * @param state   What it sailed, from the block's vector means.
 */
export function trimMeans(boat: BetweenBoat, row: number, seconds: number, state: SailedState): TrimMeans {
  const { heading, masthead } = boat.trim ?? {};
  const tack = boat.tack[row];
  const drift = (i: number): number => tack * turn(directionOf(boat.ux[i], boat.uy[i]), heading!.angle[i]);
  return {
    ...state,
    drift: heading ? meanOf(drift, row, seconds) : NaN,
    awa: masthead ? meanOf((i) => tack * masthead.angle[i], row, seconds) : NaN,
  };
}

/** Mean of the rows that are known, where they are at least half; else NaN. */
export function meanKnown(values: Float64Array, row: number, seconds: number): number {
  return meanOf((i) => values[i], row, seconds);
}

function meanOf(at: (i: number) => number, row: number, seconds: number): number {
  let sum = 0;
  let n = 0;
  for (let i = row; i < row + seconds; i++) {
    const value = at(i);
    if (Number.isNaN(value)) continue;
    sum += value;
    n++;
  }
  return n > 0 && 2 * n >= seconds ? sum / n : NaN;
}
