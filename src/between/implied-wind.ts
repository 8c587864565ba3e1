import { circularMean, directionOf, turn } from '../math/angles.js';
import type { BetweenBoat } from './boat.js';

/** Seconds the helm is averaged over. */
const HELM = 10;

/**
 * What a boat's course says of the wind's swings: settled and close-hauled, a boat turns with the wind, whatever its
 * angle. Course less its mean on that tack; the angle to the wind drops out, and no clock but the boat's own is asked.
 *
 * @param boat The boat.
 * @returns Swing of the wind by row, 10 s means, positive clockwise [deg]; NaN where not settled.
 */
export function impliedSwings(boat: BetweenBoat): Float64Array {
  const courses = boat.ux.map((u, i) => (boat.settled[i] && !Number.isNaN(u) ? directionOf(u, boat.uy[i]) : NaN));
  const swings = new Float64Array(boat.n).fill(NaN);
  for (const tack of [1, -1]) {
    const centre = circularMean(courses.filter((_, i) => boat.tack[i] === tack)).mean;
    courses.forEach((course, i) => {
      if (boat.tack[i] === tack) swings[i] = turn(centre, course);
    });
  }
  return runningMean(swings, HELM);
}

/** Mean of the values within half the width; NaN where any of them is missing. */
function runningMean(values: Float64Array, width: number): Float64Array {
  const half = Math.floor(width / 2);
  const out = new Float64Array(values.length).fill(NaN);
  let sum = 0;
  let known = 0;
  for (let i = 0; i < values.length; i++) {
    if (Number.isNaN(values[i])) known = sum = 0;
    else {
      sum += values[i];
      known++;
      if (known > 2 * half + 1) {
        sum -= values[i - 2 * half - 1];
        known--;
      }
      if (known === 2 * half + 1) out[i - half] = sum / known;
    }
  }
  return out;
}
