/**
 * Sailing or motoring? An engine shows where sails cannot drive: nearer to the wind than any rig points, at a speed that
 * does not follow the wind, or, with nothing but a track, at one speed on one course for longer than wind holds still.
 */

import { circularMean, directionOf, eastOf, northOf, turn } from '../math/angles.js';
import { lengthOf } from '../math/length.js';
import type { Issue } from '../recording/issues.js';
import type { Track } from '../recording/track.js';

/** Slower than this a boat may drift or be towed by a tide. [m/s] */
const MOVING = 1;
/** Mean apparent wind angle below which no sail draws: best rigs sail at 20 to 25 (common practice, no source). [deg] */
export const PINCHED_APPARENT = 15;
/** The same for the course to the true wind: best boats sail at 30 to 35, less the leeway and a tide across. [deg] */
export const PINCHED_TRUE = 20;
/** From one tack to the other a boat turns through this, more or less; so much time on the other shows it tacks. [deg] */
const TACKED = 90;
const TACKED_WITHIN = 22;
const OTHER_TACK = 0.3;
/** Angles are averaged over this: helm and waves. [s] */
const SMOOTHED = 30;
/** Shooting a mark or a line head to wind does not last so long. [s] */
export const LONGEST_SHOOT = 150;
/** Water speed of a sailing boat changes with each puff; under engine it holds within this share over five minutes. */
export const STEADY_SHARE = 0.009;
const STEADY_WINDOW = 300;
/** A paddle wheel that does not turn reads the same for ever: that is not steadiness. */
const FROZEN_SHARE = 1e-4;
/** The wind has to have changed by this share meanwhile, else a steady speed is only a steady wind. */
const WIND_CHANGES = 0.04;
/**
 * With a track alone: so long on one course, with the speed of single minutes within this share. Measured on recordings:
 * 0.4 to 0.9 % under engine, 1.9 % and more under sail; a receiver without Doppler adds 0.8 %.
 */
export const ALONE_SECONDS = 900;
export const ALONE_SHARE = 0.013;
const ALONE_COURSE = 8;
/** Pauses in the evidence up to this long, at the same speed, are still the engine. [s] */
const BRIDGED = 900;
const SAME_SPEED = 0.15;
/** Less than this in a log is leaving or entering a harbour: masked, and not worth a warning. [s] */
export const WORTH_SAYING = 600;

/** Wind on the rows of a track, where there is any. */
export interface WindRows {
  /** Where from. [deg true] */
  readonly twd: ArrayLike<number>;
}

export interface EngineFinding {
  readonly issues: readonly Issue[];
  /** 1 where the boat is under engine. */
  readonly mask: Uint8Array;
}

/**
 * Finds where a boat is under engine.
 *
 * @param track The smoothed track with the boat's own instruments.
 * @param wind  True wind on the same rows from a station; left out where there is none.
 * @param file  For the issue.
 * @returns The rows, and `under-engine` where they add up to ten minutes.
 */
export function findEngine(track: Track, wind?: WindRows, file?: string): EngineFinding {
  const mask = new Uint8Array(track.n);
  const speed = Float64Array.from(track.vx, (v, i) => lengthOf(v, track.vy[i]));
  const hasWind = wind !== undefined || track.awa !== undefined;
  if (track.awa) markPinched(mask, speed, track.awa, PINCHED_APPARENT);
  if (wind) {
    const angle = angleToWind(track, wind);
    const pinched = new Uint8Array(track.n);
    markPinched(pinched, speed, angle, PINCHED_TRUE);
    if (!isOneTack(pinched, speed, angle)) pinched.forEach((one, i) => (mask[i] |= one));
  }
  if (track.stw) markSteady(mask, speed, track.stw, track.aws);
  if (!hasWind) markAlone(mask, track, speed);
  bridge(mask, speed);
  return { issues: tell(mask, track, hasWind, file), mask };
}

function angleToWind(track: Track, wind: WindRows): Float64Array {
  return Float64Array.from(track.vx, (v, i) => turn(directionOf(v, track.vy[i]), wind.twd[i]));
}

/**
 * Whether what looks pinched is one tack of a boat that sails the other at a right angle to it: then the station's
 * direction is wrong by half the difference, and nobody motors.
 */
function isOneTack(pinched: Uint8Array, speed: Float64Array, angle: Float64Array): boolean {
  const near = circularMean(angle.filter((_, i) => pinched[i] === 1)).mean;
  if (Number.isNaN(near)) return false;
  const other = near - (turn(0, near) < 0 ? -TACKED : TACKED);
  let here = 0;
  let there = 0;
  for (let i = 0; i < angle.length; i++) {
    if (pinched[i]) here++;
    else if (speed[i] > MOVING && Math.abs(turn(other, angle[i])) < TACKED_WITHIN) there++;
  }
  return there > OTHER_TACK * here;
}

/** Marks stretches sailed nearer to the wind than sails can. */
function markPinched(mask: Uint8Array, speed: Float64Array, angle: ArrayLike<number>, limit: number): void {
  const n = mask.length;
  const half = SMOOTHED / 2;
  // Running sums of unit vectors: a mean angle over half a minute at every second.
  const east = new Float64Array(n + 1);
  const north = new Float64Array(n + 1);
  const count = new Float64Array(n + 1);
  for (let i = 0; i < n; i++) {
    const ok = angle[i] === angle[i];
    east[i + 1] = east[i] + (ok ? eastOf(angle[i]) : 0);
    north[i + 1] = north[i] + (ok ? northOf(angle[i]) : 0);
    count[i + 1] = count[i] + (ok ? 1 : 0);
  }
  const isPinched = (i: number) => {
    const a = Math.max(0, i - half);
    const b = Math.min(n, i + half);
    if (count[b] - count[a] < half || !(speed[i] > MOVING)) return false;
    return Math.abs(turn(0, directionOf(east[b] - east[a], north[b] - north[a]))) < limit;
  };
  let from = -1;
  for (let i = 0; i <= n; i++) {
    const pinched = i < n && isPinched(i);
    if (pinched && from < 0) from = i;
    if (pinched || from < 0) continue;
    if (i - from >= LONGEST_SHOOT) mask.fill(1, from, i);
    from = -1;
  }
}

/** Marks windows whose water speed holds still while the wind does not. */
function markSteady(mask: Uint8Array, speed: Float64Array, stw: Float64Array, aws: Float64Array | undefined): void {
  if (!aws) return;
  for (let from = 0; from + STEADY_WINDOW <= mask.length; from += STEADY_WINDOW / 2) {
    const to = from + STEADY_WINDOW;
    const water = spread(stw, from, to);
    if (!(mean(speed, from, to) > MOVING) || !(water < STEADY_SHARE) || water < FROZEN_SHARE) continue;
    if (spread(aws, from, to) > WIND_CHANGES) mask.fill(1, from, to);
  }
}

/** Standard deviation of ten-second means over their mean; NaN where a third is missing. */
function spread(column: Float64Array, from: number, to: number): number {
  const means: number[] = [];
  for (let i = from; i + 10 <= to; i += 10) {
    const m = mean(column, i, i + 10);
    if (m === m) means.push(m);
  }
  if (means.length < (to - from) / 15) return NaN;
  return deviation(means) / average(means);
}

function mean(column: Float64Array, from: number, to: number): number {
  let sum = 0;
  let n = 0;
  for (let i = from; i < to; i++) {
    if (column[i] !== column[i]) continue;
    sum += column[i];
    n++;
  }
  return n > 0 ? sum / n : NaN;
}

function average(values: readonly number[]): number {
  return values.reduce((a, b) => a + b, 0) / values.length;
}

function deviation(values: readonly number[]): number {
  const m = average(values);
  return Math.sqrt(values.reduce((a, b) => a + (b - m) ** 2, 0) / Math.max(1, values.length - 1));
}

/** Marks windows of one course and one speed: with no wind known, nothing else can tell. */
function markAlone(mask: Uint8Array, track: Track, speed: Float64Array): void {
  for (let from = 0; from + ALONE_SECONDS <= mask.length; from += 60) {
    const to = from + ALONE_SECONDS;
    const speeds: number[] = [];
    const courses: number[] = [];
    const along = directionOf(mean(track.vx, from, to), mean(track.vy, from, to));
    for (let i = from; i < to; i += 60) {
      const [east, north] = [mean(track.vx, i, i + 60), mean(track.vy, i, i + 60)];
      if (!(lengthOf(east, north) > MOVING)) break;
      speeds.push(lengthOf(east, north));
      courses.push(turn(along, directionOf(east, north)));
    }
    if (speeds.length < ALONE_SECONDS / 60 || !(mean(speed, from, to) > MOVING)) continue;
    if (deviation(speeds) / average(speeds) < ALONE_SHARE && deviation(courses) < ALONE_COURSE) mask.fill(1, from, to);
  }
}

/** Closes pauses in the evidence sailed at the same speed as before and after. */
function bridge(mask: Uint8Array, speed: Float64Array): void {
  let last = -1;
  for (let i = 0; i < mask.length; i++) {
    if (!mask[i]) continue;
    const hole = i - last - 1;
    if (last >= 0 && hole > 0 && hole <= BRIDGED) {
      const around = (mean(speed, Math.max(0, last - 60), last + 1) + mean(speed, i, i + 60)) / 2;
      const within = mean(speed, last + 1, i);
      if (Math.abs(within - around) < SAME_SPEED * around) mask.fill(1, last + 1, i);
    }
    last = i;
  }
}

function tell(mask: Uint8Array, track: Track, hasWind: boolean, file: string | undefined): Issue[] {
  const total = mask.reduce((sum, m) => sum + m, 0);
  if (total < WORTH_SAYING) return [];
  const first = mask.indexOf(1);
  const last = mask.lastIndexOf(1);
  const time = (row: number) => new Date((track.t0 + row) * 1000).toISOString().slice(11, 19);
  const why = hasWind
    ? 'nearer to the wind than a sail draws, or at a speed that does not follow the wind'
    : 'one speed on one course, for longer than a wind holds still';
  const message =
    `Between ${time(first)} and ${time(last)} UTC the boat looks to be under engine for ${Math.round(total / 60)} minutes ` +
    `(${why}): they are left out.`;
  return [{ code: 'under-engine', message, ...(file === undefined ? {} : { file }) }];
}
