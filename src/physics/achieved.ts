/**
 * The boat model turned round: from what a boat did (speed, wind, course angle) to the rig force, the leeway and the
 * incidence that must have gone with it.
 */
import { root } from '../math/solve.js';
import { driveLimit, flowAt, loadsAt, stateOf, type ForceModel, type SailingState } from './balance.js';

export interface Measured {
  /** Speed through the water. [m/s] */
  readonly speed: number;
  /** True wind at the rig. [m/s] */
  readonly tws: number;
  /** Course to true wind. [deg] */
  readonly gamma: number;
}

export interface Achieved {
  /** The state with the sail eased to the drive that was needed; null when no trim of the model drives so much. */
  readonly eased: SailingState | null;
  /** The state with the sail sheeted beyond its best to the same drive; null when there is none. */
  readonly oversheeted: SailingState | null;
  /** The state with the sail at its greatest drive, whether or not it is what the hull needs. */
  readonly full: SailingState | null;
  /** The model's greatest drive over its resistance at this speed, less one: negative when the boat beats the model. */
  readonly margin: number;
}

/**
 * The two force equations solved for what the sensors did not see.
 *
 *     q_A S (CL sin beta - CD cos beta) = R(V, Y)        along the course
 *     q_A S (CL cos beta + CD sin beta) = Y              across it
 *
 * Unknown: the rig's lift coefficient (through its incidence) and the foils' side force Y, which gives the leeway. The
 * leeway is fairly stiff: 2 % of speed or 1 degree of course angle move it by one to four tenths of a degree, the most
 * near full power. Incidence and sheeting are soft, several degrees: there drive is flat in incidence. A boat a little faster than the model has no solution.
 *
 * Two trims give the same drive. Which of them the boat had, the forces do not say; eased is the usual one.
 *
 * @param model    Boat.
 * @param measured What was seen. Cheap enough (some 10 microseconds) for errors by finite differences.
 * @returns The states, and how near the model is to its limit. All null and NaN for NaN input.
 */
export function achieved(model: ForceModel, measured: Measured): Achieved {
  const { speed, tws, gamma } = measured;
  const nothing = { eased: null, oversheeted: null, full: null, margin: NaN };
  if (!(speed > 0 && tws > 0 && gamma >= 0 && gamma <= 180)) return nothing;
  const flow = flowAt(model, speed, tws, gamma);
  const excess = (α: number): number => loadsAt(model, flow, α).excess;
  const best = driveLimit(model, flow);
  const most = loadsAt(model, flow, best);
  const margin = most.excess / most.resistance;
  const state = (α: number): SailingState | null =>
    Number.isNaN(α) ? null : stateOf(model, flow, loadsAt(model, flow, α));
  if (!(most.excess >= 0)) return { ...nothing, full: state(best), margin };
  const eased = root(excess, model.zeroLift, best, { tolerance: 1e-11 });
  const oversheeted = root(excess, best, 90, { tolerance: 1e-11 });
  return { eased: state(eased), oversheeted: state(oversheeted), full: state(best), margin };
}
