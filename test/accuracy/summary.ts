/** Errors as a few figures: how many, how large, how large against what was stated. */
import type { Measured, Sample } from './measure.js';

export interface Summary {
  readonly n: number;
  /** Of the errors with their sign; of their sizes; root mean square. */
  readonly bias: number;
  readonly mean: number;
  readonly p50: number;
  readonly p90: number;
  readonly max: number;
  /** Root mean square of error over stated error; NaN when none was stated. */
  readonly ratio: number;
  /** The same with the calibration shift added in quadrature. */
  readonly ratioSys: number;
}

/** Errors that exist: where the truth has no settled sailing (one tack hardly sailed) there is nothing to err from. */
const known = (values: readonly number[]): number[] => values.filter((v) => !Number.isNaN(v));

const average = (values: readonly number[]): number =>
  values.length > 0 ? values.reduce((sum, v) => sum + v, 0) / values.length : NaN;

/** Smallest value that at least the share p of the sorted values does not exceed. */
function quantile(sorted: readonly number[], p: number): number {
  return sorted.length > 0 ? sorted[Math.max(0, Math.ceil(p * sorted.length) - 1)] : NaN;
}

export function summarise(all: readonly number[]): Summary {
  const errors = known(all);
  const sizes = errors.map(Math.abs).sort((a, b) => a - b);
  return {
    n: errors.length,
    bias: average(errors),
    mean: average(sizes),
    p50: quantile(sizes, 0.5),
    p90: quantile(sizes, 0.9),
    max: sizes.at(-1) ?? NaN,
    ratio: NaN,
    ratioSys: NaN,
  };
}

/**
 * Sizes over the truth's own settled seconds; `own` the mean size over the seconds the debrief called settled. The
 * ratios take those too: a stated error is of the value as sailed in that stretch.
 */
export function summariseSamples(samples: readonly Sample[]): Summary & { readonly own: number } {
  const stated = samples.filter((s) => s.se !== null && s.se > 0 && Number.isFinite(s.errorOwn));
  const rms = (ratio: (s: Sample) => number): number => Math.sqrt(average(stated.map((s) => ratio(s) ** 2)));
  return {
    ...summarise(samples.map((s) => s.error)),
    own: average(known(samples.map((s) => Math.abs(s.errorOwn)))),
    ratio: rms((s) => s.errorOwn / s.se!),
    ratioSys: rms((s) => s.errorOwn / Math.hypot(s.se!, s.sys)),
  };
}

/** Harmonic mean of precision and recall: 1 when every tack is found and none is made up. */
export function f1({ hits, missed, extra }: Measured['tacks']): number {
  return (2 * hits) / (2 * hits + missed + extra);
}
