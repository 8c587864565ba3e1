import { weightedMean } from '../math/stats.js';
import { studentTwoSided } from '../math/student.js';
import type { BetweenBoat } from './boat.js';
import type { PairBlock } from './blocks.js';
import { leewayDifference, steadyError, type LeewayDifference, type LeewayWay, type WayDifference } from './leeway.js';
import { samplingMean, type SamplingMean } from './sampling.js';
import { sheetingDifference, type SheetingDifference } from './sheeting.js';

/** Leeway and sheeting of two boats beside the difference in speed made good: what it may come from, to be tested. */

/** A mean over blocks whose spread does not show the whole of its error. */
export interface TrimMean {
  /** With the sampling error. [deg] */
  readonly mean: SamplingMean;
  /** One sd of what does not average out: offsets, noise of compass and vane, the boat file. [deg] */
  readonly sys: number;
  /** Two-sided p-value against no difference, both errors counted; NaN for too few blocks, and where only forces tell it. */
  readonly p: number;
}

export interface TrimComparison {
  readonly leeway: LeewayDifference;
  readonly sheeting: SheetingDifference;
}

/** Compares the trim of two boats over what they sailed together. */
export function compareTrim(first: BetweenBoat, second: BetweenBoat, blocks: readonly PairBlock[]): TrimComparison {
  const leeway = leewayDifference(first, second, blocks);
  return { leeway, sheeting: sheetingOf(first, second, blocks, leeway) };
}

function sheetingOf(
  first: BetweenBoat,
  second: BetweenBoat,
  blocks: readonly PairBlock[],
  leeway: LeewayDifference,
): SheetingDifference {
  const nothing = (reason: string): SheetingDifference => ({ values: [], sd: NaN, reason });
  if (blocks.length === 0) return nothing('');
  if (!measured(leeway.ways)) return nothing('leeway would have to be measured on both boats');
  const { mean, sys } = leewayMean(leeway, blocks)!;
  // Half the variance each: what the blocks do not tell apart is shared out.
  const se = Math.hypot(Number.isNaN(mean.se) ? 1 : mean.se, sys) / Math.SQRT2;
  const of = (boat: 0 | 1): { value: number; se: number } => ({ value: ownLeeway(leeway.ways, blocks, boat), se });
  const beyond = leeway.values.map((value) => value - mean.value);
  return sheetingDifference([first, second], blocks, [of(0), of(1)], beyond);
}

/** Mean leeway of one of the boats by the ways combined. [deg] */
function ownLeeway(ways: readonly WayDifference[], blocks: readonly PairBlock[], boat: 0 | 1): number {
  const means = ways.map(({ each }) => knownMean(each[boat], blocks));
  return weightedMean(
    means,
    ways.map(({ weight }) => weight),
  );
}

function knownMean(values: readonly number[], blocks: readonly PairBlock[]): number {
  const rows = knownRows(values);
  return weightedMean(
    rows.map((k) => values[k]),
    rows.map((k) => blocks[k].seconds),
  );
}

const knownRows = (values: readonly number[]): number[] => values.flatMap((v, k) => (Number.isNaN(v) ? [] : [k]));

/** Whether an instrument tells it, and not the forces alone. */
export function measured(ways: readonly { readonly way: LeewayWay }[]): boolean {
  return ways.some(({ way }) => way !== 'forces');
}

/** The difference in leeway over all blocks, or over some of them; null where there is none. */
export function leewayMean(
  { ways, values }: LeewayDifference,
  blocks: readonly PairBlock[],
  wanted: (block: PairBlock) => boolean = () => true,
): TrimMean | null {
  const used = blocks.filter(wanted);
  return trimMean(values, blocks, wanted, steadyError(ways, used), measured(ways));
}

/** The same of sheeting. */
export function sheetingMean(
  { values, sd }: SheetingDifference,
  blocks: readonly PairBlock[],
  wanted: (block: PairBlock) => boolean = () => true,
): TrimMean | null {
  const whole = trimMean(values, blocks, () => true, 0, true);
  if (!whole) return null;
  const { se } = whole.mean;
  const sys = Math.sqrt(Math.max(0, sd ** 2 - (Number.isNaN(se) ? 0 : se ** 2)));
  return trimMean(values, blocks, wanted, sys, true);
}

function trimMean(
  values: readonly number[],
  blocks: readonly PairBlock[],
  wanted: (block: PairBlock) => boolean,
  sys: number,
  evidence: boolean,
): TrimMean | null {
  const rows = knownRows(values).filter((k) => wanted(blocks[k]));
  if (rows.length === 0) return null;
  const mean = samplingMean(
    rows.map((k) => values[k]),
    rows.map((k) => blocks[k].seconds),
    false,
  );
  const told = evidence && !Number.isNaN(mean.p);
  return { mean, sys, p: told ? studentTwoSided(mean.value / Math.hypot(mean.se, sys), mean.freedom) : NaN };
}
