import { lengthOf } from '../math/length.js';
import type { Observations } from './kalman.js';

/**
 * A phone that has lost the sky repeats its last position, then leaps to where the boat is. The repeats are stale: the
 * boat was not stopped. A boat that was stopped moves off at the speed it then sails.
 */

/** The leap is faster than the boat before and after by this factor ... */
const LEAP_FACTOR = 1.6;
/** ... and by this much; the noise of a fix over a second. [m/s] */
const LEAP_FLOOR = 0.5;
/** ... and longer than so many steps of the position's resolution. */
const LEAP_RESOLUTIONS = 3;

/** Fixes in a row at exactly the same place: rows of the first and the last of them. */
interface Run {
  first: number;
  last: number;
}

/** Rows that repeat a position which was no longer true. */
export function staleRows(o: Observations): number[] {
  const stale: number[] = [];
  const resolution = resolutionOf(o);
  // Four runs at a time: the one before, the one looked at, the two after it.
  const before: Run = { first: -1, last: -1 };
  const run: Run = { first: -1, last: -1 };
  const next: Run = { first: -1, last: -1 };
  const after: Run = { first: -1, last: -1 };
  let row = 0;
  for (;;) {
    move(run, before);
    move(next, run);
    move(after, next);
    row = nextRun(o, row, after);
    if (run.first < 0 && after.first < 0 && next.first < 0) break;
    if (run.first < 0 || run.last === run.first) continue;
    if (!isLeap(o, before, run, next, after, resolution) && !saysItMoves(o, run, resolution)) continue;
    for (let i = run.first + 1; i <= run.last; i++) if (o.x[i] === o.x[i]) stale.push(i);
  }
  return stale;
}

function move(from: Run, to: Run): void {
  to.first = from.first;
  to.last = from.last;
}

/** Finds the run that begins at or after a row; returns the row after it. */
function nextRun(o: Observations, row: number, run: Run): number {
  run.first = run.last = -1;
  let i = row;
  for (; i < o.x.length; i++) {
    const x = o.x[i];
    if (x !== x) continue;
    if (run.first >= 0 && (x !== o.x[run.first] || o.y[i] !== o.y[run.first])) break;
    if (run.first < 0) run.first = i;
    run.last = i;
  }
  return i;
}

/** Whether the boat must have left the place of a run long before the next fix says so. */
function isLeap(o: Observations, before: Run, run: Run, next: Run, after: Run, resolution: number): boolean {
  if (next.first < 0) return false;
  const leap = distance(o, run.last, next.first);
  if (leap <= LEAP_RESOLUTIONS * resolution) return false;
  const leapSpeed = leap / (o.time[next.first] - o.time[run.last]);
  const usual = Math.max(speedBetween(o, before, run), speedBetween(o, next, after));
  return leapSpeed > LEAP_FACTOR * usual + LEAP_FLOOR;
}

/** By its logged velocity the boat has gone so far while its position stood still. [m] */
const GONE = 10;

/** Whether the velocity logged during a run contradicts its standing still: a phone that repeats all it last knew. */
function saysItMoves(o: Observations, run: Run, resolution: number): boolean {
  let gone = 0;
  let last = run.first;
  for (let i = run.first + 1; i <= run.last; i++) {
    if (o.x[i] !== o.x[i]) continue;
    // A row without a velocity (too slow for a course) counts as standing.
    if (o.vx[i] === o.vx[i]) gone += lengthOf(o.vx[i], o.vy[i]) * (o.time[i] - o.time[last]);
    last = i;
  }
  return gone > GONE + LEAP_RESOLUTIONS * resolution;
}

function distance(o: Observations, a: number, b: number): number {
  return lengthOf(o.x[b] - o.x[a], o.y[b] - o.y[a]);
}

/** Speed from the first fix of one run to the first of the next; 0 where there is none. [m/s] */
function speedBetween(o: Observations, a: Run, b: Run): number {
  if (a.first < 0 || b.first < 0) return 0;
  return distance(o, a.first, b.first) / (o.time[b.first] - o.time[a.first]);
}

/** Rows looked at for the resolution. */
const LOOKED_AT = 4000;

/** Smallest step of the coordinates that is commonly seen. [m] */
function resolutionOf(o: Observations): number {
  const steps: number[] = [];
  let last = -1;
  for (let i = 0; i < o.x.length && steps.length < LOOKED_AT; i++) {
    if (o.x[i] !== o.x[i]) continue;
    if (last >= 0) {
      const dx = Math.abs(o.x[i] - o.x[last]);
      const dy = Math.abs(o.y[i] - o.y[last]);
      if (dx > 1e-6) steps.push(dx);
      if (dy > 1e-6) steps.push(dy);
    }
    last = i;
  }
  steps.sort((a, b) => a - b);
  return steps[Math.floor(steps.length / 50)] ?? 0;
}
