import { createSha256 } from '../math/sha256.js';
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
  return results
    .flatMap((result) => result.boats.flatMap((boat) => observe(result, boat, sailors)))
    .sort((a, b) => a.time - b.time || compareText(a.race, b.race) || compareText(a.boat, b.boat));
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

/** Day a race is filed under (UTC), null when nothing in it has a time. */
export function logbookDay(result: Result): string | null {
  return startOf(result)?.slice(0, 10) ?? null;
}

/** Eight characters that tell a race from others on the same day: the digest of its name and start. */
export function logbookDigest(result: Result): string {
  const hash = createSha256();
  hash.update(new TextEncoder().encode(`${result.race.name}\n${startOf(result) ?? ''}`));
  return hash.digest().slice(0, 8);
}

/** The gun; without one the earliest leg of any boat. */
function startOf(result: Result): string | null {
  const legs = result.boats.flatMap((boat) => boat.legs.map((leg) => leg.start));
  return result.race.start ?? (legs.length > 0 ? legs.reduce((a, b) => (Date.parse(b) < Date.parse(a) ? b : a)) : null);
}

/** True when two results are of one race: same name and start. */
export function sameRace(a: Result, b: Result): boolean {
  return a.race.name === b.race.name && startOf(a) === startOf(b);
}

/**
 * A race filed again: the newer result stands, and boats that only the older one knows are kept.
 *
 * @param older What is filed.
 * @param newer What comes.
 * @returns The result to file.
 */
export function mergeResults(older: Result, newer: Result): Result {
  const known = new Set(newer.boats.map((boat) => boat.name));
  const kept = older.boats.filter((boat) => !known.has(boat.name));
  if (kept.length === 0) return newer;
  const files = new Set(newer.inputs.map((input) => input.file));
  return {
    ...newer,
    inputs: [...newer.inputs, ...older.inputs.filter((input) => !files.has(input.file))],
    boats: [...newer.boats, ...kept],
  };
}
