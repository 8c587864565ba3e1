import { holm } from './math/holm.js';
import type { Quantity, Result } from './result/result.js';
import { compareText, inTime, observations, type Observation } from './season/logbook.js';
import { ALL_AS_WRITTEN, type Sailors } from './season/sailors.js';
import { sailorSeason, type QuantityTrend, type SailorSeason } from './season/sailor.js';
import type { SeasonResult, SeasonTrend, TrendVerdict } from './season/season-types.js';
import { racesNeeded, type Trend } from './season/trend.js';

export interface SeasonOptions {
  readonly sailors?: Sailors;
}

/** What the page draws from: the season file and what stands behind each of its sailors, in the same order. */
export interface Season {
  readonly json: SeasonResult;
  readonly detail: readonly SailorSeason[];
}

/** Chance that a season of sailors who do not change shows any verdict at all. */
const LEVEL = 0.05;
/** Slopes are told by the month. */
const DAYS = 30;

/**
 * Every race of a logbook as trends per sailor.
 *
 *     results -> observations -> sailors: trends, groups -> verdicts over the whole page
 *
 * @param results One result a race, any order.
 * @param options Aliases and hidden sailors.
 * @returns The season file and the detail behind it.
 */
export function season(results: readonly Result[], options: SeasonOptions = {}): Season {
  return seasonOf(observations(results, options.sailors ?? ALL_AS_WRITTEN));
}

/** The same of results that come one by one, none of which is kept: a logbook may be large. */
export async function seasonOfMany(results: AsyncIterable<Result>, options: SeasonOptions = {}): Promise<Season> {
  const all: Observation[] = [];
  for await (const result of results) all.push(...observations([result], options.sailors ?? ALL_AS_WRITTEN));
  return seasonOf(inTime(all));
}

function seasonOf(all: readonly Observation[]): Season {
  const names = [...new Set(all.map(({ sailor }) => sailor))].sort(compareText);
  const races = new Map(names.map((name) => [name, all.filter(({ sailor }) => sailor === name)]));
  const detail = names.map((name) => sailorSeason(name, races.get(name)!, all[0].time));
  const adjusted = holm(detail.flatMap(({ trends }) => trends.map(({ trend }) => trend.p)));
  const level = LEVEL / Math.max(1, adjusted.filter((p) => !Number.isNaN(p)).length);
  let k = 0;
  const sailors = detail.map((sailor) => ({
    name: sailor.name,
    races: sailor.races.length,
    trends: sailor.trends.map((trend) => told(trend, adjusted[k++], level)),
  }));
  return { json: { format: 'legwork-season', version: 1, sailors }, detail };
}

function told({ quantity, trend }: QuantityTrend, p: number, level: number): SeasonTrend {
  const shown = p <= LEVEL && trend.slope !== 0;
  const verdict: TrendVerdict = !shown ? 'nothing shown yet' : quantity.better * trend.slope > 0 ? 'better' : 'worse';
  return {
    quantity: quantity.key,
    slope_per_30_days: slope(trend),
    p: Number.isNaN(p) ? 1 : p,
    verdict,
    races_needed: shown ? null : racesNeeded(trend, level),
  };
}

function slope(trend: Trend): Quantity | null {
  if (!Number.isFinite(trend.slope)) return null;
  return { value: DAYS * trend.slope, se: Number.isFinite(trend.se) ? DAYS * trend.se : null, basis: 'derived' };
}
