import { holm } from '../math/holm.js';
import { studentTwoSided } from '../math/student.js';
import { pooledCorrelations } from './fleet-noise.js';
import { redundancy, varianceOfMean } from './redundancy.js';
import type { PairComparison } from './pairs.js';
import type { SamplingMean } from './sampling.js';

/** When a difference is called one. */

/** Chance of a false verdict: on speed made good; on height, speed, leeway and sheeting, which are read beside it. */
export const VERDICT_LEVEL = { vmg: 0.05, height: 0.02, speed: 0.02, leeway: 0.02, sheeting: 0.02 } as const;

/** P-values to be held against `VERDICT_LEVEL`; NaN: too few blocks for a verdict. */
export interface PairChances {
  readonly vmg: number;
  readonly height: number;
  readonly speed: number;
}

const KINDS = ['vmg', 'height', 'speed'] as const;

/**
 * P-values of one pair as they are; of several pairs in one report adjusted so that a report on equal boats shows any
 * verdict at all, on any pair, at most one time in twenty.
 *
 * The adjustment is Holm's over pairs and kinds together. It reaches far into the tails, where a pair's own few blocks
 * cannot tell how long its differences persist: that is learnt from all pairs (`pooledCorrelations`), and the larger
 * error and the fewer degrees of freedom count.
 */
export function chancesOf(comparisons: readonly PairComparison[]): PairChances[] {
  if (comparisons.length < 2) {
    return comparisons.map(({ vmg, height, speed }) => ({ vmg: vmg.p, height: height.p, speed: speed.p }));
  }
  const scale = (kind: (typeof KINDS)[number]): number => VERDICT_LEVEL.vmg / VERDICT_LEVEL[kind];
  const adjusted = holm(KINDS.flatMap((kind) => fleetChances(comparisons, kind).map((p) => p * scale(kind))));
  return comparisons.map((_, k) => {
    const [vmg, height, speed] = KINDS.map((kind, row) => adjusted[row * comparisons.length + k] / scale(kind));
    return { vmg, height, speed };
  });
}

/**
 * The same for leeway and sheeting. They are a family of their own: they say where a difference may come from, not who
 * made more to windward, and take nothing of the power of that.
 */
export function trimChancesOf(pairs: readonly { readonly leeway: number; readonly sheeting: number }[]): TrimChances[] {
  if (pairs.length < 2) return pairs.map(({ leeway, sheeting }) => ({ leeway, sheeting }));
  const adjusted = holm([...pairs.map(({ leeway }) => leeway), ...pairs.map(({ sheeting }) => sheeting)]);
  return pairs.map((_, k) => ({ leeway: adjusted[k], sheeting: adjusted[pairs.length + k] }));
}

export interface TrimChances {
  readonly leeway: number;
  readonly sheeting: number;
}

function fleetChances(comparisons: readonly PairComparison[], kind: (typeof KINDS)[number]): number[] {
  const series = comparisons.map((pair) => pair.blocks.map((block) => block[kind]));
  const correlations = pooledCorrelations(series);
  return comparisons.map((pair, k) => withFleetNoise(pair[kind], series[k], correlations));
}

/** n blocks are worth n/J: that many degrees of freedom, and a variance of the mean of J/n of a block's. */
function withFleetNoise(own: SamplingMean, values: readonly number[], correlations: readonly number[]): number {
  if (Number.isNaN(own.p)) return NaN;
  const se = Math.max(own.se, Math.sqrt(varianceOfMean(values, correlations)));
  return studentTwoSided(
    own.value / se,
    Math.max(1, Math.min(own.freedom, values.length / redundancy(values.length, correlations) - 1)),
  );
}
