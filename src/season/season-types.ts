import type { Q } from '../result/result.js';

/** The season file: `legwork season --json`. */
export interface SeasonResult {
  readonly format: 'legwork-season';
  readonly version: 1;
  readonly sailors: readonly SeasonSailor[];
}

export interface SeasonSailor {
  readonly name: string;
  readonly races: number;
  readonly trends: readonly SeasonTrend[];
}

export type TrendVerdict = 'better' | 'worse' | 'nothing shown yet';

export interface SeasonTrend {
  readonly quantity: string;
  /** Change in 30 days; null for fewer than two days. */
  readonly slope_per_30_days: Q;
  /** Adjusted for all trends of the season, 1 where there are too few races: a verdict is one below 0.05. */
  readonly p: number;
  readonly verdict: TrendVerdict;
  /** More races that would show it; null once shown, or where none in sight would. */
  readonly races_needed: number | null;
}
