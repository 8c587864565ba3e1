import type { BoatReference, LogReference, Race, StationReference } from '../files/race-types.js';
import { importLog } from '../importers/index.js';
import type { ImportedLog, ImportOptions, LogSource } from '../importers/types.js';
import { UserError, type Issue } from '../recording/issues.js';
import { mergeRecordings, sliceRecording } from '../recording/merge.js';
import { countFixes, type Recording } from '../recording/recording.js';

/** A log file as read, once however often it is named. */
export interface ReadFile {
  readonly file: string;
  readonly log: ImportedLog;
}

export interface BoatLogs {
  readonly reference: BoatReference;
  readonly track: Recording;
  readonly trackFiles: readonly string[];
  /** The boat's own instruments, apart from the track. */
  readonly instruments: readonly { readonly file: string; readonly recording: Recording }[];
}

export interface WindLog {
  readonly reference: StationReference;
  readonly recording: Recording;
}

export interface ReadLogs {
  readonly files: readonly ReadFile[];
  readonly boats: readonly BoatLogs[];
  readonly winds: readonly WindLog[];
  readonly issues: readonly Issue[];
}

/** Opens a log by the name it has in the race file. */
export type OpenLog = (file: string) => LogSource;

/** Reads every log of a race, each file once, and sorts them to boats and wind. */
export async function readLogs(race: Race, open: OpenLog): Promise<ReadLogs> {
  const files = new Map<string, ReadFile>();
  const issues: Issue[] = [];
  const read = async (reference: LogReference): Promise<Recording> => {
    const key = JSON.stringify([reference.file, reference.zone, reference.date, reference.columns]);
    let entry = files.get(key);
    if (!entry) {
      entry = { file: reference.file, log: await importLog(open(reference.file), optionsOf(reference, race)) };
      files.set(key, entry);
      issues.push(...entry.log.issues.map((issue) => ({ ...issue, file: reference.file })));
    }
    return sliceRecording(entry.log.recording, reference.clockS, reference.from, reference.to);
  };
  const boats: BoatLogs[] = [];
  for (const boat of race.boats) boats.push(await readBoat(boat, read, issues));
  const winds: WindLog[] = [];
  for (const wind of race.wind) {
    if (wind.kind === 'log') winds.push({ reference: wind, recording: await read(wind) });
  }
  return giveApparentWind({ files: [...files.values()], boats, winds, issues });
}

function optionsOf(reference: LogReference, race: Race): ImportOptions {
  const zone = reference.zone ?? race.zone ?? undefined;
  return {
    ...(zone === undefined ? {} : { zone }),
    ...(reference.date === undefined ? {} : { date: reference.date }),
    ...(reference.columns === undefined ? {} : { columns: reference.columns }),
  };
}

async function readBoat(
  reference: BoatReference,
  read: (reference: LogReference) => Promise<Recording>,
  issues: Issue[],
): Promise<BoatLogs> {
  const parts: Recording[] = [];
  for (const log of reference.track) parts.push(await read(log));
  const { recording, dropped } = mergeRecordings(parts);
  const file = reference.track[0]?.file;
  if (dropped > 0) {
    issues.push({
      code: 'tracks-overlap',
      message: `${reference.name}: ${dropped} rows of a second track lie in time before the end of the first and were left out.`,
      ...(file === undefined ? {} : { file }),
    });
  }
  if (countFixes(recording) === 0) {
    throw new UserError(`${file ?? reference.name}: no position with a time in the track of ${reference.name}`, {
      exitCode: 2,
      suggestion: 'Name a GPX, NMEA or table with time, latitude and longitude as its track.',
    });
  }
  const instruments = [];
  for (const log of reference.instruments) instruments.push({ file: log.file, recording: await read(log) });
  return { reference, track: recording, trackFiles: reference.track.map((log) => log.file), instruments };
}

/** A wind log that holds only apparent wind and no position is the one boat's; with several boats it is nobody's. */
function giveApparentWind(logs: ReadLogs): ReadLogs {
  const winds: WindLog[] = [];
  const boats = [...logs.boats];
  for (const wind of logs.winds) {
    const { channels } = wind.recording;
    const isTrue = channels.twd ?? channels.twdMagnetic;
    const apparentOnly = !isTrue && channels.awa && countFixes(wind.recording) === 0;
    if (!isTrue && !channels.awa) {
      const what = channels.tws ? 'a wind speed but no wind direction in this log' : 'no wind in this log';
      throw new UserError(`${wind.reference.file}: ${what}`, {
        exitCode: 2,
        suggestion: 'A wind log needs a wind direction and speed, or a moving boat’s apparent wind.',
      });
    }
    if (!apparentOnly) winds.push(wind);
    else if (boats.length === 1) {
      const [boat] = boats;
      const own = { file: wind.reference.file, recording: wind.recording };
      boats[0] = { ...boat, instruments: [...boat.instruments, own] };
    } else {
      throw new UserError(`${wind.reference.file}: apparent wind without a position, and more than one boat`, {
        exitCode: 2,
        suggestion: 'Name it as `instruments` of the boat that carried it, in a race file.',
      });
    }
  }
  return { ...logs, boats, winds };
}
