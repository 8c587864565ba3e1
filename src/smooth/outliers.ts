import { factorAt, UNIFORM } from './activity.js';
import type { Stretch } from './gaps.js';
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
/** An excursion up to this long that comes back to where the boat would have been is not the boat. [s] */
const LONGEST_EXCURSION = 60;

/** What the gate found in one stretch. */
export interface Gated {
  /** Rows whose position is impossible. */
  readonly rejected: readonly number[];
  /** Rows at which the track goes on elsewhere: a new stretch begins. */
  readonly jumps: readonly number[];
  /** Longest jump. [m] */
  readonly largest: number;
  /** Rows whose Doppler velocity is impossible. */
  readonly rejectedVelocity: readonly number[];
}

/**
 * Finds fixes the boat cannot have made, by the innovation of the filter: distance from where the boat should be,
 * against its standard deviation or what a hard manoeuvre can do in that time.
 */
export function gate(o: Observations, stretch: Stretch, noise: NoiseModel, activity = UNIFORM): Gated {
  const rejected: number[] = [];
  const jumps: number[] = [];
  const rejectedVelocity: number[] = [];
  const pending: number[] = [];
  const out = new Float64Array(6);
  let state = startState(o.x[stretch.from], o.y[stretch.from], noise);
  let time = o.time[stretch.from];
  let accepted = time;
  let largest = 0;
  for (let i = stretch.from; i < stretch.to; i++) {
    const t = o.time[i];
    predict(state, t - time, noise, factorAt(activity, time));
    time = t;
    const x = o.x[i];
    if (x === x) {
      const y = o.y[i];
      const distance = Math.hypot(x - state[0] - state[2], y - state[3] - state[5]);
      if (distance <= gateLimit(state, t - accepted, noise)) {
        updatePosition(state, x, y, noise.white * noise.white, out);
        accepted = t;
        for (const row of pending) rejected.push(row);
        pending.length = 0;
      } else {
        largest = Math.max(largest, distance);
        pending.push(i);
        if (!hasSettled(o, pending)) continue;
        const restart = pending[0];
        pending.length = 0;
        jumps.push(restart);
        state = startState(o.x[restart], o.y[restart], noise);
        time = accepted = o.time[restart]!;
        i = restart - 1;
        continue;
      }
    }
    const vx = o.vx[i];
    if (vx === vx && pending.length === 0) {
      const off = Math.hypot(vx - state[1], o.vy[i] - state[4]);
      const sd = Math.sqrt(state[9] + noise.doppler * noise.doppler);
      if (off > GATE * sd + MANOEUVRE_ACCELERATION) rejectedVelocity.push(i);
      else updateVelocity(state, vx, o.vy[i], noise.doppler * noise.doppler, out);
    }
  }
  for (const row of pending) rejected.push(row);
  return { rejected, jumps, largest, rejectedVelocity };
}

/** Farthest a fix may lie from the prediction. [m] */
function gateLimit(s: Float64Array, sinceAccepted: number, noise: NoiseModel): number {
  const variance = s[6] + 2 * s[8] + s[11] + noise.white * noise.white;
  const speed = Math.hypot(s[1], s[4]);
  const manoeuvre = Math.min(
    0.5 * MANOEUVRE_ACCELERATION * sinceAccepted * sinceAccepted,
    (2 * speed + 2) * sinceAccepted,
  );
  return Math.max(GATE * Math.sqrt(variance), GATE_FLOOR + 2 * noise.white + manoeuvre);
}

/** Whether the fixes set aside follow each other as a boat's would, long enough. */
function hasSettled(o: Observations, pending: readonly number[]): boolean {
  const last = pending.length - 1;
  if (pending.length < SETTLED_FIXES) return false;
  if (o.time[pending[last]] - o.time[pending[0]] < SETTLED_SECONDS) return false;
  const speeds: number[] = [];
  for (let k = 1; k <= last; k++) {
    const [a, b] = [pending[k - 1], pending[k]];
    speeds.push(Math.hypot(o.x[b] - o.x[a], o.y[b] - o.y[a]) / (o.time[b] - o.time[a]));
  }
  const sorted = [...speeds].sort((a, b) => a - b);
  const median = sorted[sorted.length >> 1];
  return sorted[last - 1] <= 2 * median + MANOEUVRE_ACCELERATION + GATE_FLOOR;
}

/**
 * Stretches between jumps that are only excursions: short, and the track after them continues the one before.
 *
 * @param jumps Rows at which the track jumped, within [from, to).
 * @returns Row ranges to be rejected, and the jumps that remain.
 */
export function excursions(
  o: Observations,
  stretch: Stretch,
  jumps: readonly number[],
): { rejected: Stretch[]; jumps: number[] } {
  const edges = [stretch.from, ...jumps, stretch.to];
  const rejected: Stretch[] = [];
  const kept: number[] = [];
  for (let k = 1; k < edges.length - 1; k++) {
    const from = edges[k];
    const to = edges[k + 1];
    const back = k + 1 < edges.length - 1;
    const before = lastFix(o, edges[k - 1], from);
    if (back && before >= 0 && o.time[to] - o.time[before] <= LONGEST_EXCURSION && isReachable(o, before, to)) {
      rejected.push({ from, to });
      k++;
    } else kept.push(from);
  }
  return { rejected, jumps: kept };
}

function lastFix(o: Observations, from: number, to: number): number {
  for (let i = to - 1; i >= from; i--) if (o.x[i] === o.x[i]) return i;
  return -1;
}

/** Whether a sailing boat gets from one fix to the other in the time between: up to 10 m/s. */
function isReachable(o: Observations, from: number, to: number): boolean {
  const distance = Math.hypot(o.x[to] - o.x[from], o.y[to] - o.y[from]);
  return distance <= 10 * (o.time[to] - o.time[from]) + GATE_FLOOR;
}
