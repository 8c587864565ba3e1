import type { BetweenBoat } from './boat.js';

/** Whether two boats were racing in one place at one time, as far as their clocks say. */

/** Racing boats are within this of each other. [m] */
export const TOGETHER = 400;
/** Boats of one fleet are mostly within this of each other, and seldom when one is a lap on or on its way home. [m] */
export const CLOSE = 150;
/** Boats that are together for more than this share of the sailing have clocks that agree to minutes. */
export const TOGETHER_AT_ALL = 0.2;

/**
 * Share of a boat's upwind sailing in which the other is near, if the second clock is ahead by `skew`. Counted for the
 * boat with more of it: a clock that is hours off can hide the other's legs.
 */
export function together(first: BetweenBoat, second: BetweenBoat, skew: number, within = TOGETHER): number {
  const [mine, theirs] = [upwindRows(first), upwindRows(second)];
  return mine.length >= theirs.length
    ? nearShare(first, mine, second, skew, within)
    : nearShare(second, theirs, first, -skew, within);
}

function nearShare(
  boat: BetweenBoat,
  rows: readonly number[],
  other: BetweenBoat,
  skew: number,
  within: number,
): number {
  let near = 0;
  for (const i of rows) {
    const j = boat.t0 + i + skew - other.t0;
    if (j < 0 || j >= other.n) continue;
    if (Math.hypot(boat.x[i] - other.x[j], boat.y[i] - other.y[j]) < within) near++;
  }
  return rows.length === 0 ? 0 : near / rows.length;
}

/** Every tenth second is enough to see who was where. [s] */
const LOOK_EVERY = 10;

function upwindRows(boat: BetweenBoat): number[] {
  return boat.legs.flatMap(({ from, to }) =>
    Array.from({ length: Math.max(0, Math.floor((to - from) / LOOK_EVERY)) }, (_, k) => from + k * LOOK_EVERY),
  );
}
