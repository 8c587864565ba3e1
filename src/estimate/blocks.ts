import { circularMean, directionOf, turn, wrap360 } from '../math/angles.js';
import { lengthOf } from '../math/length.js';
import { apparentWind } from '../physics/triangle.js';
import type { Sailing, Tack } from '../segment/sailing.js';
import type { Block } from '../segment/spells.js';

/** What a boat did in a settled block: the speed triangle of its vector means. Angles [deg], speeds [m/s]. */
export interface BlockEstimate {
  /** Index of the leg, and of the spell within the boat. */
  readonly leg: number;
  readonly spell: number;
  /** Rows [from, to). */
  readonly from: number;
  readonly to: number;
  readonly tack: Tack;
  /** Middle, UTC epoch seconds, and length. [s] */
  readonly time: number;
  readonly seconds: number;
  readonly x: number;
  readonly y: number;
  /** Course through the water. */
  readonly course: number;
  readonly twd: number;
  /** NaN where the wind speed is not known; then aws and beta are NaN too. */
  readonly tws: number;
  readonly gamma: number;
  readonly speed: number;
  /** Speed made good to windward. */
  readonly vmg: number;
  readonly aws: number;
  readonly beta: number;
}

/**
 * Means of a block: vector mean of the water velocity, mean unit vector of the wind, mean wind speed; then the triangle
 * once. VMG is a concave function of the angle, so doing it second by second would read helm wander as a loss.
 */
export function estimateBlock(sailing: Sailing, tws: Float64Array, block: Block, leg: number): BlockEstimate {
  const { from, to, tack, spell } = block;
  const ux = mean(sailing.ux, from, to);
  const uy = mean(sailing.uy, from, to);
  const course = directionOf(ux, uy);
  const twd = circularMean(sailing.twd.subarray(from, to)).mean;
  const wind = mean(tws, from, to);
  const speed = lengthOf(ux, uy);
  const gamma = Math.abs(turn(course, twd));
  const { beta, aws } = Number.isNaN(wind) ? { beta: NaN, aws: NaN } : apparentWind(speed, wind, gamma);
  return {
    leg,
    spell,
    from,
    to,
    tack,
    time: sailing.t0 + (from + to - 1) / 2,
    seconds: to - from,
    x: mean(sailing.x, from, to),
    y: mean(sailing.y, from, to),
    course,
    twd: wrap360(twd),
    tws: wind,
    gamma,
    speed,
    vmg: speed * Math.cos((gamma * Math.PI) / 180),
    aws,
    beta,
  };
}

/** Mean of rows [from, to), NaN skipped; NaN when none is there. */
export function mean(values: Float64Array, from: number, to: number): number {
  let sum = 0;
  let n = 0;
  for (let i = from; i < to; i++) {
    const value = values[i];
    if (Number.isNaN(value)) continue;
    sum += value;
    n++;
  }
  return n > 0 ? sum / n : NaN;
}
