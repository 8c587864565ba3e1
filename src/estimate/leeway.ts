/**
 * Leeway, by every way the log allows: from the heading, from the masthead angle, from the balance of forces.
 */
import { achieved, type Achieved } from '../physics/achieved.js';
import type { ForceModel } from '../physics/balance.js';
import { apparentWind } from '../physics/triangle.js';

/** Means of a stretch of steady sailing; NaN = not known. Angles are magnitudes. */
export interface LeewayInput {
  /** Speed through the water, true wind at the rig. [m/s] */
  readonly speed: number;
  readonly tws: number;
  /** Course to true wind. [deg] */
  readonly gamma: number;
  /** From the corrected heading to the course through the water, positive to leeward. [deg] */
  readonly drift: number;
  /** Bow to apparent wind, from the corrected masthead. [deg] */
  readonly mastheadAngle: number;
}

export type LeewayWay = 'heading' | 'masthead' | 'forces';

export interface LeewayEstimate {
  /** Positive to leeward. [deg] */
  readonly value: number;
  readonly se: number;
  /** Best evidence it rests on. */
  readonly basis: 'measured' | 'derived' | 'inferred';
  readonly ways: readonly {
    readonly way: LeewayWay;
    readonly value: number;
    readonly se: number;
    readonly weight: number;
  }[];
  /** True where the boat was faster than the model can be, so that the forces say nothing. */
  readonly beatsModel: boolean;
}

const INPUTS = ['speed', 'tws', 'gamma', 'drift', 'mastheadAngle'] as const;
/** What each way rests on. */
export const LEEWAY_BASIS = { heading: 'measured', masthead: 'derived', forces: 'inferred' } as const;

/**
 * Leeway of a stretch of steady sailing.
 *
 *     by heading    lambda = course to leeward of the bow, whatever the wind
 *     by masthead   lambda = beta - (apparent wind off the bow)
 *     by forces     lambda = Y / (q A a), Y from the two force equations
 *
 * Each is carried with its errors, by finite differences through the same inputs; they are combined by inverse
 * variance, and the error of the mean counts what they share (an error of gamma is in two of them).
 *
 * @param model  Boat; null: no forces.
 * @param input  Means, offsets already added. [m/s, deg]
 * @param errors Standard error of each input. [m/s, deg]
 * @param good   What the model's leeway (foil slope, rig) and speed are good to, as shares of themselves.
 * @returns Leeway [deg], or null where no way is open.
 */
export function leewayOfSailing(
  model: ForceModel | null,
  input: LeewayInput,
  errors: LeewayInput,
  good: { readonly leeway: number; readonly speed: number },
): LeewayEstimate | null {
  const solved = model ? achieved(model, input) : null;
  const all: readonly { way: LeewayWay; at: (input: LeewayInput) => number; own: number }[] = [
    { way: 'heading', at: byHeading, own: 0 },
    { way: 'masthead', at: byMasthead, own: 0 },
    { way: 'forces', at: (x) => byForces(model, x, good.speed), own: solved ? ownError(solved, good.leeway) : 0 },
  ];
  const ways = all
    .map((one) => ({ ...one, value: one.at(input), slopes: INPUTS.map((key) => reach(one.at, input, errors, key)) }))
    .map((one) => ({ ...one, se: Math.hypot(one.own, ...one.slopes) }))
    .filter((one) => Number.isFinite(one.value + one.se) && one.se > 0);
  const beatsModel = solved !== null && solved.margin < 0;
  if (ways.length === 0) return null;
  const total = ways.reduce((sum, one) => sum + 1 / one.se ** 2, 0);
  const weights = ways.map((one) => 1 / one.se ** 2 / total);
  const value = ways.reduce((sum, one, k) => sum + weights[k] * one.value, 0);
  const shared = INPUTS.map((_, j) => ways.reduce((sum, one, k) => sum + weights[k] * one.slopes[j], 0));
  const own = ways.map((one, k) => weights[k] * one.own);
  return {
    value,
    se: Math.hypot(...shared, ...own),
    basis: LEEWAY_BASIS[ways[0].way],
    ways: ways.map(({ way, value: one, se }, k) => ({ way, value: one, se, weight: weights[k] })),
    beatsModel,
  };
}

const byHeading = (x: LeewayInput): number => x.drift;

const byMasthead = (x: LeewayInput): number => apparentWind(x.speed, x.tws, x.gamma).beta - x.mastheadAngle;

/**
 * By the forces; of a boat that beats its model by no more than the model is good to, with the sail at its greatest drive.
 */
function byForces(model: ForceModel | null, x: LeewayInput, speedShare: number): number {
  if (!model) return NaN;
  const { eased, full } = achieved(model, x);
  if (eased) return eased.leeway;
  const near = full !== null && achieved(model, { ...x, speed: x.speed * (1 - speedShare) }).eased !== null;
  return near ? full.leeway : NaN;
}

/**
 * The balance takes all that a boat lacks of the model's speed as an eased sail. Where hull, sea or helm took it the sail
 * drove in full and leeway was more: anywhere between, a uniform spread of which this is the standard deviation. [deg]
 */
function ownError({ eased, full }: Achieved, modelShare: number): number {
  if (!full) return 0;
  return Math.hypot(modelShare * (eased ?? full).leeway, eased ? (full.leeway - eased.leeway) / Math.sqrt(12) : 0);
}

/** By how much one standard error of an input moves a result; one-sided where only one side has a result. */
function reach(
  at: (x: LeewayInput) => number,
  input: LeewayInput,
  errors: LeewayInput,
  key: (typeof INPUTS)[number],
): number {
  const step = errors[key];
  if (!(step > 0) || Number.isNaN(input[key])) return 0;
  const up = at({ ...input, [key]: input[key] + step });
  const down = at({ ...input, [key]: input[key] - step });
  if (Number.isFinite(up) && Number.isFinite(down)) return (up - down) / 2;
  const here = at(input);
  return Number.isFinite(up) ? up - here : here - down;
}
