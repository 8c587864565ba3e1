import type { BoatResult, Cause, LegResult, ManoeuvreResult, Q, Quantity, Result, TackSide } from '../result/result.js';
import { secondsOf } from './format.js';

/** Figures the page needs that are plain sums or differences of what the result holds. */

export interface NumberedLeg {
  readonly leg: LegResult;
  /** Place in the boat's `legs`. */
  readonly index: number;
}

export function upwindLegs(boat: BoatResult): NumberedLeg[] {
  return boat.legs.map((leg, index) => ({ leg, index })).filter(({ leg }) => leg.kind === 'upwind');
}

const STRENGTH = ['measured', 'derived', 'inferred', 'assumed'] as const;

/** The weakest basis of several: a sum is known no better than its worst part. */
function weakest(parts: readonly Quantity[]): Quantity['basis'] {
  return STRENGTH[Math.max(1, ...parts.map((q) => STRENGTH.indexOf(q.basis)))];
}

function rootSum(parts: readonly (number | null)[]): number | null {
  let sum = 0;
  for (const se of parts) {
    if (se === null) return null;
    sum += se * se;
  }
  return Math.sqrt(sum);
}

/** First less second; errors add in quadrature, the shared calibration error is taken to cancel. */
export function difference(a: Q, b: Q): Q {
  if (!a || !b) return null;
  return { value: a.value - b.value, se: rootSum([a.se, b.se]), basis: weakest([a, b]) };
}

/** Sum of independent quantities; null when one is missing. */
export function total(parts: readonly Q[]): Q {
  const known = parts.filter((q): q is Quantity => q !== null);
  if (known.length === 0 || known.length < parts.length) return null;
  return { value: known.reduce((s, q) => s + q.value, 0), se: rootSum(known.map((q) => q.se)), basis: weakest(known) };
}

/** Mean weighted by the seconds behind each part; a systematic part is shared, so it is averaged, not reduced. */
export function timeMean(parts: readonly { readonly q: Q; readonly seconds: number }[]): Q {
  const known = parts.filter((p): p is { q: Quantity; seconds: number } => p.q !== null && p.seconds > 0);
  const seconds = known.reduce((s, p) => s + p.seconds, 0);
  if (seconds === 0) return null;
  const share = known.map((p) => p.seconds / seconds);
  const se = rootSum(known.map((p, i) => (p.q.se === null ? null : p.q.se * share[i])));
  const sys = known.reduce((s, p, i) => s + (p.q.sys ?? 0) * share[i], 0);
  const value = known.reduce((s, p, i) => s + p.q.value * share[i], 0);
  return { value, se, basis: weakest(known.map((p) => p.q)), ...(sys ? { sys } : {}) };
}

type SteadyKey = Exclude<keyof TackSide, 'seconds'>;

/** A boat's settled figure over all her upwind legs. */
export function settledMean(boat: BoatResult, key: SteadyKey): Q {
  return timeMean(
    upwindLegs(boat).map(({ leg }) => ({ q: leg.steady?.[key] ?? null, seconds: leg.steady?.seconds ?? 0 })),
  );
}

export function efficiencyMean(boat: BoatResult): Q {
  return timeMean(upwindLegs(boat).map(({ leg }) => ({ q: leg.efficiency, seconds: leg.steady?.seconds ?? 0 })));
}

export interface DayBest {
  readonly boat: BoatResult;
  readonly leg: LegResult;
  readonly vmg: Quantity;
}

/** The upwind leg with the highest settled VMG; null when none has one. */
export function dayBest(result: Result): DayBest | null {
  let best: DayBest | null = null;
  for (const boat of result.boats) {
    for (const { leg } of upwindLegs(boat)) {
      const vmg = leg.steady?.vmg_kn ?? null;
      if (vmg && (!best || vmg.value > best.vmg.value)) best = { boat, leg, vmg };
    }
  }
  return best;
}

export interface CauseTotal {
  readonly cause: Cause;
  readonly metres: Quantity;
}

/** Metres by cause over all upwind legs, in the order of the ledger. */
export function causeTotals(boat: BoatResult): CauseTotal[] {
  const byCause = new Map<Cause, Q[]>();
  for (const { leg } of upwindLegs(boat)) {
    for (const { cause, metres } of leg.ledger?.entries ?? []) {
      byCause.set(cause, [...(byCause.get(cause) ?? []), metres]);
    }
  }
  return [...byCause].flatMap(([cause, parts]) => {
    const metres = total(parts.filter((q) => q !== null));
    return metres ? [{ cause, metres }] : [];
  });
}

export function manoeuvresOf(boat: BoatResult, leg: LegResult): ManoeuvreResult[] {
  const from = secondsOf(leg.start);
  const to = secondsOf(leg.end);
  return boat.manoeuvres.filter((m) => {
    const at = secondsOf(m.time);
    return at >= from && at <= to;
  });
}

/** Mean cost of the tacks of a leg. */
export function tackCost(boat: BoatResult, leg: LegResult): Q {
  const costs = manoeuvresOf(boat, leg)
    .filter((m) => m.kind === 'tack')
    .map((m) => m.loss_m)
    .filter((q): q is Quantity => q !== null);
  const sum = total(costs);
  return sum && { ...sum, value: sum.value / costs.length, se: sum.se === null ? null : sum.se / costs.length };
}

/** Is a difference evidence: beyond two of its standard errors. */
export function beyondError(q: Q): boolean {
  return q !== null && q.se !== null && Math.abs(q.value) > 2 * q.se;
}
