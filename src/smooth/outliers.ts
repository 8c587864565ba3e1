import { factorAt, UNIFORM } from './activity.js';
import type { Stretch } from './gaps.js';
import type { Jump } from './rejections.js';
import { predict, startState, updatePosition, updateVelocity, type NoiseModel, type Observations } from './kalman.js';

/** Innovations beyond so many standard deviations, plus what a manoeuvre may explain, are not the boat. */
const GATE = 5;
/** A step of the receiver's own error (a satellite gained or lost) is not called a jump. [m] */
const GATE_FLOOR = 4;
/** Acceleration of the hardest manoeuvre of a dinghy: 3 m/s² turns 4 m/s into the opposite in under 3 s. */
const MANOEUVRE_ACCELERATION = 3;
/** So many fixes that agree among each other over so many seconds are where the boat is now. */
const SETTLED_FIXES = 5;
const SETTLED_SECONDS = 8;
/** Between fixes that belong together a boat is not faster than this. [m/s] */
const FASTEST = 12;
/** An excursion up to this long that comes back to where the boat would have been is not the boat. [s] */
const LONGEST_EXCURSION = 60;

/** What the gate found in one stretch. */
export interface Gated {
  /** Rows whose position is impossible. */
  readonly rejected: readonly number[];
  /** Where the track goes on elsewhere: a new stretch begins. */
  readonly jumps: readonly Jump[];
  /** Rows whose Doppler velocity is impossible. */
  readonly rejectedVelocity: readonly number[];
}

/**
 * Finds fixes the boat cannot have made, by the innovation of the filter: distance from where the boat should be,
 * against its standard deviation or what a hard manoeuvre can do in that time.
 */
export function gate(o: Observations, stretch: Stretch, noise: NoiseModel, activity = UNIFORM): Gated {
  const rejected: number[] = [];
  const jumps: Jump[] = [];
  const rejectedVelocity: number[] = [];
  const pending: number[] = [];
  const distances: number[] = [];
  const out = new Float64Array(6);
  let state = startState(o.x[stretch.from], o.y[stretch.from], noise);
  let time = o.time[stretch.from];
  let accepted = time;
  for (let i = stretch.from; i < stretch.to; i++) {
    const t = o.time[i];
    predict(state, t - time, noise, factorAt(activity, time));
    time = t;
    const x = o.x[i];
    if (x === x) {
      const y = o.y[i];
      const distance = length(x - state[0] - state[2], y - state[3] - state[5]);
      if (distance <= gateLimit(state, t - accepted, noise)) {
        updatePosition(state, x, y, noise.white * noise.white, out);
        accepted = t;
        for (const row of pending) rejected.push(row);
        pending.length = distances.length = 0;
      } else {
        pending.push(i);
        distances.push(distance);
        const settled = settledFrom(o, pending);
        if (settled < 0) continue;
        const restart = pending[settled];
        for (const row of pending.slice(0, settled)) rejected.push(row);
        pending.length = 0;
        jumps.push({ row: restart, metres: distances[settled] });
        distances.length = 0;
        state = startState(o.x[restart], o.y[restart], noise);
        time = accepted = o.time[restart]!;
        i = restart - 1;
        continue;
      }
    }
    const vx = o.vx[i];
    if (vx === vx && pending.length === 0) {
      const off = length(vx - state[1], o.vy[i] - state[4]);
      const sd = Math.sqrt(state[9] + noise.doppler * noise.doppler);
      if (off > GATE * sd + MANOEUVRE_ACCELERATION) rejectedVelocity.push(i);
      else updateVelocity(state, vx, o.vy[i], noise.doppler * noise.doppler, out);
    }
  }
  for (const row of pending) rejected.push(row);
  return { rejected, jumps, rejectedVelocity };
}

/** Farthest a fix may lie from the prediction. [m] */
function gateLimit(s: Float64Array, sinceAccepted: number, noise: NoiseModel): number {
  const variance = s[6] + 2 * s[8] + s[11] + noise.white * noise.white;
  const speed = length(s[1], s[4]);
  const manoeuvre = Math.min(
    0.5 * MANOEUVRE_ACCELERATION * sinceAccepted * sinceAccepted,
    (2 * speed + 2) * sinceAccepted,
  );
  return Math.max(GATE * Math.sqrt(variance), GATE_FLOOR + 2 * noise.white + manoeuvre);
}

/**
 * Of the fixes set aside, the first of those at the end that follow each other as a boat's would, long enough.
 *
 * @returns Its place among the fixes set aside, -1 where they do not settle.
 */
function settledFrom(o: Observations, pending: readonly number[]): number {
  let start = pending.length - 1;
  while (start > 0 && isPlausible(o, pending[start - 1], pending[start])) start--;
  const seconds = o.time[pending[pending.length - 1]] - o.time[pending[start]];
  return pending.length - start >= SETTLED_FIXES && seconds >= SETTLED_SECONDS ? start : -1;
}

/** Whether a boat gets from one fix to the other in the time between. */
function isPlausible(o: Observations, from: number, to: number): boolean {
  const distance = length(o.x[to] - o.x[from], o.y[to] - o.y[from]);
  return distance <= FASTEST * (o.time[to] - o.time[from]) + GATE_FLOOR;
}

/** What a boat does to the chord of its neighbours that turns 6 m/s into the opposite within a step. [m/s] */
const SPIKE_SPEED = 12;

/** An outlier lies twice as far off its chord as it puts its neighbours off theirs; less, and they are several. */
const STANDS_ALONE = 1.5;

/**
 * Single fixes off the chord of their neighbours by more than any boat turns: out before anything is learnt from the
 * log. Only where the chord itself is one a boat sails; else it is a jump for good.
 */
export function spikeRows(o: Observations, { from, to }: Stretch): number[] {
  const spikes: number[] = [];
  let before = -1;
  let row = nextFix(o, from, to);
  let next = nextFix(o, row + 1, to);
  let offBefore = 0;
  let off = 0;
  while (row < to) {
    const after = nextFix(o, next + 1, to);
    const offNext = after < to ? offChord(o, row, next, after) : 0;
    const alone = off > STANDS_ALONE * Math.max(offBefore, offNext);
    if (before >= 0 && next < to && alone && off > turnLimit(o, before, row, next) && isPlausible(o, before, next)) {
      spikes.push(row);
    }
    before = row;
    row = next;
    next = after;
    offBefore = off;
    off = offNext;
  }
  return spikes;
}

/** Distance of a fix from the chord of its neighbours. [m] */
function offChord(o: Observations, last: number, at: number, next: number): number {
  const share = (o.time[at] - o.time[last]) / (o.time[next] - o.time[last]);
  const east = o.x[at] - o.x[last] - share * (o.x[next] - o.x[last]);
  const north = o.y[at] - o.y[last] - share * (o.y[next] - o.y[last]);
  return length(east, north);
}

/** Of a vector: Math.hypot guards against overflow, which costs ten times as much. */
function length(x: number, y: number): number {
  return Math.sqrt(x * x + y * y);
}

function nextFix(o: Observations, row: number, to: number): number {
  let i = row;
  while (i < to && o.x[i] !== o.x[i]) i++;
  return i;
}

/** Farthest off the chord that a turn brings a boat. [m] */
function turnLimit(o: Observations, last: number, row: number, next: number): number {
  const [before, after] = [o.time[row] - o.time[last], o.time[next] - o.time[row]];
  return GATE_FLOOR + (SPIKE_SPEED * before * after) / (before + after);
}

/**
 * Stretches between jumps that are only excursions: short, and the track after them continues the one before.
 *
 * @param jumps Where the track jumped, within the stretch.
 * @returns Row ranges to be rejected, and the jumps that remain.
 */
export function excursions(
  o: Observations,
  stretch: Stretch,
  jumps: readonly Jump[],
): { rejected: Stretch[]; jumps: Jump[] } {
  const edges = [stretch.from, ...jumps.map(({ row }) => row), stretch.to];
  const rejected: Stretch[] = [];
  const kept: Jump[] = [];
  for (let k = 1; k < edges.length - 1; k++) {
    const from = edges[k];
    const to = edges[k + 1];
    const back = k + 1 < edges.length - 1;
    const before = lastFix(o, edges[k - 1], from);
    if (back && before >= 0 && o.time[to] - o.time[before] <= LONGEST_EXCURSION && isPlausible(o, before, to)) {
      rejected.push({ from, to });
      k++;
    } else kept.push(jumps[k - 1]);
  }
  return { rejected, jumps: kept };
}

function lastFix(o: Observations, from: number, to: number): number {
  for (let i = to - 1; i >= from; i--) if (o.x[i] === o.x[i]) return i;
  return -1;
}
