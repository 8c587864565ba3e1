import { angleBetween, circularMean, directionOf, eastOf, northOf, turn, wrap360 } from '../math/angles.js';
import { lengthOf } from '../math/length.js';
import { median } from '../math/median.js';
import type { Track } from '../recording/track.js';
import { windSums, type WindSource } from './source.js';

/** A turn from one steady course to another. */
interface CourseTurn {
  /** Direction half-way between the courses, on the side the boat turned through. [deg] */
  readonly bisector: number;
  /** Least speed in the turn over the mean of the speeds before and after. */
  readonly dip: number;
  /** Mean speed before and after. [m/s] */
  readonly speed: number;
}

/** A course is steady when its 10 s hold within this of their mean. [deg] */
const STEADY = 12;
const STEADY_SECONDS = 10;
/** Turns of a tack or a gybe. [deg] */
const TURN_MIN = 50;
const TURN_MAX = 130;
const TURN_SECONDS = 25;

/** Turns of 50 to 130 degrees between steady courses, without any knowledge of the wind. */
function courseTurns(track: Track): CourseTurn[] {
  const n = track.n;
  const course = Float64Array.from(track.vx, (vx, i) => directionOf(vx, track.vy[i]));
  const speed = Float64Array.from(track.vx, (vx, i) => lengthOf(vx, track.vy[i]));
  const usual = median(Array.from(speed).filter((s) => s > 0.7));
  const steady = new Float64Array(n).fill(NaN);
  for (let i = 0; i + STEADY_SECONDS <= n; i++) {
    const part = course.subarray(i, i + STEADY_SECONDS);
    const { mean, n: count } = circularMean(part);
    const slow = Math.min(...speed.subarray(i, i + STEADY_SECONDS)) < 0.5 * usual;
    if (count === STEADY_SECONDS && !slow && part.every((c) => angleBetween(c, mean) < STEADY)) steady[i] = mean;
  }
  const turns: CourseTurn[] = [];
  let i = 0;
  while (i < n) {
    const found = turnFrom(i, steady, course, speed);
    if (found) turns.push(found.turn);
    i = found ? found.next : i + 1;
  }
  return turns;
}

function turnFrom(
  i: number,
  steady: Float64Array,
  course: Float64Array,
  speed: Float64Array,
): { turn: CourseTurn; next: number } | null {
  if (Number.isNaN(steady[i]) || !Number.isNaN(steady[i + 1] ?? 0)) return null;
  const end = i + STEADY_SECONDS;
  for (let j = end; j < end + TURN_SECONDS && j < steady.length; j++) {
    if (Number.isNaN(steady[j])) continue;
    const change = turn(steady[i], steady[j]);
    if (Math.abs(change) < TURN_MIN || Math.abs(change) > TURN_MAX) return null;
    const before = mean(speed, i, end);
    const after = mean(speed, j + 5, Math.min(speed.length, j + STEADY_SECONDS + 5));
    const least = Math.min(...speed.subarray(end - 3, j + 3));
    const through = circularMean(course.subarray(end, j)).mean;
    const bisector = wrap360(steady[i] + change / 2);
    if (Number.isFinite(through) && angleBetween(through, bisector) > 90) return null;
    return { turn: { bisector, dip: (2 * least) / (before + after), speed: (before + after) / 2 }, next: j };
  }
  return null;
}

function mean(values: Float64Array, from: number, to: number): number {
  let sum = 0;
  for (let i = from; i < to; i++) sum += values[i];
  return sum / Math.max(1, to - from);
}

/**
 * First guess of the mean wind direction from courses alone: tacks and gybes turn about the wind's axis; a tack costs
 * much of the speed, a gybe little, and boats are slower upwind. Good to some 10 degrees; it only serves to find the
 * tacks, whose bisectors then give the direction.
 *
 * @returns Where the wind comes from [deg]; NaN when there are fewer than two such turns.
 */
export function guessWindDirection(tracks: readonly Track[]): number {
  const turns = tracks.flatMap((track) => courseTurns(track));
  if (turns.length < 2) return NaN;
  const axis = axisOf(turns);
  let vote = 0;
  const speeds = median(turns.map((t) => t.speed));
  for (const t of turns) {
    const towards = Math.cos((Math.PI / 180) * turn(axis, t.bisector));
    if (Math.abs(towards) < 0.7) continue;
    const looksLikeTack = 1.6 * (0.8 - t.dip) + 0.6 * (1 - t.speed / speeds);
    vote += Math.sign(towards) * Math.max(-0.5, Math.min(0.5, looksLikeTack));
  }
  return wrap360(vote >= 0 ? axis : axis + 180);
}

/** The direction (0..180) about which most turns are symmetrical, by a 12 degree kernel. */
function axisOf(turns: readonly CourseTurn[]): number {
  let best = 0;
  let most = -1;
  for (let axis = 0; axis < 180; axis += 2) {
    let sum = 0;
    for (const t of turns) {
      const off = Math.min(angleBetween(axis, t.bisector), angleBetween(axis + 180, t.bisector));
      sum += Math.exp(-((off / 12) ** 2) / 2);
    }
    if (sum > most) {
      most = sum;
      best = axis;
    }
  }
  return best;
}

/** A look at the wind's direction: the bisector of the courses before and after a tack, or a reading by hand. */
export interface DirectionLook {
  /** UTC epoch seconds. */
  readonly time: number;
  /** Where from. [deg] */
  readonly direction: number;
  /** One standard error. [deg] */
  readonly se: number;
}

/** Random walk of the wind direction: 4 degrees in a minute's worth of root-time. [deg^2/s] */
const WALK = 16 / 60;

/**
 * Wind direction over time from single looks, by a random-walk smoother (forward filter, backward pass).
 *
 * @param looks In any order.
 * @returns A source without speed, and its standard error on the same rows [deg]; null without looks.
 *
 * [1] H. E. Rauch, F. Tung, C. T. Striebel, AIAA Journal 3(8), 1965.
 */
export function windFromLooks(
  looks: readonly DirectionLook[],
  span: { readonly from: number; readonly to: number },
): { source: WindSource; se: Float64Array } | null {
  if (looks.length === 0) return null;
  const sorted = [...looks].sort((a, b) => a.time - b.time);
  const centre = circularMean(sorted.map((look) => look.direction)).mean;
  const t0 = Math.floor(span.from);
  const n = Math.max(1, Math.ceil(span.to) - t0 + 1);
  const information = new Float64Array(n);
  const weighted = new Float64Array(n);
  for (const look of sorted) {
    const i = Math.max(0, Math.min(n - 1, Math.round(look.time - t0)));
    information[i] = information[i] + 1 / look.se ** 2;
    weighted[i] = weighted[i] + turn(centre, look.direction) / look.se ** 2;
  }
  const { value, variance } = walkSmoother(information, weighted);
  const direction = Float64Array.from(value, (v) => wrap360(centre + v));
  const source: WindSource = {
    kind: 'tracks',
    file: '',
    boat: -1,
    t0,
    n,
    place: null,
    accuracyDir: 1,
    accuracySpeed: 1,
    hasSpeed: false,
    window: 1,
    sums: windSums(direction, new Float64Array(n).fill(NaN)),
  };
  return { source, se: variance.map((v) => Math.sqrt(v)) };
}

function walkSmoother(
  information: Float64Array,
  weighted: Float64Array,
): { value: Float64Array; variance: Float64Array } {
  const n = information.length;
  const value = new Float64Array(n);
  const variance = new Float64Array(n);
  let m = 0;
  let v = 1e6;
  for (let i = 0; i < n; i++) {
    if (i > 0) v += WALK;
    const gain = v / (1 + v * information[i]);
    m = gain * (m / v + weighted[i]);
    v = gain;
    value[i] = m;
    variance[i] = v;
  }
  for (let i = n - 2; i >= 0; i--) {
    const predicted = variance[i] + WALK;
    const c = variance[i] / predicted;
    value[i] = value[i] + c * (value[i + 1] - value[i]);
    variance[i] = variance[i] + c * c * (variance[i + 1] - predicted);
  }
  return { value, variance };
}

/** East and north of the mean direction between two courses. Exported for bisectors of tacks. */
export function bisectorOf(before: number, after: number): number {
  return directionOf(eastOf(before) + eastOf(after), northOf(before) + northOf(after));
}
