/**
 * Tables of comma, semicolon, tab or bar separated values (RFC 4180 where it is followed), a record a row. The rows
 * are parsed by papaparse in blocks of whole lines; an unclosed quote costs its own row, not the rest of the log.
 */
import { UserError } from '../recording/issues.js';
import { readCell, type Cell } from './cells.js';
import { faultOfPosition } from './gpx.js';
import { findLayout, parseRows, type TableLayout } from './layout.js';
import { PlainRows } from './plain-rows.js';
import type { LogRows } from './rows.js';
import { settle, type Settled } from './settle.js';
import { createTableClock, type TableClock } from './table-clock.js';
import type { Tally } from './tally.js';
import type { ColumnReading, ImportOptions } from './types.js';
import { createZoneClock } from './zone.js';

/** Letters a block has at least, so that parsing pays. */
const BLOCK = 1 << 16;
/** Letters a row has at most. */
const LONGEST = 1 << 22;
/** Lines a quoted cell may run over. */
const CELL_LINES = 20;

type TakeRow = (cells: readonly string[], line: number, whole: boolean) => void;

/**
 * Reads a table.
 *
 * @param quick Rows that are plain go past the parser; without it all goes through it, which is the reference.
 */
export async function readCsv(
  texts: AsyncIterable<string>,
  rows: LogRows,
  tally: Tally,
  options: ImportOptions,
  quick = true,
): Promise<{ settled: Settled; columns: readonly ColumnReading[] }> {
  let layout: TableLayout | undefined;
  let take: TakeRow = () => undefined;
  let plain: PlainRows | undefined;
  let line = 1;
  for await (const { text, last } of wholeLines(texts)) {
    let body = text;
    if (!layout) {
      layout = findLayout(text, options, tally);
      const zone = options.zone === undefined ? null : createZoneClock(options.zone);
      const clock = createTableClock(layout.time, zone, tally);
      take = createRowTaker(layout, clock, rows, tally);
      if (quick && PlainRows.fits(layout)) plain = new PlainRows(layout, clock, rows, tally);
      for (let k = 0; k < layout.skip; k++) body = body.slice(body.indexOf('\n') + 1 || body.length);
      line += layout.skip;
    }
    if (plain && !body.includes('"')) {
      // What stands behind the last line end may be half a row.
      const whole = body.lastIndexOf('\n') + 1;
      line = takePlain(body, whole, line, layout.delimiter, plain, take);
      body = body.slice(whole);
    }
    line = takeBlock(body, line, layout, last, take, tally);
  }
  tellTable(tally);
  const settled = settle(rows, tally, '');
  if (settled.recording.time.length === 0 && tally.seen('time without a date') > 0) throw dateMissing(tally.file);
  return { settled, columns: layout?.readings ?? [] };
}

function dateMissing(file: string): UserError {
  return new UserError(`${file}: the rows carry a time of day but no date.`, {
    exitCode: 2,
    suggestion: 'Give the day it was logged with --date YYYY-MM-DD, or as `date` in the race file.',
  });
}

/** Blocks of whole lines, line ends made alike; the last block may end within a line. */
async function* wholeLines(texts: AsyncIterable<string>): AsyncIterable<{ text: string; last: boolean }> {
  let held = '';
  for await (const text of texts) {
    held += text;
    if (held.length < BLOCK) continue;
    const ready = alike(held, false);
    // A line longer than any row is none: it is not waited for.
    const end = cutAt(ready) || (ready.length > LONGEST ? ready.length : 0);
    if (end > 0) yield { text: ready.slice(0, end), last: false };
    held = ready.slice(end);
  }
  yield { text: alike(held, true), last: true };
}

/** Every kind of line end as one. A carriage return at the end of a piece may be half of one: it is left. */
function alike(text: string, last: boolean): string {
  if (!text.includes('\r')) return text;
  if (!last && text.endsWith('\r')) return text.slice(0, -1).replace(/\r\n?/g, '\n') + '\r';
  return text.replace(/\r\n?/g, '\n');
}

/** Behind the last line that is surely whole: not within a quoted cell that may go on. */
function cutAt(text: string): number {
  const end = text.lastIndexOf('\n') + 1;
  let from = end;
  for (let lines = 0; lines < CELL_LINES && from > 0; lines++) {
    const start = text.lastIndexOf('\n', from - 2) + 1;
    if (isOdd(text.slice(start, from))) return start > 0 ? start : end;
    from = start;
  }
  return end;
}

/** Whether a line opens a quote that it does not close. */
function isOdd(line: string): boolean {
  let quotes = 0;
  for (let at = line.indexOf('"'); at >= 0; at = line.indexOf('"', at + 1)) quotes++;
  return quotes % 2 === 1;
}

/** Takes the whole lines before `end`, without quotes: plain rows at once, runs of others through the parser. */
function takePlain(
  text: string,
  end: number,
  first: number,
  delimiter: string,
  plain: PlainRows,
  take: TakeRow,
): number {
  let line = first;
  let runStart = 0;
  let runLine = first;
  const flush = (to: number): void => {
    if (to > runStart)
      parseRows(text.slice(runStart, to - 1), delimiter, false).forEach((cells, k) => take(cells, runLine + k, true));
  };
  for (let from = 0; from < end; line++) {
    const to = text.indexOf('\n', from);
    if (plain.parse(text, from, to)) {
      flush(from);
      plain.commit(line);
      runStart = to + 1;
      runLine = line + 1;
    }
    from = to + 1;
  }
  flush(end);
  return line;
}

/** Takes the rows of a block and returns the number of the line after it. */
function takeBlock(
  text: string,
  first: number,
  layout: TableLayout,
  last: boolean,
  take: TakeRow,
  tally: Tally,
): number {
  const { delimiter } = layout;
  const open = last && !text.endsWith('\n');
  const lines = (text.endsWith('\n') ? text.slice(0, -1) : text).split('\n');
  if (text === '') return first;
  const one = (cells: readonly string[], at: number, span = 1): void =>
    take(cells, first + at, !(open && at + span === lines.length));
  if (!text.includes('"')) {
    parseRows(lines.join('\n'), delimiter, false).forEach((cells, k) => one(cells, k));
    return first + lines.length;
  }
  for (let from = 0; from < lines.length;) {
    let to = from;
    while (to < lines.length && !isOdd(lines[to])) to++;
    takeClosed(lines.slice(from, to), delimiter, (cells, k) => one(cells, from + k));
    if (to < lines.length) to += takeOdd(lines, to, first, layout, one, tally);
    from = to;
  }
  return first + lines.length;
}

/** Lines whose quotes are all closed: a row each. */
function takeClosed(
  lines: readonly string[],
  delimiter: string,
  one: (cells: readonly string[], k: number) => void,
): void {
  const rows = parseRows(lines.join('\n'), delimiter, true);
  if (rows.length === lines.length || lines.length === 0) rows.slice(0, lines.length).forEach(one);
  else lines.forEach((line, k) => one(parseRows(line.replaceAll('"', ''), delimiter, false)[0] ?? [''], k));
}

/** A line with an open quote: joined with the line that closes it if that makes a row, else read without quotes. */
function takeOdd(
  lines: readonly string[],
  at: number,
  first: number,
  layout: TableLayout,
  one: (cells: readonly string[], at: number, span: number) => void,
  tally: Tally,
): number {
  for (let to = at + 1; to < Math.min(lines.length, at + CELL_LINES); to++) {
    if (!isOdd(lines[to])) continue;
    const joined = parseRows(lines.slice(at, to + 1).join('\n'), layout.delimiter, true);
    if (joined.length !== 1 || joined[0].length !== layout.headers.length) break;
    one(joined[0], at, to + 1 - at);
    return to + 1 - at;
  }
  tally.notice('unclosed-quote', first + at);
  one(parseRows(lines[at].replaceAll('"', ''), layout.delimiter, false)[0] ?? [''], at, 1);
  return 1;
}

/** Judges rows and adds them to the log. */
function createRowTaker(layout: TableLayout, clock: TableClock, rows: LogRows, tally: Tally): TakeRow {
  const { headers, columns } = layout;
  const cell: Cell = { state: 'absent', value: NaN };
  const values = new Float64Array(columns.length);
  const latAt = columns.findIndex(({ channel }) => channel === 'lat');
  const lonAt = columns.findIndex(({ channel }) => channel === 'lon');
  return (cells, line, whole) => {
    if (isBlank(cells)) return;
    tally.read++;
    if (cells[0].startsWith('#')) return tally.ignore('comment');
    if (isHeader(cells, headers)) {
      rows.startPiece();
      return tally.ignore('repeated header');
    }
    if (!whole && cells.length < headers.length) {
      tally.issue('file-truncated', `The file is cut within line ${line}.`, line);
      return tally.reject('cut short', line);
    }
    if (cells.length > headers.length && cells.slice(headers.length).some((text) => text.trim() !== '')) {
      return tally.reject('more cells than headers', line);
    }
    const state = clock.read(cells, line);
    if (state === 'time without a date') tally.notice(state, line);
    if (state !== 'time') return tally.reject(state, line);
    const worst = readValues(cells, layout, values, cell, line, tally);
    const fault = latAt < 0 || lonAt < 0 ? undefined : positionFault(cells, layout, values, latAt, lonAt);
    if (fault !== undefined) return tally.reject(fault, line);
    addRow(columns, values, clock.seconds, line, worst, rows, tally);
  };
}

function isBlank(cells: readonly string[]): boolean {
  return cells.length <= 1 ? (cells[0] ?? '').trim() === '' : cells.every((text) => text.trim() === '');
}

function isHeader(cells: readonly string[], headers: readonly string[]): boolean {
  return (
    cells[0].trim() === headers[0] &&
    cells.length === headers.length &&
    cells.every((text, k) => text.trim() === headers[k])
  );
}

/** Reads the cells of a row; returns the gravest state met, 'absent' when all were read or empty. */
function readValues(
  cells: readonly string[],
  layout: TableLayout,
  values: Float64Array,
  cell: Cell,
  line: number,
  tally: Tally,
): Cell['state'] {
  let worst: Cell['state'] = 'absent';
  layout.columns.forEach(({ index, channel, factor }, k) => {
    readCell(cells[index], channel, factor, cell);
    values[k] = signed(cell.value, channel, cells, layout);
    if (cell.state === 'number' || cell.state === 'absent') return;
    worst = cell.state;
    tally.notice(`cell ${cell.state}`, line);
  });
  return worst;
}

/** A number whose sign is a letter in another column. */
function signed(value: number, channel: string, cells: readonly string[], layout: TableLayout): number {
  const at =
    channel === 'awa' ? layout.awaSide : channel === 'lat' ? layout.latSide : channel === 'lon' ? layout.lonSide : -1;
  if (at < 0) return value;
  const letter = (cells[at] ?? '').trim().charAt(0).toUpperCase();
  return (channel === 'awa' ? 'LP' : 'SW').includes(letter) && letter !== '' ? -Math.abs(value) : Math.abs(value);
}

/** Why the row's position cannot be used. A position of zeros, or none, is not a fault of the row: it has none. */
function positionFault(
  cells: readonly string[],
  { columns }: TableLayout,
  values: Float64Array,
  latAt: number,
  lonAt: number,
): string | undefined {
  const lat = values[latAt];
  const lon = values[lonAt];
  const latText = (cells[columns[latAt].index] ?? '').trim();
  const lonText = (cells[columns[lonAt].index] ?? '').trim();
  if (latText === '' && lonText === '') return undefined;
  const others = values.some((value, k) => k !== latAt && k !== lonAt && !Number.isNaN(value));
  const none = (Number.isNaN(lat) && Number.isNaN(lon)) || (lat === 0 && lon === 0);
  const fault = faultOfPosition(latText, lonText, lat, lon);
  if (fault !== undefined && !(none && others)) return fault === 'no position' ? 'half a position' : fault;
  if (none) values[latAt] = values[lonAt] = NaN;
  if (lon === 180) values[lonAt] = -180;
  return undefined;
}

function addRow(
  columns: TableLayout['columns'],
  values: Float64Array,
  seconds: number,
  line: number,
  worst: Cell['state'],
  rows: LogRows,
  tally: Tally,
): void {
  if (values.every((value) => Number.isNaN(value))) {
    if (worst === 'fill') return tally.reject('fill values only', line);
    if (worst !== 'absent') return tally.reject('no value understood', line);
    return tally.ignore('row without values');
  }
  const row = rows.add(seconds, line);
  for (let k = 0; k < columns.length; k++) rows.set(columns[k].channel, row, values[k]);
}

function tellTable(tally: Tally): void {
  tally.tellZone();
  tally.tell('cell fill', 'fill-values', (n) => `${n} cell(s) hold a fill value such as -9999 and count as empty.`);
  tally.tell(
    'cell out-of-range',
    'value-out-of-range',
    (n) => `${n} cell(s) hold what their column cannot mean and count as empty.`,
  );
  tally.tell('cell unreadable', 'cell-unreadable', (n) => `${n} cell(s) are not numbers and count as empty.`);
  tally.tell('unclosed-quote', 'unclosed-quote', (n) => `${n} row(s) with an unclosed quote are read without quotes.`);
}
