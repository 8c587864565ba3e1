import { circularMean, eastOf, northOf } from '../math/angles.js';
import { LABEL, type Label, type LegRows } from '../segment/spells.js';
import { tackSign, type RowRange, type Sailing, type Tack } from '../segment/sailing.js';
import { estimateBlock, type BlockEstimate } from './blocks.js';
import { BOUNDS_ERROR } from './losses.js';
import type { Overstood } from './overstanding.js';
import type { Reference } from './reference.js';
import { correlatedError, type ErrorModel, type Figure } from './steady.js';

const RAD = Math.PI / 180;

export const CAUSES = [
  'manoeuvres',
  'start',
  'high',
  'low',
  'trim',
  'speed',
  'overstood',
  'stopped',
  'shifts',
] as const;
export type Cause = (typeof CAUSES)[number];

export interface LedgerFigures {
  readonly available: Figure;
  readonly made: Figure;
  readonly lost: Figure;
  readonly entries: Readonly<Record<Cause, Figure>>;
  /** What the entries are made of, in time order: their sums, trim apart. */
  readonly pieces: readonly LedgerPiece[];
  readonly overstood: readonly Overstood[];
}

/** What one piece of a leg cost, by cause. */
export interface LedgerPiece {
  readonly label: Label;
  /** Seconds counted. */
  readonly seconds: number;
  /** What was sailed in it on the whole. */
  readonly block: BlockEstimate;
  readonly metres: Readonly<Record<Cause, number>>;
  readonly offer: Offer;
}

/** What the reference offers in a piece's wind, and how it hangs on what was measured. */
export interface Offer {
  /** Best speed made good [m/s], and the course angle it is had at [deg]. */
  readonly vmg: number;
  readonly gamma: number;
  /** Change of the speed made good along the reference's curve for a degree of course angle, at the angle sailed. [m/s] */
  readonly slope: number;
  /** Change of the best speed made good for a unit of ln wind speed. [m/s] */
  readonly windSlope: number;
}

/** A piece of a leg: a block of steady sailing (settled or fetching), or a window in which the boat was busy. */
interface Piece extends RowRange {
  readonly label: Label;
}

/** Sums over a piece's rows: reference's best, made along the instantaneous and along the mean wind. [m], and seconds. */
interface Sums {
  readonly best: number;
  readonly made: number;
  readonly madeMean: number;
  readonly seconds: number;
}

export interface LedgerInput {
  readonly sailing: Sailing;
  readonly tws: Float64Array;
  readonly leg: RowRange;
  readonly rows: LegRows;
  readonly reference: Reference;
  readonly errors: ErrorModel;
  /** Stretches sailed from beyond the lay line. */
  readonly overstood: readonly Overstood[];
  /** Speed that the trim cost, where it could be told; null: its metres stay in speed. [m/s] */
  readonly trim: { readonly loss: number; readonly sd: number } | null;
  /** Direction of the leg's mean wind where it is shared with other boats; else the leg's own. [deg] */
  readonly meanWind?: number;
}

/**
 * Where a beat's metres went. lost = available - made is divided so that the entries sum to it exactly:
 *
 *     available = sum V*(W),  made = sum V . w_mean
 *     per block:  high or low = T V*(W) - T v(gamma, W) cos gamma;  speed = the rest of the block's sum V* - V . w
 *     per window: its sum V* - V . w, less the blocks' mean rates of high, low and speed nearby times its length
 *     shifts = sum V . w - V . w_mean
 */
export function legLedger(input: LedgerInput): LedgerFigures {
  const { sailing, leg } = input;
  const meanWind = input.meanWind ?? circularMean(sailing.twd.subarray(leg.from, leg.to)).mean;
  const pieces = cutWindows(piecesOf(input.rows, leg), input.overstood);
  const sums = pieces.map((piece) => sumOver(input, piece, meanWind));
  const parts = pieces.map((piece, k) => (isBlock(piece) ? blockParts(input, piece, sums[k]) : null));
  const blocks = pieces.map((piece) => blockOf(input, piece));
  const entries = nothing();
  const costs = pieces.map((piece, k): LedgerPiece => {
    const sum = sums[k];
    const metres = nothing();
    metres.shifts = sum.made - sum.madeMean;
    const part = parts[k];
    const share = overstoodShare(input, piece);
    if (part) addBlock(metres, part, share);
    else
      addWindow(
        metres,
        piece,
        sum,
        nearRates(pieces, parts, k),
        share > 0 ? share * blockParts(input, piece, sum).low : 0,
      );
    for (const cause of CAUSES) entries[cause] += metres[cause];
    return {
      label: piece.label,
      seconds: sum.seconds,
      block: blocks[k],
      metres,
      offer: offerOf(input.reference, blocks[k]),
    };
  });
  const trim = trimMetres(input);
  entries.trim += trim.value;
  entries.speed -= trim.value;
  const available = sums.reduce((total, sum) => total + sum.best, 0);
  const made = sums.reduce((total, sum) => total + sum.madeMean, 0);
  return { ...withErrors(input, entries, available, made), pieces: costs, overstood: input.overstood };
}

function nothing(): Record<Cause, number> {
  return Object.fromEntries(CAUSES.map((cause) => [cause, 0])) as Record<Cause, number>;
}

function tackAt(sailing: Sailing, piece: RowRange): Tack {
  return sailing.gamma[piece.from] >= 0 ? 'starboard' : 'port';
}

/** Metres to windward that the trim cost over the settled sailing. */
function trimMetres({ sailing, rows, trim }: LedgerInput): Figure {
  if (!trim) return { value: 0, se: 0, sys: 0 };
  let along = 0;
  for (const block of rows.blocks) {
    for (let i = block.from; i < block.to; i++) along += Math.cos(sailing.gamma[i] * RAD) || 0;
  }
  return { value: trim.loss * along, se: trim.sd * along, sys: 0 };
}

/** Windows cut where a stretch from beyond the lay line begins or ends. */
function cutWindows(pieces: readonly Piece[], overstood: readonly Overstood[]): Piece[] {
  const cuts = overstood.flatMap(({ from, to }) => [from, to]);
  return pieces.flatMap((piece) => {
    if (isBlock(piece)) return [piece];
    const inside = cuts.filter((row) => row > piece.from && row < piece.to).sort((a, b) => a - b);
    const ends = [piece.from, ...inside, piece.to];
    return inside.length === 0 ? [piece] : inside.concat(piece.to).map((to, k) => ({ ...piece, from: ends[k], to }));
  });
}

/** Share of a piece's low sailing that was sailed from beyond the lay line. */
function overstoodShare({ overstood }: LedgerInput, piece: RowRange): number {
  return overstood.find(({ from, to }) => piece.from >= from && piece.to <= to)?.share ?? 0;
}

function isBlock(piece: Piece): boolean {
  return piece.label === LABEL.settled || piece.label === LABEL.fetching;
}

/** Longest piece of fetching treated as one block. [s] */
const FETCH_BLOCK = 30;

/** Cuts a leg into settled blocks, fetching blocks and windows; rows in a gap are left out of both sides. */
function piecesOf(rows: LegRows, leg: RowRange): Piece[] {
  const pieces: Piece[] = [];
  const { labels } = rows;
  let k = 0;
  while (k < labels.length) {
    const label = labels[k] as Label;
    let end = k + 1;
    while (end < labels.length && labels[end] === label) end++;
    if (label === LABEL.settled) {
      const from = leg.from + k;
      const blocks = rows.blocks.filter((block) => block.from >= from && block.from < leg.from + end);
      pieces.push(...blocks.map((block) => ({ from: block.from, to: block.to, label })));
    } else if (label === LABEL.fetching) {
      const n = Math.max(1, Math.round((end - k) / FETCH_BLOCK));
      for (let i = 0; i < n; i++) {
        const from = leg.from + k + Math.round((i * (end - k)) / n);
        pieces.push({ from, to: leg.from + k + Math.round(((i + 1) * (end - k)) / n), label });
      }
    } else if (label !== LABEL.gap) pieces.push({ from: leg.from + k, to: leg.from + end, label });
    k = end;
  }
  return pieces;
}

function sumOver(input: LedgerInput, piece: RowRange, meanWind: number): Sums {
  const { sailing, tws, reference } = input;
  let best = 0;
  let made = 0;
  let madeMean = 0;
  let seconds = 0;
  for (let i = piece.from; i < piece.to; i++) {
    const toWind = sailing.ux[i] * eastOf(sailing.twd[i]) + sailing.uy[i] * northOf(sailing.twd[i]);
    const offered = reference.bestVmg(tws[i]);
    if (Number.isNaN(toWind + offered)) continue;
    best += offered;
    made += toWind;
    madeMean += sailing.ux[i] * eastOf(meanWind) + sailing.uy[i] * northOf(meanWind);
    seconds++;
  }
  return { best, made, madeMean, seconds };
}

function blockOf({ sailing, tws }: LedgerInput, piece: RowRange): BlockEstimate {
  return estimateBlock(sailing, tws, { ...piece, tack: tackAt(sailing, piece), spell: 0 }, 0);
}

function offerOf(reference: Reference, { gamma, tws }: BlockEstimate): Offer {
  const along = (at: number): number => reference.speed(at, tws) * Math.cos(at * RAD);
  const vmg = reference.bestVmg(tws);
  return {
    vmg,
    gamma: reference.bestGamma(tws),
    slope: along(gamma + 0.5) - along(gamma - 0.5),
    windSlope: vmg * elasticity(reference, tws),
  };
}

interface BlockParts {
  readonly seconds: number;
  readonly high: number;
  readonly low: number;
  readonly speed: number;
}

function blockParts(input: LedgerInput, piece: Piece, sum: Sums): BlockParts {
  const block = blockOf(input, piece);
  const { reference } = input;
  const astray =
    sum.seconds *
    (reference.bestVmg(block.tws) - reference.speed(block.gamma, block.tws) * Math.cos(block.gamma * RAD));
  const off = Number.isNaN(astray) ? 0 : Math.max(0, astray);
  const isHigh = block.gamma < reference.bestGamma(block.tws);
  return {
    seconds: sum.seconds,
    high: isHigh ? off : 0,
    low: isHigh ? 0 : off,
    speed: sum.best - sum.made - off,
  };
}

function addBlock(entries: Record<Cause, number>, part: BlockParts, overstoodShare: number): void {
  const overstood = overstoodShare * part.low;
  entries.high += part.high;
  entries.low += part.low - overstood;
  entries.overstood += overstood;
  entries.speed += part.speed;
}

interface Rates {
  readonly high: number;
  readonly low: number;
  readonly speed: number;
}

/** Blocks this close to a window say what high, low and speed went on costing in it. [s] */
const NEAR = 90;

/**
 * Mean rates of high, low and speed in the settled blocks within 90 s of a window: of those before it and those after it
 * apart, then of the two, so that a shift in the manoeuvre does not lean the mean. [m/s]
 */
function nearRates(pieces: readonly Piece[], parts: readonly (BlockParts | null)[], at: number): Rates {
  const window = pieces[at];
  const side = (before: boolean): Rates | null => {
    let seconds = 0;
    const sum = { high: 0, low: 0, speed: 0 };
    pieces.forEach((piece, k) => {
      const part = parts[k];
      if (!part || piece.label !== LABEL.settled || piece.from < window.from !== before) return;
      if (piece.to <= window.from - NEAR || piece.from >= window.to + NEAR) return;
      seconds += part.seconds;
      sum.high += part.high;
      sum.low += part.low;
      sum.speed += part.speed;
    });
    return seconds > 0 ? { high: sum.high / seconds, low: sum.low / seconds, speed: sum.speed / seconds } : null;
  };
  const sides = [side(true), side(false)].filter((rates) => rates !== null);
  const mean = (pick: (rates: Rates) => number): number =>
    sides.length > 0 ? sides.reduce((sum, rates) => sum + pick(rates), 0) / sides.length : 0;
  return { high: mean((r) => r.high), low: mean((r) => r.low), speed: mean((r) => r.speed) };
}

const WINDOW_CAUSE: Readonly<Record<number, Cause>> = {
  [LABEL.manoeuvre]: 'manoeuvres',
  [LABEL.unsettled]: 'manoeuvres',
  [LABEL.start]: 'start',
  [LABEL.rounding]: 'start',
};

/** @param overstood What was lost in it by sailing low from beyond the lay line. [m] */
function addWindow(entries: Record<Cause, number>, piece: Piece, sum: Sums, rates: Rates, overstood: number): void {
  const total = sum.best - sum.made;
  if (piece.label === LABEL.stopped) {
    entries.stopped += total;
    return;
  }
  const high = rates.high * sum.seconds;
  const low = overstood > 0 ? 0 : rates.low * sum.seconds;
  const speed = rates.speed * sum.seconds;
  entries.high += high;
  entries.low += low;
  entries.speed += speed;
  entries.overstood += overstood;
  entries[WINDOW_CAUSE[piece.label] ?? 'manoeuvres'] += total - high - low - speed - overstood;
}

/** Least error of shifts: the wandering part of the wind error taken across the course for the whole leg. [m] */
function straying(blocks: readonly BlockEstimate[], { mismatch }: ErrorModel, leg: RowRange): number {
  const across = mean(blocks.map((b) => b.speed * Math.sin(b.gamma * RAD)));
  const { wander, tau } = mismatch.direction;
  return blocks.length > 0 ? 0.7 * wander * RAD * across * Math.sqrt(2 * tau * (leg.to - leg.from)) : 0;
}

function mean(values: readonly number[]): number {
  return values.reduce((sum, value) => sum + value, 0) / values.length;
}

/** When a leg's start is sailed off and its end begins is known to about this. [s] */
const ENDS_ERROR = 1.2;

/** Runs of rows in which the boat was busy. */
function countWindows({ labels }: LegRows): number {
  let n = 0;
  labels.forEach((label, i) => {
    const busy = label === LABEL.manoeuvre || label === LABEL.unsettled;
    if (busy && label !== labels[i - 1]) n++;
  });
  return n;
}

/** How a share of error in wind speed shows in the reference's best VMG: d ln V* / d ln W, about 0.6; from the curve. */
function elasticity(reference: Reference, tws: number): number {
  return Math.log(reference.bestVmg(tws * 1.02) / reference.bestVmg(tws * 0.98)) / Math.log(1.02 / 0.98);
}

/**
 * Errors of the entries. A direction error turns made-good on both tacks in opposite ways, which shows in speed and
 * shifts; a wind speed error scales what was available, which shows in speed; the receiver shows where it was. An anchored
 * reference is moved with the scale of the wind, so that this drops out; in its place comes the error of the anchor.
 */
function withErrors(
  input: LedgerInput,
  entries: Record<Cause, number>,
  available: number,
  made: number,
): Omit<LedgerFigures, 'pieces' | 'overstood'> {
  const { sailing, tws, leg, rows, errors, reference } = input;
  const blocks = rows.blocks.map((block) => estimateBlock(sailing, tws, block, 0));
  const cross = blocks.map((b) => tackSign(b.tack) * b.seconds * b.speed * Math.sin(b.gamma * RAD) * RAD);
  const offered = blocks.map((b) => b.seconds * reference.bestVmg(b.tws) * elasticity(reference, b.tws));
  const direction = correlatedError(blocks, cross, errors.mismatch.direction);
  const windSpeed = correlatedError(blocks, offered, errors.mismatch.speed);
  const sum = (values: readonly number[]): number => values.reduce((total, value) => total + value, 0);
  const seconds = blocks.map((b) => b.seconds);
  const total = Math.max(1, sum(seconds));
  const scale = (leg.to - leg.from) / total;
  const imbalance = sum(cross);
  const centred = cross.map((value, k) => value - (imbalance * seconds[k]) / total);
  const swing = correlatedError(blocks, centred, { ...errors.mismatch.direction, slow: 0 });
  const receiver = Math.SQRT2 * errors.displacementSe(leg.to - leg.from);
  const sysDirection = Math.abs(imbalance) * errors.sysDirection;
  const sysWind = reference.kind === 'best' ? 0 : sum(offered) * scale * errors.sysSpeed;
  const wind = sum(blocks.map((b) => b.seconds * b.tws)) / total;
  const offer = Math.hypot(windSpeed * scale, available * (wind > 0 ? reference.levelSe(wind) : 0));
  const windows = leg.to - leg.from - total;
  const speedRate = total > 0 ? (Math.hypot(direction, windSpeed) / total) * windows : 0;
  const vmg = available / (leg.to - leg.from);
  const tacks = Math.hypot(receiver, 0.5 * speedRate, BOUNDS_ERROR * Math.sqrt(countWindows(rows)) * vmg);
  const ends = Math.hypot(receiver, ENDS_ERROR * vmg);
  const figure = (value: number, se: number, sys = 0): Figure => ({ value, se: value === 0 ? 0 : se, sys });
  const angleRate = Math.abs(entries.high) + Math.abs(entries.low);
  const angle = Math.min(angleRate, Math.hypot(direction, 0.2 * angleRate));
  return {
    available: figure(available, offer, sysWind),
    made: figure(made, Math.hypot(receiver, errors.leastGamma * RAD * Math.abs(sum(cross)))),
    lost: figure(available - made, Math.hypot(receiver, offer), sysWind),
    entries: {
      manoeuvres: figure(entries.manoeuvres, tacks),
      start: figure(entries.start, ends),
      high: figure(entries.high, angle, sysDirection),
      low: figure(entries.low, angle, sysDirection),
      trim: trimMetres(input),
      speed: figure(entries.speed, Math.hypot(direction, offer, receiver), Math.hypot(sysDirection, sysWind)),
      overstood: figure(entries.overstood, Math.hypot(receiver, 0.2 * entries.overstood)),
      stopped: figure(entries.stopped, receiver),
      shifts: figure(entries.shifts, Math.max(swing * scale, straying(blocks, errors, leg), receiver)),
    },
  };
}
