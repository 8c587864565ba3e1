import type { Channel } from '../recording/recording.js';
import type { LogRows } from './rows.js';
import type { Tally } from './tally.js';

/** Channels that only say more about a position. A repeated position is not made news by them. */
const OF_THE_FIX: ReadonlySet<Channel> = new Set(['lat', 'lon', 'sog', 'cog', 'variation']);

/** How far a stamp's records are spread at most, in typical steps of the clock: beyond it the log has a hole. */
const FARTHEST = 1.5;

/** What a record under a stamp already taken is. */
type Twin = 'more' | 'repeated' | 'stale-position' | 'other';

/**
 * Sorts out records that share a time stamp. What completes a record is merged with it, what repeats it is rejected,
 * and fixes at different positions (or different readings) are spread evenly up to the next stamp: the clock of such
 * a log stands still while the boat moves.
 *
 * @param order Rows in order of time. Their times are changed where they are spread.
 * @returns The rows left, at strictly increasing times.
 */
export function resolveStamps(rows: LogRows, order: Uint32Array, tally: Tally): Uint32Array {
  const left = new Uint32Array(order.length);
  const channels = rows.channels;
  let n = 0;
  let typical = NaN;
  let step = NaN;
  for (let from = 0, to = 0; from < order.length; from = to) {
    const stamp = rows.time(order[from]);
    for (to = from + 1; to < order.length && rows.time(order[to]) === stamp;) to++;
    if (to - from > 1) {
      const slots = sortOut(rows, channels, order.subarray(from, to), tally);
      if (slots.rows.length > 1) {
        if (Number.isNaN(typical)) typical = medianStep(rows, order);
        const next = to < order.length ? rows.time(order[to]) - stamp : Infinity;
        const span = to < order.length || Number.isNaN(step) ? next : step * slots.count;
        step = spread(rows, slots, stamp, Math.min(span, next, FARTHEST * typical), tally);
      }
      for (const row of slots.rows) left[n++] = row;
    } else left[n++] = order[from]!;
  }
  return left.slice(0, n);
}

/** Rows that stay under one stamp, the turn at which each came, and how many turns there were. */
interface Slots {
  readonly rows: number[];
  readonly turns: number[];
  count: number;
}

function sortOut(rows: LogRows, channels: readonly Channel[], group: Uint32Array, tally: Tally): Slots {
  const slots: Slots = { rows: [group[0]], turns: [0], count: 1 };
  for (const row of group.subarray(1)) {
    const held = slots.rows.at(-1)!;
    const twin = compare(rows, channels, held, row);
    if (twin === 'more') {
      merge(rows, channels, held, row);
      continue;
    }
    if (twin === 'repeated')
      tally.reject('time and values repeat the record before', rows.line(row), rows.records(row));
    else {
      if (twin === 'stale-position') for (const channel of OF_THE_FIX) rows.blank(channel, row);
      slots.rows.push(row);
      slots.turns.push(slots.count);
    }
    slots.count++;
  }
  return slots;
}

function compare(rows: LogRows, channels: readonly Channel[], held: number, row: number): Twin {
  let shared = 0;
  let added = 0;
  let moved = false;
  let news = false;
  for (const channel of channels) {
    const a = rows.get(channel, held);
    const b = rows.get(channel, row);
    if (Number.isNaN(b)) continue;
    if (Number.isNaN(a)) added++;
    else {
      shared++;
      if (a === b) continue;
      if (channel === 'lat' || channel === 'lon') moved = true;
      else if (!OF_THE_FIX.has(channel)) news = true;
      else if (Number.isNaN(rows.get('lat', held)) || Number.isNaN(rows.get('lat', row))) news = true;
    }
  }
  if (moved) return 'other';
  if (!news) return added > 0 || shared === 0 ? 'more' : 'repeated';
  const bothFixed = !Number.isNaN(rows.get('lat', held)) && !Number.isNaN(rows.get('lat', row));
  return bothFixed ? 'stale-position' : 'other';
}

function merge(rows: LogRows, channels: readonly Channel[], held: number, row: number): void {
  for (const channel of channels) {
    if (Number.isNaN(rows.get(channel, held))) rows.set(channel, held, rows.get(channel, row));
  }
  rows.addRecords(held, rows.records(row));
}

/** Spreads the rows of a stamp over `span` seconds; without a span (one stamp in the whole log) only the first stays. */
function spread(rows: LogRows, slots: Slots, stamp: number, span: number, tally: Tally): number {
  if (!Number.isFinite(span)) {
    for (const row of slots.rows.splice(1)) {
      tally.reject('no later time stamp to spread it up to', rows.line(row), rows.records(row));
    }
    return NaN;
  }
  const step = span / slots.count;
  slots.rows.forEach((row, k) => {
    rows.setTime(row, stamp + step * slots.turns[k]);
    if (k > 0) tally.notice('clock-steps', rows.line(row));
  });
  tally.notice('stepped stamps', rows.line(slots.rows[0]));
  return step;
}

/** Median of the steps between different stamps; Infinity when there is only one. */
function medianStep(rows: LogRows, order: Uint32Array): number {
  const steps: number[] = [];
  for (let i = 1; i < order.length; i++) {
    const step = rows.time(order[i]) - rows.time(order[i - 1]);
    if (step > 0) steps.push(step);
  }
  if (steps.length === 0) return Infinity;
  const sorted = Float64Array.from(steps).sort();
  return sorted[sorted.length >> 1];
}
