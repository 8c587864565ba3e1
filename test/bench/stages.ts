/** The stages of a debrief one by one, in this process. */
import { basename } from 'node:path';
import { logSource } from '../../src/cli/files.js';
import { debrief } from '../../src/debrief.js';
import type { Race } from '../../src/files/race-types.js';
import type { Bytes } from '../../src/importers/bytes.js';
import { importLog } from '../../src/importers/index.js';
import { readNmea } from '../../src/importers/nmea.js';
import { LogRows } from '../../src/importers/rows.js';
import { Tally } from '../../src/importers/tally.js';
import type { ImportedLog, LogSource } from '../../src/importers/types.js';
import type { Recording } from '../../src/recording/recording.js';
import { debriefPage } from '../../src/report/page.js';
import { jsonText } from '../../src/result/json.js';
import { THRESHOLDS } from '../../src/segment/thresholds.js';
import { receiverDisplacementSe } from '../../src/smooth/index.js';
import { boatModels } from '../../src/steps/boat-models.js';
import { checkRecording } from '../../src/steps/check-sensors.js';
import { cleanTracks } from '../../src/steps/clean-tracks.js';
import { errorModels } from '../../src/steps/error-model.js';
import { estimateBoat } from '../../src/steps/estimate-boat.js';
import { readLogs } from '../../src/steps/read-logs.js';
import { reconcileBoats } from '../../src/steps/reconcile-boats.js';
import { sailAll } from '../../src/steps/sail-all.js';
import type { Track } from './data.js';
import { measure } from './measure.js';

/** A log as the command line opens it. */
export const openFile = (path: string): LogSource => logSource(basename(path), path);

/** Sentences by the tolerant reader alone. */
export async function readTolerantly(path: string): Promise<Recording> {
  const { name, chunks } = openFile(path);
  const { settled } = await readNmea(chunks as Bytes, 'utf-8', new LogRows(), new Tally(name), {}, false);
  return settled.recording;
}

export const read = (path: string): Promise<ImportedLog> => importLog(openFile(path));

const log = (file: string) => ({ file, clockS: 0 });

export function raceOf({ gpx, wind }: Track): Race {
  const boat = { name: 'bench', sailor: 'bench', track: [log(gpx)], instruments: [log(wind)], boat: 'single-hander' };
  const nothing = { start: null, finish: null, zone: null, current: null, notes: null };
  return { name: 'bench', ...nothing, wind: [], marks: {}, runs: [], exclude: [], boats: [boat], boatAssumed: false };
}

export interface Stage {
  readonly name: string;
  /** [s] of processor time */
  readonly cpu: number;
  /** What went in: fixes, seconds of sailing, or bytes. */
  readonly size: number;
  readonly unit: string;
}

/** Every stage once, in order, each with what it was given. */
export async function stages(track: Track): Promise<Stage[]> {
  const race = raceOf(track);
  const open = openFile;
  const logs = await measure(() => readLogs(race, open));
  const fixes = logs.value.boats[0].track.time.length;
  const clean = await measure(() => cleanTracks(logs.value, checkRecording));
  const models = await boatModels(race, open);
  const options = { thresholds: THRESHOLDS, rigHeight: models[0].spec.rig.centre };
  const found = await measure(() => sailAll(race, logs.value, clean.value, null, options));
  const { wind } = found.value;
  const corrections = await measure(() => reconcileBoats(clean.value, wind, null, null));
  const estimates = await measure(() => {
    const errors = errorModels(
      clean.value,
      wind,
      corrections.value,
      (boat) => (seconds) => receiverDisplacementSe(seconds, boat.noise),
    );
    return wind.sailed.map((one, k) => estimateBoat(one, errors[k], clean.value.boats[k].track.awa));
  });
  const whole = await measure(() => debrief(race, open));
  const { result, series } = whole.value;
  const page = await measure(() => debriefPage(result, series));
  const json = await measure(() => jsonText(result));
  const seconds = clean.value.boats[0].track.n;
  return [
    { name: 'read track and wind', cpu: logs.cpu, size: fixes, unit: 'fixes' },
    { name: 'check and smooth', cpu: clean.cpu, size: fixes, unit: 'fixes' },
    { name: 'wind and segments', cpu: found.cpu, size: seconds, unit: 'seconds' },
    { name: 'reconcile instruments', cpu: corrections.cpu, size: seconds, unit: 'seconds' },
    { name: 'estimates', cpu: estimates.cpu, size: seconds, unit: 'seconds' },
    { name: 'all of the debrief', cpu: whole.cpu, size: fixes, unit: 'fixes' },
    { name: 'report', cpu: page.cpu, size: page.value.length, unit: 'bytes' },
    { name: 'result file', cpu: json.cpu, size: json.value.length, unit: 'bytes' },
  ];
}
