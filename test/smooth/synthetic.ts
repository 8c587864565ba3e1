/** A boat whose true path is known, and receivers that record it with known errors. */
import { fromPlane, makeFrame } from '../../src/math/geo.js';
import { createRecording, type Recording } from '../../src/recording/recording.js';

/** Seeded uniform numbers in [0, 1): mulberry32, a public-domain generator. */
export function uniform(seed: number): () => number {
  let a = seed >>> 0;
  return () => {
    a = (a + 0x6d2b79f5) >>> 0;
    let t = Math.imul(a ^ (a >>> 15), a | 1);
    t ^= t + Math.imul(t ^ (t >>> 7), t | 61);
    return ((t ^ (t >>> 14)) >>> 0) / 4294967296;
  };
}

/** Seeded standard normal numbers (Box and Muller 1958). */
export function normal(seed: number): () => number {
  const u = uniform(seed);
  return () => Math.sqrt(-2 * Math.log(1 - u())) * Math.cos(2 * Math.PI * u());
}

export const FRAME = makeFrame(46.9, 9.06);
export const T0 = Date.UTC(2026, 3, 18, 12, 0, 0) / 1000;

/** True path at 20 Hz. */
export interface Path {
  readonly dt: number;
  readonly x: Float64Array;
  readonly y: Float64Array;
  readonly vx: Float64Array;
  readonly vy: Float64Array;
}

/**
 * A beat: 2.5 m/s at 45 degrees to a wind from the north, a tack every `every` seconds (8 s through 90 degrees, down
 * to 1.2 m/s and 25 s to get up to speed), helm wander of 3 degrees and speed wander of 0.1 m/s over some 8 s.
 */
export function beat(seconds: number, seed: number, every = 90): Path {
  const dt = 0.05;
  const n = Math.round(seconds / dt) + 1;
  const path = { dt, x: new Float64Array(n), y: new Float64Array(n), vx: new Float64Array(n), vy: new Float64Array(n) };
  const random = normal(seed);
  const keep = Math.exp(-dt / 8);
  const fresh = Math.sqrt(1 - keep * keep);
  let wanderCourse = 0;
  let wanderSpeed = 0;
  for (let i = 0; i < n; i++) {
    const t = i * dt;
    wanderCourse = keep * wanderCourse + fresh * 3 * random();
    wanderSpeed = keep * wanderSpeed + fresh * 0.1 * random();
    const leg = Math.floor(t / every);
    const since = t - leg * every;
    const side = leg % 2 === 0 ? 1 : -1;
    const turning = leg === 0 ? 1 : Math.min(1, since / 8);
    const course = side * 45 * (2 * turning - 1) + wanderCourse;
    const slowed = leg === 0 ? 0 : since < 8 ? since / 8 : Math.exp(-(since - 8) / 8);
    const speed = 2.5 - 1.3 * slowed + wanderSpeed;
    path.vx[i] = speed * Math.sin((Math.PI / 180) * course);
    path.vy[i] = speed * Math.cos((Math.PI / 180) * course);
    if (i === 0) continue;
    path.x[i] = path.x[i - 1] + ((path.vx[i] + path.vx[i - 1]) / 2) * dt;
    path.y[i] = path.y[i - 1] + ((path.vy[i] + path.vy[i - 1]) / 2) * dt;
  }
  return path;
}

/** Receiver: white and slowly wandering error of a fix, Doppler noise; a time of fixes. */
export interface Receiver {
  readonly seed: number;
  readonly white?: number;
  readonly correlated?: number;
  readonly correlation?: number;
  /** Standard deviation of a Doppler velocity per axis; absent: none logged. */
  readonly doppler?: number;
  /** Step between fixes and the jitter of the stamps. [s] */
  readonly step: number;
  readonly jitter?: number;
}

/** Truth of a path at a time since its start, to the nearest of its own steps. */
export function at(path: Path, t: number): { x: number; y: number; vx: number; vy: number } {
  const i = Math.min(path.x.length - 1, Math.max(0, Math.round(t / path.dt)));
  return { x: path.x[i], y: path.y[i], vx: path.vx[i], vy: path.vy[i] };
}

/** The times a receiver takes fixes. */
export function fixTimes(path: Path, receiver: Receiver): number[] {
  const random = uniform(receiver.seed + 7);
  const times: number[] = [];
  const end = (path.x.length - 1) * path.dt;
  for (let t = 0; t <= end; t += receiver.step) {
    const moved = t + (random() - 0.5) * 2 * (receiver.jitter ?? 0);
    const rounded = Math.round(moved / path.dt) * path.dt;
    if (rounded < 0 || rounded > end || rounded <= (times.at(-1) ?? -1)) continue;
    times.push(rounded);
  }
  return times;
}

/** What a receiver records of a path. */
export function record(path: Path, receiver: Receiver, times = fixTimes(path, receiver)): Recording {
  const { white = 0.2, correlated = 1.5, correlation = 80, doppler } = receiver;
  const random = normal(receiver.seed);
  const n = times.length;
  const columns = { lat: new Float64Array(n), lon: new Float64Array(n) };
  const sog = new Float64Array(n);
  const cog = new Float64Array(n);
  let gx = correlated * random();
  let gy = correlated * random();
  times.forEach((t, k) => {
    const φ = k === 0 ? 1 : Math.exp(-(t - times[k - 1]) / correlation);
    gx = φ * gx + correlated * Math.sqrt(1 - φ * φ) * random();
    gy = φ * gy + correlated * Math.sqrt(1 - φ * φ) * random();
    const truth = at(path, t);
    const place = fromPlane(FRAME, truth.x + gx + white * random(), truth.y + gy + white * random());
    columns.lat[k] = place.lat;
    columns.lon[k] = place.lon;
    const vx = truth.vx + (doppler ?? 0) * random();
    const vy = truth.vy + (doppler ?? 0) * random();
    sog[k] = Math.hypot(vx, vy);
    cog[k] = ((180 / Math.PI) * Math.atan2(vx, vy) + 360) % 360;
  });
  const time = Float64Array.from(times, (t) => T0 + t);
  return createRecording({ time, channels: doppler === undefined ? columns : { ...columns, sog, cog } });
}

/**
 * The times at which a logger that leaves out points on straight lines would write one: at least every `longest`
 * seconds, and when the course has changed by 10 degrees since the last.
 */
export function thinned(path: Path, longest: number): number[] {
  const times = [0];
  const end = (path.x.length - 1) * path.dt;
  for (let t = 1; t <= end; t++) {
    const last = at(path, times[times.length - 1]);
    const now = at(path, t);
    const turned = Math.abs(Math.atan2(now.vx * last.vy - now.vy * last.vx, now.vx * last.vx + now.vy * last.vy));
    if (turned > Math.PI / 18 || t - times[times.length - 1] >= longest) times.push(t);
  }
  return times;
}
