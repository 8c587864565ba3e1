/**
 * Tuning: a few multipliers of the boat model fitted to settled sailing, moving only what the log determines.
 */
import { fitLeastSquares, type Fit } from '../math/least-squares.js';
import { balance } from '../physics/balance.js';
import type { BoatSpec, Tuning } from '../physics/boat-spec.js';
import { makeModel, type ModelOptions } from '../physics/model.js';

/** Means of a settled block. */
export interface TuneBlock {
  /** Speed through the water, true wind at the rig. [m/s] */
  readonly speed: number;
  readonly tws: number;
  /** Course to true wind. [deg] */
  readonly gamma: number;
  /** Measured leeway and heel, magnitudes; NaN where not measured. [deg] */
  readonly leeway: number;
  readonly heel: number;
  /** Blocks of one spell hang together. */
  readonly spell: number;
}

export type TuneName = keyof Tuning;

export interface TunedFactor {
  readonly name: TuneName;
  readonly value: number;
  readonly se: number;
  /** One standard deviation of the prior. */
  readonly priorSd: number;
  /** False: left where it was, for this reason. */
  readonly moved: boolean;
  readonly reason: string;
}

export interface TuneFit {
  readonly tuning: Tuning;
  readonly factors: readonly TunedFactor[];
  /** Correlations of the errors of the factors that were moved, in their order. */
  readonly correlation: readonly (readonly number[])[];
  /** Root mean square of measured less modelled speed before and after, and mean. [m/s] */
  readonly before: { readonly rms: number; readonly mean: number };
  readonly after: { readonly rms: number; readonly mean: number };
  readonly blocks: number;
  readonly spells: number;
}

const NAMES: readonly TuneName[] = ['hullResistance', 'rigDrag', 'rightingMoment', 'foilSlope'];
/** Standard deviation of the logarithm of each factor before the log is seen. Common practice, no source. */
const PRIOR_SD: Tuning = { hullResistance: 0.2, rigDrag: 0.2, rightingMoment: 0.15, foilSlope: 0.2 };
/** What a block's speed is good to before the log tells better, as a share; leeway and heel in degrees. Assumed. */
const FIRST_SIGMA = [0.03, 0.7, 2] as const;
const LEAST_SIGMA = [0.01, 0.2, 0.5] as const;
const HUBER = 2.5;
const MOST_OF_PRIOR = 0.7;
const MOST_CORRELATION = 0.95;
/** Fewer blocks or spells than this tune nothing. */
const LEAST_BLOCKS = 12;
const LEAST_SPELLS = 4;

/**
 * Fits the factors to settled blocks by damped least squares with priors.
 *
 * The residuals are the logarithm of measured over modelled speed, and measured less modelled leeway and heel where
 * there are sensors; errors are clustered by spell. A factor whose error stays above 0.7 of its prior's, or that is told
 * from another with a correlation above 0.95 only, is put back to where it was and the others are fitted again without
 * it. An error in the wind's speed goes into the factors unseen: 2 % of wind is about 4 % of hull resistance.
 *
 * @param boat    Boat as it stands; its factors are where the priors are centred.
 * @param blocks  Settled blocks, over as many winds as can be had.
 * @param options Crew, water, air.
 * @returns Factors with errors, residuals before and after; null where there is too little sailing.
 */
export function fitTuning(boat: BoatSpec, blocks: readonly TuneBlock[], options: ModelOptions = {}): TuneFit | null {
  const used = blocks.filter((block) => block.speed > 0 && block.tws > 0 && Number.isFinite(block.gamma));
  const spells = new Set(used.map((block) => block.spell)).size;
  if (used.length < LEAST_BLOCKS || spells < LEAST_SPELLS) return null;
  const reasons = new Map<TuneName, string>();
  let free = [...NAMES];
  let { fit, sigma } = settled(boat, used, free, options);
  const all = fit;
  for (;;) {
    const bad = undetermined(free, fit);
    if (!bad) break;
    reasons.set(bad.name, bad.reason);
    const before = fit.parameters.filter((_, i) => free[i] !== bad.name);
    free = free.filter((name) => name !== bad.name);
    if (free.length === 0) break;
    ({ fit, sigma } = settled(boat, used, free, options, { sigma, parameters: before }));
  }
  const tuning = free.length > 0 ? tuningOf(boat, free, fit.parameters) : boat.tuning;
  return {
    tuning,
    factors: NAMES.map((name) => factorOf(boat, name, free, fit, all, reasons)),
    correlation: free.length > 0 ? fit.correlation.map((row) => Array.from(row)) : [],
    before: speedResidual(boat, used, options),
    after: speedResidual({ ...boat, tuning }, used, options),
    blocks: used.length,
    spells,
  };
}

function factorOf(
  boat: BoatSpec,
  name: TuneName,
  free: readonly TuneName[],
  fit: Fit,
  all: Fit,
  reasons: ReadonlyMap<TuneName, string>,
): TunedFactor {
  const i = free.indexOf(name);
  const moved = i >= 0;
  const value = boat.tuning[name] * (moved ? Math.exp(fit.parameters[i]) : 1);
  const logSe = moved ? fit.se[i] : all.se[NAMES.indexOf(name)];
  return {
    name,
    value,
    se: value * logSe,
    priorSd: boat.tuning[name] * PRIOR_SD[name],
    moved,
    reason: reasons.get(name) ?? '',
  };
}

/** The factor that the log determines worst, if any is not determined. */
function undetermined(free: readonly TuneName[], fit: Fit): { name: TuneName; reason: string } | null {
  const shares = free.map((name, i) => fit.se[i] / PRIOR_SD[name]);
  const worst = shares.indexOf(Math.max(...shares));
  if (shares[worst] > MOST_OF_PRIOR) return { name: free[worst], reason: 'the log does not determine it' };
  for (let i = 0; i < free.length; i++) {
    for (let j = 0; j < i; j++) {
      if (Math.abs(fit.correlation[i][j]) <= MOST_CORRELATION) continue;
      const [drop, keep] = shares[i] > shares[j] ? [i, j] : [j, i];
      return { name: free[drop], reason: `not told from ${free[keep]}` };
    }
  }
  return null;
}

function tuningOf(boat: BoatSpec, free: readonly TuneName[], logs: ArrayLike<number>): Tuning {
  const tuning = { ...boat.tuning } as Record<TuneName, number>;
  free.forEach((name, i) => (tuning[name] *= Math.exp(logs[i])));
  return tuning;
}

interface Settled {
  readonly fit: Fit;
  /** Spread of each kind of residual. */
  readonly sigma: readonly number[];
}

/** Fits, takes the spread of each kind of residual from the fit, and fits again; from an earlier fit where there is one. */
function settled(
  boat: BoatSpec,
  blocks: readonly TuneBlock[],
  free: readonly TuneName[],
  options: ModelOptions,
  from?: { readonly sigma: readonly number[]; readonly parameters: Float64Array },
): Settled {
  let sigma = from?.sigma ?? FIRST_SIGMA;
  let fit = fitWith(boat, blocks, free, options, sigma, from?.parameters);
  for (let round = from ? 1 : 0; round < 2; round++) {
    const spread = spreads(fit.residuals, sigma);
    sigma = spread.map((value, k) => (value > 0 ? Math.max(value, LEAST_SIGMA[k]) : FIRST_SIGMA[k]));
    fit = fitWith(boat, blocks, free, options, sigma, fit.parameters);
  }
  return { fit, sigma };
}

function fitWith(
  boat: BoatSpec,
  blocks: readonly TuneBlock[],
  free: readonly TuneName[],
  options: ModelOptions,
  sigma: readonly number[],
  start?: Float64Array,
): Fit {
  return fitLeastSquares({
    residuals: (logs) => {
      const model = makeModel({ ...boat, tuning: tuningOf(boat, free, logs) }, options);
      return blocks.flatMap((block) => {
        const state = balance(model, block.tws, block.gamma, block.speed);
        const off = [Math.log(block.speed / state.speed), block.leeway - state.leeway, block.heel - state.heel];
        return off.map((value, k) => value / sigma[k]);
      });
    },
    mean: free.map(() => 0),
    sd: free.map((name) => PRIOR_SD[name]),
    ...(start && { start: Array.from(start) }),
    huber: HUBER,
    clusters: blocks.flatMap((block) => FIRST_SIGMA.map(() => block.spell)),
    maxRounds: 12,
    tolerance: 1e-2,
  });
}

/** Spread of each kind of residual, by the median of sizes; NaN where there are too few. (0 stands for absent.) */
function spreads(residuals: Float64Array, sigma: readonly number[]): number[] {
  return sigma.map((scale, k) => {
    const sizes = Array.from(
      residuals.filter((r, i) => i % sigma.length === k && r !== 0),
      Math.abs,
    );
    if (sizes.length < LEAST_BLOCKS) return NaN;
    sizes.sort((a, b) => a - b);
    return 1.4826 * scale * sizes[sizes.length >> 1];
  });
}

function speedResidual(
  boat: BoatSpec,
  blocks: readonly TuneBlock[],
  options: ModelOptions,
): { rms: number; mean: number } {
  const model = makeModel(boat, options);
  const off = blocks
    .map((block) => block.speed - balance(model, block.tws, block.gamma, block.speed).speed)
    .filter(Number.isFinite);
  const mean = off.reduce((sum, value) => sum + value, 0) / off.length;
  return { mean, rms: Math.sqrt(off.reduce((sum, value) => sum + value * value, 0) / off.length) };
}
