import { holm } from '../math/holm.js';
import { normalTwoSided } from '../math/normal.js';
import type { BoatResult, Cause, Ledger, Q } from '../result/result.js';
import { difference, total, upwindLegs } from './figures.js';

/** The ledger of one boat less another's, over the laps both have one for. */

export interface LedgerGap {
  readonly cause: Cause;
  /** A value a lap, metres that the first lost more; null where one of the two has none. */
  readonly laps: readonly Q[];
  readonly together: Q;
  /** Whether it is more than chance makes of so many causes looked at together (5 %, Holm). */
  readonly stands: boolean;
}

export interface LedgerGaps {
  readonly laps: readonly number[];
  /** In the order of the ledger, shifts not among them; causes that are nothing in both boats are left out. */
  readonly causes: readonly LedgerGap[];
  readonly shifts: LedgerGap | null;
  /** All causes but shifts. */
  readonly before: { readonly laps: readonly Q[]; readonly together: Q };
}

const LEVEL = 0.05;

/** Null when there is no lap for which both have a ledger against the same reference. */
export function ledgerGaps(first: BoatResult, second: BoatResult): LedgerGaps | null {
  const both = upwindLegs(first).flatMap(({ leg: { lap, ledger } }) => {
    const other = upwindLegs(second).find(({ leg }) => leg.lap === lap)?.leg.ledger;
    return ledger && other && ledger.reference === other.reference ? [{ lap, ledgers: [ledger, other] as const }] : [];
  });
  if (both.length === 0) return null;
  const pairs = both.map(({ ledgers }) => ledgers);
  const gaps = judged(causesOf(pairs).map((cause) => gapOf(cause, pairs)));
  const causes = gaps.filter(({ cause }) => cause !== 'shifts');
  const sums = both.map((_, k) => total(causes.map(({ laps }) => laps[k])));
  return {
    laps: both.map(({ lap }) => lap),
    causes,
    shifts: gaps.find(({ cause }) => cause === 'shifts') ?? null,
    before: { laps: sums, together: total(sums) },
  };
}

type Two = readonly [Ledger, Ledger];

function causesOf(pairs: readonly Two[]): Cause[] {
  const all = pairs.flatMap((two) => two.flatMap(({ entries }) => entries));
  const something = all.filter(({ metres }) => metres !== null && (metres.value !== 0 || (metres.se ?? 0) > 0));
  return [...new Set(something.map(({ cause }) => cause))].sort((a, b) => place(all, a) - place(all, b));
}

function place(all: readonly { readonly cause: Cause }[], cause: Cause): number {
  return all.findIndex((entry) => entry.cause === cause);
}

function gapOf(cause: Cause, pairs: readonly Two[]): Omit<LedgerGap, 'stands'> {
  const of = ({ entries }: Ledger): Q => entries.find((entry) => entry.cause === cause)?.metres ?? null;
  const laps = pairs.map(([a, b]) => difference(of(a), of(b)));
  return { cause, laps, together: total(laps) };
}

function judged(gaps: readonly Omit<LedgerGap, 'stands'>[]): LedgerGap[] {
  const chances = holm(gaps.map(({ together: q }) => (q?.se ? normalTwoSided(q.value / q.se) : NaN)));
  return gaps.map((gap, k) => ({ ...gap, stands: chances[k] <= LEVEL }));
}
