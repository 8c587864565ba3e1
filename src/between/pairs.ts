import { toKnots } from '../math/units.js';
import type { PairLeg, PairResult, Quantity } from '../result/result.js';
import { pairBlocks, PAIRING, type PairBlock, type PairingOptions } from './blocks.js';
import type { BetweenBoat } from './boat.js';
import { LEAST_BLOCKS, samplingMean, type SamplingMean } from './sampling.js';
import { meanWindByLap } from './mean-wind.js';
import { compareTrim, leewayMean, measured, sheetingMean, type TrimComparison, type TrimMean } from './trim.js';
import { chancesOf, trimChancesOf, VERDICT_LEVEL, type PairChances, type TrimChances } from './verdicts.js';

/** Two boats against each other on what they sailed settled, on the same tack and close by. */

/** A comparison before its verdicts: first boat less second, m/s and degrees. */
export interface PairComparison {
  readonly boats: readonly [string, string];
  readonly blocks: readonly PairBlock[];
  readonly vmg: SamplingMean;
  readonly height: SamplingMean;
  readonly speed: SamplingMean;
  readonly gamma: SamplingMean;
  /** Metres gained to windward of the mean wind in the shared blocks. */
  readonly gain: number;
  readonly seconds: number;
  readonly trim: TrimComparison;
}

/**
 * Compares two boats.
 *
 * Each 30 s block of settled sailing on one tack, close by, gives a difference in speed made good and its two parts, by
 * course angle and by speed, against one shared wind. Blocks are the sample: see `samplingMean`.
 *
 * @param first   First boat.
 * @param second  Second boat: values are first less second.
 * @param options Distances and lengths.
 * @returns Means over the blocks with their sampling errors.
 */
export function comparePair(
  first: BetweenBoat,
  second: BetweenBoat,
  options: Partial<PairingOptions> = {},
): PairComparison {
  const all = { ...PAIRING, ...options };
  const blocks = pairBlocks(first, second, meanWindByLap(first, second, all.shift), all);
  const trim = compareTrim(first, second, blocks);
  return { boats: [first.name, second.name], blocks, ...summarise(blocks), trim };
}

type Summary = Omit<PairComparison, 'boats' | 'trim'>;

function summarise(blocks: readonly PairBlock[]): Omit<Summary, 'blocks'> {
  const seconds = blocks.map((block) => block.seconds);
  const of = (key: 'vmg' | 'height' | 'speed' | 'gamma'): SamplingMean =>
    samplingMean(
      blocks.map((block) => block[key]),
      seconds,
      key === 'vmg',
    );
  return {
    vmg: of('vmg'),
    height: of('height'),
    speed: of('speed'),
    gamma: of('gamma'),
    gain: blocks.reduce((total, block) => total + block.gain, 0),
    seconds: seconds.reduce((total, length) => total + length, 0),
  };
}

/**
 * All pairs of a fleet, in the order given, with verdicts that hold for the report as a whole.
 *
 * @param boats   Two boats or more.
 * @param options Distances and lengths; `only` limits the comparison to the boats named.
 * @returns One result a pair.
 */
export function comparePairs(
  boats: readonly BetweenBoat[],
  options: Partial<PairingOptions> & { only?: readonly string[] } = {},
): { results: PairResult[]; comparisons: PairComparison[] } {
  const { only, ...pairing } = options;
  const comparisons = pairsOf(boats, only).map(([first, second]) => comparePair(first, second, pairing));
  const chances = chancesOf(comparisons);
  const trims = trimChancesOf(
    comparisons.map(({ trim, blocks }) => ({
      leeway: leewayMean(trim.leeway, blocks)?.p ?? NaN,
      sheeting: sheetingMean(trim.sheeting, blocks)?.p ?? NaN,
    })),
  );
  const results = comparisons.map((pair, k) => pairResult(pair, { ...chances[k], ...trims[k] }));
  return { results, comparisons };
}

/** Every two boats once, in the order given. */
export function pairsOf(boats: readonly BetweenBoat[], only?: readonly string[]): [BetweenBoat, BetweenBoat][] {
  const wanted = only ? boats.filter(({ name }) => only.includes(name)) : boats;
  return wanted.flatMap((first, i) => wanted.slice(i + 1).map((second): [BetweenBoat, BetweenBoat] => [first, second]));
}

function pairResult(pair: PairComparison, p: PairChances & TrimChances): PairResult {
  const winner = (value: number, chance: number, level: number): string | null =>
    chance <= level ? pair.boats[value > 0 ? 0 : 1] : null;
  const trim = trimFigures(pair, pair.blocks);
  const more = (q: Quantity | null, kind: keyof TrimChances): string | null =>
    q && winner(q.value, p[kind], VERDICT_LEVEL[kind]);
  return {
    boats: pair.boats,
    ...figures(pair),
    ...trim,
    settled_s: pair.seconds,
    faster: winner(pair.vmg.value, p.vmg, VERDICT_LEVEL.vmg),
    higher: winner(pair.height.value, p.height, VERDICT_LEVEL.height),
    quicker: winner(pair.speed.value, p.speed, VERDICT_LEVEL.speed),
    more_leeway: more(trim.leeway_difference_deg, 'leeway'),
    sheeted_wider: more(trim.sheeting_difference_deg, 'sheeting'),
    leeway_ways: waysOf(pair),
    legs: legResults(pair),
    notes: notes(pair),
  };
}

type TrimKeys = 'leeway_difference_deg' | 'sheeting_difference_deg';
type Figures = Omit<PairLeg, 'lap' | TrimKeys>;

function figures(pair: Summary): Figures {
  return {
    vmg_difference_kn: knots(pair.vmg),
    height_part_kn: knots(pair.height),
    speed_part_kn: knots(pair.speed),
    gamma_difference_deg: quantity(pair.gamma.value, pair.gamma.se),
    gain_m: quantity(pair.gain, pair.vmg.se * pair.seconds),
    blocks: pair.blocks.length,
  };
}

/** Leeway and sheeting over some of the blocks of a pair. */
function trimFigures({ trim, blocks }: PairComparison, of: readonly PairBlock[]): Record<TrimKeys, Quantity | null> {
  const wanted = (block: PairBlock): boolean => of.includes(block);
  const told = (mean: TrimMean | null, basis: Quantity['basis']): Quantity | null => {
    const q = mean && quantity(mean.mean.value, mean.mean.se);
    return q && { ...q, sys: mean.sys, basis };
  };
  const way = trim.leeway.ways[0]?.way ?? 'forces';
  return {
    leeway_difference_deg: told(leewayMean(trim.leeway, blocks, wanted), LEEWAY_BASIS[way]),
    sheeting_difference_deg: told(sheetingMean(trim.sheeting, blocks, wanted), 'inferred'),
  };
}

const LEEWAY_BASIS = { heading: 'measured', masthead: 'derived', forces: 'inferred' } as const;

/** The difference in leeway by each way, as the leg of a boat has it. */
function waysOf({ trim, blocks }: PairComparison): NonNullable<PairResult['leeway_ways']> {
  return trim.leeway.ways.map((way) => {
    const { mean, sys } = leewayMean({ ways: [{ ...way, weight: 1 }], values: way.values, reason: '' }, blocks)!;
    const q = quantity(mean.value, mean.se);
    return {
      way: way.way,
      leeway_difference_deg: q && { ...q, sys, basis: LEEWAY_BASIS[way.way] },
      weight: way.weight,
    };
  });
}

function legResults(pair: PairComparison): PairLeg[] {
  const laps = [...new Set(pair.blocks.map((block) => block.lap))].sort((a, b) => a - b);
  return laps.map((lap) => {
    const own = pair.blocks.filter((block) => block.lap === lap);
    return { lap, ...figures({ blocks: own, ...summarise(own) }), ...trimFigures(pair, own) };
  });
}

function knots(mean: SamplingMean): Quantity | null {
  return quantity(toKnots(mean.value), toKnots(mean.se));
}

function quantity(value: number, se: number): Quantity | null {
  if (!Number.isFinite(value)) return null;
  return { value, se: Number.isFinite(se) ? se : null, basis: 'derived' };
}

function notes({ blocks, trim }: PairComparison): string[] {
  const n = blocks.length;
  if (n === 0) return ['never settled on the same tack within reach of each other: nothing to compare'];
  const few = n < LEAST_BLOCKS;
  return [
    ...(few ? [`only ${n} blocks sailed together: too few for a verdict (${LEAST_BLOCKS} needed)`] : []),
    ...(trim.leeway.reason ? [`leeway: not determined: ${trim.leeway.reason}`] : []),
    ...(trim.sheeting.reason ? [`sheeting: not determined: ${trim.sheeting.reason}`] : []),
    ...(trim.leeway.ways.length > 0 && !measured(trim.leeway.ways)
      ? ['leeway: by the forces alone, from the speeds and angles above: no evidence beyond them, and no verdict']
      : []),
  ];
}
