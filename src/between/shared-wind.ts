import { circularMean, eastOf, northOf } from '../math/angles.js';
import type { BetweenBoat } from './boat.js';

/**
 * One wind for two boats: the mean of the directions at both, or the one that is known. An error of the wind then turns
 * both courses' angles alike and drops out of the difference.
 *
 * @param first     First boat.
 * @param rowFirst  Its row.
 * @param second    Second boat.
 * @param rowSecond Its row.
 * @returns Where the wind comes from in [0, 360) [deg]; NaN when neither knows.
 */
export function sharedDirection(first: BetweenBoat, rowFirst: number, second: BetweenBoat, rowSecond: number): number {
  return circularMean([first.twd[rowFirst], second.twd[rowSecond]]).mean;
}

export interface UnitVector {
  readonly east: number;
  readonly north: number;
}

/** Sums directions as unit vectors; NaN is passed over. */
export class WindSum {
  #east = 0;
  #north = 0;
  #n = 0;

  add(direction: number): void {
    if (Number.isNaN(direction)) return;
    this.#east += eastOf(direction);
    this.#north += northOf(direction);
    this.#n++;
  }

  /** Unit vector to where the mean wind comes from; null when there is none. */
  mean(): UnitVector | null {
    const length = Math.hypot(this.#east, this.#north);
    if (this.#n === 0 || length < 1e-9 * this.#n) return null;
    return { east: this.#east / length, north: this.#north / length };
  }
}
