import { rowAt, type BetweenBoat } from './boat.js';
import { sharedDirection, WindSum, type UnitVector } from './shared-wind.js';

/**
 * Mean wind of each upwind leg two boats sailed at the same time: the direction progress is measured along.
 *
 * @param first  First boat.
 * @param second Second boat.
 * @param shift  Added to the second boat's clock. [s]
 * @returns By lap, unit vector to where the mean wind comes from; a lap without wind is left out.
 */
export function meanWindByLap(first: BetweenBoat, second: BetweenBoat, shift = 0): Map<number, UnitVector> {
  const winds = new Map<number, UnitVector>();
  for (const leg of first.legs) {
    const sum = new WindSum();
    for (let row = leg.from; row < leg.to; row++) {
      const other = rowAt(second, first.t0 + row - shift);
      sum.add(other >= 0 ? sharedDirection(first, row, second, other) : first.twd[row]);
    }
    const wind = sum.mean();
    if (wind) winds.set(leg.lap, wind);
  }
  return winds;
}
