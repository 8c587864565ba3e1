import { eastInPlane, northInPlane, type Frame } from '../math/geo.js';
import { eastOf, northOf } from '../math/angles.js';
import type { Issue } from '../recording/issues.js';
import type { Recording } from '../recording/recording.js';
import type { Track } from '../recording/track.js';
import { activityOf, type Activity } from './activity.js';
import { dopplerLag, undoLag } from './doppler.js';
import { findStretches, fixRows, stepping, type Gap, type Stretch } from './gaps.js';
import { attachInstruments } from './instruments.js';
import { smoothStretch, type Observations } from './kalman.js';
import { estimateNoise, type TrackNoise } from './noise.js';
import { excursions, gate, spikeRows } from './outliers.js';
import { FAR, JUMP, LONELY, Rejections, STALE, type FixRejection, type Jump } from './rejections.js';
import { staleRows } from './stale.js';

export interface SmoothOptions {
  /** File the recording came from, for issues. */
  readonly file?: string;
  /** Use this noise instead of finding it. */
  readonly noise?: TrackNoise;
}

export interface SmoothedTrack {
  readonly track: Track;
  readonly rejected: readonly FixRejection[];
  readonly gaps: readonly Gap[];
  readonly issues: readonly Issue[];
  /** What was found of the boat's and the receiver's noise; for `receiverDisplacementSe`. */
  readonly noise: TrackNoise;
}

/** Below this speed a receiver's course is noise (0.05 m/s of it is 6 degrees). [m/s] */
const SLOWEST_COURSE = 0.5;
/** A boat's log is not longer: fixes farther away carry a wrong date. [s] */
const LONGEST_LOG = 7 * 86400;
/** A stretch with fewer fixes has no velocity worth the name. */
const FEWEST_FIXES = 3;

/**
 * A recording as a clean track: impossible and stale fixes taken out, gaps left open, the rest smoothed onto whole
 * seconds, with the boat's instruments on the same rows.
 *
 * @param recording One boat's log.
 * @param frame     The race's local plane.
 * @param options   File name for issues; noise where it is known.
 */
export function smoothTrack(recording: Recording, frame: Frame, options: SmoothOptions = {}): SmoothedTrack {
  const observations = observe(recording, frame);
  const rejections = new Rejections(observations);
  rejections.add(STALE, staleRows(observations));
  const breaks = [...recording.breaks];
  const room = new Int32Array(recording.time.length);
  const near = dropFar(observations, findStretches(observations, breaks, room).stretches, rejections);
  for (const stretch of near) rejections.add(JUMP, spikeRows(observations, stretch));
  const step = stepping(observations.time, fixRows(observations, room)).median;
  const activity = activityOf(observations, near, step);
  const lag = options.noise?.dopplerLag ?? dopplerLag(observations, near, activity);
  if (lag > 0) undoLag(observations, lag, activity);
  const noise = options.noise ?? estimateNoise(observations, near, { step, activity, lag });
  const jumps = gateAll(observations, near, noise, activity, rejections);
  for (const { row } of jumps) breaks.push(row);
  breaks.sort((p, q) => p - q);
  const found = findStretches(observations, breaks, room);
  const { stretches, gaps } = dropLonely(observations, found.stretches, rejections)
    ? findStretches(observations, breaks, room)
    : found;
  const track = attachInstruments(smoothAll(recording.name, observations, stretches, noise, activity), recording);
  return {
    track,
    rejected: rejections.list(),
    gaps,
    issues: rejections.issues(jumps, options.file),
    noise,
  };
}

/** Positions in the plane and Doppler velocities of each row. */
function observe(recording: Recording, frame: Frame): Observations {
  const n = recording.time.length;
  const { lat, lon, sog, cog } = recording.channels;
  const x = new Float64Array(n).fill(NaN);
  const y = new Float64Array(n).fill(NaN);
  const vx = new Float32Array(n).fill(NaN);
  const vy = new Float32Array(n).fill(NaN);
  if (lat && lon) {
    for (let i = 0; i < n; i++) {
      x[i] = eastInPlane(frame, lon[i]);
      y[i] = northInPlane(frame, lat[i]);
    }
  }
  if (sog && cog) {
    for (let i = 0; i < n; i++) {
      if (!(sog[i] >= SLOWEST_COURSE)) continue;
      vx[i] = sog[i] * eastOf(cog[i]);
      vy[i] = sog[i] * northOf(cog[i]);
    }
  }
  return { time: recording.time, x, y, vx, vy };
}

/** Gates every stretch; impossible fixes and velocities are taken out of the observations. */
function gateAll(
  o: Observations,
  stretches: readonly Stretch[],
  noise: TrackNoise,
  activity: Activity,
  rejections: Rejections,
): Jump[] {
  const kept: Jump[] = [];
  for (const stretch of stretches) {
    const gated = gate(o, stretch, noise, activity);
    const { rejected, jumps } = excursions(o, stretch, gated.jumps);
    for (const row of gated.rejectedVelocity) o.vx[row] = o.vy[row] = NaN;
    rejections.add(JUMP, gated.rejected);
    for (const { from, to } of rejected) rejections.add(JUMP, rowsOf(from, to));
    for (const jump of jumps) kept.push(jump);
  }
  return kept;
}

function rowsOf(from: number, to: number): number[] {
  return Array.from({ length: to - from }, (_, k) => from + k);
}

function countFixes(o: Observations, { from, to }: Stretch): number {
  let n = 0;
  for (let i = from; i < to; i++) if (o.x[i] === o.x[i]) n++;
  return n;
}

/** Takes out the fixes of stretches too short for a velocity; returns whether there were any. */
function dropLonely(o: Observations, stretches: readonly Stretch[], rejections: Rejections): boolean {
  const lonely = stretches.filter((stretch) => countFixes(o, stretch) < FEWEST_FIXES);
  for (const { from, to } of lonely) rejections.add(LONELY, rowsOf(from, to));
  return lonely.length > 0;
}

/** Keeps the part of the log that holds most fixes where it spans more than a week. */
function dropFar(o: Observations, stretches: readonly Stretch[], rejections: Rejections): Stretch[] {
  const groups: Stretch[][] = [];
  for (const stretch of stretches) {
    const last = groups.at(-1);
    const first = last?.[0];
    if (first && o.time[stretch.to - 1] - o.time[first.from] <= LONGEST_LOG) last.push(stretch);
    else groups.push([stretch]);
  }
  if (groups.length <= 1) return [...stretches];
  const size = (group: Stretch[]) => group.reduce((sum, s) => sum + countFixes(o, s), 0);
  const best = groups.reduce((a, b) => (size(b) > size(a) ? b : a));
  for (const group of groups) {
    if (group !== best) for (const { from, to } of group) rejections.add(FAR, rowsOf(from, to));
  }
  return best;
}

function smoothAll(
  name: string,
  o: Observations,
  stretches: readonly Stretch[],
  noise: TrackNoise,
  activity: Activity,
): Track {
  const first = stretches[0];
  const last = stretches.at(-1);
  const t0 = first ? Math.ceil(o.time[first.from]) : 0;
  const n = last ? Math.max(0, Math.floor(o.time[last.to - 1]) - t0 + 1) : 0;
  const column = () => new Float64Array(n).fill(NaN);
  const rows = { x: column(), y: column(), vx: column(), vy: column(), sePosition: column(), seVelocity: column() };
  for (const { from, to } of stretches) smoothStretch({ observations: o, from, to, noise, activity }, { t0, ...rows });
  return { name, t0, n, ...rows };
}
