import type { BoatResult, Cause, Quantity, Result } from '../result/result.js';
import { CAUSE_MEANING, CAUSE_WORDS } from './causes.js';
import { causeTotals, total, type CauseTotal } from './figures.js';

/** What cost most, told so that nobody is misled: a loss by the angle beside the speed that it brought. */

/** Causes that trade against one another: who sails low goes faster, who sails high slower. */
export const ANGLE_AND_SPEED: ReadonlySet<Cause> = new Set(['high', 'low', 'trim', 'speed']);

export const TOGETHER_WORDS = 'Angle and speed together';
export const TOGETHER_MEANING =
  'Sailing high or low, trim and speed for the angle, summed: the angle alone does not say what it cost, for speed may have paid for it.';

export interface Finding {
  readonly words: string;
  readonly meaning: string;
  readonly causes: ReadonlySet<Cause>;
  readonly metres: Quantity;
  /** What it is the sum of, where it is one. */
  readonly parts: readonly CauseTotal[];
}

/** The least that is told. [m] */
const LEAST = 0.5;

/**
 * The largest items of a boat's ledger, shifts apart. Where speed was gained for the angle, angle and speed are one
 * item: else the angle would read as a loss that the speed has paid for.
 */
export function findingsOf(boat: BoatResult, count: number): Finding[] {
  const totals = causeTotals(boat).filter(({ cause }) => cause !== 'shifts');
  const trade = totals.filter(({ cause }) => ANGLE_AND_SPEED.has(cause));
  const gained = trade.some(({ cause, metres }) => (cause === 'speed' || cause === 'trim') && metres.value <= -LEAST);
  const together = gained ? total(trade.map(({ metres }) => metres)) : null;
  const alone = together ? totals.filter(({ cause }) => !ANGLE_AND_SPEED.has(cause)) : totals;
  const found: Finding[] = alone.map(({ cause, metres }) => ({
    words: CAUSE_WORDS[cause],
    meaning: CAUSE_MEANING[cause],
    causes: new Set([cause]),
    metres,
    parts: [],
  }));
  if (together) {
    const parts = trade.filter(({ metres }) => Math.abs(metres.value) >= LEAST);
    found.push({ words: TOGETHER_WORDS, meaning: TOGETHER_MEANING, causes: ANGLE_AND_SPEED, metres: together, parts });
  }
  return found
    .filter(({ metres }) => metres.value >= LEAST)
    .sort((a, b) => b.metres.value - a.metres.value)
    .slice(0, count);
}

/** Metres of some causes together over all beats; null where there is no ledger. */
export function metresOf(boat: BoatResult, causes: ReadonlySet<Cause>): Quantity | null {
  return total(causeTotals(boat).filter(({ cause }) => causes.has(cause)).map(({ metres }) => metres)); // prettier-ignore
}

/** The smallest figure for the same causes among the other boats: what they can cost on this day. */
export function leastOfOthers(
  result: Result,
  boat: BoatResult,
  causes: ReadonlySet<Cause>,
): { name: string; metres: Quantity } | null {
  const others = result.boats.flatMap((other) => {
    const metres = other === boat ? null : metresOf(other, causes);
    return metres ? [{ name: other.name, metres }] : [];
  });
  return others.reduce<(typeof others)[number] | null>(
    (least, one) => (least && least.metres.value <= one.metres.value ? least : one),
    null,
  );
}
