import type { BetweenBoat } from './boat.js';
import { clockSkew, type ClockSkew } from './clock-skew.js';
import { together, TOGETHER_AT_ALL } from './together.js';

/** A boat whose clock is to be set right. */
export interface ClockCorrection {
  readonly name: string;
  /** To be added to its clock. [s] */
  readonly correction: number;
  readonly skew: ClockSkew;
}

/** Two clocks that are found off by the same amount are off by it within this. [s] */
const ALIKE = 6;

/**
 * What to add to which clock so that all agree, where it is certain that one is off. Each boat is held against the one
 * that most others were with; where all others are found off against it by the same, it is the odd one out itself.
 *
 * @param boats Two boats or more.
 * @returns One entry a boat to be corrected; none when all may be right.
 */
export function clockCorrections(boats: readonly BetweenBoat[]): ClockCorrection[] {
  const anchor = mostMet(boats);
  const found = boats
    .filter((boat) => boat !== anchor)
    .map((boat): ClockCorrection => {
      const skew = clockSkew(anchor, boat);
      return { name: boat.name, correction: skew.correction, skew };
    });
  const off = found.filter(({ correction }) => correction !== 0);
  const alike = off.every(({ correction }) => Math.abs(correction - off[0].correction) <= ALIKE);
  if (off.length < 2 || off.length < found.length || !alike) return off;
  return [{ name: anchor.name, correction: -off[0].correction, skew: off[0].skew }];
}

/** The boat with the most others near it as the clocks stand; of equals the first. */
function mostMet(boats: readonly BetweenBoat[]): BetweenBoat {
  const met = boats.map(
    (boat) => boats.filter((other) => other !== boat && together(boat, other, 0) > TOGETHER_AT_ALL).length,
  );
  return boats[met.indexOf(Math.max(...met))];
}
