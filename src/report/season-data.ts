import type { Q } from '../result/result.js';
import type { Unit } from './format.js';

/** What the page of a season draws from: trends with the races behind them. */
export interface SeasonData {
  readonly json: { readonly sailors: readonly SailorTrends[] };
  readonly detail: readonly SailorDetail[];
}

export interface SailorTrends {
  readonly name: string;
  readonly races: number;
  readonly trends: readonly TrendWords[];
}

export interface TrendWords {
  readonly quantity: string;
  readonly slope_per_30_days: Q;
  readonly p: number;
  readonly verdict: 'better' | 'worse' | 'nothing shown yet';
  readonly races_needed: number | null;
}

export interface RaceValue {
  readonly race: string;
  /** UTC seconds. */
  readonly time: number;
  readonly wind: number;
  readonly values: Readonly<Record<string, { readonly value: number; readonly se: number } | undefined>>;
}

export interface SailorDetail {
  readonly name: string;
  readonly races: readonly RaceValue[];
  readonly trends: readonly {
    readonly quantity: { readonly key: string };
    readonly trend: { readonly slope: number; readonly intercept: number; readonly wind: string };
    readonly races: readonly RaceValue[];
  }[];
  readonly byWind: readonly GroupData[];
  readonly byBoat: readonly GroupData[];
  readonly byCrewMass: readonly GroupData[];
  readonly notes: readonly string[];
}

export interface GroupData {
  readonly name: string;
  readonly races: number;
  readonly means: Readonly<Record<string, { readonly value: number; readonly se: number | null } | undefined>>;
}

export interface Words {
  readonly words: string;
  readonly unit: Unit;
  readonly times: number;
}

export const QUANTITIES: Readonly<Record<string, Words>> = {
  share: { words: 'Share of the metres there were', unit: 'percent', times: 100 },
  efficiency: { words: 'Settled VMG against the model’s optimum', unit: 'percent', times: 100 },
  settled_vmg: { words: 'Settled VMG against the reference', unit: 'percent', times: 100 },
  tack_cost_m: { words: 'Cost of a tack', unit: 'm', times: 1 },
  leeway_off_best_deg: { words: 'Leeway off the model’s best', unit: 'deg', times: 1 },
  sheeting_off_best_deg: { words: 'Sheeting off the model’s best', unit: 'deg', times: 1 },
};

export function wordsOf(key: string): Words {
  return QUANTITIES[key] ?? { words: key, unit: 'count', times: 1 };
}

/** The page of a race as a link, every part of its path encoded; null where none lies beside. */
export type Links = (race: RaceValue) => string | null;
