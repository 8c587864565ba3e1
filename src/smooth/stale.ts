import type { Observations } from './kalman.js';

/**
 * A phone that has lost the sky repeats its last position, then leaps to where the boat is. The repeats are stale: the
 * boat was not stopped. A boat that was stopped moves off at the speed it then sails.
 */

/** The leap is faster than the boat before and after by this factor ... */
const LEAP_FACTOR = 1.6;
/** ... and by this much; the noise of a fix over a second. [m/s] */
const LEAP_FLOOR = 1;
/** ... and longer than so many steps of the position's resolution. */
const LEAP_RESOLUTIONS = 3;

/** Rows that repeat a position which was no longer true. */
export function staleRows(o: Observations): number[] {
  const stale: number[] = [];
  const rows = distinctRuns(o);
  const resolution = resolutionOf(o, rows);
  for (let k = 0; k + 1 < rows.length; k++) {
    const run = rows[k];
    const next = rows[k + 1];
    if (run.last === run.first) continue;
    const leap = distance(o, run.last, next.first);
    const leapSpeed = leap / (o.time[next.first] - o.time[run.last]);
    if (leap <= LEAP_RESOLUTIONS * resolution) continue;
    const usual = Math.max(speedBetween(o, rows[k - 1], run), speedBetween(o, next, rows[k + 2]));
    if (Number.isNaN(usual) || leapSpeed <= LEAP_FACTOR * usual + LEAP_FLOOR) continue;
    for (let i = run.first + 1; i <= run.last; i++) if (o.x[i] === o.x[i]) stale.push(i);
  }
  return stale;
}

/** Fixes in a row at exactly the same place. */
interface Run {
  readonly first: number;
  last: number;
}

function distinctRuns(o: Observations): Run[] {
  const runs: Run[] = [];
  let current: Run | undefined;
  for (let i = 0; i < o.x.length; i++) {
    const x = o.x[i];
    if (x !== x) continue;
    if (current && o.x[current.first] === x && o.y[current.first] === o.y[i]) current.last = i;
    else runs.push((current = { first: i, last: i }));
  }
  return runs;
}

function distance(o: Observations, a: number, b: number): number {
  return Math.hypot(o.x[b] - o.x[a], o.y[b] - o.y[a]);
}

/** Speed from the first fix of one run to the first of the next; 0 where there is none. [m/s] */
function speedBetween(o: Observations, a: Run | undefined, b: Run | undefined): number {
  if (!a || !b) return 0;
  return distance(o, a.first, b.first) / (o.time[b.first] - o.time[a.first]);
}

/** Smallest step of the coordinates that is commonly seen. [m] */
function resolutionOf(o: Observations, runs: readonly Run[]): number {
  const steps: number[] = [];
  for (let k = 1; k < Math.min(runs.length, 2000); k++) {
    const dx = Math.abs(o.x[runs[k].first] - o.x[runs[k - 1].first]);
    const dy = Math.abs(o.y[runs[k].first] - o.y[runs[k - 1].first]);
    if (dx > 1e-6) steps.push(dx);
    if (dy > 1e-6) steps.push(dy);
  }
  steps.sort((a, b) => a - b);
  return steps[Math.floor(steps.length / 50)] ?? 0;
}
