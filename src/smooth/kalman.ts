/**
 * Constant-velocity Kalman filter and fixed-interval smoother on an irregular time base, with the receiver's
 * slowly wandering error as a state of its own.
 *
 * Per axis the state is position p, velocity v and receiver error g:
 *
 *     dp = v dt,   dv = white acceleration of spectral density q,   dg = -g/τ dt + noise, var(g) = σc²
 *     measured position = p + g + white noise,   measured (Doppler) velocity = v + white noise      [1, ch. 6; 2, 8.2]
 *
 * Both axes share one covariance, since noises and times are the same. The smoother is the Rauch-Tung-Striebel one
 * [3] in Bierman's form [4], which carries the adjoint of the state backward and inverts no covariance, so exact
 * measurements and a receiver error of zero are allowed. Whole seconds are time points without a measurement: what
 * comes out there is the smoothed state itself, not an interpolation.
 *
 * [1] Y. Bar-Shalom, X. R. Li, T. Kirubarajan, Estimation with Applications to Tracking and Navigation, 2001.
 * [2] A. Gelb (ed.), Applied Optimal Estimation, 1974 (first-order Gauss-Markov process as a state).
 * [3] H. E. Rauch, F. Tung, C. T. Striebel, AIAA Journal 3 (1965) 1445.
 * [4] G. J. Bierman, Fixed interval smoothing with discrete measurements, Int. J. Control 18 (1973) 65.
 */

import { factorAt, UNIFORM, type Activity } from './activity.js';

/** What was measured, in time order, in the local plane. NaN = not measured in this row. */
export interface Observations {
  /** [s], strictly increasing. */
  readonly time: Float64Array;
  /** Position east and north. [m] */
  readonly x: Float64Array;
  readonly y: Float64Array;
  /** Doppler velocity east and north. [m/s] */
  readonly vx: Float32Array;
  readonly vy: Float32Array;
}

/** How the boat moves and how the receiver errs, per axis. */
export interface NoiseModel {
  /** Spectral density of the boat's acceleration, q. [m²/s³] */
  readonly accel: number;
  /** Standard deviation of the white part of a fix. [m] */
  readonly white: number;
  /** Standard deviation of the receiver's slowly wandering error, and its correlation time. [m], [s] */
  readonly correlated: number;
  readonly correlation: number;
  /** Standard deviation of one Doppler velocity. [m/s] */
  readonly doppler: number;
}

/** Filter state: px vx gx, py vy gy, then the shared covariance pp pv pg vv vg gg. */
export type FilterState = Float64Array;

/** Not knowing: 100 m and 10 m/s about the first fix. */
export const START_VARIANCE = { position: 100 * 100, velocity: 10 * 10 };

/** The state before the first measurement. */
export function startState(x: number, y: number, noise: NoiseModel, variance = START_VARIANCE): FilterState {
  const state = new Float64Array(12);
  state[0] = x;
  state[3] = y;
  state[6] = variance.position;
  state[9] = variance.velocity;
  state[11] = noise.correlated * noise.correlated;
  return state;
}

/** Moves the state on by `dt` seconds, in place; `factor` scales the boat's acceleration (see activity). */
export function predict(s: FilterState, dt: number, noise: NoiseModel, factor = 1): void {
  if (dt === 0) return;
  const q = noise.accel * factor;
  const φ = Math.exp(-dt / noise.correlation);
  const pv = s[7];
  const vv = s[9];
  const vg = s[10];
  s[0] += s[1] * dt;
  s[2] *= φ;
  s[3] += s[4] * dt;
  s[5] *= φ;
  s[6] += dt * (2 * pv + dt * (vv + (q * dt) / 3));
  s[7] = pv + dt * (vv + (q * dt) / 2);
  s[8] = φ * (s[8] + dt * vg);
  s[9] = vv + q * dt;
  s[10] = φ * vg;
  s[11] = φ * φ * s[11] + noise.correlated * noise.correlated * (1 - φ * φ);
}

/** Gain of the three states, variance of the innovation, innovation east and north. */
export type Innovation = Float64Array;

/**
 * Takes in a position, in place; `out` becomes its gain, variance and innovation.
 *
 * @param weight Trust in this fix, 1 as a rule: its variance is divided by it.
 */
export function updatePosition(
  s: FilterState,
  x: number,
  y: number,
  variance: number,
  out: Innovation,
  weight = 1,
): void {
  const p = s[6] + s[8];
  const v = s[7] + s[10];
  const g = s[8] + s[11];
  const total = p + g + variance / weight;
  apply(s, p, v, g, total, x - s[0] - s[2], y - s[3] - s[5], out);
}

/** Takes in a velocity, in place; `out` becomes its gain, variance and innovation. */
export function updateVelocity(s: FilterState, vx: number, vy: number, variance: number, out: Innovation): void {
  apply(s, s[7], s[9], s[10], s[9] + variance, vx - s[1], vy - s[4], out);
}

function apply(
  s: FilterState,
  p: number,
  v: number,
  g: number,
  total: number,
  east: number,
  north: number,
  out: Innovation,
): void {
  const kp = p / total;
  const kv = v / total;
  const kg = g / total;
  s[0] += kp * east;
  s[1] += kv * east;
  s[2] += kg * east;
  s[3] += kp * north;
  s[4] += kv * north;
  s[5] += kg * north;
  s[6] -= kp * p;
  s[7] -= kp * v;
  s[8] -= kp * g;
  s[9] -= kv * v;
  s[10] -= kv * g;
  s[11] -= kg * g;
  out[0] = kp;
  out[1] = kv;
  out[2] = kg;
  out[3] = total;
  out[4] = east;
  out[5] = north;
}

/** Adjoint of the state going backward: λ east (3), λ north (3), Λ (00 01 02 11 12 22). */
type Adjoint = Float64Array;

function backTime(a: Adjoint, dt: number, φ: number): void {
  a[1] += dt * a[0];
  a[2] *= φ;
  a[4] += dt * a[3];
  a[5] *= φ;
  const l00 = a[6];
  const l01 = a[7];
  const l02 = a[8];
  a[7] = l01 + dt * l00;
  a[8] = φ * l02;
  a[9] += dt * (2 * l01 + dt * l00);
  a[10] = φ * (a[10] + dt * l02);
  a[11] *= φ * φ;
}

/** Back through a measurement whose record (gain, variance, innovation) starts at `r` of the tape. */
function backMeasurement(a: Adjoint, tape: Float64Array, r: number, ofVelocity: boolean): void {
  const k0 = tape[r];
  const k1 = tape[r + 1];
  const k2 = tape[r + 2];
  const inverse = 1 / tape[r + 3];
  const east = k0 * a[0] + k1 * a[1] + k2 * a[2] + tape[r + 4] * inverse;
  const north = k0 * a[3] + k1 * a[4] + k2 * a[5] + tape[r + 5] * inverse;
  const u0 = a[6] * k0 + a[7] * k1 + a[8] * k2;
  const u1 = a[7] * k0 + a[9] * k1 + a[10] * k2;
  const u2 = a[8] * k0 + a[10] * k1 + a[11] * k2;
  const c = k0 * u0 + k1 * u1 + k2 * u2 + inverse;
  if (ofVelocity) {
    a[1] -= east;
    a[4] -= north;
    a[7] -= u0;
    a[9] += c - 2 * u1;
    a[10] -= u2;
    return;
  }
  a[0] -= east;
  a[2] -= east;
  a[3] -= north;
  a[5] -= north;
  a[6] += c - 2 * u0;
  a[7] -= u1;
  a[8] += c - u0 - u2;
  a[10] -= u1;
  a[11] += c - 2 * u2;
}

/** What the smoother writes: row i is the time t0 + i. */
export interface SmoothedRows {
  readonly t0: number;
  readonly x: Float64Array;
  readonly y: Float64Array;
  readonly vx: Float64Array;
  readonly vy: Float64Array;
  readonly sePosition: Float64Array;
  readonly seVelocity: Float64Array;
}

/** Smoothed state at a row whose filtered record starts at `r` of the tape. */
function writeRow(out: SmoothedRows, row: number, tape: Float64Array, r: number, a: Adjoint): void {
  const pp = tape[r + 4];
  const pv = tape[r + 5];
  const pg = tape[r + 6];
  const vv = tape[r + 7];
  const vg = tape[r + 8];
  out.x[row] = tape[r] - (pp * a[0] + pv * a[1] + pg * a[2]);
  out.vx[row] = tape[r + 1] - (pv * a[0] + vv * a[1] + vg * a[2]);
  out.y[row] = tape[r + 2] - (pp * a[3] + pv * a[4] + pg * a[5]);
  out.vy[row] = tape[r + 3] - (pv * a[3] + vv * a[4] + vg * a[5]);
  out.sePosition[row] = Math.sqrt(Math.max(0, pp - quadratic(a, pp, pv, pg)));
  out.seVelocity[row] = Math.sqrt(Math.max(0, vv - quadratic(a, pv, vv, vg)));
}

function quadratic(a: Adjoint, p: number, v: number, g: number): number {
  return p * (a[6] * p + 2 * (a[7] * v + a[8] * g)) + v * (a[9] * v + 2 * a[10] * g) + g * g * a[11];
}

/** Where a forward pass stands: next row of the observations, next whole second, time of the state. */
interface Cursor {
  row: number;
  tick: number;
  time: number;
}

/** Records of one stretch of a forward pass, for the way back. */
interface Tape {
  readonly kind: Uint8Array;
  /** Time since the record before. [s] */
  readonly dt: Float64Array;
  readonly values: Float64Array;
  n: number;
}

const POSITION = 1;
const VELOCITY = 2;
const TICK = 3;
const STRIDE = 9;
/** Time points between two checkpoints: the tape stays below 3 MB whatever the length of the log. */
const STRETCH = 8192;

const newTape = (): Tape => ({
  kind: new Uint8Array(3 * STRETCH),
  dt: new Float64Array(3 * STRETCH),
  values: new Float64Array(3 * STRETCH * STRIDE),
  n: 0,
});

/** One for all stretches, one after the other: a damaged log has a hundred thousand of them. */
let sharedTape: Tape | null = null;

/** Observations [from, to), what is known of their noise, and the rows to be written. */
export interface SmoothingJob {
  readonly observations: Observations;
  readonly from: number;
  readonly to: number;
  readonly noise: NoiseModel;
  /** How hard the boat manoeuvres; left out: the same throughout. */
  readonly activity?: Activity;
  /** Prior about the first position instead of the wide one. */
  readonly variance?: { position: number; velocity: number };
  /** Where the prior is centred instead of the first fix. */
  readonly start?: { x: number; y: number };
}

/**
 * Smooths one unbroken stretch and writes its whole seconds, each with its standard errors.
 *
 * The forward pass is done twice: once to keep its state every few thousand points, and again stretch by stretch from
 * the end, so that memory does not grow with the log and nothing is approximated.
 *
 * @param job Observations and noise.
 * @param out Rows; only whole seconds from the first to the last observation are written. [m], [m/s]
 * @returns How many rows were written.
 */
export function smoothStretch(job: SmoothingJob, out: SmoothedRows): number {
  const { observations, from, to, noise } = job;
  const first = observations.time[from];
  const cursor: Cursor = { row: from, tick: Math.max(Math.ceil(first), out.t0), time: first };
  const start = job.start ?? { x: observations.x[from], y: observations.y[from] };
  const state = startState(start.x, start.y, noise, job.variance);
  const checkpoints: { cursor: Cursor; state: FilterState }[] = [];
  while (cursor.row < to) {
    checkpoints.push({ cursor: { ...cursor }, state: state.slice() });
    forward(job, cursor, state, null);
  }
  const tape = (sharedTape ??= newTape());
  const adjoint: Adjoint = new Float64Array(12);
  let written = 0;
  for (let i = checkpoints.length - 1; i >= 0; i--) {
    const { cursor: at, state: from_ } = checkpoints[i];
    tape.n = 0;
    forward(job, at, from_, tape);
    written += backward(tape, adjoint, at.tick, noise, out);
  }
  return written;
}

/** Filters up to a stretch of time points onward from the cursor, recording them if there is a tape. */
function forward(job: SmoothingJob, cursor: Cursor, state: FilterState, tape: Tape | null): void {
  const { observations, to, noise, activity = UNIFORM } = job;
  const { time } = observations;
  for (let points = 0; points < STRETCH && cursor.row < to; points++) {
    const next = time[cursor.row];
    const isTick = cursor.tick < next;
    const at = isTick ? cursor.tick : next;
    const dt = at - cursor.time;
    predict(state, dt, noise, factorAt(activity, cursor.time));
    cursor.time = at;
    let elapsed = dt;
    if (!isTick) elapsed = takeRow(job, cursor.row++, state, elapsed, tape);
    if (cursor.tick === at) {
      if (tape) recordTick(tape, elapsed, state);
      cursor.tick++;
      elapsed = 0;
    }
    // A row without a measurement leaves its time to the next record.
    if (tape && elapsed !== 0) recordPause(tape, elapsed);
  }
}

const scratch: Innovation = new Float64Array(6);

/** Takes in what a row measured; returns the time not yet recorded. */
function takeRow(job: SmoothingJob, row: number, state: FilterState, dt: number, tape: Tape | null): number {
  const { observations, noise } = job;
  let elapsed = dt;
  const x = observations.x[row];
  if (x === x) {
    updatePosition(state, x, observations.y[row], noise.white * noise.white, scratch);
    if (tape) recordMeasurement(tape, POSITION, elapsed);
    elapsed = 0;
  }
  const vx = observations.vx[row];
  if (vx === vx) {
    updateVelocity(state, vx, observations.vy[row], noise.doppler * noise.doppler, scratch);
    if (tape) recordMeasurement(tape, VELOCITY, elapsed);
    elapsed = 0;
  }
  return elapsed;
}

function recordMeasurement(tape: Tape, kind: number, dt: number): void {
  const r = tape.n * STRIDE;
  for (let i = 0; i < 6; i++) tape.values[r + i] = scratch[i]!;
  tape.kind[tape.n] = kind;
  tape.dt[tape.n++] = dt;
}

function recordTick(tape: Tape, dt: number, s: FilterState): void {
  const r = tape.n * STRIDE;
  const { values } = tape;
  values[r] = s[0]!;
  values[r + 1] = s[1]!;
  values[r + 2] = s[3]!;
  values[r + 3] = s[4]!;
  for (let i = 0; i < 5; i++) values[r + 4 + i] = s[6 + i]!;
  tape.kind[tape.n] = TICK;
  tape.dt[tape.n++] = dt;
}

function recordPause(tape: Tape, dt: number): void {
  tape.kind[tape.n] = 0;
  tape.dt[tape.n++] = dt;
}

/** Carries the adjoint back over a tape; `tick` is the whole second after the tape's last. */
function backward(tape: Tape, adjoint: Adjoint, tick: number, noise: NoiseModel, out: SmoothedRows): number {
  let row = tick - out.t0;
  let written = 0;
  for (let i = tape.n - 1; i >= 0; i--) {
    const kind = tape.kind[i];
    if (kind === TICK) {
      row--;
      if (row < out.x.length) {
        writeRow(out, row, tape.values, i * STRIDE, adjoint);
        written++;
      }
    } else if (kind !== 0) backMeasurement(adjoint, tape.values, i * STRIDE, kind === VELOCITY);
    const dt = tape.dt[i];
    if (dt !== 0) backTime(adjoint, dt, Math.exp(-dt / noise.correlation));
  }
  return written;
}
