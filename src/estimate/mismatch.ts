import { median } from '../math/median.js';
import { tackSign } from '../segment/sailing.js';
import type { BlockEstimate } from './blocks.js';
import { tiltOf } from './wind-response.js';

/**
 * How the wind at the boat differs from the wind used for it: a wandering part with a correlation time, and a part that
 * stays through a leg. Direction in degrees, speed as a fraction of the wind speed.
 */
export interface Mismatch {
  readonly direction: MismatchPart;
  readonly speed: MismatchPart;
}

export interface MismatchPart {
  /** Standard deviation of the wandering part in a block's mean. */
  readonly wander: number;
  /** Its correlation time. [s] */
  readonly tau: number;
  /** Standard deviation of the part that stays through a leg. */
  readonly slow: number;
  /** Standard deviation of its change across the course, per kilometre and axis. */
  readonly gradient: number;
  /** How it was had, for the method page. */
  readonly from: 'boats' | 'one-boat' | 'sensor';
}

/** Blocks of two boats this close in time see the same wind error. [s] */
const SAME_TIME = 20;
/** Share of a single boat's own block variance that is put down to the wind. */
const SHARE_ALONE = 0.4;
const LEAST_DIRECTION = 0.3;
const LEAST_SPEED = 0.005;
/** A boat's speed answers the wind's with about this exponent upwind; common practice, no source. */
const SPEED_RESPONSE = 0.5;

/** Residual of each block's course angle, as a wind direction error: signed, mean of the boat's tack removed. [deg] */
function directionResiduals(blocks: readonly BlockEstimate[]): number[] {
  const port = median(blocks.filter((b) => b.tack === 'port').map((b) => b.gamma));
  const starboard = median(blocks.filter((b) => b.tack === 'starboard').map((b) => b.gamma));
  return blocks.map((b) => tackSign(b.tack) * (b.gamma - (b.tack === 'port' ? port : starboard)));
}

/**
 * Power with which the boats' speeds went with the wind's: their own blocks', near the usual one where they do not tell.
 * With the usual one throughout, gusts that all boats met would show as an error of the wind in light air, where a boat
 * answers in full, and in strong, where it does not.
 */
function responseOf(boats: readonly (readonly BlockEstimate[])[]): number {
  const groups = boats.flatMap((blocks) =>
    (['port', 'starboard'] as const).map((tack) =>
      blocks
        .filter((b) => b.tack === tack)
        .map((b) => ({ wind: Math.log(b.tws), excess: Math.log(b.speed) - SPEED_RESPONSE * Math.log(b.tws) })),
    ),
  );
  return SPEED_RESPONSE + tiltOf(groups).power;
}

/** Residual of each block's speed against the speed its wind would give, as a fraction of the wind speed. */
function speedResiduals(blocks: readonly BlockEstimate[], response: number): number[] {
  const ratio = blocks.map((b) => Math.log(b.speed / b.tws ** response));
  const centre = median(ratio);
  return ratio.map((value) => -(value - centre) / SPEED_RESPONSE);
}

interface Pooled {
  readonly near: number;
  readonly pairs: number;
  readonly later: number;
}

/** Mean products of residuals of different boats at the same time, and 30 to 90 s apart. */
function commonMode(boats: readonly { times: readonly number[]; residuals: readonly number[] }[]): Pooled {
  let near = 0;
  let pairs = 0;
  let later = 0;
  let laterPairs = 0;
  for (let a = 0; a < boats.length; a++) {
    for (let b = 0; b < boats.length; b++) {
      if (a === b) continue;
      boats[a].times.forEach((time, i) => {
        boats[b].times.forEach((other, j) => {
          const apart = Math.abs(other - time);
          if (apart > 90) return;
          const product = boats[a].residuals[i] * boats[b].residuals[j];
          if (Number.isNaN(product)) return;
          if (apart <= SAME_TIME) {
            near += product;
            pairs++;
          } else if (apart >= 30) {
            later += product;
            laterPairs++;
          }
        });
      });
    }
  }
  return { near: pairs > 0 ? near / pairs : NaN, pairs, later: laterPairs > 0 ? later / laterPairs : NaN };
}

function variance(values: readonly number[]): number {
  const there = values.filter((value) => !Number.isNaN(value));
  return there.length > 0 ? there.reduce((sum, value) => sum + value * value, 0) / there.length : NaN;
}

/** Correlation time from the covariance at the same time and about a minute later. [s] */
function correlationTime({ near, later }: Pooled): number {
  const ratio = later / near;
  if (!(ratio > 0.05)) return 30;
  return Math.min(240, Math.max(30, -60 / Math.log(Math.min(0.8, ratio))));
}

function partFrom(
  boats: readonly { times: readonly number[]; residuals: readonly number[] }[],
  least: number,
  slow: number,
  gradient: number,
): MismatchPart {
  const own = median(boats.map((boat) => variance(boat.residuals)));
  const pooled = boats.length > 1 ? commonMode(boats) : null;
  if (pooled && pooled.pairs >= 20) {
    const wander = Math.sqrt(Math.max(least ** 2, Math.min(pooled.near, own)));
    return { wander, tau: correlationTime(pooled), slow, gradient, from: 'boats' };
  }
  const wander = Math.sqrt(Math.max(least ** 2, SHARE_ALONE * (Number.isNaN(own) ? 4 : own)));
  return { wander, tau: 60, slow, gradient, from: 'one-boat' };
}

/** Wind differs by about 5 degrees and 10 % across a course of some 1200 m: common practice, no source. [per km] */
const GRADIENT = { direction: 4, speed: 0.08 };
/** What stays of the wind's difference from a sensor for a whole leg, by its distance: common practice, no source. [deg per km] */
const SLOW_PER_KM = 2.4;
/** Where shifts were found to reach the whole course at once the wind is of one piece: so much of that is left. */
const UNIFORM_SHARE = 0.12;

/**
 * Station-to-boat mismatch from what two or more boats' settled blocks share at the same time; with one boat, 0.4 of its
 * own block variance.
 *
 * @param boats    Blocks of each boat that uses the source.
 * @param distance Typical distance of boats from the sensor, NaN when not known. [m]
 * @param uniform  Whether shifts were found to reach the whole course at once.
 */
export function estimateMismatch(
  boats: readonly (readonly BlockEstimate[])[],
  distance: number,
  uniform: boolean,
): Mismatch {
  const used = boats.filter((blocks) => blocks.length >= 4);
  const far = Number.isNaN(distance) ? 500 : distance;
  const part = uniform ? UNIFORM_SHARE : 1;
  const response = responseOf(used);
  const times = used.map((blocks) => blocks.map((b) => b.time));
  const direction = used.map((blocks, k) => ({ times: times[k], residuals: directionResiduals(blocks) }));
  const speed = used.map((blocks, k) => ({ times: times[k], residuals: speedResiduals(blocks, response) }));
  return {
    direction: partFrom(
      direction,
      LEAST_DIRECTION,
      part * Math.min(3, (SLOW_PER_KM * far) / 1000),
      part * GRADIENT.direction,
    ),
    speed: partFrom(speed, LEAST_SPEED, part * Math.min(0.08, (0.05 * far) / 1000), part * GRADIENT.speed),
  };
}

/** On-board wind is at the boat: what is left is the vane's and cups' noise, averaged over a block. */
export const ON_BOARD_MISMATCH: Mismatch = {
  direction: { wander: 0.5, tau: 15, slow: 0.3, gradient: 0, from: 'sensor' },
  speed: { wander: 0.01, tau: 15, slow: 0.005, gradient: 0, from: 'sensor' },
};
