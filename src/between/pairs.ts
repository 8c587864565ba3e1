import { toKnots } from '../math/units.js';
import type { PairLeg, PairResult, Quantity } from '../result/result.js';
import { pairBlocks, PAIRING, type PairBlock, type PairingOptions } from './blocks.js';
import type { BetweenBoat } from './boat.js';
import { LEAST_BLOCKS, samplingMean, type SamplingMean } from './sampling.js';
import { meanWindByLap } from './mean-wind.js';
import { chancesOf, VERDICT_LEVEL, type PairChances } from './verdicts.js';

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
  return { boats: [first.name, second.name], blocks, ...summarise(blocks) };
}

function summarise(blocks: readonly PairBlock[]): Omit<PairComparison, 'boats' | 'blocks'> {
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
  const results = comparisons.map((pair, k) => pairResult(pair, chances[k]));
  return { results, comparisons };
}

/** Every two boats once, in the order given. */
export function pairsOf(boats: readonly BetweenBoat[], only?: readonly string[]): [BetweenBoat, BetweenBoat][] {
  const wanted = only ? boats.filter(({ name }) => only.includes(name)) : boats;
  return wanted.flatMap((first, i) => wanted.slice(i + 1).map((second): [BetweenBoat, BetweenBoat] => [first, second]));
}

function pairResult(pair: PairComparison, p: PairChances): PairResult {
  const winner = (mean: SamplingMean, chance: number, level: number): string | null =>
    chance <= level ? pair.boats[mean.value > 0 ? 0 : 1] : null;
  return {
    boats: pair.boats,
    ...figures(pair),
    settled_s: pair.seconds,
    faster: winner(pair.vmg, p.vmg, VERDICT_LEVEL.vmg),
    higher: winner(pair.height, p.height, VERDICT_LEVEL.height),
    quicker: winner(pair.speed, p.speed, VERDICT_LEVEL.speed),
    legs: legResults(pair.blocks),
    notes: notes(pair),
  };
}

type Figures = Omit<PairLeg, 'lap'>;

function figures(pair: Omit<PairComparison, 'boats'>): Figures {
  return {
    vmg_difference_kn: knots(pair.vmg),
    height_part_kn: knots(pair.height),
    speed_part_kn: knots(pair.speed),
    gamma_difference_deg: quantity(pair.gamma.value, pair.gamma.se),
    gain_m: quantity(pair.gain, pair.vmg.se * pair.seconds),
    blocks: pair.blocks.length,
  };
}

function legResults(blocks: readonly PairBlock[]): PairLeg[] {
  const laps = [...new Set(blocks.map((block) => block.lap))].sort((a, b) => a - b);
  return laps.map((lap) => {
    const own = blocks.filter((block) => block.lap === lap);
    return { lap, ...figures({ blocks: own, ...summarise(own) }) };
  });
}

function knots(mean: SamplingMean): Quantity | null {
  return quantity(toKnots(mean.value), toKnots(mean.se));
}

function quantity(value: number, se: number): Quantity | null {
  if (!Number.isFinite(value)) return null;
  return { value, se: Number.isFinite(se) ? se : null, basis: 'derived' };
}

function notes(pair: PairComparison): string[] {
  const n = pair.blocks.length;
  if (n === 0) return ['never settled on the same tack within reach of each other: nothing to compare'];
  if (n < LEAST_BLOCKS) return [`only ${n} blocks sailed together: too few for a verdict (${LEAST_BLOCKS} needed)`];
  return [];
}
