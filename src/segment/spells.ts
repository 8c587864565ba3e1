import { angleBetween, directionOf } from '../math/angles.js';
import { median } from '../math/median.js';
import type { Leg } from './legs.js';
import type { Manoeuvre } from './manoeuvres.js';
import { findStates, steeringAngle } from './point-of-sail.js';
import { tackOf, type RowRange, type Sailing, type Tack } from './sailing.js';
import type { Thresholds } from './thresholds.js';

/** What a second of a leg was spent on. Every row of a leg has exactly one label. */
export const LABEL = {
  settled: 0,
  manoeuvre: 1,
  start: 2,
  rounding: 3,
  stopped: 4,
  fetching: 5,
  unsettled: 6,
  gap: 7,
} as const;
export type Label = (typeof LABEL)[keyof typeof LABEL];

/** A stretch of settled close-hauled sailing on one tack. */
export interface Spell extends RowRange {
  readonly tack: Tack;
}

/** A piece of a spell: the unit of averaging. */
export interface Block extends RowRange {
  readonly tack: Tack;
  /** Index of the spell it is part of. */
  readonly spell: number;
}

export interface LegRows {
  /** One label per row of the leg: labels[i] is for row leg.from + i. */
  readonly labels: Uint8Array;
  readonly spells: readonly Spell[];
  readonly blocks: readonly Block[];
}

/**
 * Divides a beat into settled sailing and the rest.
 *
 * Settled is close-hauled, with way on, outside the windows of manoeuvres, after the start or rounding has been sailed
 * off, before the last seconds at the mark, not luffing or stopped nor recovering from it, and not fetching the mark
 * below the boat's own close-hauled angle; at least `minSettled` seconds at a stretch.
 *
 * @param own The boat's own close-hauled angle, the median of its settled sailing; NaN when not known yet. [deg]
 */
export function divideBeat(
  sailing: Sailing,
  leg: Leg,
  manoeuvres: readonly Manoeuvre[],
  usual: number,
  own: number,
  thresholds: Thresholds,
): LegRows {
  const labels = new Uint8Array(leg.to - leg.from).fill(LABEL.unsettled);
  const mark = (from: number, to: number, label: Label): void => {
    labels.fill(label, Math.max(0, Math.round(from) - leg.from), Math.max(0, Math.round(to) - leg.from));
  };
  const angle = steeringAngle(sailing, usual, thresholds);
  for (const state of findStates(angle.subarray(leg.from, leg.to), thresholds)) {
    if (state.point === 'upwind') mark(leg.from + state.from, leg.from + state.to, LABEL.settled);
  }
  for (let i = leg.from; i < leg.to; i++) {
    const size = Math.abs(sailing.gamma[i]);
    if (!(size >= thresholds.luffing && size <= thresholds.closeHauled)) labels[i - leg.from] = LABEL.unsettled;
  }
  markTroubles(sailing, leg, usual, thresholds, mark);
  mark(leg.from, startedAt(sailing, leg, usual, thresholds), LABEL.start);
  mark(leg.to - thresholds.rounding, leg.to, LABEL.rounding);
  markFetching(sailing, leg, manoeuvres, own, thresholds, labels);
  markWindows(leg, manoeuvres, labels, mark);
  for (let i = leg.from; i < leg.to; i++) if (Number.isNaN(sailing.gamma[i])) labels[i - leg.from] = LABEL.gap;
  const spells = spellsOf(sailing, leg, labels, thresholds);
  return { labels, spells, blocks: cutBlocks(spells, thresholds) };
}

type Mark = (from: number, to: number, label: Label) => void;

/** A turn that begins or ends so near a stop is part of it: falling off into it, heading up out of it. [s] */
const AT_STOP = 5;

/** Whether a turn begins or ends at a stop of the leg, and is no tack. */
function isOfStop({ kind, entry, exit }: Manoeuvre, leg: Leg, labels: Uint8Array): boolean {
  if (kind === 'tack' || kind === 'gybe') return false;
  const at = (row: number): number => Math.min(labels.length, Math.max(0, Math.round(row) - leg.from));
  return labels.subarray(at(entry - AT_STOP), at(exit + AT_STOP)).includes(LABEL.stopped);
}

/**
 * Windows of manoeuvres; a rounding-up at the very beginning of the leg belongs to the start, a turn into a stop or out of
 * it to the stop: a boat blown over falls off before and heads up after, and the whole is what it cost.
 */
function markWindows(leg: Leg, manoeuvres: readonly Manoeuvre[], labels: Uint8Array, mark: Mark): void {
  const stops = manoeuvres.map((manoeuvre) => isOfStop(manoeuvre, leg, labels));
  for (const [k, manoeuvre] of manoeuvres.entries()) {
    if (manoeuvre.exit <= leg.from || manoeuvre.entry >= leg.to) continue;
    if (manoeuvre.kind === 'full-turn' || stops[k]) {
      mark(Math.max(leg.from, manoeuvre.entry), Math.min(leg.to, manoeuvre.exit), LABEL.stopped);
      continue;
    }
    const atStart = manoeuvre.at <= leg.from + 5;
    const atEnd = manoeuvre.at >= leg.to - 3 && manoeuvre.kind !== 'tack';
    mark(
      Math.max(leg.from, manoeuvre.entry),
      Math.min(leg.to, manoeuvre.exit),
      atStart ? LABEL.start : atEnd ? LABEL.rounding : LABEL.manoeuvre,
    );
  }
}

/**
 * Row from which a leg's first sailing is settled: the 5 s mean speed is back at 95 % of usual, no sooner than
 * `settleMin` and no later than `settleMax` after the leg begins.
 */
function startedAt(sailing: Sailing, leg: Leg, usual: number, thresholds: Thresholds): number {
  const last = Math.min(leg.to, Math.round(leg.from + thresholds.settleMax));
  for (let i = Math.round(leg.from + thresholds.settleMin); i < last && i + 3 <= sailing.n; i++) {
    let sum = 0;
    for (let k = i - 2; k < i + 3; k++) sum += sailing.speed[k];
    if (sum / 5 >= 0.95 * usual) return i;
  }
  return last;
}

/** Slower than this share of usual is trouble, not a lull: a lull of a third of the wind leaves 0.7. */
const SLOW = 0.55;

/** Stops, luffing and slow stretches, each with the time it takes to get going again. */
function markTroubles(sailing: Sailing, leg: Leg, usual: number, thresholds: Thresholds, mark: Mark): void {
  let slowFrom = -1;
  for (let i = leg.from; i <= leg.to; i++) {
    const size = i < leg.to ? Math.abs(sailing.gamma[i]) : NaN;
    const trouble = i < leg.to && (sailing.speed[i] < SLOW * usual || size < thresholds.luffing);
    if (trouble && slowFrom < 0) slowFrom = i;
    if (trouble || slowFrom < 0) continue;
    if (i - slowFrom > thresholds.flicker) {
      const label = hasStop(sailing, slowFrom, i, usual, thresholds) ? LABEL.stopped : LABEL.unsettled;
      mark(slowFrom - thresholds.beforeTack, Math.min(leg.to, i + thresholds.settleMin), label);
    }
    slowFrom = -1;
  }
}

/** Whether the boat lay stopped within rows [from, to). */
function hasStop(sailing: Sailing, from: number, to: number, usual: number, thresholds: Thresholds): boolean {
  let since = from;
  for (let i = from; i < to; i++) {
    if (!(sailing.speed[i] < thresholds.stopped * usual)) since = i + 1;
    else if (i + 1 - since >= thresholds.minStop) return true;
  }
  return false;
}

/** Steering within this of the bearing to the leg's end is steering for the mark. [deg] */
const STEERING_FOR_MARK = 7;
/** A stretch that ends within this of the leg's end may have been steered for the mark though a tack follows. [s] */
const AT_THE_MARK = 120;
/** Half the stretch over which course and course angle are judged. [s] */
const FETCH_HALF = 12;

/**
 * Fetching: from the moment after the last tack from which the boat either sails below its own angle by `fetching`, or
 * steers for the place where the leg ends and on the whole sails below its own angle by a quarter of that.
 */
function markFetching(
  sailing: Sailing,
  leg: Leg,
  manoeuvres: readonly Manoeuvre[],
  own: number,
  thresholds: Thresholds,
  labels: Uint8Array,
): void {
  if (Number.isNaN(own)) return;
  const end = leg.to - Math.round(thresholds.rounding);
  const tacks = manoeuvres.filter((m) => m.kind === 'tack' && m.at > leg.from && m.at < leg.to);
  const fill = (from: number, to: number): void => {
    for (let i = from; i < to; i++) if (labels[i - leg.from] !== LABEL.rounding) labels[i - leg.from] = LABEL.fetching;
  };
  const low = backTo(tacks.at(-1)?.exit ?? leg.from, end, (from, to) => {
    return below(sailing, from, to) > own + thresholds.fetching;
  });
  fill(low, leg.to);
  for (let k = tacks.length; k >= 0; k--) {
    const last = tacks[k]?.entry ?? end;
    if (end - last > AT_THE_MARK) break;
    const straight = backTo(tacks[k - 1]?.exit ?? leg.from, last, (from, to) => {
      return offMark(sailing, leg, from, to) < STEERING_FOR_MARK;
    });
    const reaches = below(sailing, straight, last) > own + thresholds.fetching / 4;
    if (reaches && last - straight >= thresholds.minSettled) fill(straight, last === end ? leg.to : last);
  }
}

/** First row of the stretch up to `last` of which every row's neighbourhood passes. */
function backTo(first: number, last: number, passes: (from: number, to: number) => boolean): number {
  let from = last;
  for (let i = last - 1; i >= first; i--) {
    if (!passes(Math.max(first, i - FETCH_HALF), Math.min(last, i + FETCH_HALF + 1))) break;
    from = i;
  }
  return from;
}

/** Median course angle of rows. [deg] */
function below(sailing: Sailing, from: number, to: number): number {
  return Math.abs(median(sailing.gamma.subarray(from, to)));
}

/** Angle between the course made over rows and the bearing from their middle to the end of the leg. [deg] */
function offMark(sailing: Sailing, leg: Leg, from: number, to: number): number {
  const { x, y } = sailing;
  const end = Math.min(leg.to, sailing.n - 1);
  const middle = Math.round((from + to - 1) / 2);
  return angleBetween(
    directionOf(x[end] - x[middle], y[end] - y[middle]),
    directionOf(x[to - 1] - x[from], y[to - 1] - y[from]),
  );
}

/** Runs of settled rows on one tack that are long enough; shorter ones are relabelled unsettled. */
function spellsOf(sailing: Sailing, leg: Leg, labels: Uint8Array, thresholds: Thresholds): Spell[] {
  const spells: Spell[] = [];
  let from = -1;
  const close = (to: number): void => {
    if (from >= 0 && to - from >= thresholds.minSettled) {
      spells.push({ from: leg.from + from, to: leg.from + to, tack: tackOf(sailing.gamma[leg.from + from]) });
    } else if (from >= 0) labels.fill(LABEL.unsettled, from, to);
    from = -1;
  };
  for (let k = 0; k < labels.length; k++) {
    const settled = labels[k] === LABEL.settled;
    const sameTack = from < 0 || Math.sign(sailing.gamma[leg.from + k]) === Math.sign(sailing.gamma[leg.from + from]);
    if (!settled || !sameTack) close(k);
    if (settled && from < 0) from = k;
  }
  close(labels.length);
  return spells;
}

/** Cuts spells into equal pieces nearest to `block` seconds; a spell shorter than one and a half blocks is one piece. */
export function cutBlocks(spells: readonly Spell[], thresholds: Thresholds): Block[] {
  const blocks: Block[] = [];
  spells.forEach((spell, index) => {
    const length = spell.to - spell.from;
    const pieces = Math.max(1, Math.round(length / thresholds.block));
    for (let k = 0; k < pieces; k++) {
      const from = spell.from + Math.round((k * length) / pieces);
      const to = spell.from + Math.round(((k + 1) * length) / pieces);
      blocks.push({ from, to, tack: spell.tack, spell: index });
    }
  });
  return blocks;
}
