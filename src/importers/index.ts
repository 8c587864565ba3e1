/** The door of the importers: a log's bytes in, a recording and its books out. */
import { createSha256 } from '../math/sha256.js';
import { UserError } from '../recording/issues.js';
import type { Channel } from '../recording/recording.js';
import { hashed, peek, unwrapped, type Bytes } from './bytes.js';
import { readCsv } from './csv.js';
import { detect, HEAD, type Detected } from './detect.js';
import { decoded } from './encoding.js';
import { readGpx } from './gpx.js';
import { readNmea } from './nmea.js';
import { LogRows } from './rows.js';
import { settle, type Settled } from './settle.js';
import { Tally } from './tally.js';
import type { ColumnReading, ImportedLog, ImportOptions, LogKind, LogSource } from './types.js';
import { tellWeekRollover } from './week-rollover.js';
import { createZoneClock } from './zone.js';

/** What a reader returns: the rows settled, and how the columns were understood. */
interface ReadLog {
  readonly settled: Settled;
  readonly columns: readonly ColumnReading[];
}

/**
 * Reads one log: GPX, NMEA 0183 or a table, plain or in gzip or zip, told by its content. What cannot be used of it is
 * counted; what the reader of the report should know is an issue.
 *
 * @throws UserError (exit code 2) when nothing of it can be used, with what it is and what to do.
 */
export async function importLog(source: LogSource, options: ImportOptions = {}): Promise<ImportedLog> {
  const elsewhere = source.elsewhere?.(options);
  if (elsewhere) return elsewhere;
  const tally = new Tally(source.name);
  const hash = (source.createHash ?? createSha256)();
  const bytes = await unwrapped(hashed(source, hash), tally);
  const { head, all } = await peek(bytes, HEAD);
  const detected = detect(head, source.name);
  const { settled, columns } = await read(detected, all, options, tally);
  refuseUseless(detected.kind, settled, tally);
  tellWeekRollover(settled.recording, tally);
  tally.tell(
    'zero-bytes',
    'zero-bytes',
    () => 'The file holds zero bytes, as a failing card leaves them; they are left out.',
  );
  return {
    kind: detected.kind,
    recording: settled.recording,
    rows: tally.read,
    kept: settled.kept + tally.keptAside,
    ignored: tally.ignored,
    ignoredTypes: tally.ignoredTypes(),
    rejected: tally.rejections.list(),
    fixes: settled.fixes,
    samples: settled.samples,
    columns,
    issues: tally.issues,
    sha256: hash.digest(),
  };
}

/** @throws UserError when no record of the log is of use. */
function refuseUseless(kind: LogKind, settled: Settled, tally: Tally): void {
  if (settled.recording.time.length > 0 && Object.keys(settled.recording.channels).some((one) => USEFUL.has(one)))
    return;
  const worst = tally.rejections.list().toSorted((a, b) => b.count - a.count)[0];
  const held = Object.entries(tally.ignoredTypes()).map(([type, count]) => `${count} ${type}`);
  const why = worst
    ? ` ${worst.count} of ${tally.read} records: ${worst.reason}, first at line ${worst.first_line}.`
    : held.length > 0
      ? ` It holds ${held.join(', ')}.`
      : '';
  throw new UserError(`${tally.file}: no position with a time and no wind or heading is to be had from it.${why}`, {
    exitCode: 2,
    suggestion: WHAT_TO_DO[kind],
  });
}

/** A log is of use for where the boat was, the wind, or what the boat's own instruments read. */
const USEFUL: ReadonlySet<string> = new Set<Channel>([
  ...(['lat', 'heading', 'headingMagnetic', 'stw', 'heel', 'awa', 'aws', 'twd', 'twdMagnetic', 'tws'] as const),
]);

const WHAT_TO_DO: Readonly<Record<LogKind, string>> = {
  gpx: 'Export the recorded track with its times; routes and waypoints have none.',
  nmea: 'Log sentences that carry the time (RMC, GGA, GLL or ZDA), or a stamp before each sentence.',
  csv: 'Give a column with the time of each row and columns with positions or wind; --columns says which is which.',
};

async function read(
  { kind, encoding }: Detected,
  bytes: Bytes,
  options: ImportOptions,
  tally: Tally,
): Promise<ReadLog> {
  const rows = new LogRows();
  if (kind === 'nmea') return readNmea(bytes, encoding, rows, tally, options);
  if (kind === 'csv') return readCsv(decoded(bytes, encoding, tally), rows, tally, options);
  const zone = options.zone === undefined ? null : createZoneClock(options.zone);
  const { name, columns } = await readGpx(bytes, encoding, rows, tally, zone);
  return { settled: settle(rows, tally, name), columns };
}
