import { factorAt, type Activity } from './activity.js';
import type { Stretch } from './gaps.js';
import type { Observations } from './kalman.js';

/**
 * Displays damp what a receiver measures: the logged speed and course then trail the boat by some seconds, which blurs
 * and delays every tack. The fixes show by how much.
 */

/** Lags looked for. [s] */
const LONGEST_LAG = 8;
const LAG_STEP = 0.5;
/** Velocities from fixes are taken over this to either side. [s] */
const HALF = 2;
/** A lag is believed when it lowers the squared disagreement with the fixes by this factor. */
const BELIEVED = 1.2;
/** Disagreement above this is an outlier, not a lag. [m/s] */
const LARGEST = 3;
/** At most so many moments are compared, those in manoeuvres first: on a straight line a lag cannot be seen. */
const MOMENTS = 4000;

/**
 * By how much the logged velocity trails the fixes.
 *
 * @param o         Fixes and logged velocities.
 * @param stretches Where the fixes hang together.
 * @param activity  How hard the boat manoeuvres.
 * @returns Lag; 0 where none shows. [s, 0..8]
 */
export function dopplerLag(o: Observations, stretches: readonly Stretch[], activity: Activity): number {
  if (!o.vx.some((v) => v === v)) return 0;
  const moments = chordVelocities(o, stretches, activity);
  if (moments.length < 30) return 0;
  let best = 0;
  let least = Infinity;
  let unmoved = NaN;
  for (let lag = 0; lag <= LONGEST_LAG; lag += LAG_STEP) {
    const disagreement = meanDisagreement(o, moments, lag);
    if (lag === 0) unmoved = disagreement;
    if (disagreement < least) [best, least] = [lag, disagreement];
  }
  return unmoved > BELIEVED * least ? best : 0;
}

/** Velocity from fixes at a time. */
interface Moment {
  readonly time: number;
  readonly vx: number;
  readonly vy: number;
}

/** Velocities from chords about the fixes at which a velocity was logged, in manoeuvres. */
function chordVelocities(o: Observations, stretches: readonly Stretch[], activity: Activity): Moment[] {
  const moments: Moment[] = [];
  for (const { from, to } of stretches) {
    let back = from;
    let ahead = from;
    for (let i = from; i < to && moments.length < MOMENTS; i++) {
      const t = o.time[i];
      if (o.x[i] !== o.x[i] || factorAt(activity, t) <= 1) continue;
      back = fixNear(o, back, to, t - HALF);
      ahead = fixNear(o, Math.max(ahead, i), to, t + HALF);
      const dt = o.time[ahead] - o.time[back];
      const off = (o.time[ahead] + o.time[back]) / 2 - t;
      if (back >= i || ahead <= i || dt > 4 * HALF || Math.abs(off) > HALF / 4) continue;
      moments.push({ time: t + off, vx: (o.x[ahead] - o.x[back]) / dt, vy: (o.y[ahead] - o.y[back]) / dt });
    }
  }
  return moments;
}

/** First fix from a row on that is not before a time; the last one where there is none. */
function fixNear(o: Observations, row: number, to: number, time: number): number {
  let last = row;
  for (let i = row; i < to; i++) {
    if (o.x[i] !== o.x[i]) continue;
    last = i;
    if (o.time[i] >= time - 1e-6) break;
  }
  return last;
}

function meanDisagreement(o: Observations, moments: readonly Moment[], lag: number): number {
  const series = new VelocitySeries(o);
  let sum = 0;
  let n = 0;
  for (const moment of moments) {
    if (!series.at(moment.time + lag)) continue;
    const off = Math.hypot(series.vx - moment.vx, series.vy - moment.vy);
    sum += Math.min(off, LARGEST) ** 2;
    n++;
  }
  return n < moments.length / 2 ? Infinity : sum / n;
}

/** Logged velocities further apart than this are not joined. [s] */
const JOINED = 5;

/** Reads the logged velocity at rising times, on the line between the readings around. */
class VelocitySeries {
  readonly #o: Observations;
  #before = -1;
  #after = -1;
  vx = NaN;
  vy = NaN;

  constructor(o: Observations) {
    this.#o = o;
    this.#after = this.#next(0);
  }

  #next(row: number): number {
    const { vx } = this.#o;
    for (let i = row; i < vx.length; i++) if (vx[i] === vx[i]) return i;
    return vx.length;
  }

  /** Sets vx, vy; false where no reading is near. Times must not go back. */
  at(time: number): boolean {
    const o = this.#o;
    while (this.#after < o.vx.length && o.time[this.#after] < time) {
      this.#before = this.#after;
      this.#after = this.#next(this.#after + 1);
    }
    if (this.#before < 0 || this.#after >= o.vx.length) return false;
    const span = o.time[this.#after] - o.time[this.#before];
    if (span > JOINED) return false;
    const share = (time - o.time[this.#before]) / span;
    this.vx = o.vx[this.#before] + share * (o.vx[this.#after] - o.vx[this.#before]);
    this.vy = o.vy[this.#before] + share * (o.vy[this.#after] - o.vy[this.#before]);
    return true;
  }
}

/** From this lag on the display has damped its readings so much that they are wrong while the boat turns. [s] */
const DAMPED = 1;

/**
 * Moves the logged velocities by a lag, in place: each row gets what was logged `lag` later. Where damping has cut the
 * corners of manoeuvres the readings are left out.
 */
export function undoLag(o: Observations, lag: number, activity: Activity): void {
  const series = new VelocitySeries({ ...o, vx: o.vx.slice(), vy: o.vy.slice() });
  let turnedAt = -Infinity;
  for (let i = 0; i < o.vx.length; i++) {
    if (o.vx[i] !== o.vx[i]) continue;
    const t = o.time[i];
    if (factorAt(activity, t) > 1 || factorAt(activity, t + lag) > 1) turnedAt = t;
    const cut = lag >= DAMPED && t - turnedAt <= lag;
    const known = series.at(t + lag) && !cut;
    o.vx[i] = known ? series.vx : NaN;
    o.vy[i] = known ? series.vy : NaN;
  }
}

/** Factor on the error of damped readings: what they leave out of the boat's wander, besides their noise. */
export function dampedError(lag: number): number {
  return lag >= DAMPED ? 1 + lag / 2 : 1;
}
