import { apparentWind, ceilingVmg } from '../physics/triangle.js';
import { eastOf, northOf } from '../math/angles.js';
import { tackSign, type Tack } from '../segment/sailing.js';
import type { BlockEstimate } from './blocks.js';
import type { Mismatch, MismatchPart } from './mismatch.js';

/** A figure with its error as sailed (`se`) and its shift for one sd of calibration and mounting (`sys`). */
export interface Figure {
  readonly value: number;
  readonly se: number;
  readonly sys: number;
}

/** What is known of the errors of one boat's figures. */
export interface ErrorModel {
  readonly mismatch: Mismatch;
  /** One sd of what is left of the wind direction's mounting error. [deg] */
  readonly sysDirection: number;
  /** One sd of the wind speed's calibration. [fraction] */
  readonly sysSpeed: number;
  /** Standard error per axis of a displacement over so many seconds. [m] */
  readonly displacementSe: (seconds: number) => number;
  /** Standard error per axis of the water's velocity, where it was estimated. [m/s] */
  readonly drift: number;
  /** Least standard error of gamma: 2 degrees where the wind direction came from the tracks, else 0. [deg] */
  readonly leastGamma: number;
}

export interface SteadyFigures {
  readonly seconds: number;
  readonly gamma: Figure;
  readonly speed: Figure;
  readonly vmg: Figure;
  readonly tws: Figure;
  readonly aws: Figure;
  readonly beta: Figure;
  readonly ceiling: Figure;
}

const RAD = Math.PI / 180;

/** Weighted mean over blocks. */
function weighted(blocks: readonly BlockEstimate[], weights: readonly number[], pick: (b: BlockEstimate) => number) {
  return blocks.reduce((sum, block, k) => sum + weights[k] * pick(block), 0);
}

/**
 * Standard error of a weighted sum of block errors with an exponential correlation in time, a part that stays and a part
 * that changes across the course (r: place from the blocks' middle, km).
 * Variance = sum_kl u_k u_l wander^2 exp(-|t_k - t_l| / tau) + slow^2 (sum_k u_k)^2 + gradient^2 |sum_k u_k r_k|^2.
 *
 * @param u Weight of each block's error, with the sign in which it enters.
 */
export function correlatedError(blocks: readonly BlockEstimate[], u: readonly number[], part: MismatchPart): number {
  let variance = 0;
  let sum = 0;
  for (let k = 0; k < u.length; k++) {
    sum += u[k];
    variance += u[k] ** 2;
    for (let l = k + 1; l < u.length; l++) {
      const apart = Math.abs(blocks[l].time - blocks[k].time);
      if (apart < 8 * part.tau) variance += 2 * u[k] * u[l] * Math.exp(-apart / part.tau);
    }
  }
  const tilt = part.gradient > 0 ? part.gradient * leverage(blocks, u) : 0;
  return Math.sqrt(Math.max(0, variance) * part.wander ** 2 + (part.slow * sum) ** 2 + tilt ** 2);
}

/** Length of the weighted sum of the blocks' places about their middle. [km x unit of u] */
function leverage(blocks: readonly BlockEstimate[], u: readonly number[]): number {
  const n = blocks.length;
  const x0 = blocks.reduce((sum, b) => sum + b.x, 0) / n;
  const y0 = blocks.reduce((sum, b) => sum + b.y, 0) / n;
  const x = blocks.reduce((sum, b, k) => sum + u[k] * (b.x - x0), 0);
  const y = blocks.reduce((sum, b, k) => sum + u[k] * (b.y - y0), 0);
  return Math.hypot(x, y) / 1000;
}

/**
 * Error that the receiver makes in a mean velocity along an axis that may turn with the blocks: ends of blocks less their
 * beginnings, whose errors wander together over a minute or two, so that what one stretch gains the next gives back. With
 * s = +1 at an end and -1 at a beginning, a its axis and D the error of a displacement over so long,
 * variance = -1/2 sum_ij s_i s_j cos(a_i - a_j) D(|t_i - t_j|)^2, over the seconds squared. Every block's s sum to
 * nothing, so what D comes to in the end may be taken off it everywhere: then only what is near in time counts.
 *
 * @param axis Direction along which a block's velocity counts. [deg]
 * @returns [m/s]
 */
function receiverError(
  blocks: readonly BlockEstimate[],
  errors: ErrorModel,
  axis: (block: BlockEstimate) => number,
): number {
  const ends = blocks.flatMap((block) => {
    const angle = axis(block);
    const unit = { x: eastOf(angle), y: northOf(angle) };
    return [
      { ...unit, sign: -1, time: block.time - block.seconds / 2 },
      { ...unit, sign: 1, time: block.time + block.seconds / 2 },
    ];
  });
  const last = errors.displacementSe(FORGOTTEN) ** 2;
  let variance = (ends.length * last) / 2;
  for (let i = 0; i < ends.length; i++) {
    for (let j = i + 1; j < ends.length; j++) {
      const apart = Math.abs(ends[j].time - ends[i].time);
      if (apart >= FORGOTTEN) break;
      const along = ends[i].x * ends[j].x + ends[i].y * ends[j].y;
      const squared = apart > 0 ? errors.displacementSe(apart) ** 2 : 0;
      variance -= ends[i].sign * ends[j].sign * along * (squared - last);
    }
  }
  const seconds = blocks.reduce((sum, block) => sum + block.seconds, 0);
  return Math.hypot(Math.sqrt(Math.max(0, variance)) / seconds, errors.drift);
}

/** A receiver's wandering is another after this. [s] */
const FORGOTTEN = 600;

const ALONG = (block: BlockEstimate): number => block.course;
const ACROSS = (block: BlockEstimate): number => block.course - tackSign(block.tack) * 90;
const TO_WINDWARD = (block: BlockEstimate): number => block.twd;

/**
 * Time means over settled blocks, with errors.
 *
 * A wind direction error enters the course angle with opposite signs on the two tacks, so over a leg sailed evenly it
 * nearly cancels; a wind speed error does not. Receiver errors count by the displacement of each spell.
 *
 * @param blocks At least one.
 */
export function steadyFigures(blocks: readonly BlockEstimate[], errors: ErrorModel): SteadyFigures {
  const seconds = blocks.reduce((sum, block) => sum + block.seconds, 0);
  const weights = blocks.map((block) => block.seconds / seconds);
  const signed = blocks.map((block, k) => tackSign(block.tack) * weights[k]);
  const imbalance = Math.abs(signed.reduce((sum, w) => sum + w, 0));
  const at = (pick: (b: BlockEstimate) => number): number => weighted(blocks, weights, pick);
  const speed = at((b) => b.speed);
  const gamma = at((b) => b.gamma);
  const tws = at((b) => b.tws);
  const receiver = receiverError(blocks, errors, ALONG);
  const wind = correlatedError(blocks, signed, errors.mismatch.direction);
  const across = receiverError(blocks, errors, ACROSS);
  const gammaSe = Math.max(errors.leastGamma, Math.hypot(wind, across / speed / RAD));
  const gammaSys = errors.sysDirection * imbalance;
  const cross = speed * Math.sin(gamma * RAD) * RAD;
  const windSpeed = correlatedError(blocks, weights, errors.mismatch.speed);
  const slope = triangleSlopes(speed, tws, gamma);
  const toWindward = receiverError(blocks, errors, TO_WINDWARD);
  const turnSe = Math.max(errors.leastGamma, wind);
  const propagate = (s: Slopes, base: number): Figure => ({
    value: base,
    se: Math.hypot(s.gamma * gammaSe, s.tws * windSpeed, s.receiver * receiver),
    sys: Math.hypot(s.gamma * gammaSys, s.tws * errors.sysSpeed),
  });
  return {
    seconds,
    gamma: { value: gamma, se: gammaSe, sys: gammaSys },
    speed: { value: speed, se: receiver, sys: 0 },
    vmg: { value: at((b) => b.vmg), se: Math.hypot(cross * turnSe, toWindward), sys: cross * gammaSys },
    tws: { value: tws, se: tws * windSpeed, sys: tws * errors.sysSpeed },
    aws: propagate(
      slope.aws,
      at((b) => b.aws),
    ),
    beta: propagate(
      slope.beta,
      at((b) => b.beta),
    ),
    ceiling: propagate(
      slope.ceiling,
      at((b) => ceilingVmg(b.tws, b.beta)),
    ),
  };
}

interface Slopes {
  /** Per degree of gamma, per fraction of wind speed, per m/s of boat speed. */
  readonly gamma: number;
  readonly tws: number;
  readonly receiver: number;
}

/** Slopes of the triangle by central differences. */
function triangleSlopes(speed: number, tws: number, gamma: number): { aws: Slopes; beta: Slopes; ceiling: Slopes } {
  const quantities = (v: number, w: number, g: number): [number, number, number] => {
    const { beta, aws } = apparentWind(v, w, g);
    return [aws, beta, ceilingVmg(w, beta)];
  };
  const slope = (high: readonly number[], low: readonly number[], step: number): number[] =>
    high.map((value, k) => (value - low[k]) / (2 * step));
  const g = slope(quantities(speed, tws, gamma + 0.1), quantities(speed, tws, gamma - 0.1), 0.1);
  const w = slope(quantities(speed, tws * 1.001, gamma), quantities(speed, tws * 0.999, gamma), 0.001);
  const v = slope(quantities(speed + 0.01, tws, gamma), quantities(speed - 0.01, tws, gamma), 0.01);
  const of = (k: number): Slopes => ({ gamma: g[k], tws: w[k], receiver: v[k] });
  return { aws: of(0), beta: of(1), ceiling: of(2) };
}

/** Angle between the mean courses on the two tacks, relative to the wind: the sum of the two course angles. */
export function tackingAngle(blocks: readonly BlockEstimate[], errors: ErrorModel): Figure | null {
  const total = (tack: Tack): number =>
    blocks.filter((b) => b.tack === tack).reduce((sum, block) => sum + block.seconds, 0);
  const sides = { port: total('port'), starboard: total('starboard') };
  if (sides.port === 0 || sides.starboard === 0) return null;
  const weights = blocks.map((b) => b.seconds / sides[b.tack]);
  const signed = blocks.map((b, k) => tackSign(b.tack) * weights[k]);
  const wind = correlatedError(blocks, signed, errors.mismatch.direction);
  const speed = weighted(blocks, weights, (b) => b.speed) / 2;
  const receiver = (2 * receiverError(blocks, errors, ACROSS)) / speed / RAD;
  return {
    value: weighted(blocks, weights, (b) => b.gamma),
    se: Math.max(2 * errors.leastGamma, Math.hypot(wind, receiver)),
    sys: 0,
  };
}
