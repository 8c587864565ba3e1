import type { GrowingColumn, LogRows } from './rows.js';
import type { Tally } from './tally.js';

/** How long before the first and after the last stamp a record may be placed at the log's own rate. [s] */
const REACH = 60;
/** A pause between stamps longer than this [s], with a rate this many times below the usual one, was not logged through. */
const PAUSE = 30;
const SLOWER = 5;
/** A sentence of some 50 letters at the 480 letters a second of IEC 61162-1: the rate where the log shows none. [s] */
const LINE_STEP = 0.1;

/** Records without a time between two that have one; -1 and NaN stand for a neighbour that is not there. */
interface Stretch {
  readonly waiting: readonly number[];
  readonly before: number;
  readonly after: number;
  readonly start: number;
  readonly end: number;
}

/**
 * Gives a time to the rows without one: between the stamps of their neighbours in order of arrival, evenly, or as the
 * logger's own leading stamps divide it. A pause of the log is not filled.
 *
 * @param anchors Rows that have a time, in order of arrival and of time.
 * @param lead    The logger's own stamps, where the log has them.
 * @returns All rows that have a time now, in order of time.
 */
export function placeBetween(rows: LogRows, anchors: Uint32Array, tally: Tally, lead?: GrowingColumn): Uint32Array {
  const usual = usualStep(rows, anchors);
  const placed = new Uint32Array(rows.length);
  let n = 0;
  for (const stretch of stretches(rows, anchors)) {
    if (stretch.before >= 0) placed[n++] = stretch.before;
    if (stretch.waiting.length === 0) continue;
    const times = (lead && timesByLead(stretch, lead)) ?? timesByTurn(stretch, usual);
    stretch.waiting.forEach((row, k) => {
      const away = Number.isNaN(stretch.start) ? stretch.end - times[k] : times[k] - stretch.start;
      const between = stretch.before >= 0 && stretch.after >= 0;
      if (between || away <= REACH) {
        rows.setTime(row, times[k]);
        placed[n++] = row;
      } else tally.reject('no time, and no time stamp near it', rows.line(row), rows.records(row));
    });
  }
  return placed.slice(0, n);
}

function* stretches(rows: LogRows, anchors: Uint32Array): Generator<Stretch> {
  for (let k = 0; k <= anchors.length; k++) {
    const before = k > 0 ? anchors[k - 1] : -1;
    const after = k < anchors.length ? anchors[k] : -1;
    const waiting: number[] = [];
    const to = after >= 0 ? after : rows.length;
    for (let row = before + 1; row < to; row++)
      if (Number.isNaN(rows.time(row)) && rows.records(row) > 0) waiting.push(row);
    yield {
      waiting,
      before,
      after,
      start: before >= 0 ? rows.time(before) : NaN,
      end: after >= 0 ? rows.time(after) : NaN,
    };
  }
}

/** Median time between records where they stand between two stamps; that of the line when there is no such place. */
function usualStep(rows: LogRows, anchors: Uint32Array): number {
  const steps: number[] = [];
  for (const { waiting, start, end } of stretches(rows, anchors)) {
    const step = (end - start) / (waiting.length + 1);
    if (waiting.length > 0 && !Number.isNaN(step)) steps.push(step);
  }
  const sorted = Float64Array.from(steps).sort();
  return sorted.length > 0 ? sorted[sorted.length >> 1] : LINE_STEP;
}

/** Evenly, or at the usual rate where one side is open or the log paused. */
function timesByTurn(stretch: Stretch, usual: number): number[] {
  const { waiting, start, end } = stretch;
  const n = waiting.length;
  if (Number.isNaN(start)) return waiting.map((_, k) => end - usual * (n - k));
  const even = (end - start) / (n + 1);
  const step = Number.isNaN(end) || (end - start > PAUSE && even > SLOWER * usual) ? usual : even;
  return waiting.map((_, k) => start + step * (k + 1));
}

/** By the logger's own stamps, where they part all records; else undefined. */
function timesByLead(stretch: Stretch, lead: GrowingColumn): number[] | undefined {
  const { waiting, before, after, start, end } = stretch;
  const rows = [...(before >= 0 ? [before] : []), ...waiting, ...(after >= 0 ? [after] : [])];
  const stamps = rows.map((row) => lead.get(row));
  if (stamps.some((stamp, k) => Number.isNaN(stamp) || (k > 0 && stamp <= stamps[k - 1]))) return undefined;
  if (before < 0) return waiting.map((row) => end - (lead.get(after) - lead.get(row)));
  const first = lead.get(before);
  const scale = after < 0 ? 1 : (end - start) / (lead.get(after) - first);
  return waiting.map((row) => start + scale * (lead.get(row) - first));
}
