/**
 * Sheeting: where the boom was, as far as the log can tell. Near full power drive is flat in incidence, so it is soft:
 * never a number alone but a distribution beside what was believed before.
 */
import { bestLoads, flowAt, sheetedLoads, type ForceModel } from '../physics/balance.js';
import { sail, sailWithSheeting } from '../physics/model.js';

export interface SheetingData {
  /** Speed through the water, true wind at the rig [m/s], course to true wind [deg]. */
  readonly speed: number;
  readonly tws: number;
  readonly gamma: number;
  /** Leeway where it was measured (heading or masthead), not where it comes from the same model. [deg] */
  readonly leeway?: { readonly value: number; readonly se: number };
  /** What a boat of this kind has of the model's leeway on the day, and what that is good to: shares of the model's. */
  readonly leewayLevel: { readonly share: number; readonly se: number };
  /** Heel where there is a sensor. [deg] */
  readonly heel?: { readonly value: number; readonly se: number };
  /**
   * What the model sails to with the best trim, as a share of its own speed, with what that and the speed are good to
   * (a share, one standard deviation), to let the speed speak too. For the value shown; never for a ledger, where it
   * would explain the whole of a boat's slowness as trim by construction.
   */
  readonly able?: { readonly share: number; readonly se: number };
}

export interface SheetingPosterior {
  /** Boom to centreline, positive to leeward. [deg] */
  readonly mean: number;
  readonly sd: number;
  /** What was believed before: trimmed as the model would. [deg] */
  readonly priorMean: number;
  readonly priorSd: number;
  /** True where the data narrowed it by a third or more: else it is not to be shown. */
  readonly narrowed: boolean;
  readonly points: readonly { readonly sheeting: number; readonly weight: number }[];
}

/** How far boats sail from the model's trim, one standard deviation. [deg] Common practice, no source. */
const PRIOR_SD = 5;
/**
 * What the model's heel is good to, as a share and in degrees: how flat a crew sails is its choice as long as it can hold
 * the boat. Common practice, no source.
 */
const MODEL_HEEL = 0.25;
const CREW_HEEL = 5;
/**
 * A boat can be slow for many reasons, trim being one: its speed counts with long tails, Student's of so many degrees of
 * freedom, so that a great slowness does not outvote the leeway. Common practice, no source.
 */
const SPEED_FREEDOM = 2;
/** The grid: so far either side of the prior mean, so fine. [deg] */
const REACH = 3.5 * PRIOR_SD;
const STEP = 0.5;
/** Sheeting is shown where its spread fell to this share of the prior's. */
const NARROWED = 2 / 3;

/**
 * Posterior of the sheeting angle of a stretch of steady sailing.
 *
 * Prior: normal about the model's best trim on that course, 5 degrees, not closer than the boat can sheet. Data: the
 * leeway (and heel) that go with each sheeting angle at the measured speed against those measured; with `able` also the
 * speed the model would sail with it.
 *
 * @param model Boat.
 * @param data  What was measured. [m/s, deg]
 * @returns Distribution over sheeting [deg]; null where the model cannot sail that course.
 */
export function sheetingPosterior(model: ForceModel, data: SheetingData): SheetingPosterior | null {
  const best = sail(model, data.tws, data.gamma);
  const flow = flowAt(model, data.speed, data.tws, data.gamma);
  // The trim that drives best at the speed the boat had; where that is no sailing at all, the model's own.
  const trimmed = bestLoads(model, flow);
  const priorMean = trimmed.excess > 0 || !(best.speed > 0) ? sheetingAt(model, data, trimmed) : best.sheeting;
  if (!Number.isFinite(priorMean)) return null;
  const low = Math.max(model.sheetingMin, priorMean - REACH);
  const high = Math.min(model.sheetingMax, priorMean + REACH);
  const count = Math.max(1, Math.round((high - low) / STEP));
  const grid = Array.from({ length: count + 1 }, (_, i) => low + ((high - low) * i) / count);
  const prior = grid.map((angle) => Math.exp(-0.5 * ((angle - priorMean) / PRIOR_SD) ** 2));
  const posterior = grid.map((angle, i) => prior[i] * Math.exp(-0.5 * misfit(model, data, angle)));
  const before = moments(grid, prior);
  const after = moments(grid, posterior);
  if (!Number.isFinite(after.mean)) return null;
  return {
    mean: after.mean,
    sd: after.sd,
    priorMean: before.mean,
    priorSd: before.sd,
    narrowed: after.sd <= NARROWED * before.sd,
    points: grid.map((sheeting, i) => ({ sheeting, weight: posterior[i] / after.total })),
  };
}

function sheetingAt(model: ForceModel, data: SheetingData, loads: ReturnType<typeof bestLoads>): number {
  const { beta } = flowAt(model, data.speed, data.tws, data.gamma);
  return beta - loads.incidence - model.leeway(data.speed, loads.side, loads.heel);
}

/** Sum of squared standardised differences between what goes with a sheeting angle and what was measured. */
function misfit(model: ForceModel, data: SheetingData, sheeting: number): number {
  const { speed, tws, gamma, leeway, heel, able, leewayLevel } = data;
  let sum = 0;
  if (leeway || heel) {
    const loads = sheetedLoads(model, flowAt(model, speed, tws, gamma), sheeting);
    const there = leewayLevel.share * model.leeway(speed, loads.side, loads.heel);
    if (leeway) sum += standardised(there - leeway.value, leeway.se, leewayLevel.se * there);
    if (heel)
      sum += standardised(loads.heel - Math.abs(heel.value), heel.se, Math.hypot(MODEL_HEEL * loads.heel, CREW_HEEL));
  }
  if (able) {
    const sailed = able.share * sailWithSheeting(model, tws, gamma, sheeting).speed;
    const off = standardised((sailed > 0 ? sailed : 0) - speed, 0, able.se * speed);
    sum += (SPEED_FREEDOM + 1) * Math.log(1 + off / SPEED_FREEDOM);
  }
  return sum;
}

const standardised = (difference: number, se: number, own: number): number => difference ** 2 / (se ** 2 + own ** 2);

function moments(grid: readonly number[], weights: readonly number[]): { mean: number; sd: number; total: number } {
  const total = weights.reduce((sum, weight) => sum + weight, 0);
  const mean = grid.reduce((sum, angle, i) => sum + weights[i] * angle, 0) / total;
  const variance = grid.reduce((sum, angle, i) => sum + weights[i] * (angle - mean) ** 2, 0) / total;
  return { mean, sd: Math.sqrt(variance), total };
}

/**
 * Speed that the trim cost: expectation of v(gamma) - v(gamma, sheeting) over a posterior made without the speed.
 *
 * @param model     Boat.
 * @param tws       True wind. [m/s]
 * @param gamma     Course to true wind. [deg]
 * @param posterior Distribution of the sheeting angle.
 * @returns Expected loss, never negative, and its standard deviation. [m/s]
 */
export function trimLoss(
  model: ForceModel,
  tws: number,
  gamma: number,
  posterior: SheetingPosterior,
): { loss: number; sd: number } {
  const best = sail(model, tws, gamma).speed;
  const likely = posterior.points.filter((point) => point.weight > 1e-4);
  const total = likely.reduce((sum, point) => sum + point.weight, 0);
  const losses = likely.map(({ sheeting }) => {
    const { speed } = sailWithSheeting(model, tws, gamma, sheeting);
    return speed > 0 ? Math.max(0, best - speed) : best;
  });
  const loss = likely.reduce((sum, { weight }, i) => sum + weight * losses[i], 0) / total;
  const variance = likely.reduce((sum, { weight }, i) => sum + weight * (losses[i] - loss) ** 2, 0) / total;
  return { loss, sd: Math.sqrt(variance) };
}
