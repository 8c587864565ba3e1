/**
 * Are the instruments to be believed: what must be added to compass, masthead and wind station so that all that was
 * logged agrees, with leeway and current found on the way.
 *
 * Per block, tack s = +1 on starboard:
 *     U = V_ground - C                 water velocity
 *     bow = dir U + s leeway
 *     A = wind over ground - V_ground  apparent wind, free of current and leeway
 *     heading + c = bow,   masthead angle + a = from(A) - bow,   apparent speed = |A|,   water speed = |U|
 * and the station's wind is direction + d, speed x e^m.
 *
 * Who knows what: heading and masthead together give a + c and d, with no leeway or current in them. Heading less water
 * course gives c (the same on both tacks) and leeway (opposite on them). d is told from a only by how beta follows
 * gamma (0.72 of a degree for a degree upwind, about 1.4 downwind).
 */
import { directionOf, eastOf, northOf, wrap180 } from '../math/angles.js';
import { fitLeastSquares, type Fit } from '../math/least-squares.js';
import { lengthOf } from '../math/length.js';
import { KNOT } from '../math/units.js';

/** Vector means over some 20 s of steady sailing; NaN = not logged. */
export interface ReconcileBlock {
  /** +1 starboard tack (wind over the starboard side), -1 port. */
  readonly tack: 1 | -1;
  readonly upwind: boolean;
  /** Blocks of one stretch between manoeuvres hang together. */
  readonly spell: number;
  /** Velocity over ground. [m/s] */
  readonly east: number;
  readonly north: number;
  /** True heading as logged. [deg] */
  readonly heading: number;
  /** Apparent wind off the bow as logged, signed, positive starboard. [deg] */
  readonly mastheadAngle: number;
  /** Apparent wind speed as logged. [m/s] */
  readonly apparentSpeed: number;
  /** Speed through the water as logged. [m/s] */
  readonly waterSpeed: number;
  /** Wind over ground at the boat, from the station: where from [deg], speed [m/s]. */
  readonly windFrom: number;
  readonly windSpeed: number;
}

export interface ReconcileOptions {
  /** Current where it was given, as a velocity. [m/s] Absent: an unknown. */
  readonly current?: { readonly east: number; readonly north: number };
  /**
   * What is known of the station's direction offset otherwise, such as from the boats' courses being alike on both
   * tacks, in place of the wide prior. [deg] It tells the masthead's offset from the station's.
   */
  readonly windDirection?: { readonly value: number; readonly se: number };
}

export type ReconcileName =
  | 'compass'
  | 'masthead'
  | 'windDirection'
  | 'windScale'
  | 'currentEast'
  | 'currentNorth'
  | 'leewayUpwind'
  | 'leewayDownwind';

export interface Reconciled {
  /** What must be added to the reading (for `windScale` to the logarithm of the speed), or the quantity itself. */
  readonly value: number;
  readonly se: number;
  /** False: the log does not tell it; to be shown as not separable and not to be applied. */
  readonly applied: boolean;
  /** Why not, in words; empty when applied. */
  readonly reason: string;
}

export interface Reconciliation {
  readonly estimates: Readonly<Record<ReconcileName, Reconciled>>;
  /** Root mean square of what is left, by observation; NaN where there was none. [deg], [m/s] */
  readonly residual: {
    readonly heading: number;
    readonly masthead: number;
    readonly apparentSpeed: number;
    readonly waterSpeed: number;
  };
  /** How much larger the residual is with the current forced to zero; 1 where it was given or is not needed. */
  readonly withoutCurrent: number;
  readonly blocks: number;
  readonly warnings: readonly { readonly code: 'not-separable' | 'current-unknown'; readonly message: string }[];
}

/** Unknowns of the fit: besides those that are reported, how differently the station sees the wind of beats and runs. */
type Unknown = ReconcileName | 'windSplit';

const REPORTED: readonly ReconcileName[] = [
  'compass',
  'masthead',
  'windDirection',
  'windScale',
  'currentEast',
  'currentNorth',
  'leewayUpwind',
  'leewayDownwind',
];
const NAMES: readonly Unknown[] = [...REPORTED, 'windSplit'];

/**
 * Prior means and standard deviations: offsets 10 deg, scale 5 %, current 1 kn each way, leeway 4 +- 4 and 0.7 +- 0.7.
 * The boats beat and run over different water, so even a true station is off by another amount on each, half a
 * difference of 2 degrees either way: masthead and station are told apart only by beats against runs, and no better.
 */
const MEAN = [0, 0, 0, 0, 0, 0, 4, 0.7, 0] as const;
const SD = [10, 10, 10, 0.05, KNOT, KNOT, 4, 0.7, 1] as const;

/** Names for people. */
const SAID: Readonly<Record<Unknown, string>> = {
  compass: 'the compass offset',
  masthead: 'the masthead offset',
  windDirection: "the wind station's direction offset",
  windScale: "the wind station's speed scale",
  currentEast: 'the current to the east',
  currentNorth: 'the current to the north',
  leewayUpwind: 'leeway upwind',
  leewayDownwind: 'leeway downwind',
  windSplit: 'a wind that differs between beats and runs',
};

/** Observations, and what each is good to before the log tells better. [deg], [m/s] Common practice, no source. */
const KINDS = ['heading', 'masthead', 'apparentSpeed', 'waterSpeed'] as const;
const FIRST_SIGMA = [1.5, 3, 0.4, 0.15] as const;
/** No observation is believed better than this. */
const LEAST_SIGMA = [0.15, 0.3, 0.03, 0.02] as const;

/** Residuals beyond so many standard deviations count in proportion. */
const HUBER = 2.5;
/** Fewer blocks than this tell nothing. */
const LEAST_BLOCKS = 8;
/** An estimate is applied where its error is below this share of the prior's, */
const MOST_OF_PRIOR = 0.7;
/** and no correlation is above this, unless its error is small all the same (then a correlation does no harm). */
const MOST_CORRELATION = 0.95;
const SMALL_OF_PRIOR = 0.35;
/** The current is believed to be there when leaving it out makes the residual so much larger. */
const CURRENT_RATIO = 1.5;

/**
 * Reconciles a boat's log: robust least squares over all settled blocks, upwind and down, both tacks.
 *
 * Standard errors come from residuals clustered by spell. What the log cannot tell apart is reported and not applied:
 * an error above 0.7 of the prior's or a correlation above 0.95; compass and leeway with one tack only; leeway without
 * a heading; leeway and current with neither water speed nor a given current; masthead and station direction when all
 * is upwind without apparent wind speed. Where leaving out the (unknown) current makes the residual half as large
 * again, no leeway is claimed.
 *
 * @param blocks  Vector means, 20 s or so, no manoeuvres.
 * @param options Current where known. [m/s]
 * @returns Offsets to be added [deg], current [m/s], leeway positive to leeward [deg], with errors; null where there
 *   are too few blocks or nothing on board to reconcile.
 */
export function reconcile(blocks: readonly ReconcileBlock[], options: ReconcileOptions = {}): Reconciliation | null {
  const used = blocks.filter(usable);
  if (used.length < LEAST_BLOCKS) return null;
  const free = NAMES.filter((name) => !options.current || !name.startsWith('current'));
  const fixed = fixedValues(options);
  const priors = priorsOf(options);
  const { fit, sigma } = settledFit(used, free, fixed, priors);
  const withoutCurrent = options.current ? 1 : currentNeed(used, fixed, fit, sigma, priors);
  const claims = claimsOf(used, free, fit, options, withoutCurrent);
  const spread = rms(used, fullValues(free, fixed, fit.parameters));
  return {
    estimates: estimatesOf(free, fixed, fit, claims),
    residual: { heading: spread[0], masthead: spread[1], apparentSpeed: spread[2], waterSpeed: spread[3] },
    withoutCurrent,
    blocks: used.length,
    warnings: warningsOf(claims, withoutCurrent),
  };
}

function usable(block: ReconcileBlock): boolean {
  const instrument =
    Number.isFinite(block.heading) ||
    Number.isFinite(block.mastheadAngle) ||
    Number.isFinite(block.apparentSpeed) ||
    Number.isFinite(block.waterSpeed);
  return instrument && Number.isFinite(block.east + block.north);
}

type Values = Record<Unknown, number>;

function fixedValues({ current }: ReconcileOptions): Values {
  const values = Object.fromEntries(NAMES.map((name, i) => [name, MEAN[i]])) as Values;
  return { ...values, currentEast: current?.east ?? 0, currentNorth: current?.north ?? 0 };
}

interface Priors {
  readonly mean: readonly number[];
  readonly sd: readonly number[];
}

function priorsOf({ windDirection }: ReconcileOptions): Priors {
  const at = NAMES.indexOf('windDirection');
  if (!windDirection || !(windDirection.se > 0)) return { mean: MEAN, sd: SD };
  return {
    mean: MEAN.map((value, i) => (i === at ? windDirection.value : value)),
    sd: SD.map((value, i) => (i === at ? windDirection.se : value)),
  };
}

function fullValues(free: readonly Unknown[], fixed: Values, parameters: ArrayLike<number>): Values {
  const values = { ...fixed };
  free.forEach((name, i) => (values[name] = parameters[i]));
  return values;
}

/**
 * What each observation of a block is off by, in the order of KINDS. Heading and masthead angle together are taken as
 * one, their sum: it has no bow in it, and so no leeway, current or noise of the course.
 */
function misfit(block: ReconcileBlock, v: Values): [number, number, number, number] {
  const east = block.east - v.currentEast;
  const north = block.north - v.currentNorth;
  const leeway = block.upwind ? v.leewayUpwind : v.leewayDownwind;
  const bow = directionOf(east, north) + block.tack * leeway;
  const from = block.windFrom + v.windDirection + (block.upwind ? v.windSplit : -v.windSplit);
  const speed = block.windSpeed * Math.exp(v.windScale);
  // Towards where it comes from: the wind there, and the boat's own motion against it.
  const [ax, ay] = [speed * eastOf(from) + block.east, speed * northOf(from) + block.north];
  const seen = Number.isNaN(block.heading) ? bow : block.heading + v.compass;
  return [
    wrap180(block.heading + v.compass - bow),
    wrap180(block.mastheadAngle + v.masthead + seen - directionOf(ax, ay)),
    block.apparentSpeed - lengthOf(ax, ay),
    block.waterSpeed - lengthOf(east, north),
  ];
}

/** Fits, then takes each observation's sigma from its residuals and fits again, until these settle. */
function settledFit(
  blocks: readonly ReconcileBlock[],
  free: readonly Unknown[],
  fixed: Values,
  priors: Priors,
): { fit: Fit; sigma: readonly number[] } {
  let sigma: readonly number[] = FIRST_SIGMA;
  let fit = fitWith(blocks, free, fixed, priors, sigma);
  for (let round = 0; round < 4; round++) {
    const spread = robustSpread(blocks, fullValues(free, fixed, fit.parameters));
    sigma = spread.map((value, k) => (value > 0 ? Math.max(value, LEAST_SIGMA[k]) : FIRST_SIGMA[k]));
    fit = fitWith(blocks, free, fixed, priors, sigma, fit.parameters);
  }
  return { fit, sigma };
}

function fitWith(
  blocks: readonly ReconcileBlock[],
  free: readonly Unknown[],
  fixed: Values,
  priors: Priors,
  sigma: readonly number[],
  start?: ArrayLike<number>,
): Fit {
  const at = free.map((name) => NAMES.indexOf(name));
  return fitLeastSquares({
    residuals: (parameters) => {
      const values = fullValues(free, fixed, parameters);
      const out = new Float64Array(blocks.length * KINDS.length);
      for (let b = 0; b < blocks.length; b++) {
        const off = misfit(blocks[b], values);
        for (let k = 0; k < off.length; k++) out[b * off.length + k] = off[k] / sigma[k];
      }
      return out;
    },
    mean: at.map((i) => priors.mean[i]),
    sd: at.map((i) => priors.sd[i]),
    ...(start && { start: Array.from(start) }),
    huber: HUBER,
    clusters: blocks.flatMap((block) => KINDS.map(() => block.spell)),
  });
}

/** Spread by the median of the absolute misfits, as one standard deviation of a normal law (1.4826 times it). */
function robustSpread(blocks: readonly ReconcileBlock[], values: Values): number[] {
  const misfits = blocks.map((block) => misfit(block, values));
  return KINDS.map((_, k) => {
    const sizes = misfits.map((off) => Math.abs(off[k])).filter((size) => !Number.isNaN(size));
    if (sizes.length < LEAST_BLOCKS) return NaN;
    sizes.sort((a, b) => a - b);
    return 1.4826 * sizes[sizes.length >> 1];
  });
}

function rms(blocks: readonly ReconcileBlock[], values: Values): number[] {
  const misfits = blocks.map((block) => misfit(block, values));
  return KINDS.map((_, k) => {
    const squares = misfits.map((off) => off[k] ** 2).filter((square) => !Number.isNaN(square));
    return Math.sqrt(squares.reduce((sum, square) => sum + square, 0) / squares.length);
  });
}

/** Residual with the current forced to zero over the residual with it free: root of the ratio of the robust costs. */
function currentNeed(
  blocks: readonly ReconcileBlock[],
  fixed: Values,
  fit: Fit,
  sigma: readonly number[],
  priors: Priors,
): number {
  const still = NAMES.filter((name) => !name.startsWith('current'));
  const forced = fitWith(blocks, still, { ...fixed, currentEast: 0, currentNorth: 0 }, priors, sigma);
  return Math.sqrt(forced.cost / fit.cost);
}

/** For each unknown why it is not claimed; empty where it is. */
type Claims = Readonly<Record<ReconcileName, string>>;

function claimsOf(
  blocks: readonly ReconcileBlock[],
  free: readonly Unknown[],
  fit: Fit,
  { current }: ReconcileOptions,
  withoutCurrent: number,
): Claims {
  const has = (key: 'heading' | 'apparentSpeed' | 'waterSpeed'): boolean =>
    blocks.filter((block) => Number.isFinite(block[key])).length >= LEAST_BLOCKS;
  const oneTack = new Set(blocks.map((block) => block.tack)).size < 2;
  const reasons = Object.fromEntries(REPORTED.map((name) => [name, ''])) as Record<ReconcileName, string>;
  for (const name of REPORTED) {
    const i = free.indexOf(name);
    if (i >= 0) reasons[name] = statisticalReason(name, i, free, fit);
  }
  const refuse = (reason: string, ...names: ReconcileName[]): void => {
    for (const name of names) reasons[name] = reason;
  };
  if (!has('apparentSpeed') && blocks.every((block) => block.upwind)) {
    refuse('only upwind sailing and no apparent wind speed', 'masthead', 'windDirection');
  }
  if (!current && !has('waterSpeed')) refuse('no water speed and no current given', 'leewayUpwind', 'leewayDownwind');
  if (withoutCurrent >= CURRENT_RATIO) {
    refuse('a current not given in the race file', 'leewayUpwind', 'leewayDownwind');
  }
  if (!has('heading')) refuse('no heading', 'compass', 'leewayUpwind', 'leewayDownwind');
  if (oneTack) refuse('one tack only', 'compass', 'leewayUpwind', 'leewayDownwind');
  return reasons;
}

function statisticalReason(name: Unknown, i: number, free: readonly Unknown[], fit: Fit): string {
  const share = fit.se[i] / SD[NAMES.indexOf(name)];
  if (share > MOST_OF_PRIOR) return 'the log does not tell it';
  if (share < SMALL_OF_PRIOR) return '';
  const rival = free.findIndex((_, j) => j !== i && Math.abs(fit.correlation[i][j]) > MOST_CORRELATION);
  return rival < 0 ? '' : `not told from ${SAID[free[rival]]}`;
}

function estimatesOf(
  free: readonly Unknown[],
  fixed: Values,
  fit: Fit,
  claims: Claims,
): Record<ReconcileName, Reconciled> {
  const of = (name: ReconcileName): Reconciled => {
    const i = free.indexOf(name);
    if (i < 0) return { value: fixed[name], se: 0, applied: true, reason: '' };
    return { value: fit.parameters[i], se: fit.se[i], applied: claims[name] === '', reason: claims[name] };
  };
  return Object.fromEntries(REPORTED.map((name) => [name, of(name)])) as Record<ReconcileName, Reconciled>;
}

function warningsOf(claims: Claims, withoutCurrent: number): Reconciliation['warnings'] {
  const lost = REPORTED.filter((name) => claims[name] !== '');
  const list = lost.map((name) => `${SAID[name]} (${claims[name]})`).join(', ');
  const separable =
    lost.length > 0
      ? [{ code: 'not-separable' as const, message: `The log does not settle, and so nothing is done about: ${list}.` }]
      : [];
  if (withoutCurrent < CURRENT_RATIO) return separable;
  const message =
    'The log cannot be understood without a current that the race file does not give. No leeway is claimed. ' +
    'Give the current, or the water speed, to have it.';
  return [...separable, { code: 'current-unknown', message }];
}
