import type { BoatResult, Result } from '../result/result.js';
import { beats, QUANTITIES, windOf, type QuantityKey, type Value } from './quantities.js';
import { sailorName, type Sailors } from './sailors.js';

/** The logbook: result files of many races, and what each says of each sailor. */

/** One boat of one race. */
export interface Observation {
  readonly sailor: string;
  readonly race: string;
  /** UTC epoch seconds: the gun, or the first beat. */
  readonly time: number;
  /** Boat file by name, and the digest that says whether results compare. */
  readonly boat: string;
  readonly model: string;
  /** [kg, NaN where not said] */
  readonly crewMass: number;
  /** [kn, NaN where not known] */
  readonly wind: number;
  /** What the ledger was measured against; null without one. */
  readonly reference: string | null;
  readonly values: Readonly<Partial<Record<QuantityKey, Value>>>;
}

/**
 * What the races say, in order of time; boats without a beat say nothing.
 *
 * @param results One result a race.
 * @param sailors Aliases and hidden names.
 * @returns One observation for each boat of each race whose sailor is not hidden.
 */
export function observations(results: readonly Result[], sailors: Sailors): Observation[] {
  return inTime(results.flatMap((result) => result.boats.flatMap((boat) => observe(result, boat, sailors))));
}

export function inTime(all: readonly Observation[]): Observation[] {
  return [...all].sort((a, b) => a.time - b.time || compareText(a.race, b.race) || compareText(a.boat, b.boat));
}

function observe(result: Result, boat: BoatResult, sailors: Sailors): Observation[] {
  const sailor = sailorName(sailors, boat.sailor);
  const legs = beats(boat);
  if (sailor === null || legs.length === 0) return [];
  const values: Partial<Record<QuantityKey, Value>> = {};
  for (const { key, of } of QUANTITIES) {
    const value = of(boat);
    if (value) values[key] = value;
  }
  return [
    {
      sailor,
      race: result.race.name,
      time: Date.parse(result.race.start ?? legs[0].start) / 1000,
      boat: boat.model.boat,
      model: boat.model.sha256,
      crewMass: boat.crew_mass_kg ?? NaN,
      wind: windOf(boat, result.wind.tws_kn),
      reference: legs.find((leg) => leg.ledger)?.ledger?.reference ?? null,
      values,
    },
  ];
}

/** Order of code units: the same everywhere, whatever the reader's language. */
export function compareText(a: string, b: string): number {
  return a < b ? -1 : a > b ? 1 : 0;
}
