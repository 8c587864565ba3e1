import { factorAt, UNIFORM, type Activity } from './activity.js';
import { dampedError } from './doppler.js';
import type { Stretch } from './gaps.js';
import { predict, startState, updatePosition, updateVelocity, type NoiseModel, type Observations } from './kalman.js';

/**
 * The error of a consumer receiver is not white: most of it wanders slowly (satellite clocks, troposphere, ionosphere,
 * multipath), so that a displacement over seconds is known far better than sqrt(2) times the error of a position.
 * Here it is a first-order Gauss-Markov process beside white noise.
 *
 * 1.5 m per axis is the middle of what is published: 2.5 m circular error probable (2.1 m per axis) of single-band
 * receivers, 4.9 m (95 %) of smartphones under an open sky (van Diggelen, Enge, ION GNSS+ 2015; from memory). The
 * correlation time of about 80 s is common practice for filtered single-point positions.
 */
export const RECEIVER = { correlated: 1.5, correlation: 80 } as const;

/** What the smoother used, found from the log itself. */
export interface TrackNoise extends NoiseModel {
  /** Whether Doppler velocities took part. */
  readonly dopplerUsed: boolean;
  /** By how much logged velocities trailed the fixes; undone. [s] */
  readonly dopplerLag: number;
  /** Median step between fixes. [s] */
  readonly step: number;
}

/** Random walk that the wandering error looks like over short times: variance per second. [m²/s] */
export function driftRate(noise: { correlated: number; correlation: number }): number {
  return (2 * noise.correlated * noise.correlated) / noise.correlation;
}

/** Slowest steady error of a Doppler speed that no averaging removes. [m/s] Common practice, no source. */
const DOPPLER_BIAS = 0.01;
/** Doppler velocities closer than this in time err alike. [s] Common practice, no source. */
export const DOPPLER_CORRELATION = 1;

/**
 * Standard error per axis of a smoothed track's displacement over a span: what a leg's metres and a block's mean
 * velocity owe to the receiver.
 *
 *     var(T) = 2 σc² (1 - exp(-T/τ)) + 2 σw²(smoothed),   with Doppler combined by inverse variance with σd² T
 *
 * Divide by the span for the standard error of the mean velocity. σc and τ are the larger of the log's own and the
 * published ones, because a log shows only the fastest part of its own wandering.
 *
 * @param seconds Span. [s, > 0]
 * @param noise   The track's noise as `smoothTrack` returns it; left out: a consumer receiver at 1 Hz without Doppler.
 * @returns Standard error of the displacement per axis. [m]
 */
export function receiverDisplacementSe(seconds: number, noise: TrackNoise = DEFAULT_NOISE): number {
  if (!(seconds > 0)) return NaN;
  const sigma = Math.max(noise.correlated, RECEIVER.correlated);
  const wandering = 2 * sigma * sigma * (1 - Math.exp(-seconds / Math.min(noise.correlation, RECEIVER.correlation)));
  const byPosition = wandering + 2 * smoothedWhiteVariance(noise);
  if (!noise.dopplerUsed) return Math.sqrt(byPosition);
  const bias = DOPPLER_BIAS * seconds;
  const byDoppler = noise.doppler * noise.doppler * noise.step * seconds + bias * bias;
  return Math.sqrt(1 / (1 / byPosition + 1 / byDoppler));
}

/**
 * White noise of the fixes as it is left in a smoothed position. Of the steady constant-velocity smoother,
 * H(ω) = 1/(1 + (ω/ω0)⁴) with ω0⁴ = q/(σw² Δt), remains σw² Δt/(2π) ∫ |H|² dω = 0.2652 σw² Δt ω0.
 */
function smoothedWhiteVariance(noise: TrackNoise): number {
  const density = noise.white * noise.white * noise.step;
  if (density === 0) return 0;
  return Math.min(noise.white * noise.white, 0.2652 * density * (noise.accel / density) ** 0.25);
}

/**
 * What the search starts from, and how far the log may move it before the likelihood has to be firm: natural
 * logarithm's standard deviation. Acceleration: a dinghy changes its velocity by some 0.3 m/s within 2 s in waves
 * and by 3 m/s within 5 s in a tack. White: resolution and receiver noise at 1 Hz. Doppler: 0.05 m/s is a maker's
 * figure for speed, more in waves. Common practice, no source.
 */
const PRIOR = {
  accel: { value: 0.05, spread: 2 },
  white: { value: 0.2, spread: 2 },
  drift: { value: driftRate(RECEIVER) / 2, spread: 1 },
  doppler: { value: 0.1, spread: 0.7 },
} as const;

type Parameter = keyof typeof PRIOR;
type Parameters = Record<Parameter, number>;

/** Bounds of the search. */
const BOUNDS: Record<Parameter, readonly [number, number]> = {
  accel: [1e-4, 5],
  white: [0.01, 20],
  drift: [driftRate(RECEIVER) / 8, driftRate(RECEIVER) * 16],
  doppler: [0.05, 2],
};

/** A consumer receiver at 1 Hz of which only positions are known. */
export const DEFAULT_NOISE: TrackNoise = {
  ...toNoise({ accel: PRIOR.accel.value, white: PRIOR.white.value, drift: driftRate(RECEIVER), doppler: 0.1 }),
  dopplerUsed: false,
  dopplerLag: 0,
  step: 1,
};

/** A slower drift than the receiver's means a longer correlation, a faster one a larger error. */
function toNoise(p: Parameters): NoiseModel {
  const usual = driftRate(RECEIVER);
  const faster = Math.max(1, p.drift / usual);
  return {
    accel: p.accel,
    white: p.white,
    correlated: RECEIVER.correlated * Math.sqrt(faster),
    correlation: RECEIVER.correlation * Math.max(1, usual / p.drift),
    doppler: p.doppler,
  };
}

/** Rows the search looks at, in this many pieces spread over the log. */
const SAMPLE_PIECES = 16;
const SAMPLE_ROWS = 350;
/** Shorter pieces say too little. */
const FEWEST_ROWS = 10;
/** At a berth receivers often hold their position: nothing there says how they err under way. [m/s] */
const UNDER_WAY = 0.7;

/**
 * Finds the noise of a track by maximum likelihood of its innovations, over a grid of factors of two and then of
 * sqrt(2), one parameter after the other, with wide priors.
 *
 * @param observations Positions and Doppler velocities.
 * @param stretches    Where they hang together.
 * @param log          Median step between fixes [s], how hard the boat manoeuvres, lag undone in the velocities [s].
 */
export function estimateNoise(
  observations: Observations,
  stretches: readonly Stretch[],
  { step, activity, lag }: { step: number; activity: Activity; lag: number },
): TrackNoise {
  const pieces = samplePieces(observations, stretches);
  const hasDoppler = observations.vx.some((v) => v === v);
  const names: Parameter[] = hasDoppler ? ['accel', 'white', 'drift', 'doppler'] : ['accel', 'white', 'drift'];
  const score = once((p) =>
    pieces.reduce((sum, piece) => sum + logLikelihood(observations, piece, toNoise(p), activity), logPrior(p, names)),
  );
  let best: Parameters = {
    accel: PRIOR.accel.value,
    white: PRIOR.white.value,
    drift: PRIOR.drift.value,
    doppler: PRIOR.doppler.value,
  };
  if (pieces.length > 0) for (const factor of [4, 2, Math.SQRT2]) best = climb(best, names, factor, score);
  // Readings closer than the correlation time of the Doppler error do not count as so many.
  const crowding = Math.sqrt(Math.max(1, DOPPLER_CORRELATION / step));
  const damped = dampedError(lag);
  const noise = toNoise({ ...best, accel: best.accel * damped, doppler: best.doppler * crowding * damped });
  return { ...noise, dopplerUsed: hasDoppler, dopplerLag: lag, step };
}

/** Up to so many pieces evenly spread over the log, of those in which the boat moves if there are any. */
function samplePieces(o: Observations, stretches: readonly Stretch[]): Stretch[] {
  const pieces: Stretch[] = [];
  for (const { from, to } of stretches) {
    for (let at = from; at + FEWEST_ROWS <= to; at += SAMPLE_ROWS) {
      pieces.push({ from: at, to: Math.min(to, at + SAMPLE_ROWS) });
    }
  }
  const moving = pieces.filter((piece) => meanSpeed(o, piece) > UNDER_WAY);
  const all = moving.length > 0 ? moving : pieces;
  const share = Math.min(1, SAMPLE_PIECES / all.length);
  return all.filter((_, k) => Math.floor((k + 1) * share) > Math.floor(k * share));
}

/** Speed from the first to the last fix of a piece. [m/s] */
function meanSpeed(o: Observations, { from, to }: Stretch): number {
  let [first, last] = [from, to - 1];
  while (first < last && o.x[first] !== o.x[first]) first++;
  while (last > first && o.x[last] !== o.x[last]) last--;
  return Math.hypot(o.x[last] - o.x[first], o.y[last] - o.y[first]) / (o.time[last] - o.time[first]);
}

/** A score that is worked out once for each place: a search comes back to where it was. */
function once(score: (p: Parameters) => number): (p: Parameters) => number {
  const known = new Map<string, number>();
  return (p) => {
    const key = `${p.accel} ${p.white} ${p.drift} ${p.doppler}`;
    let value = known.get(key);
    if (value === undefined) known.set(key, (value = score(p)));
    return value;
  };
}

function climb(
  start: Parameters,
  names: readonly Parameter[],
  factor: number,
  score: (p: Parameters) => number,
): Parameters {
  let best = start;
  let bestScore = score(start);
  for (let round = 0; round < 12; round++) {
    let moved = false;
    for (const name of names) {
      for (const f of [factor, 1 / factor]) {
        const [low, high] = BOUNDS[name];
        const tried = { ...best, [name]: Math.min(high, Math.max(low, best[name] * f)) };
        if (tried[name] === best[name]) continue;
        const s = score(tried);
        if (s <= bestScore) continue;
        best = tried;
        bestScore = s;
        moved = true;
        break;
      }
    }
    if (!moved) break;
  }
  return best;
}

function logPrior(p: Parameters, names: readonly Parameter[]): number {
  let sum = 0;
  for (const name of names) {
    const z = Math.log(p[name] / PRIOR[name].value) / PRIOR[name].spread;
    sum -= (z * z) / 2;
  }
  return sum;
}

/** From four standard deviations on an innovation is taken as an outlier or a manoeuvre: it costs, but pulls less. */
const CLIP = 16;

/** Log likelihood of the innovations of a piece, both axes, up to a constant. The first fixes only start the filter. */
export function logLikelihood(o: Observations, { from, to }: Stretch, noise: NoiseModel, activity = UNIFORM): number {
  let first = from;
  while (first < to && !(o.x[first] === o.x[first])) first++;
  if (first === to) return 0;
  const state = startState(o.x[first], o.y[first], noise);
  const out = new Float64Array(6);
  const before = new Float64Array(12);
  const white = noise.white * noise.white;
  const doppler = noise.doppler * noise.doppler;
  let sum = 0;
  let time = o.time[first];
  for (let i = first; i < to; i++) {
    const x = o.x[i];
    const vx = o.vx[i];
    if (x !== x && vx !== vx) continue;
    predict(state, o.time[i] - time, noise, factorAt(activity, time));
    time = o.time[i]!;
    if (x === x) {
      before.set(state);
      updatePosition(state, x, o.y[i], white, out);
      const d2 = squareSum(out);
      if (d2 > CLIP) {
        state.set(before);
        updatePosition(state, x, o.y[i], white, out, CLIP / d2);
        out[3] = before[6] + 2 * before[8] + before[11] + white;
      }
      if (i > first + 2) sum += cost(out[3], d2);
    }
    if (vx === vx) {
      updateVelocity(state, vx, o.vy[i], doppler, out);
      if (i > first + 2) sum += cost(out[3], squareSum(out));
    }
  }
  return sum;
}

function squareSum(out: Float64Array): number {
  return (out[4] * out[4] + out[5] * out[5]) / out[3];
}

/** Both axes share one variance, so its logarithm counts twice halved. */
function cost(variance: number, d2: number): number {
  const clipped = d2 > CLIP ? CLIP * (1 + Math.log(d2 / CLIP)) : d2;
  return -Math.log(variance) - clipped / 2;
}
