import { apparentWind } from '../physics/triangle.js';
import { weightedMean } from '../math/stats.js';
import type { BetweenBoat } from './boat.js';
import type { PairBlock } from './blocks.js';
import { samplingMean } from './sampling.js';
import type { TrimMeans } from './trim-means.js';

/** Leeway of one boat less another's over the blocks they share. */

export type LeewayWay = 'heading' | 'masthead' | 'forces';

/** The difference by one way, block by block. */
export interface WayDifference {
  readonly way: LeewayWay;
  /** One value a block, NaN where not known: of each boat, and first less second. [deg] */
  readonly each: readonly [readonly number[], readonly number[]];
  readonly values: readonly number[];
  /** One sd of what is left of the two offsets: opposite on the two tacks, so it counts by how unevenly they were sailed. */
  readonly offset: number;
  /** One sd of what stays whatever the tacks. [deg] */
  readonly stays: number;
  /** Share in the mean of all ways. */
  readonly weight: number;
}

export interface LeewayDifference {
  readonly ways: readonly WayDifference[];
  /** All ways together, one value a block, NaN where not known. [deg] */
  readonly values: readonly number[];
  /** Why there are no ways; empty where there are. */
  readonly reason: string;
}

/** What is left of a compass's and a vane's error in a mean, their offsets apart: common practice, no source. [deg] */
const COMPASS_NOISE = 0.2;
const VANE_NOISE = 0.4;

/**
 * Of what a boat file is good to, the part that boats of one file have in common, and that in which they differ (variances
 * sum to one): common practice, no source.
 */
export const SHARED_OF_FILE = 0.87;
export const OWN_OF_FILE = 0.5;

type Unweighted = Omit<WayDifference, 'weight'>;

/**
 * The difference in leeway, by every instrument that both boats carry; where there is none, by the forces.
 *
 *     by heading    course to leeward of the bow, first less second: a current or a turned frame that both share drops out
 *     by masthead   beta - (apparent wind off the bow): an error of the one wind moves both betas nearly alike
 *     by forces     what the boat file's balance asks for at the speeds and angles sailed: no evidence beyond these
 *
 * The ways are combined by inverse variance of sampling error and offsets together.
 *
 * @param first  First boat.
 * @param second Second boat.
 * @param blocks What they sailed together.
 */
export function leewayDifference(
  first: BetweenBoat,
  second: BetweenBoat,
  blocks: readonly PairBlock[],
): LeewayDifference {
  if (blocks.length === 0) return none('');
  const sensors = [byHeading(first, second, blocks), byMasthead(first, second, blocks)].filter((way) => way !== null);
  const forces = sensors.length === 0 ? byForces(first, second, blocks) : null;
  if (typeof forces === 'string') return none(`${lacking(first, second)}, and ${forces}`);
  const open = forces ? [forces] : sensors;
  const precision = open.map((way) => 1 / totalVariance(way, blocks));
  const sum = precision.reduce((a, b) => a + b, 0);
  const ways = open.map((way, k) => ({ ...way, weight: open.length === 1 ? 1 : precision[k] / sum }));
  return { ways, values: blocks.map((_, k) => combined(ways, k)), reason: '' };
}

const none = (reason: string): LeewayDifference => ({ ways: [], values: [], reason });

/** One sd of what the blocks' spread does not show, over some of them. [deg] */
export function steadyError(ways: readonly WayDifference[], blocks: readonly PairBlock[]): number {
  const seconds = blocks.map((block) => block.seconds);
  const uneven = Math.abs(
    weightedMean(
      blocks.map(({ tack }) => tack),
      seconds,
    ),
  );
  return Math.hypot(...ways.map(({ weight, offset, stays }) => weight * Math.hypot(uneven * offset, stays)));
}

function totalVariance(way: Unweighted, blocks: readonly PairBlock[]): number {
  const known = blocks.flatMap((block, k) => (Number.isNaN(way.values[k]) ? [] : [{ block, value: way.values[k] }]));
  const { se } = samplingMean(
    known.map(({ value }) => value),
    known.map(({ block }) => block.seconds),
    false,
  );
  const steady = steadyError([{ ...way, weight: 1 }], blocks);
  return steady ** 2 + (Number.isNaN(se) ? 1 : se ** 2);
}

function combined(ways: readonly WayDifference[], k: number): number {
  const known = ways.filter(({ values }) => !Number.isNaN(values[k]));
  return weightedMean(
    known.map(({ values }) => values[k]),
    known.map(({ weight }) => weight),
  );
}

function byHeading(first: BetweenBoat, second: BetweenBoat, blocks: readonly PairBlock[]): Unweighted | null {
  const [a, b] = [first.trim?.heading, second.trim?.heading];
  if (!a || !b) return null;
  return way('heading', blocks, ({ drift }) => drift, {
    offset: Math.hypot(a.offsetSe, b.offsetSe),
    stays: Math.SQRT2 * COMPASS_NOISE,
  });
}

function byMasthead(first: BetweenBoat, second: BetweenBoat, blocks: readonly PairBlock[]): Unweighted | null {
  const [a, b] = [first.trim?.masthead, second.trim?.masthead];
  if (!a || !b) return null;
  const leeway = ({ speed, tws, gamma, awa }: TrimMeans): number => apparentWind(speed, tws, gamma).beta - awa;
  return way('masthead', blocks, leeway, {
    offset: Math.hypot(a.offsetSe, b.offsetSe),
    stays: Math.SQRT2 * VANE_NOISE,
  });
}

/** null where it tells nothing of any block. */
function way(
  name: LeewayWay,
  blocks: readonly PairBlock[],
  of: (means: TrimMeans, boat: number) => number,
  errors: { readonly offset: number; readonly stays: number },
): Unweighted | null {
  const each = [0, 1].map((boat) => blocks.map(({ trim }) => of(trim[boat], boat)));
  const values = blocks.map((_, k) => each[0][k] - each[1][k]);
  return values.every(Number.isNaN) ? null : { way: name, each: [each[0], each[1]], values, ...errors };
}

/** The difference by the forces, or why there is none. */
function byForces(first: BetweenBoat, second: BetweenBoat, blocks: readonly PairBlock[]): Unweighted | string {
  const boats = [first, second];
  const files = boats.map((boat) => boat.trim?.forces);
  const [a, b] = files;
  if (!a || !b) return 'no boat file says what the forces make of it';
  const states = boats.map((_, boat) => meanState(blocks, boat));
  if (states.some(({ tws }) => Number.isNaN(tws))) return 'without the wind’s speed the forces cannot';
  const means = [a.leeway(states[0]), b.leeway(states[1])];
  const fast = means.findIndex((mean) => mean === null);
  if (fast >= 0) return `${boats[fast].name} was faster than its boat file allows, so the forces cannot`;
  const [one, other] = means.map((mean) => mean!);
  const alike = a.file === b.file;
  const shared = alike ? SHARED_OF_FILE * a.leewayShare * (one.value - other.value) : 0;
  const own = (share: number): number => (alike ? OWN_OF_FILE : 1) * share;
  const stays = Math.hypot(
    shared,
    one.open,
    other.open,
    own(a.leewayShare) * one.value,
    own(b.leewayShare) * other.value,
  );
  const of = (means: TrimMeans, boat: number): number => (boat === 0 ? a : b).leeway(means)?.value ?? NaN;
  return way('forces', blocks, of, { offset: 0, stays }) ?? 'the forces cannot tell it block by block';
}

/** What a boat sailed over all blocks, by time. */
export function meanState(blocks: readonly PairBlock[], boat: number): { speed: number; tws: number; gamma: number } {
  const seconds = blocks.map((block) => block.seconds);
  const of = (key: 'speed' | 'tws' | 'gamma'): number =>
    weightedMean(
      blocks.map(({ trim }) => trim[boat][key]),
      seconds,
    );
  return { speed: of('speed'), tws: of('tws'), gamma: of('gamma') };
}

/** Which boat has nothing on board to tell leeway by. */
function lacking(first: BetweenBoat, second: BetweenBoat): string {
  const bare = [first, second].filter(({ trim }) => !trim?.heading && !trim?.masthead).map(({ name }) => name);
  if (bare.length === 2) return 'neither log tells it by heading or masthead';
  return bare.length === 1 ? `the log of ${bare[0]} does not tell it` : 'the two logs tell it by different instruments';
}
