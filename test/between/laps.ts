import { readFileSync } from 'node:fs';
import { betweenBoat } from '../../src/compare.js';
import type { BetweenBoat } from '../../src/between/boat.js';
import { debrief } from '../../src/debrief.js';
import type { Race } from '../../src/files/race-types.js';
import { recording } from '../importers/recordings.js';

export const knotsOf = (speed: number): number => (speed * 3600) / 1852;

interface Laps {
  readonly first: BetweenBoat;
  readonly second: BetweenBoat;
  readonly shift: number;
}

let laps: Promise<Laps> | undefined;

/** The two beats of one yacht as two boats that sail leg 1, and the seconds between them; five hours, read once. */
export function lapAgainstLap(): Promise<Laps> {
  return (laps ??= readLaps());
}

async function readLaps(): Promise<Laps> {
  const log = 'two-laps/two-laps.nmea';
  const reference = { file: log, clockS: 0 };
  const race: Race = {
    name: 'Two laps',
    start: null,
    finish: null,
    zone: null,
    wind: [],
    current: null,
    marks: {},
    runs: [],
    exclude: [],
    boats: [{ name: 'Yacht', sailor: 'Yacht', track: [reference], instruments: [], boat: 'day-keelboat' }],
    boatAssumed: false,
    notes: null,
  };
  const { result, series } = await debrief(race, (file) => ({
    name: file,
    chunks: [new Uint8Array(readFileSync(recording(file)))],
  }));
  const yacht = betweenBoat(series.boats[0], result.boats[0], []);
  const [one, other] = yacht.legs.slice(-2);
  return {
    first: { ...yacht, legs: [{ ...one, lap: 1 }] },
    second: { ...yacht, legs: [{ ...other, lap: 1 }] },
    shift: other.from - one.from,
  };
}
