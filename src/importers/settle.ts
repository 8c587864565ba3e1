import { createRecording, type Channel, type Recording } from '../recording/recording.js';
import { isReversed, longestOrdered } from './order.js';
import { placeBetween } from './placing.js';
import type { GrowingColumn, LogRows } from './rows.js';
import { resolveStamps } from './stamps.js';
import type { Tally } from './tally.js';

const WIND: readonly Channel[] = ['awa', 'aws', 'twd', 'twdMagnetic', 'tws'];

/** A log's rows made a recording, and what became of the records. */
export interface Settled {
  readonly recording: Recording;
  /** Records that reached the recording. */
  readonly kept: number;
  readonly fixes: number;
  readonly samples: number;
}

/**
 * Puts the rows of a log on one strictly increasing time base: pieces in order of their beginning, records that go
 * back rejected (as few as possible), shared stamps resolved, records without a time placed between their neighbours.
 *
 * @param lead The logger's own stamps, where the log has them beside its times.
 */
export function settle(rows: LogRows, tally: Tally, name: string, lead?: GrowingColumn): Settled {
  // Most logs are in order as they are: nothing need be moved.
  if (rows.isOrdered) return gather(rows, undefined, name);
  const stamped = keepOrder(rows, stampedRows(rows, tally), tally);
  const anchors = resolveStamps(rows, stamped, tally);
  tellSteps(tally);
  const placed = rows.untimed > 0 ? placeBetween(rows, anchors, tally, lead) : anchors;
  return gather(rows, withRoom(rows, placed, tally), name);
}

/** Between two stamps a hair apart there may be no number left for a time of its own. */
function withRoom(rows: LogRows, placed: Uint32Array, tally: Tally): Uint32Array {
  let before = -Infinity;
  let n = 0;
  for (let i = 0; i < placed.length; i++) {
    const row = placed[i];
    const time = rows.time(row);
    if (time > before) {
      before = time;
      placed[n++] = row;
    } else tally.reject('no room between the time stamps around it', rows.line(row), rows.records(row));
  }
  return placed.subarray(0, n);
}

/** Rows with a time, piece by piece in order of their first times; a log written newest first is turned round. */
function stampedRows(rows: LogRows, tally: Tally): Uint32Array {
  const starts = [0, ...rows.pieces];
  const pieces = starts.map((from, k) => ({ from, to: starts[k + 1] ?? rows.length, first: NaN, last: NaN }));
  for (const piece of pieces) {
    for (let row = piece.from; row < piece.to; row++) {
      const time = rows.time(row);
      if (Number.isNaN(time)) continue;
      if (Number.isNaN(piece.first)) piece.first = time;
      piece.last = time;
    }
  }
  const timed = pieces.filter((piece) => !Number.isNaN(piece.first));
  const sorted = timed.toSorted((a, b) => Math.min(a.first, a.last) - Math.min(b.first, b.last));
  if (sorted.some((piece, k) => k > 0 && piece.first < sorted[k - 1].last)) {
    tally.issue('tracks-overlap', 'Tracks or segments inside the log overlap in time; they are read as one recording.');
  }
  const stamped = new Uint32Array(rows.length);
  let n = 0;
  for (const piece of sorted) {
    const start = n;
    for (let row = piece.from; row < piece.to; row++) if (!Number.isNaN(rows.time(row))) stamped[n++] = row;
    const part = stamped.subarray(start, n);
    if (piece.last < piece.first && isReversed(rows.times(part))) {
      part.reverse();
      tally.issue('order-reversed', 'The log is written newest first; it is read from its end.', rows.line(piece.from));
    }
  }
  return stamped.slice(0, n);
}

/** Leaves out the rows whose time goes back. */
function keepOrder(rows: LogRows, stamped: Uint32Array, tally: Tally): Uint32Array {
  const kept = longestOrdered(rows.times(stamped));
  if (kept.length === stamped.length) return stamped;
  let k = 0;
  for (let i = 0; i < stamped.length; i++) {
    if (k < kept.length && kept[k] === i) k++;
    else tally.reject('time out of order', rows.line(stamped[i]), rows.records(stamped[i]));
  }
  return kept.map((i) => stamped[i]);
}

function tellSteps(tally: Tally): void {
  const stamps = tally.seen('stepped stamps');
  tally.tell(
    'clock-steps',
    'clock-steps',
    (count) =>
      `The clock stands still while values change: under ${stamps} time ${stamps === 1 ? 'stamp' : 'stamps'} ` +
      `${count} further ${count === 1 ? 'record was' : 'records were'} spread evenly up to the next stamp.`,
  );
}

/**
 * The columns, and the breaks where a row is of another piece than the row before it.
 *
 * @param placed Rows in order of time; undefined for all as they stand.
 */
function gather(rows: LogRows, placed: Uint32Array | undefined, name: string): Settled {
  let kept = 0;
  if (placed) for (let i = 0; i < placed.length; i++) kept += rows.records(placed[i]);
  else for (let row = 0; row < rows.length; row++) kept += rows.records(row);
  const order = withValues(rows, placed);
  const time = rows.times(order);
  rows.releaseTimes();
  const columns: Partial<Record<Channel, Float64Array>> = {};
  const windy = new Uint8Array(time.length);
  for (const channel of rows.channels) {
    const values = rows.values(channel, order);
    rows.release(channel);
    const present = markPresent(values, WIND.includes(channel) ? windy : undefined);
    if (present > 0) columns[channel] = values;
  }
  const recording = createRecording({
    name,
    time,
    channels: columns,
    breaks: order ? findBreaks(order, rows.pieces) : rows.pieces,
  });
  const fixes = columns.lat ? markPresent(columns.lat) : 0;
  return { recording, kept, fixes, samples: windy.reduce((n, one) => n + one, 0) };
}

/** Counts the values that are there, and marks their rows. */
function markPresent(values: Float64Array, marks?: Uint8Array): number {
  let present = 0;
  for (let i = 0; i < values.length; i++) {
    if (Number.isNaN(values[i])) continue;
    present++;
    if (marks) marks[i] = 1;
  }
  return present;
}

/** The rows that hold a value at all: a row of a clock sentence holds none. */
function withValues(rows: LogRows, placed: Uint32Array | undefined): Uint32Array | undefined {
  const length = placed?.length ?? rows.length;
  const some = new Uint8Array(length);
  for (const channel of rows.channels) if (rows.column(channel).mark(some, placed) === length) return placed;
  const left = new Uint32Array(length);
  let n = 0;
  for (let i = 0; i < length; i++) if (some[i] === 1) left[n++] = placed ? placed[i] : i;
  return left.subarray(0, n);
}

/** Where a row is of another piece than the one before it. A damaged log has pieces by the hundred thousand. */
function findBreaks(order: Uint32Array, pieces: readonly number[]): number[] {
  if (pieces.length === 0) return [];
  const breaks: number[] = [];
  let from = 0;
  let to = 0;
  for (let i = 0; i < order.length; i++) {
    const row = order[i];
    if (row >= from && row < to) continue;
    const next = firstBeyond(pieces, row);
    from = next === 0 ? 0 : pieces[next - 1];
    to = next < pieces.length ? pieces[next] : Infinity;
    if (i > 0) breaks.push(i);
  }
  return breaks;
}

/** The first of ascending numbers above a value; their count when there is none. */
function firstBeyond(ascending: readonly number[], value: number): number {
  let low = 0;
  let high = ascending.length;
  while (low < high) {
    const middle = (low + high) >>> 1;
    if (ascending[middle] > value) high = middle;
    else low = middle + 1;
  }
  return low;
}
