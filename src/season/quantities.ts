import type { BoatResult, LegResult, Q, Steady } from '../result/result.js';
import { weightedMean } from '../math/stats.js';

/** What a season follows, and how a race's value is taken from its legs. */

export interface Value {
  readonly value: number;
  /** NaN where the result states none. */
  readonly se: number;
}

export interface SeasonQuantity {
  readonly key: QuantityKey;
  /** +1: more is better, -1: less is. */
  readonly better: 1 | -1;
  /** Measured against the ledger's reference: races with another kind of reference do not join. */
  readonly byReference: boolean;
  readonly of: (boat: BoatResult) => Value | null;
}

export type QuantityKey =
  'share' | 'efficiency' | 'settled_vmg' | 'tack_cost_m' | 'leeway_off_best_deg' | 'sheeting_off_best_deg';

export const QUANTITIES: readonly SeasonQuantity[] = [
  { key: 'share', better: 1, byReference: true, of: share },
  { key: 'efficiency', better: 1, byReference: false, of: efficiency },
  { key: 'settled_vmg', better: 1, byReference: true, of: settledVmg },
  { key: 'tack_cost_m', better: -1, byReference: false, of: tackCost },
  { key: 'leeway_off_best_deg', better: -1, byReference: false, of: (boat) => offBest(boat, 'leeway_deg') },
  { key: 'sheeting_off_best_deg', better: -1, byReference: false, of: (boat) => offBest(boat, 'sheeting_deg') },
];

/** Upwind legs only: the program judges nothing else. */
export function beats(boat: BoatResult): LegResult[] {
  return boat.legs.filter((leg) => leg.kind === 'upwind');
}

/** Metres made over metres there were to make, all beats together. */
function share(boat: BoatResult): Value | null {
  const legs = beats(boat).flatMap(({ ledger, share: part }) => {
    const [available, made] = [ledger?.available_m?.value, ledger?.made_m?.value];
    if (available === undefined || made === undefined || !(available > 0)) return [];
    return [{ value: made / available, se: part?.se ?? NaN, weight: available }];
  });
  return pooled(legs);
}

function efficiency(boat: BoatResult): Value | null {
  return pooled(beats(boat).flatMap((leg) => inSettledTime(leg, leg.efficiency)));
}

/**
 * Settled speed made good over what the reference would make in the same wind. With the model as reference this is
 * `efficiency` once more, so it is left out there.
 */
function settledVmg(boat: BoatResult): Value | null {
  const legs = beats(boat).flatMap((leg) => {
    const seconds = (Date.parse(leg.end) - Date.parse(leg.start)) / 1000;
    const available = leg.ledger?.reference === 'model' ? undefined : leg.ledger?.available_m?.value;
    const vmg = leg.steady?.vmg_kn;
    if (!vmg || available === undefined || !(available > 0 && seconds > 0)) return [];
    const reference = (available / seconds) * KNOTS_PER_METRE_A_SECOND;
    return inSettledTime(leg, {
      ...vmg,
      value: vmg.value / reference,
      se: vmg.se === null ? null : vmg.se / reference,
    });
  });
  return pooled(legs);
}

const KNOTS_PER_METRE_A_SECOND = 3600 / 1852;

/** Mean metres a tack cost. */
function tackCost(boat: BoatResult): Value | null {
  const tacks = boat.manoeuvres.flatMap(({ kind, loss_m }) =>
    kind === 'tack' && loss_m ? [{ value: loss_m.value, se: loss_m.se ?? NaN, weight: 1 }] : [],
  );
  return pooled(tacks);
}

/** How far settled sailing was from the model's best, without sign. */
function offBest(boat: BoatResult, key: 'leeway_deg' | 'sheeting_deg'): Value | null {
  const legs = beats(boat).flatMap((leg) => {
    const [sailed, best] = [leg.steady?.[key], leg.optimum?.[key]];
    return sailed && best ? inSettledTime(leg, { ...sailed, value: Math.abs(sailed.value - best.value) }) : [];
  });
  return pooled(legs);
}

const known = (wind: Q): Q => (wind?.basis === 'inferred' ? null : wind);

interface Weighted extends Value {
  readonly weight: number;
}

function inSettledTime(leg: { readonly steady: Steady | null }, q: Q): Weighted[] {
  if (!q || !leg.steady || !(leg.steady.seconds > 0)) return [];
  return [{ value: q.value, se: q.se ?? NaN, weight: leg.steady.seconds }];
}

/** Mean in proportion to weight; errors of legs are taken as independent. */
function pooled(parts: readonly Weighted[]): Value | null {
  const weights = parts.map(({ weight }) => weight);
  const value = weightedMean(
    parts.map((part) => part.value),
    weights,
  );
  if (!Number.isFinite(value)) return null;
  const total = weights.reduce((sum, weight) => sum + weight, 0);
  return { value, se: Math.sqrt(parts.reduce((sum, { se, weight }) => sum + ((weight / total) * se) ** 2, 0)) };
}

/**
 * Mean true wind speed of the settled sailing, or the race's. A speed inferred through the boat model is none: it goes
 * with the boat's own speed. [kn, NaN where not known]
 */
export function windOf(boat: BoatResult, raceWind: Q): number {
  const legs = beats(boat).flatMap((leg) => inSettledTime(leg, known(leg.steady?.tws_kn ?? null)));
  return pooled(legs)?.value ?? known(raceWind)?.value ?? NaN;
}
