/**
 * The best a boat can do in a wind: most made good to windward or to leeward over all course angles, and the polar
 * diagram.
 */
import { maximum } from '../math/solve.js';
import { toKnots } from '../math/units.js';
import { balance, type ForceModel, type SailingState } from './balance.js';

/** Course angles between which the best upwind and downwind courses are looked for. [deg] */
const UPWIND = [25, 75] as const;
const DOWNWIND = [105, 180] as const;

/**
 * The course and sheeting with the most speed made good to windward.
 *
 * @param model Boat.
 * @param tws   True wind at the rig. [m/s]
 * @returns State on that course.
 */
export function bestUpwind(model: ForceModel, tws: number): SailingState {
  return bestBetween(model, tws, UPWIND, 1);
}

/**
 * The course and sheeting with the most speed made good to leeward; `vmg` is negative there.
 *
 * @param model Boat.
 * @param tws   True wind at the rig. [m/s]
 * @returns State on that course.
 */
export function bestDownwind(model: ForceModel, tws: number): SailingState {
  return bestBetween(model, tws, DOWNWIND, -1);
}

function bestBetween(
  model: ForceModel,
  tws: number,
  [low, high]: readonly [number, number],
  sign: 1 | -1,
): SailingState {
  let hint = NaN;
  const good = (gamma: number): number => {
    const { speed, vmg } = balance(model, tws, gamma, hint);
    // A boat that does not sail makes nothing good; a hint from there would mislead.
    hint = speed > 0 ? speed : NaN;
    return speed > 0 ? sign * vmg : 0;
  };
  return balance(model, tws, maximum(good, low, high, { tolerance: 1e-6 }).at, hint);
}

export interface PolarPoint {
  readonly tws: number;
  readonly gamma: number;
  readonly speed: number;
}

/**
 * The polar diagram: speed over course angle, from close-hauled (five degrees inside the best upwind course) to dead
 * downwind, in steps of 5 degrees with the best upwind and downwind courses among them.
 *
 * @param model Boat.
 * @param winds True winds. [m/s]
 * @param step  Step of the course angle. [deg]
 * @returns Points, wind by wind, angle rising. [m/s, deg, m/s]
 */
export function polar(model: ForceModel, winds: readonly number[], step = 5): PolarPoint[] {
  return winds.flatMap((tws) => {
    const up = bestUpwind(model, tws);
    const down = bestDownwind(model, tws);
    const first = Math.ceil((up.gamma - 5) / step) * step;
    const angles = new Set<number>([up.gamma, down.gamma]);
    for (let gamma = first; gamma < 180; gamma += step) angles.add(gamma);
    angles.add(180);
    let hint = NaN;
    const points = [...angles]
      .sort((a, b) => a - b)
      .map((gamma) => {
        hint = balance(model, tws, gamma, hint).speed;
        return { tws, gamma, speed: hint };
      });
    return points.filter(({ speed }) => speed > 0);
  });
}

export interface OptimumRow {
  readonly tws_kn: number;
  readonly gamma_deg: number;
  readonly speed_kn: number;
  readonly vmg_kn: number;
  readonly beta_deg: number;
  readonly aero_drag_angle_deg: number;
  readonly hydro_drag_angle_deg: number;
  readonly leeway_deg: number;
  readonly sheeting_deg: number;
  readonly incidence_deg: number;
  readonly heel_deg: number;
  readonly aws_kn: number;
}

export interface OptimumTable {
  readonly format: 'legwork-optimum';
  readonly version: 1;
  readonly boat: string;
  readonly rows: readonly OptimumRow[];
  readonly polar?: readonly { readonly tws_kn: number; readonly gamma_deg: number; readonly speed_kn: number }[];
}

/**
 * The boat model's best upwind sailing over a range of winds, in outside units.
 *
 * @param model Boat.
 * @param name  Name to write into the table.
 * @param winds True winds. [kn]
 * @param options `polar`: the whole polar diagram too.
 * @returns Table in knots and degrees.
 */
export function optimumTable(
  model: ForceModel,
  name: string,
  winds: readonly number[],
  options: { readonly polar?: boolean } = {},
): OptimumTable {
  const inside = winds.map((kn) => (kn * 1852) / 3600);
  const rows = inside.map((tws, i) => optimumRow(winds[i], bestUpwind(model, tws)));
  const table = { format: 'legwork-optimum', version: 1, boat: name, rows } as const;
  if (!options.polar) return table;
  const points = inside.flatMap((tws, i) =>
    polar(model, [tws]).map(({ gamma, speed }) => ({
      tws_kn: winds[i],
      gamma_deg: gamma,
      speed_kn: toKnots(speed),
    })),
  );
  return { ...table, polar: points };
}

function optimumRow(knots: number, state: SailingState): OptimumRow {
  return {
    tws_kn: knots,
    gamma_deg: state.gamma,
    speed_kn: toKnots(state.speed),
    vmg_kn: toKnots(state.vmg),
    beta_deg: state.beta,
    aero_drag_angle_deg: state.aeroDragAngle,
    hydro_drag_angle_deg: state.hydroDragAngle,
    leeway_deg: state.leeway,
    sheeting_deg: state.sheeting,
    incidence_deg: state.incidence,
    heel_deg: state.heel,
    aws_kn: toKnots(state.aws),
  };
}
