import type { BetweenBoat } from './boat.js';
import { clockSkew, type ClockSkew } from './clock-skew.js';

/** A boat whose clock was set right for the comparison. */
export interface ClockCorrection {
  readonly name: string;
  readonly correction: number;
  readonly skew: ClockSkew;
}

/**
 * Puts all boats on one clock where it is certain that one is off: each is held against the first, and the setting most
 * boats share is taken as right.
 *
 * @param boats Two boats or more.
 * @returns The boats, those corrected with another `t0`, and what was corrected.
 */
export function onOneClock(boats: readonly BetweenBoat[]): { boats: BetweenBoat[]; corrected: ClockCorrection[] } {
  const [first, ...others] = boats;
  const skews = others.map((boat) => clockSkew(first, boat));
  const corrections = [0, ...skews.map(({ correction }) => correction)];
  const right = commonest(corrections);
  const corrected = boats.flatMap(({ name }, k): ClockCorrection[] => {
    const correction = corrections[k] - right;
    // Where the first boat is the odd one out its own skew is that of any other against it.
    const skew = k > 0 ? skews[k - 1] : skews.find(({ sure }) => sure);
    return correction !== 0 && skew ? [{ name, correction, skew }] : [];
  });
  return { boats: boats.map((boat, k) => ({ ...boat, t0: boat.t0 + corrections[k] - right })), corrected };
}

/** The value most often met; of equals the smallest in size. */
function commonest(values: readonly number[]): number {
  const counts = new Map<number, number>();
  for (const value of values) counts.set(value, (counts.get(value) ?? 0) + 1);
  const [[best]] = [...counts].sort((a, b) => b[1] - a[1] || Math.abs(a[0]) - Math.abs(b[0]));
  return best;
}
