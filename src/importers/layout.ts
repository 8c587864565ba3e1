import Papa from 'papaparse';
import { UserError } from '../recording/issues.js';
import { CHANNELS, type Channel } from '../recording/recording.js';
import { kindOf, readHeader, readUnit, type Header, type Meaning, type Unit } from './columns.js';
import { readDecimal } from './decimals.js';
import { readDay } from './days.js';
import { orderOf, readOddTime, type TimeLayout } from './table-clock.js';
import type { Tally } from './tally.js';
import { fromUnix, readIso } from './times.js';
import type { ColumnReading, ImportOptions } from './types.js';

const DELIMITERS = [',', ';', '\t', '|'] as const;
/** How many lines may stand before the header. */
const PREAMBLE = 60;

/** A column that is used. */
export interface TableColumn {
  readonly index: number;
  readonly channel: Channel;
  /** Times this, in our units. */
  readonly factor: number;
}

/** How a table is to be read. */
export interface TableLayout {
  readonly delimiter: string;
  /** Lines before the first row of data. */
  readonly skip: number;
  readonly headers: readonly string[];
  readonly columns: readonly TableColumn[];
  readonly time: TimeLayout;
  /** Columns of the letters that belong to numbers, -1 where there is none. */
  readonly awaSide: number;
  readonly latSide: number;
  readonly lonSide: number;
  readonly readings: readonly ColumnReading[];
}

/** A header row found, and what its cells mean. */
interface Candidate {
  readonly delimiter: string;
  readonly line: number;
  readonly headers: readonly string[];
  readonly meanings: readonly Header[];
  readonly score: number;
}

/** Parses lines of a table; quotes are not read where `quoted` is false. */
export function parseRows(text: string, delimiter: string, quoted: boolean): string[][] {
  // A quote character that text cannot hold switches quotes off.
  return Papa.parse<string[]>(text, { delimiter, newline: '\n', quoteChar: quoted ? '"' : '\uFFFF' }).data;
}

/**
 * Finds the header of a table and what its columns mean.
 *
 * @param text The beginning of the table.
 * @throws UserError with the headers seen and the names we know, when nothing is understood.
 */
export function findLayout(text: string, options: ImportOptions, tally: Tally): TableLayout {
  const lines = text.split('\n', PREAMBLE + 40);
  let best: Candidate | undefined;
  for (const delimiter of DELIMITERS) {
    for (let line = 0; line < Math.min(lines.length, PREAMBLE); line++) {
      const candidate = judge(lines[line], line, delimiter, options);
      if (candidate && candidate.score > (best?.score ?? 0)) best = candidate;
    }
  }
  best ??= numbered(lines, options);
  if (!best) throw notUnderstood(lines, tally);
  const from = best.line + 1;
  const rest = lines.slice(from, from + 30).filter((line) => line.trim() !== '' && !line.startsWith('#'));
  const sample = rest.map((line) => parseRows(line, best.delimiter, true)[0] ?? []);
  const units = unitsRow(sample[0]);
  if (units) sample.shift();
  const meanings = units ? withUnits(best.meanings, units) : best.meanings;
  return plan({ ...best, meanings }, lines, units ? 1 : 0, sample, options, tally);
}

/** A line as a header row: it must name the time and one thing more. */
function judge(line: string, number: number, delimiter: string, options: ImportOptions): Candidate | undefined {
  const bare = line.replace(/^(\uFEFF|\s)*(#|\/\/|%)?\s*/, '');
  if (!bare.includes(delimiter)) return undefined;
  const headers = (parseRows(bare, delimiter, true)[0] ?? []).map((cell) => cell.trim());
  const meanings = headers.map((header) => meaningOf(header, options));
  const known = new Set(meanings.map(({ meaning }) => meaning).filter((meaning) => meaning !== null));
  const timed = known.has('time') || known.has('date');
  if (!timed || known.size < 2) return undefined;
  return { delimiter, line: number, headers, meanings, score: known.size };
}

/** A header's meaning: what the user says of it, else what it says itself. */
function meaningOf(header: string, options: ImportOptions): Header {
  const said = Object.entries(options.columns ?? {}).find(([name]) => sameHeader(name, header));
  return said ? saidMeaning(said[1]) : readHeader(header);
}

function sameHeader(a: string, b: string): boolean {
  return a === b || a.trim().toLowerCase() === b.trim().toLowerCase();
}

/** `field`, `field:unit`, or `-` for a column that is not to be used. */
function saidMeaning(text: string): Header {
  const [field = '', unitText] = text.split(':').map((part) => part.trim());
  const nothing: Header = { meaning: null, unit: null, utc: false, sensor: false };
  if (field === '' || field === '-' || field.toLowerCase() === 'ignore') return nothing;
  const header = Object.hasOwn(CHANNELS, field) ? { ...nothing, meaning: field as Channel } : readHeader(field);
  if (!header.meaning) {
    throw new UserError(`--columns: '${field}' is not a field we know.`, {
      exitCode: 2,
      suggestion: `Fields: ${FIELDS}.`,
    });
  }
  if (unitText === undefined) return header;
  const unit = readUnit(unitText, kindOf(header.meaning));
  if (!unit)
    throw new UserError(`--columns: '${unitText}' is not a unit of ${field}.`, { exitCode: 2, suggestion: UNITS });
  return { ...header, unit };
}

const FIELDS =
  'time, date, lat, lon, sog_kn, cog_deg, hdg_deg, hdg_true_deg, variation_deg, stw_kn, heel_deg, awa_deg, aws_kn, ' +
  'twd_deg, tws_kn, twa_deg';
const UNITS = 'Units: kn, m/s, km/h, mph, ft/s for speeds; deg, rad for angles; s, ms for times.';

/** Without a header the user may number the columns: `1=time,2=lat`. */
function numbered(lines: readonly string[], options: ImportOptions): Candidate | undefined {
  const said = Object.entries(options.columns ?? {}).filter(([name]) => /^\d+$/.test(name.trim()));
  const first = lines.find((line) => line.trim() !== '');
  if (said.length === 0 || first === undefined) return undefined;
  const count = (delimiter: string): number => first.split(delimiter).length;
  // The comma last: it may be the decimal sign.
  const delimiter = DELIMITERS.toReversed().toSorted((a, b) => count(b) - count(a))[0];
  const headers = Array.from({ length: count(delimiter) }, (_, k) => String(k + 1));
  const meanings = headers.map((header) => meaningOf(header, options));
  return { delimiter, line: -1, headers, meanings, score: 1 };
}

function notUnderstood(lines: readonly string[], tally: Tally): UserError {
  const rows = DELIMITERS.flatMap((delimiter) => lines.slice(0, 5).map((line) => line.split(delimiter)));
  const widest = rows.toSorted((a, b) => b.length - a.length)[0] ?? [];
  const seen = widest.slice(0, 20).map((cell) => `'${cell.trim().slice(0, 40)}'`);
  return new UserError(`${tally.file}: a table whose columns are not understood. Headers seen: ${seen.join(', ')}.`, {
    exitCode: 2,
    suggestion: `Say what they mean with --columns 'header=field,...'. Fields: ${FIELDS}.`,
  });
}

/** The row below the header when it holds units and no numbers. */
function unitsRow(row: readonly string[] | undefined): (string | undefined)[] | undefined {
  if (!row) return undefined;
  const cells = row.map((cell) => cell.trim().replace(/^[([{]|[)\]}]$/g, ''));
  if (cells.some((cell) => !Number.isNaN(readDecimal(cell)) || /\d{3}/.test(cell))) return undefined;
  const known = cells.filter((cell) => readUnit(cell, 'speed') ?? readUnit(cell, 'angle') ?? readUnit(cell, 'time'));
  const filled = cells.filter((cell) => cell !== '');
  return known.length > 0 && known.length >= filled.length / 3 ? cells : undefined;
}

function withUnits(meanings: readonly Header[], units: readonly (string | undefined)[]): Header[] {
  return meanings.map((header, k) => {
    const unit = header.meaning ? readUnit(units[k] ?? '', kindOf(header.meaning)) : null;
    return header.unit || !unit ? header : { ...header, unit };
  });
}

/** The columns to use: the first that means a thing; times by what the sample shows. */
function plan(
  { delimiter, line, headers, meanings }: Candidate,
  lines: readonly string[],
  unitRows: number,
  sample: readonly (readonly string[])[],
  options: ImportOptions,
  tally: Tally,
): TableLayout {
  const chosen = withoutHalves(asWindLog(chooseColumns(meanings, sample)));
  const at = (meaning: Meaning): number => chosen.findIndex((one) => one?.meaning === meaning);
  tellAssumed(headers, chosen, options, tally);
  return {
    delimiter,
    skip: skipped(lines, line + 1, unitRows),
    headers,
    columns: chosen.flatMap((one, index) =>
      one && isChannel(one.meaning) ? [{ index, channel: one.meaning, factor: factorOf(one) }] : [],
    ),
    time: timeLayout(at('time'), at('date'), chosen, sample, options, tally),
    awaSide: at('awaSide'),
    latSide: at('latSide'),
    lonSide: at('lonSide'),
    readings: headers.map((header, k) => readingOf(header, chosen[k])),
  };
}

type Chosen = (Header & { readonly meaning: Meaning }) | undefined;

function isChannel(meaning: Meaning): meaning is Channel {
  return Object.hasOwn(CHANNELS, meaning);
}

/** Lines up to the first row of data: what stands before the header, the header, a row of units. */
function skipped(lines: readonly string[], from: number, unitRows: number): number {
  let line = from;
  if (unitRows > 0) while (lines[line]?.trim() === '' || lines[line]?.startsWith('#')) line++;
  return line + unitRows;
}

function chooseColumns(meanings: readonly Header[], sample: readonly (readonly string[])[]): Chosen[] {
  const taken = new Set<Meaning>();
  const times = meanings.map((header, k) => (header.meaning === 'time' ? k : -1)).filter((k) => k >= 0);
  const bestTime = times.find((k) => sample.some((row) => isDated(row[k] ?? ''))) ?? times[0];
  return meanings.map((header, k) => {
    const { meaning } = header;
    if (meaning === null || taken.has(meaning) || (meaning === 'time' && k !== bestTime)) return undefined;
    taken.add(meaning);
    return { ...header, meaning };
  });
}

/** Whether a cell is a time with its day. */
function isDated(text: string): boolean {
  const bare = text.trim();
  return [
    readIso(bare),
    fromUnix(readDecimal(bare)),
    readOddTime(bare, 'day-first'),
    readOddTime(bare, 'month-first'),
  ].some((seconds) => !Number.isNaN(seconds));
}

/** In a table with a direction but no position and no course, a plain `speed` is the wind's. */
function asWindLog(chosen: readonly Chosen[]): Chosen[] {
  const has = (meaning: Meaning): boolean => chosen.some((one) => one?.meaning === meaning);
  if (!has('twd') || has('tws') || has('lat') || has('cog')) return [...chosen];
  return chosen.map((one) => (one?.meaning === 'sog' ? { ...one, meaning: 'tws' } : one));
}

/** A latitude without a longitude, or the other way round, is no position. */
function withoutHalves(chosen: readonly Chosen[]): Chosen[] {
  const has = (meaning: Meaning): boolean => chosen.some((one) => one?.meaning === meaning);
  if (has('lat') === has('lon')) return [...chosen];
  return chosen.map((one) => (one?.meaning === 'lat' || one?.meaning === 'lon' ? undefined : one));
}

function factorOf({ meaning, unit }: { meaning: Meaning; unit: Unit | null }): number {
  return unit?.factor ?? (kindOf(meaning) === 'speed' ? readUnit('kn', 'speed')!.factor : 1);
}

function readingOf(header: string, chosen: Chosen): ColumnReading {
  if (!chosen) return { header, means: null, unit: null };
  const { meaning, unit } = chosen;
  if (meaning === 'awaSide') return { header, means: 'awa', unit: 'side' };
  if (meaning === 'latSide') return { header, means: 'lat', unit: 'N or S' };
  if (meaning === 'lonSide') return { header, means: 'lon', unit: 'E or W' };
  const kind = kindOf(meaning);
  const fallback = kind === 'speed' ? 'kn' : kind === 'angle' ? 'deg' : null;
  return { header, means: meaning, unit: unit?.name ?? fallback };
}

function timeLayout(
  time: number,
  date: number,
  chosen: readonly Chosen[],
  sample: readonly (readonly string[])[],
  options: ImportOptions,
  tally: Tally,
): TimeLayout {
  const alone = time < 0 || (date >= 0 && sample.some((row) => isDated(row[time] ?? '')));
  const timeColumn = time < 0 ? date : time;
  const dates = sample.flatMap((row) => [row[timeColumn] ?? '', date >= 0 ? (row[date] ?? '') : '']);
  const order = orderOf(dates);
  if (!order && dates.some((text) => /^\d{1,2}[-/]\d{1,2}[-/]\d{4}/.test(text.trim()))) {
    tally.issue('date-order-assumed', 'The dates may be day or month first; they are read with the day first.');
  }
  return {
    time: timeColumn,
    date: alone ? -1 : date,
    utc: chosen[timeColumn]?.utc === true || (!alone && chosen[date]?.utc === true),
    factor: chosen[timeColumn]?.unit?.factor ?? NaN,
    order: order ?? 'day-first',
    day: readDay(options.date),
  };
}

function tellAssumed(
  headers: readonly string[],
  chosen: readonly Chosen[],
  options: ImportOptions,
  tally: Tally,
): void {
  const bare = headers.filter((_, k) => chosen[k] && kindOf(chosen[k].meaning) === 'speed' && !chosen[k].unit);
  if (bare.length > 0) {
    tally.issue(
      'unit-assumed',
      `Speeds without a unit are read as knots: ${bare.map((name) => `'${name}'`).join(', ')}.`,
    );
  }
  const relative = headers.filter((_, k) => chosen[k]?.meaning === 'twd' && chosen[k].sensor);
  for (const name of relative) {
    tally.issue('direction-relative', `'${name}' is relative to the sensor: give the sensor's bearing as its offset.`);
  }
  for (const name of Object.keys(options.columns ?? {})) {
    if (headers.some((header) => sameHeader(name, header))) continue;
    tally.issue('column-not-found', `--columns names '${name}', which this log has not.`);
  }
}
