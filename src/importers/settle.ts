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
  const stamped = keepOrder(rows, stampedRows(rows, tally), tally);
  const anchors = resolveStamps(rows, stamped, tally);
  tellSteps(tally);
  const placed = placeBetween(rows, anchors, tally, lead);
  return gather(rows, placed, name);
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
    if (piece.last < piece.first && isReversed(Float64Array.from(part, (row) => rows.time(row)))) {
      part.reverse();
      tally.issue('order-reversed', 'The log is written newest first; it is read from its end.', rows.line(piece.from));
    }
  }
  return stamped.slice(0, n);
}

/** Leaves out the rows whose time goes back. */
function keepOrder(rows: LogRows, stamped: Uint32Array, tally: Tally): Uint32Array {
  const kept = longestOrdered(Float64Array.from(stamped, (row) => rows.time(row)));
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

/** The columns, and the breaks where a row is of another piece than the row before it. */
function gather(rows: LogRows, placed: Uint32Array, name: string): Settled {
  const channels = rows.channels;
  let kept = 0;
  const order = placed.filter((row) => {
    kept += rows.records(row);
    return channels.some((channel) => !Number.isNaN(rows.get(channel, row)));
  });
  const time = Float64Array.from(order, (row) => rows.time(row));
  const breaks = findBreaks(order, rows.pieces);
  const columns: Partial<Record<Channel, Float64Array>> = {};
  const windy = new Uint8Array(order.length);
  for (const channel of channels) {
    const column = rows.column(channel);
    const values = new Float64Array(order.length);
    let present = 0;
    for (let i = 0; i < order.length; i++) {
      values[i] = column.get(order[i]);
      if (Number.isNaN(values[i])) continue;
      present++;
      if (WIND.includes(channel)) windy[i] = 1;
    }
    if (present > 0) columns[channel] = values;
    rows.release(channel);
  }
  const recording = createRecording({ name, time, channels: columns, breaks });
  const fixes = columns.lat ? columns.lat.reduce((n, φ) => (Number.isNaN(φ) ? n : n + 1), 0) : 0;
  return { recording, kept, fixes, samples: windy.reduce((n, one) => n + one, 0) };
}

function findBreaks(order: Uint32Array, pieces: readonly number[]): number[] {
  if (pieces.length === 0) return [];
  const breaks: number[] = [];
  let from = 0;
  let to = 0;
  order.forEach((row, i) => {
    if (row >= from && row < to) return;
    const next = pieces.findIndex((start) => start > row);
    from = next === 0 ? 0 : (pieces.at(next < 0 ? -1 : next - 1) ?? 0);
    to = next < 0 ? Infinity : pieces[next];
    if (i > 0) breaks.push(i);
  });
  return breaks;
}
