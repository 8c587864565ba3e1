/** A race as far as its division into legs and turns: logs read and smoothed once, sailed as often as a test likes. */
import { readFileSync } from 'node:fs';
import type { Race } from '../../src/files/race-types.js';
import { THRESHOLDS, type Thresholds } from '../../src/segment/thresholds.js';
import { checkRecording } from '../../src/steps/check-sensors.js';
import { cleanTracks, type CleanTracks } from '../../src/steps/clean-tracks.js';
import { readLogs, type OpenLog } from '../../src/steps/read-logs.js';
import { sailAll, type SailedRace } from '../../src/steps/sail-all.js';
import { recording } from '../importers/recordings.js';

export interface Prepared {
  readonly clean: CleanTracks;
  readonly sail: (thresholds?: Thresholds) => SailedRace;
}

export async function prepare(race: Race, open: OpenLog): Promise<Prepared> {
  const logs = await readLogs(race, open);
  const clean = cleanTracks(logs, checkRecording);
  return {
    clean,
    sail: (thresholds = THRESHOLDS) => sailAll(race, logs, clean, null, { thresholds, rigHeight: 2.5 }),
  };
}

/** A race of one boat whose one log holds all there is. */
export function raceOf(file: string, changes: Partial<Race> = {}): Race {
  const track = [{ file, clockS: 0 }];
  return {
    name: 'A log',
    start: null,
    finish: null,
    zone: null,
    wind: [],
    current: null,
    marks: {},
    runs: [],
    exclude: [],
    boats: [{ name: 'Boat', sailor: 'Boat', track, instruments: [], boat: 'day-keelboat' }],
    boatAssumed: false,
    notes: null,
    ...changes,
  };
}

/** Opens real recordings. */
export const openRecording: OpenLog = (file) => ({
  name: file,
  chunks: [new Uint8Array(readFileSync(recording(file)))],
});
