import type { Sailing } from '../segment/sailing.js';
import type { Manoeuvre } from '../segment/manoeuvres.js';
import type { BlockEstimate } from './blocks.js';
import { correlatedError, type ErrorModel, type Figure } from './steady.js';
import { eastOf, northOf } from '../math/angles.js';

/** Settled sailing this close to a manoeuvre says what would have been made without it. [s] */
const NEAR = 90;
const RAD = Math.PI / 180;
/**
 * Which seconds a tack took, and what would have been made in them: so much time at the speed made good. From invented
 * races, over tacks clear of marks: 4 to 5 m a tack about what the invented boat really lost. [s]
 */
export const BOUNDS_ERROR = 2.2;

/** Sum of velocity made good to windward over rows [from, to), gaps left out: metres, and seconds counted. */
export function madeGood(sailing: Sailing, from: number, to: number): { metres: number; seconds: number } {
  let metres = 0;
  let seconds = 0;
  for (let i = from; i < Math.min(to, sailing.n); i++) {
    const gain = sailing.ux[i] * eastOf(sailing.twd[i]) + sailing.uy[i] * northOf(sailing.twd[i]);
    if (Number.isNaN(gain)) continue;
    metres += gain;
    seconds++;
  }
  return { metres, seconds };
}

/**
 * Settled blocks of the same leg within 90 s of rows [entry, exit), and weights that give the sailing before and the
 * sailing after the same say, so that a shift in the manoeuvre does not lean the mean.
 */
export function blocksNear(
  blocks: readonly BlockEstimate[],
  leg: number,
  window: { readonly entry: number; readonly exit: number },
): { near: BlockEstimate[]; weights: number[]; seconds: number } {
  const near = blocks.filter(
    (block) => block.leg === leg && block.to > window.entry - NEAR && block.from < window.exit + NEAR,
  );
  const isBefore = (block: BlockEstimate): boolean => block.from < window.entry;
  const total = (before: boolean): number =>
    near.filter((block) => isBefore(block) === before).reduce((sum, block) => sum + block.seconds, 0);
  const [before, after] = [total(true), total(false)];
  const sides = (before > 0 ? 1 : 0) + (after > 0 ? 1 : 0);
  const weights = near.map((block) => block.seconds / (sides * (isBefore(block) ? before : after)));
  return { near, weights, seconds: before + after };
}

/**
 * Windward distance a manoeuvre cost: what the settled sailing around it would have made in its time, less what was
 * made.  loss = T x mean VMG of the blocks within 90 s - sum of VMG over the window.
 *
 * What is sailed beyond the leg's end, after a tack close to the mark, is no part of it.
 *
 * @param leg Its index, and the row at which it ends.
 * @returns Loss, positive lost [m]; null without settled sailing near it.
 */
export function manoeuvreLoss(
  sailing: Sailing,
  manoeuvre: Manoeuvre,
  blocks: readonly BlockEstimate[],
  leg: { readonly index: number; readonly to: number },
  errors: ErrorModel,
): Figure | null {
  const window = { entry: manoeuvre.entry, exit: Math.min(manoeuvre.exit, leg.to) };
  const { near, weights, seconds: settled } = blocksNear(blocks, leg.index, window);
  if (settled < 20) return null;
  const rate = near.reduce((sum, block, k) => sum + weights[k] * block.vmg, 0);
  const { metres, seconds } = madeGood(sailing, window.entry, window.exit);
  const cross = near.reduce((sum, b, k) => sum + weights[k] * b.speed * Math.sin(b.gamma * RAD), 0);
  const signed = near.map((block, k) => (block.tack === 'starboard' ? 1 : -1) * weights[k]);
  const wind = correlatedError(near, signed, errors.mismatch.direction) * RAD * cross * seconds;
  const within = errors.mismatch.direction.wander * RAD * cross * 0.3 * seconds;
  const receiver = errors.displacementSe(seconds);
  const bounds = BOUNDS_ERROR * rate;
  return { value: rate * seconds - metres, se: Math.hypot(wind, within, receiver, bounds), sys: 0 };
}
