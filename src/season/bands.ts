import { weightedMean } from '../math/stats.js';
import type { Observation } from './logbook.js';
import { QUANTITIES, type QuantityKey } from './quantities.js';

/** A sailor's races sorted by wind, boat and crew weight: where the metres go in which conditions. */

export interface Group {
  /** `light`, `medium`, `fresh`; a boat's name; a crew weight such as `75 to 80 kg`. */
  readonly name: string;
  readonly races: number;
  readonly means: Readonly<Partial<Record<QuantityKey, GroupMean>>>;
}

export interface GroupMean {
  readonly value: number;
  /** Sampling error of the mean, from the spread between races; null for a single race. */
  readonly se: number | null;
  readonly races: number;
}

/** Wind bands by the speed at which crews change what they do: below hiking, hiking, easing. Common practice, no source. [kn] */
export const WIND_BANDS = [
  { name: 'light', below: 8 },
  { name: 'medium', below: 14 },
  { name: 'fresh', below: Infinity },
] as const;

/** Width of a class of crew weight. [kg] */
const CREW_CLASS = 5;

export function byWind(races: readonly Observation[]): Group[] {
  const band = (wind: number): string | null => WIND_BANDS.find(({ below }) => wind < below)?.name ?? null;
  const order = WIND_BANDS.map(({ name }): string => name);
  return grouped(races, ({ wind }) => band(wind)).sort((a, b) => order.indexOf(a.name) - order.indexOf(b.name));
}

export function byBoat(races: readonly Observation[]): Group[] {
  return grouped(races, ({ boat }) => boat);
}

export function byCrewMass(races: readonly Observation[]): Group[] {
  const lowest = (mass: number): number => CREW_CLASS * Math.floor(mass / CREW_CLASS);
  const name = ({ crewMass }: Observation): string | null =>
    Number.isFinite(crewMass) ? `${lowest(crewMass)} to ${lowest(crewMass) + CREW_CLASS} kg` : null;
  return grouped(
    [...races].sort((a, b) => a.crewMass - b.crewMass),
    name,
  );
}

function grouped(races: readonly Observation[], nameOf: (race: Observation) => string | null): Group[] {
  const groups = new Map<string, Observation[]>();
  for (const race of races) {
    const name = nameOf(race);
    if (name === null) continue;
    const group = groups.get(name);
    if (group) group.push(race);
    else groups.set(name, [race]);
  }
  return [...groups].map(([name, members]) => ({ name, races: members.length, means: meansOf(members) }));
}

function meansOf(races: readonly Observation[]): Group['means'] {
  const means: Partial<Record<QuantityKey, GroupMean>> = {};
  for (const { key } of QUANTITIES) {
    const values = races.flatMap((race) => race.values[key]?.value ?? []);
    if (values.length > 0) means[key] = meanOf(values);
  }
  return means;
}

function meanOf(values: readonly number[]): GroupMean {
  const n = values.length;
  const value = weightedMean(values, new Array<number>(n).fill(1));
  const squares = values.reduce((sum, v) => sum + (v - value) ** 2, 0);
  return { value, se: n < 2 ? null : Math.sqrt(squares / (n - 1) / n), races: n };
}
