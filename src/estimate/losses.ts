import type { Sailing } from '../segment/sailing.js';
import type { Manoeuvre } from '../segment/manoeuvres.js';
import type { BlockEstimate } from './blocks.js';
import { correlatedError, type ErrorModel, type Figure } from './steady.js';
import { eastOf, northOf } from '../math/angles.js';

/** Settled sailing this close to a manoeuvre says what would have been made without it. [s] */
const NEAR = 90;
const RAD = Math.PI / 180;

/** Sum of velocity made good to windward over rows [from, to), gaps left out: metres, and seconds counted. */
export function madeGood(sailing: Sailing, from: number, to: number): { metres: number; seconds: number } {
  let metres = 0;
  let seconds = 0;
  for (let i = from; i < Math.min(to, sailing.n); i++) {
    const gain = sailing.ux[i]! * eastOf(sailing.twd[i]!) + sailing.uy[i]! * northOf(sailing.twd[i]!);
    if (Number.isNaN(gain)) continue;
    metres += gain;
    seconds++;
  }
  return { metres, seconds };
}

/** Settled blocks of the same leg within 90 s on both sides of rows [entry, exit). */
export function blocksNear(
  blocks: readonly BlockEstimate[],
  leg: number,
  window: { readonly entry: number; readonly exit: number },
): BlockEstimate[] {
  return blocks.filter(
    (block) => block.leg === leg && block.to > window.entry - NEAR && block.from < window.exit + NEAR,
  );
}

/**
 * Windward distance a manoeuvre cost: what the settled sailing around it would have made in its time, less what was
 * made.  loss = T x mean VMG of the blocks within 90 s - sum of VMG over the window.
 *
 * @returns Loss, positive lost [m]; null without settled sailing near it.
 */
export function manoeuvreLoss(
  sailing: Sailing,
  manoeuvre: Manoeuvre,
  blocks: readonly BlockEstimate[],
  leg: number,
  errors: ErrorModel,
): Figure | null {
  const near = blocksNear(blocks, leg, manoeuvre);
  const total = near.reduce((sum, block) => sum + block.seconds, 0);
  if (total < 20) return null;
  const weights = near.map((block) => block.seconds / total);
  const rate = near.reduce((sum, block, k) => sum + weights[k]! * block.vmg, 0);
  const { metres, seconds } = madeGood(sailing, manoeuvre.entry, manoeuvre.exit);
  const cross = near.reduce((sum, b, k) => sum + weights[k]! * b.speed * Math.sin(b.gamma * RAD), 0);
  const signed = near.map((block, k) => (block.tack === 'starboard' ? 1 : -1) * weights[k]!);
  const wind = correlatedError(near, signed, errors.mismatch.direction) * RAD * cross * seconds;
  const within = errors.mismatch.direction.wander * RAD * cross * 0.3 * seconds;
  const receiver = errors.displacementSe(seconds);
  return { value: rate * seconds - metres, se: Math.hypot(wind, within, receiver), sys: 0 };
}
