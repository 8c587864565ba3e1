import { circularMean } from '../math/angles.js';
import type { BlockEstimate } from '../estimate/blocks.js';
import { madeGood, manoeuvreLoss } from '../estimate/losses.js';
import { steadyFigures, tackingAngle, type ErrorModel, type Figure, type SteadyFigures } from '../estimate/steady.js';
import type { Leg } from '../segment/legs.js';
import type { Manoeuvre } from '../segment/manoeuvres.js';
import type { Sailed } from './sail.js';

export interface LegEstimate {
  readonly leg: Leg;
  readonly blocks: readonly BlockEstimate[];
  readonly all: SteadyFigures | null;
  readonly port: SteadyFigures | null;
  readonly starboard: SteadyFigures | null;
  readonly tackingAngle: Figure | null;
  /** The whole leg along the instantaneous wind, positive toward the leg's goal. [m/s] */
  readonly vmg: Figure | null;
  /** Mean measured apparent wind angle of the settled rows, magnitude; null without a vane. [deg] */
  readonly vane: Figure | null;
  readonly tacks: number;
  readonly gybes: number;
  /** Mean wind direction. [deg] */
  readonly twd: number;
}

export interface BoatEstimate {
  readonly legs: readonly LegEstimate[];
  readonly manoeuvres: readonly { readonly manoeuvre: Manoeuvre; readonly loss: Figure | null }[];
  readonly errors: ErrorModel;
}

/** Every leg and manoeuvre of one boat, with errors. */
export function estimateBoat(one: Sailed, errors: ErrorModel, awa: Float64Array | undefined): BoatEstimate {
  const legs = one.legs.map((leg, index) => estimateLeg(one, leg, index, errors, awa));
  const manoeuvres = one.manoeuvres.map((manoeuvre) => {
    const leg = one.legs.findIndex((l) => manoeuvre.at >= l.from && manoeuvre.at < l.to);
    const beat = leg >= 0 && one.legs[leg].kind === 'upwind';
    const loss =
      beat && manoeuvre.kind !== 'gybe'
        ? manoeuvreLoss(one.sailing, manoeuvre, one.blocks, { index: leg, to: one.legs[leg].to }, errors)
        : null;
    return { manoeuvre, loss };
  });
  return { legs, manoeuvres, errors };
}

function estimateLeg(
  one: Sailed,
  leg: Leg,
  index: number,
  errors: ErrorModel,
  awa: Float64Array | undefined,
): LegEstimate {
  const blocks = one.blocks.filter((block) => block.leg === index);
  const side = (tack: string): SteadyFigures | null => {
    const some = blocks.filter((block) => block.tack === tack);
    return some.length > 0 ? steadyFigures(some, errors) : null;
  };
  const all = blocks.length > 0 ? steadyFigures(blocks, errors) : null;
  const within = (kind: string): number =>
    one.manoeuvres.filter((m) => m.kind === kind && m.at >= leg.from && m.at < leg.to).length;
  return {
    leg,
    blocks,
    all,
    port: side('port'),
    starboard: side('starboard'),
    tackingAngle: blocks.length > 0 ? tackingAngle(blocks, errors) : null,
    vmg: leg.kind === 'reach' ? null : wholeLeg(one, leg, all, errors),
    vane: awa ? vaneMean(awa, blocks) : null,
    tacks: within('tack'),
    gybes: within('gybe'),
    twd: circularMean(one.sailing.twd.subarray(leg.from, leg.to)).mean,
  };
}

/** When a boat is at a mark is known to about this: a rounding takes that long. [s] */
const END_ERROR = 5;

/** Mean velocity made good over a whole leg; its wind error is that of the settled part. */
function wholeLeg(one: Sailed, leg: Leg, all: SteadyFigures | null, errors: ErrorModel): Figure | null {
  const { metres, seconds } = madeGood(one.sailing, leg.from, leg.to);
  if (seconds === 0) return null;
  const value = (leg.kind === 'downwind' ? -metres : metres) / seconds;
  const ends = (Math.SQRT2 * END_ERROR * Math.abs(value)) / seconds;
  const receiver = Math.hypot(errors.displacementSe(seconds) / seconds, ends);
  const se = all ? Math.hypot(all.vmg.se, receiver) : Math.hypot(receiver, 0.02 * Math.abs(value));
  return { value, se, sys: all ? all.vmg.sys : 0 };
}

/** A vane's noise about a second's mean: common practice, no source. [deg] */
const VANE_NOISE = 2;

function vaneMean(awa: Float64Array, blocks: readonly BlockEstimate[]): Figure | null {
  let sum = 0;
  let n = 0;
  for (const block of blocks) {
    for (let i = block.from; i < block.to; i++) {
      const angle = Math.abs(awa[i]);
      if (Number.isNaN(angle)) continue;
      sum += angle;
      n++;
    }
  }
  return n > 0 ? { value: sum / n, se: VANE_NOISE / Math.sqrt(n), sys: 4 } : null;
}
