import { InvalidArgumentError } from 'commander';
import type { Command } from 'commander';
import { raceParts } from '../index.js';
import { unusable } from './files.js';
import type { RaceOptions } from './races.js';

/** What `debrief`, `compare` and `tune` are told besides their INPUT. */
export interface RaceFlags {
  readonly wind?: RaceOptions['wind'];
  readonly boat?: string;
  readonly start?: string;
  readonly finish?: string;
  readonly zone?: string;
  readonly date?: string;
  readonly current?: RaceOptions['current'];
  readonly columns?: Readonly<Record<string, string>>;
  readonly quiet?: boolean;
  readonly progress: boolean;
  readonly keepGoing?: boolean;
}

export interface OutputFlags {
  readonly out?: string;
  readonly json?: string;
  readonly csv?: string;
  readonly geojson?: string;
  readonly parquet?: string;
  readonly logbook?: string;
}

export function addRaceOptions(command: Command): Command {
  return command
    .option('--wind <FILE|DIR@KNOTS>', 'wind log, or one wind by hand; repeatable, adds to the race file', addWind)
    .option('--boat <NAME|FILE>', 'built-in boat or boat file, for all boats')
    .option('--start <TIME>', 'the gun: 14:05 or 2026-04-18T14:05:00+02:00')
    .option('--finish <TIME>', 'the finish, written likewise')
    .option('--zone <IANA>', 'time zone for times that carry none, such as Europe/Zurich')
    .option('--date <DAY>', 'day (YYYY-MM-DD) of times and logs that carry none')
    .option('--current <SET,DRIFT>', 'where the current flows to and its knots, such as 90,0.3', readCurrent)
    .option(
      '--columns <HEADER=FIELD,...>',
      "how to read a table's headers: 'wind dir=twd_deg,Speed=sog_kn:m/s'",
      addColumns,
    );
}

export function addOutputOptions(command: Command, report: string): Command {
  return command
    .option('--out <FILE>', `the report (default: ${report})`)
    .option('--json <FILE>', 'the result file; - is standard output')
    .option('--csv <FOLDER>', 'tables: legs.csv and seconds.csv')
    .option('--geojson <FILE>', 'tracks, legs, manoeuvres and marks')
    .option('--parquet <FILE>', 'legs and settled spells');
}

export function addManners(command: Command, batch = true): Command {
  command.option('--quiet', 'no summary').option('--no-progress', 'no progress');
  return batch ? command.option('--keep-going', 'go on with the next race after a failure') : command;
}

/** `215@12` is a wind by hand, all else a file. */
function addWind(text: string, before: RaceOptions['wind'] = []): RaceOptions['wind'] {
  const match = /^(-?\d+(?:\.\d+)?)\s*@\s*(\d+(?:\.\d+)?)(?:\s*kn)?$/.exec(text);
  if (!match) return [...before, text];
  const [twd_deg, tws_kn] = [Number(match[1]), Number(match[2])];
  if (Math.abs(twd_deg) > 360 || tws_kn > 150) {
    throw new InvalidArgumentError('A wind by hand is DIRECTION@KNOTS, such as 215@12.');
  }
  return [...before, { twd_deg, tws_kn }];
}

function readCurrent(text: string): { set_deg: number; drift_kn: number } {
  const match = /^\s*(-?\d+(?:\.\d+)?)\s*,\s*(\d+(?:\.\d+)?)\s*$/.exec(text);
  const [set_deg, drift_kn] = match ? [Number(match[1]), Number(match[2])] : [NaN, NaN];
  if (Math.abs(set_deg) <= 360 && drift_kn <= 20) return { set_deg, drift_kn };
  throw new InvalidArgumentError('A current is SET,DRIFT in degrees and knots, such as 90,0.3.');
}

/** `wind dir=twd_deg,Speed=sog_kn:m/s`; a header may hold `=`, not a comma. */
export function addColumns(text: string, before: Readonly<Record<string, string>> = {}): Record<string, string> {
  const columns: Record<string, string> = { ...before };
  for (const part of text.split(',')) {
    const at = part.lastIndexOf('=');
    const [header, field] = [part.slice(0, Math.max(0, at)).trim(), part.slice(at + 1).trim()];
    if (header === '' || field === '') {
      throw new InvalidArgumentError(`"${part}" is not HEADER=FIELD, such as 'wind dir=twd_deg'.`);
    }
    columns[header] = field;
  }
  return columns;
}

export function collect(text: string, before: readonly string[] = []): string[] {
  return [...before, text];
}

/** `4:24:2`, or one wind alone. Both ends are included. */
export function readWinds(text: string): number[] {
  const parts = text.split(':').map((part) => (part.trim() === '' ? NaN : Number(part)));
  const [from, to = from, step = 1] = parts;
  const sound = parts.length <= 3 && parts.every(Number.isFinite) && from > 0 && to >= from && to <= 60 && step > 0;
  const count = Math.floor((to - from) / step + 1e-9) + 1;
  if (!sound || count > 1000) {
    throw new InvalidArgumentError('Winds are FROM:TO:STEP in knots above 0 and up to 60, such as 4:24:2.');
  }
  return Array.from({ length: count }, (_, i) => Number((from + i * step).toFixed(9)));
}

/** Times, days and zones on the command line are held to the same rules as in a race file. */
export async function checkFlags(flags: Pick<RaceFlags, 'start' | 'finish' | 'zone' | 'date'>): Promise<void> {
  const { parseTime, isDay, isZone } = await raceParts();
  const check = (option: string, text: string | undefined, good: (text: string) => boolean, how: string): void => {
    if (text === undefined || good(text)) return;
    throw unusable(`--${option} ${text}: ${how}`);
  };
  const isTime = (text: string): boolean => parseTime(text) !== null;
  check('start', flags.start, isTime, 'not a time. Write 14:05 or 2026-04-18T14:05:00+02:00.');
  check('finish', flags.finish, isTime, 'not a time. Write 14:05 or 2026-04-18T14:05:00+02:00.');
  check('zone', flags.zone, isZone, 'not a time zone of the IANA data base. Write one such as Europe/Zurich.');
  check('date', flags.date, isDay, 'not a day. Write YYYY-MM-DD.');
}

/** What a job needs of the flags. */
export function raceOptions(flags: RaceFlags): RaceOptions {
  const { wind = [], boat, start, finish, zone, date, current, columns } = flags;
  return {
    wind,
    ...(boat === undefined ? {} : { boat }),
    ...(start === undefined ? {} : { start }),
    ...(finish === undefined ? {} : { finish }),
    ...(zone === undefined ? {} : { zone }),
    ...(date === undefined ? {} : { date }),
    ...(current === undefined ? {} : { current }),
    ...(columns === undefined ? {} : { columns }),
  };
}
