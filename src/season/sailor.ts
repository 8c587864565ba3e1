import { byBoat, byCrewMass, byWind, type Group } from './bands.js';
import type { Observation } from './logbook.js';
import { QUANTITIES, type QuantityKey, type SeasonQuantity } from './quantities.js';
import { LEAST_RACES, raceTrend, type Trend } from './trend.js';

/** One sailor's season before verdicts. */
export interface SailorSeason {
  readonly name: string;
  /** All races, in order of time. */
  readonly races: readonly Observation[];
  readonly trends: readonly QuantityTrend[];
  readonly byWind: readonly Group[];
  readonly byBoat: readonly Group[];
  readonly byCrewMass: readonly Group[];
  readonly notes: readonly string[];
}

export interface QuantityTrend {
  readonly quantity: SeasonQuantity;
  readonly trend: Trend;
  /** Races that joined in the trend. */
  readonly races: readonly Observation[];
}

/** Seconds in a day. */
export const DAY = 86400;

/**
 * Trends and groups of one sailor. Races made with different boat files do not join in one trend, nor races measured
 * against different kinds of reference: the largest set counts, the latest of equals.
 *
 * @param name  The sailor.
 * @param races The sailor's races, in order of time.
 * @param origin UTC epoch second of day 0 of the trends.
 */
export function sailorSeason(name: string, races: readonly Observation[], origin: number): SailorSeason {
  const joined = largest(races, ({ model }) => model);
  const trends = QUANTITIES.flatMap((quantity): QuantityTrend[] => {
    const known = joined.filter((race) => race.values[quantity.key]);
    const own = quantity.byReference ? largest(known, ({ reference }) => reference) : known;
    return own.length === 0 ? [] : [{ quantity, races: own, trend: trendOf(own, quantity.key, origin) }];
  });
  return {
    name,
    races,
    trends,
    byWind: byWind(joined),
    byBoat: byBoat(races),
    byCrewMass: byCrewMass(joined),
    notes: notes(races, joined, trends),
  };
}

function trendOf(races: readonly Observation[], key: QuantityKey, origin: number): Trend {
  return raceTrend(
    races.flatMap((race) => {
      const value = race.values[key];
      return value ? [{ day: (race.time - origin) / DAY, value: value.value, se: value.se, wind: race.wind }] : [];
    }),
  );
}

/** The members that share the commonest key; of equals, those with the latest race. */
function largest<K>(races: readonly Observation[], keyOf: (race: Observation) => K): readonly Observation[] {
  const sets = new Map<K, Observation[]>();
  for (const race of races) {
    const set = sets.get(keyOf(race));
    if (set) set.push(race);
    else sets.set(keyOf(race), [race]);
  }
  let best: readonly Observation[] = [];
  for (const set of sets.values()) {
    const later = best.length === set.length && set.at(-1)!.time >= (best.at(-1)?.time ?? -Infinity);
    if (set.length > best.length || later) best = set;
  }
  return best;
}

function notes(
  races: readonly Observation[],
  joined: readonly Observation[],
  trends: readonly QuantityTrend[],
): string[] {
  const found: string[] = [];
  const apart = races.length - joined.length;
  if (apart > 0) {
    found.push(`${apart} of ${races.length} races were made with another boat file and are not joined in the trends`);
  }
  const mixed = trends.find(
    ({ quantity, races: own }) =>
      quantity.byReference && own.length < joined.filter((race) => race.values[quantity.key]).length,
  );
  if (mixed) found.push('races measured against another kind of reference are left out of share and settled speed');
  const tested = trends.filter(({ trend }) => trend.n >= LEAST_RACES);
  if (tested.some(({ trend }) => trend.wind === 'not known')) {
    found.push('the wind speed is not known for enough races: it is not allowed for');
  }
  if (tested.some(({ trend }) => trend.wind === 'one with time')) {
    found.push('the wind rose or fell evenly with the season: its effect cannot be told from a trend');
  }
  return found;
}
