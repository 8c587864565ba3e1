import type { Stretch } from './gaps.js';
import type { Observations } from './kalman.js';

/**
 * How hard the boat is manoeuvring, second by second: a factor on the spectral density of its acceleration. One density
 * for a whole log is a compromise that blurs tacks and leaves noise on the straight.
 */
export interface Activity {
  /** Whole second of the first value. */
  readonly t0: number;
  /** Factor from each second to the next, >= 1. */
  readonly factor: Float32Array;
}

/** Nothing known: the same everywhere. */
export const UNIFORM: Activity = { t0: 0, factor: new Float32Array(0) };

/** Velocity before and after are taken over so many seconds (or two steps of a slow logger): half a tack. */
const HALF = 4;
/** A change of velocity is a manoeuvre when its square is so many times the usual one. */
const UNUSUAL = 3;
/** ... and no manoeuvre is more than this: a capsize is 4 m/s within 2 s, against 0.3 m/s of usual wander. */
const HARDEST = 60;

/**
 * Reads the activity from the fixes: the change of velocity over some seconds, from chords before and after, against
 * the median of the log.
 *
 * @param o         Positions. [m]
 * @param stretches Where they hang together.
 * @param step      Median step between fixes. [s]
 */
export function activityOf(o: Observations, stretches: readonly Stretch[], step: number): Activity {
  if (stretches.length === 0) return UNIFORM;
  const t0 = Math.floor(o.time[stretches[0].from]);
  const n = Math.ceil(o.time[stretches[stretches.length - 1].to - 1]) - t0 + 1;
  const x = new Float32Array(n).fill(NaN);
  const y = new Float32Array(n).fill(NaN);
  for (const stretch of stretches) chords(o, stretch, t0, x, y);
  const half = Math.max(HALF, Math.round(2 * step));
  const change = squaredChanges(x, y, half);
  const usual = medianOf(change);
  const factor = new Float32Array(n).fill(1);
  if (!(usual > 0)) return { t0, factor };
  const reach = Math.ceil(half / 2);
  for (let i = 0; i < n; i++) {
    let sum = 0;
    let count = 0;
    for (let k = Math.max(0, i - reach); k <= Math.min(n - 1, i + reach); k++) {
      if (change[k] !== change[k]) continue;
      sum += change[k];
      count++;
    }
    if (count > 0) factor[i] = Math.min(HARDEST, Math.max(1, sum / count / usual / UNUSUAL));
  }
  return { t0, factor };
}

/** Positions at whole seconds, by the chord between the fixes around each. */
function chords(o: Observations, { from, to }: Stretch, t0: number, x: Float32Array, y: Float32Array): void {
  let last = -1;
  for (let row = from; row < to; row++) {
    if (o.x[row] !== o.x[row]) continue;
    if (last >= 0) {
      const start = o.time[last];
      const share = 1 / (o.time[row] - start);
      for (let t = Math.ceil(start); t <= o.time[row]; t++) {
        const s = (t - start) * share;
        x[t - t0] = o.x[last] + s * (o.x[row] - o.x[last]);
        y[t - t0] = o.y[last] + s * (o.y[row] - o.y[last]);
      }
    }
    last = row;
  }
}

/** Squared change of velocity over `half` seconds before and after each second. */
function squaredChanges(x: Float32Array, y: Float32Array, half: number): Float32Array {
  const change = new Float32Array(x.length).fill(NaN);
  for (let i = half; i + half < x.length; i++) {
    const east = (x[i + half] - 2 * x[i] + x[i - half]) / half;
    const north = (y[i + half] - 2 * y[i] + y[i - half]) / half;
    change[i] = east * east + north * north;
  }
  return change;
}

/** A boat at her berth: changes below (0.05 m/s)² say nothing about what is usual under way. */
const AT_REST = 0.0025;

/** Median of the values above rest, among at most some thousand evenly spread values. */
function medianOf(values: Float32Array): number {
  const stride = Math.max(1, Math.floor(values.length / 10000));
  const some: number[] = [];
  for (let i = 0; i < values.length; i += stride) if (values[i] > AT_REST) some.push(values[i]);
  if (some.length === 0) return NaN;
  some.sort((a, b) => a - b);
  return some[some.length >> 1];
}

/** The factor at a time. */
export function factorAt(activity: Activity, time: number): number {
  return activity.factor[Math.floor(time) - activity.t0] ?? 1;
}
