import { weightedMean } from '../math/stats.js';
import type { BetweenBoat, TrimForces } from './boat.js';
import type { PairBlock } from './blocks.js';
import { meanState, OWN_OF_FILE, SHARED_OF_FILE } from './leeway.js';

/**
 * Sheeting angle of one boat less another's: from the leeway measured on both, what sheeting angles go with it. Soft as
 * it is on one boat, the difference is firmer: what is wrong with the boat file is wrong on both boats alike.
 */

export interface SheetingDifference {
  /** One value a block, about the mean of the posterior. [deg] */
  readonly values: readonly number[];
  /** Spread of the posterior of the difference. [deg] */
  readonly sd: number;
  /** Why there is none; empty where there is. */
  readonly reason: string;
}

/** What was measured of each boat over the blocks: leeway, positive to leeward, and one sd of it. [deg] */
export interface MeasuredLeeway {
  readonly value: number;
  readonly se: number;
}

/** The difference is shown where its spread fell to this share of what it was before, as for one boat. */
const NARROWED = 2 / 3;
/** A boat further from what was believed before than so many standard deviations tells of the boat file, not of the boom. */
const MOST_ASTRAY = 2;
/** The part of the boat file's error of leeway that boats of one file share, in standard deviations. */
const SHARED = Array.from({ length: 9 }, (_, k) => (k - 4) / 1.6);

/**
 * Posterior of the difference of two booms.
 *
 * Each boom's prior is normal about the best trim at the speed it sailed; its leeway is that of the boat file, off by a
 * share that boats of one file have for the most part in common:
 *   p(s1, s2) = sum over e of p(e) prod_i prior_i(s_i) N(leeway_i; (1 + e) lambda_i(s_i), se_i)
 * The speed is left out as evidence: it stands beside in the same table.
 *
 * @param boats    The two, with their boat files.
 * @param blocks   What they sailed together.
 * @param measured Mean leeway of each over the blocks, by its instruments.
 * @param beyond   By how much the difference in leeway of each block is off its mean, NaN where not known. [deg]
 */
export function sheetingDifference(
  boats: readonly [BetweenBoat, BetweenBoat],
  blocks: readonly PairBlock[],
  measured: readonly [MeasuredLeeway, MeasuredLeeway],
  beyond: readonly number[],
): SheetingDifference {
  const [a, b] = boats.map(({ trim }) => trim?.forces);
  if (!a || !b) return none('no boat file says what goes with its leeway');
  const booms = [boomOf(a, blocks, 0), boomOf(b, blocks, 1)];
  if (!booms[0] || !booms[1]) return none('without the wind’s speed nothing says what goes with the leeway');
  const pair = [booms[0], booms[1]] as const;
  const shared = a.file === b.file;
  const at = posterior(pair, measured, shared);
  const file = 'is not one that its boat file has for any usual trim';
  if (Number.isNaN(at.sd)) return none(`the leeway of one of the boats ${file}`);
  const before = Math.hypot(booms[0].priorSd, booms[1].priorSd);
  if (!(at.sd <= NARROWED * before)) return none('the logs say too little of it');
  const astray = pair.findIndex((boom, k) => Math.abs(at.means[k] - boom.priorMean) >= MOST_ASTRAY * boom.priorSd);
  if (astray >= 0) return none(`the leeway of ${boats[astray].name} ${file}`);
  const slope = slopeOf(pair, measured, shared);
  return { values: beyond.map((off) => at.difference + slope * off), sd: at.sd, reason: '' };
}

const none = (reason: string): SheetingDifference => ({ values: [], sd: NaN, reason });

/** One boat's angles with their prior weights and the leeway that goes with each. */
interface Boom {
  readonly priorMean: number;
  readonly priorSd: number;
  readonly angles: readonly number[];
  readonly weights: readonly number[];
  readonly leeway: readonly number[];
  readonly share: number;
}

function boomOf(forces: TrimForces, blocks: readonly PairBlock[], boat: number): Boom | null {
  const state = meanState(blocks, boat);
  const prior = Number.isNaN(state.tws) ? null : forces.sheetingPrior(state);
  if (!prior) return null;
  const angles = prior.points.map(({ sheeting }) => sheeting);
  return {
    priorMean: prior.mean,
    priorSd: prior.sd,
    angles,
    weights: prior.points.map(({ weight }) => weight),
    leeway: angles.map((angle) => forces.leewayAt(state, angle)),
    share: forces.leewayShare,
  };
}

interface Posterior {
  readonly difference: number;
  readonly sd: number;
  readonly means: readonly [number, number];
}

/** Sums over the shared error; boats of two files have each their own, in the width of their likelihoods. */
function posterior(booms: readonly [Boom, Boom], measured: readonly MeasuredLeeway[], shared: boolean): Posterior {
  let total = 0;
  const sum = { a: 0, b: 0, difference: 0, square: 0 };
  for (const e of shared ? SHARED : [0]) {
    const [a, b] = booms.map((boom, k) =>
      momentsOf(boom, measured[k], shared ? e * SHARED_OF_FILE * boom.share : 0, shared),
    );
    const weight = Math.exp(-0.5 * e * e) * a.evidence * b.evidence;
    total += weight;
    sum.a += weight * a.mean;
    sum.b += weight * b.mean;
    sum.difference += weight * (a.mean - b.mean);
    sum.square += weight * ((a.mean - b.mean) ** 2 + a.variance + b.variance);
  }
  const difference = sum.difference / total;
  return {
    difference,
    sd: Math.sqrt(sum.square / total - difference ** 2),
    means: [sum.a / total, sum.b / total],
  };
}

function momentsOf(
  boom: Boom,
  { value, se }: MeasuredLeeway,
  error: number,
  shared: boolean,
): { evidence: number; mean: number; variance: number } {
  const weights = boom.angles.map((_, i) => {
    const own = (shared ? OWN_OF_FILE : 1) * boom.share * boom.leeway[i];
    const off = (1 + error) * boom.leeway[i] - value;
    return boom.weights[i] * Math.exp((-0.5 * off * off) / (se * se + own * own));
  });
  const evidence = weights.reduce((all, weight) => all + weight, 0);
  const mean = weightedMean(boom.angles, weights);
  const variance = weightedMean(
    boom.angles.map((angle) => (angle - mean) ** 2),
    weights,
  );
  return { evidence, mean, variance };
}

/** By how much the difference of the booms follows one of the leeways. [deg a deg] */
function slopeOf(booms: readonly [Boom, Boom], measured: readonly MeasuredLeeway[], shared: boolean): number {
  const step = 0.1;
  const at = (by: number): number =>
    posterior(
      booms,
      measured.map(({ value, se }, k) => ({ value: value + (k === 0 ? by : -by) / 2, se })),
      shared,
    ).difference;
  return (at(step) - at(-step)) / (2 * step);
}
