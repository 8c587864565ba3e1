import { choleskyInPlace } from '../math/cholesky.js';
import type { MismatchPart } from './mismatch.js';

/** What a settled block lost by one cause, and how an error of the wind shows in it. */
export interface Rate {
  /** Middle of the block, UTC epoch seconds, its length [s], and its place [m]. */
  readonly time: number;
  readonly seconds: number;
  readonly x: number;
  readonly y: number;
  /** Lost by the cause. [m/s] */
  readonly value: number;
  /** Per degree by which the wind used for it is veered. [m/s] */
  readonly turning: number;
  /** Per unit of the wind's speed by which it is too high. [m/s] */
  readonly offered: number;
}

/** How the wind at the boats differs from the wind used for them. */
export interface WindErrors {
  readonly direction: MismatchPart;
  readonly speed: MismatchPart;
  /** Whether the two boats' wind is one and the same; else each has its own instruments. */
  readonly shared: boolean;
}

export interface RateDifference {
  /** Mean rate of the first boat less that of the second. [m/s] */
  readonly value: number;
  /** Its sampling error. [m/s] */
  readonly se: number;
  /** Blocks it rests on, less what was fitted. */
  readonly freedom: number;
}

/** Shares of the wind's part that are tried, on its stated variance; and correlations of a boat's neighbouring blocks. */
const WIND_SCALES = [0.02, 0.1, 0.5, 2, 8, 30, 120, 500, 2000];
const KEEPINGS = [-0.4, -0.2, 0, 0.25, 0.5, 0.7, 0.85];
/** Two means, the scale and the keeping. */
const PARAMETERS = 4;
/** Length of a usual block: shorter ones are the noisier. [s] */
const BLOCK = 30;

/**
 * Difference of two boats' mean rates by generalised least squares: what the error of one wind does to both boats at the
 * same time, with each one's sign, cancels; what each boat's own helm does is counted as noise, alike in neighbouring
 * blocks. The size of both is found by restricted maximum likelihood over a small grid [1].
 *
 *     y = mean + difference x (first boat) + e,   cov e = s2 (own + scale x wind)
 *     own  = exp(-|t_k - t_l| / 60 s) x keeping + (1 - keeping) on the diagonal, within a boat, x 30 s / length
 *     wind = t_k t_l (wander^2 exp(-|t_k - t_l| / tau) + gradient^2 r_k . r_l), direction and speed, both boats
 *
 * @param first, second Settled blocks of each boat. At least two of each, else the error is infinite.
 * @returns Difference, positive: the first boat lost more. [m/s]
 *
 * [1] Patterson, Thompson, Recovery of inter-block information when block sizes are unequal, Biometrika 58, 1971.
 */
export function rateDifference(first: readonly Rate[], second: readonly Rate[], wind: WindErrors): RateDifference {
  const freedom = first.length + second.length - PARAMETERS;
  if (first.length < 2 || second.length < 2 || freedom < 1) return { value: NaN, se: Infinity, freedom: 0 };
  const rates = [...first, ...second];
  const boats = rates.map((_, k) => (k < first.length ? 1 : 0));
  const windPart = windCovariance(rates, boats, wind);
  const ownPart = ownCovariances(rates, boats);
  const unit = sizeOf(rates);
  const room = new Float64Array(rates.length * (rates.length + SIDES));
  let best: Fit | null = null;
  for (const keeping of KEEPINGS) {
    const own = ownPart(keeping);
    for (const scale of WIND_SCALES) {
      const fit = fitAt(rates, boats, own, windPart, scale / unit, room);
      if (fit && (!best || fit.likelihood > best.likelihood)) best = fit;
    }
  }
  return best ? { value: best.difference, se: best.se, freedom } : { value: NaN, se: Infinity, freedom: 0 };
}

/** Variance of all rates about their mean, the unit of the own part. [m2/s2] */
function sizeOf(rates: readonly Rate[]): number {
  const mean = rates.reduce((sum, rate) => sum + rate.value, 0) / rates.length;
  return Math.max(1e-12, rates.reduce((sum, rate) => sum + (rate.value - mean) ** 2, 0) / rates.length);
}

/** A symmetric matrix: rows of n numbers one after another, of which only the lower triangle is used. */
type Square = Float64Array;

function square(n: number, at: (k: number, l: number) => number): Square {
  const all = new Float64Array(n * n);
  for (let k = 0; k < n; k++) for (let l = 0; l <= k; l++) all[k * n + l] = at(k, l);
  return all;
}

/** The own part by what is kept from block to block. */
function ownCovariances(rates: readonly Rate[], boats: readonly number[]): (keeping: number) => Square {
  const n = rates.length;
  const length = square(n, (k, l) =>
    boats[k] === boats[l] ? BLOCK / Math.sqrt(rates[k].seconds * rates[l].seconds) : 0,
  );
  const apart = square(n, (k, l) => Math.round(Math.abs(rates[k].time - rates[l].time) / BLOCK));
  return (keeping) => {
    const powers = new Map<number, number>();
    const alike = (blocks: number): number => {
      let power = powers.get(blocks);
      if (power === undefined) powers.set(blocks, (power = keeping ** blocks));
      return power;
    };
    return square(n, (k, l) => (boats[k] === boats[l] ? alike(apart[k * n + l]) * length[k * n + l] : 0));
  };
}

function windCovariance(rates: readonly Rate[], boats: readonly number[], wind: WindErrors): Square {
  const x0 = rates.reduce((sum, { x }) => sum + x, 0) / rates.length;
  const y0 = rates.reduce((sum, { y }) => sum + y, 0) / rates.length;
  return square(rates.length, (k, l) => {
    if (boats[k] !== boats[l] && !wind.shared) return 0;
    const [a, b] = [rates[k], rates[l]];
    const apart = Math.abs(a.time - b.time);
    const places = ((a.x - x0) * (b.x - x0) + (a.y - y0) * (b.y - y0)) / 1e6;
    const of = (part: MismatchPart): number =>
      part.wander ** 2 * Math.exp(-apart / part.tau) + part.gradient ** 2 * places;
    return a.turning * b.turning * of(wind.direction) + a.offered * b.offered * of(wind.speed);
  });
}

interface Fit {
  readonly difference: number;
  readonly se: number;
  /** Logarithm, but for a constant. */
  readonly likelihood: number;
}

/** Right-hand sides: one, the boat, the rates. */
const SIDES = 3;

/**
 * Generalised least squares and restricted likelihood at one mixture of own and wind part.
 *
 * @param room For the work: the matrix and below it the right-hand sides.
 */
function fitAt(
  rates: readonly Rate[],
  boats: readonly number[],
  own: Square,
  wind: Square,
  scale: number,
  room: Float64Array,
): Fit | null {
  const n = rates.length;
  for (let k = 0; k < n; k++) {
    for (let at = k * n; at <= k * n + k; at++) room[at] = own[at] + scale * wind[at];
    room[n * n + k] = 1;
    room[n * n + n + k] = boats[k];
    room[n * n + 2 * n + k] = rates[k].value;
  }
  if (!choleskyInPlace(room, n, n + SIDES)) return null;
  const [one, boat, value] = [0, 1, 2].map((side) => room.subarray(n * n + side * n, n * n + (side + 1) * n));
  const [a, b, c] = [dot(one, one), dot(one, boat), dot(boat, boat)];
  const [p, q] = [dot(one, value), dot(boat, value)];
  const determinant = a * c - b * b;
  if (!(determinant > 0)) return null;
  const mean = (c * p - b * q) / determinant;
  const difference = (a * q - b * p) / determinant;
  let left = 0;
  let logarithm = 0;
  for (let k = 0; k < n; k++) {
    left += (value[k] - mean * one[k] - difference * boat[k]) ** 2;
    logarithm += Math.log(room[k * n + k]);
  }
  const variance = Math.max(1e-12, left / (n - 2));
  return {
    difference,
    se: Math.sqrt((variance * a) / determinant),
    likelihood: -0.5 * ((n - 2) * Math.log(variance) + 2 * logarithm + Math.log(determinant)),
  };
}

function dot(a: Float64Array, b: Float64Array): number {
  let sum = 0;
  for (let k = 0; k < a.length; k++) sum += a[k] * b[k];
  return sum;
}
