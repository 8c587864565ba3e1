/**
 * The balance of a boat under sail in surge, sway and roll, in the horizontal plane. For a wind, a course angle and
 * either the best or a given sheeting angle it finds the speed at which drive equals resistance, rig side force equals
 * foil side force (which sets the leeway), and the heeling moment is held.
 *
 *     beta = incidence + sheeting + leeway = aero drag angle + hydro drag angle
 *
 * Nested one-dimensional solves: incidence inside, speed outside. Where several speeds balance, the fastest counts.
 */
import { DEG, RAD } from '../math/angles.js';
import { lengthOf } from '../math/length.js';
import { root, rootBetween } from '../math/solve.js';
import { dragAngle } from './drag-angles.js';
import type { LiftDrag } from './rig.js';
import type { Stability } from './stability.js';

/** What the balance needs to know of a boat. Any functional forms will do. */
export interface ForceModel {
  readonly airDensity: number;
  /** Sail area. [m2] */
  readonly area: number;
  /** Lift and drag coefficients over incidence [deg], flattened by `flat` (1: full). */
  rig(incidence: number, flat: number): LiftDrag;
  /** Resistance upright and without side force, at a speed and a true wind [m/s]. [N] */
  upright(speed: number, tws: number): number;
  /** All resistance: the upright one [N] at a speed [m/s] with a horizontal side force [N] and a heel [deg] added. [N] */
  resistance(upright: number, speed: number, side: number, heel: number): number;
  /** Leeway at a speed [m/s] with a side force [N] and a heel [deg]. [deg] */
  leeway(speed: number, side: number, heel: number): number;
  /** Centre of effort to centre of lateral resistance, along the mast. [m] */
  readonly arm: number;
  /** null: holds any moment upright. */
  readonly stability: Stability | null;
  /** Incidence without lift, and with the greatest lift. [deg] */
  readonly zeroLift: number;
  readonly stall: number;
  readonly sheetingMin: number;
  readonly sheetingMax: number;
}

/** The wind triangle at a trial speed. */
export interface Flow {
  readonly speed: number;
  readonly tws: number;
  readonly gamma: number;
  readonly beta: number;
  readonly aws: number;
  readonly sinβ: number;
  readonly cosβ: number;
  /** Apparent dynamic pressure times sail area. [N] */
  readonly push: number;
  /** Resistance upright and without side force. [N] */
  readonly upright: number;
}

/** Where the last inner solve ended: a guess for the next one, never more than that. */
interface Guess {
  incidence: number;
}

/** Forces at a trial speed and incidence. `excess` = drive - resistance is zero in balance. */
export interface Loads {
  /** Incidence as the heeled sail sees it, and in the horizontal plane. [deg] */
  readonly sailed: number;
  readonly incidence: number;
  readonly flat: number;
  /** Horizontal coefficients. */
  readonly lift: number;
  readonly drag: number;
  readonly drive: number;
  readonly side: number;
  readonly heel: number;
  readonly moment: number;
  readonly resistance: number;
  readonly excess: number;
}

/** Everything about a boat in balance. Angles [deg], speeds [m/s], forces [N]. */
export interface SailingState {
  readonly tws: number;
  readonly gamma: number;
  readonly speed: number;
  readonly vmg: number;
  readonly beta: number;
  readonly aws: number;
  readonly aeroDragAngle: number;
  readonly hydroDragAngle: number;
  readonly leeway: number;
  readonly sheeting: number;
  readonly incidence: number;
  readonly heel: number;
  /** Heeling moment as a share of what can be held. */
  readonly momentUsed: number;
  readonly moment: number;
  readonly drive: number;
  readonly side: number;
  readonly resistance: number;
  /** Horizontal lift and drag coefficients of the rig. */
  readonly liftCoefficient: number;
  readonly dragCoefficient: number;
  /** 1: full sail; less: lift taken off by flattening because the sheeting does not ease enough. */
  readonly flat: number;
}

/**
 * The wind triangle at a trial speed, with what the force balance needs of it.
 *
 * @param model Boat.
 * @param speed Trial speed. [m/s]
 * @param tws   True wind. [m/s]
 * @param gamma Course angle. [deg]
 * @returns Flow.
 */
export function flowAt(model: ForceModel, speed: number, tws: number, gamma: number): Flow {
  const γ = RAD * gamma;
  const across = tws * Math.sin(γ);
  const along = speed + tws * Math.cos(γ);
  const aws = lengthOf(across, along);
  const push = 0.5 * model.airDensity * model.area * aws * aws;
  const beta = DEG * Math.atan2(across, along);
  const upright = model.upright(speed, tws);
  return { speed, tws, gamma, beta, aws, sinβ: across / aws, cosβ: along / aws, push, upright };
}

/**
 * Forces of a trial state.
 *
 * With heel the lift leans: its horizontal part is cos(heel) of it, the arm is cos(heel) of its length, and the sail
 * sees cos(heel) of the horizontal incidence. The trial is made at the sail's own incidence, so that its coefficients
 * are fixed while heel and side force are found together.
 *
 * @param model  Boat.
 * @param flow   Wind triangle.
 * @param sailed Incidence as the heeled sail sees it. [deg]
 * @param flat   Flattening, 1 = full sail.
 * @returns Forces [N], moment [N m], horizontal incidence [deg].
 */
export function loadsAt(model: ForceModel, flow: Flow, sailed: number, flat = 1): Loads {
  const polar = model.rig(sailed, flat);
  const fromDrag = flow.push * polar.drag * flow.sinβ;
  const fromLift = flow.push * polar.lift * flow.cosβ;
  const heel = model.stability ? heelOf(model.stability, model.arm, fromDrag, fromLift) : 0;
  const cosφ = Math.cos(RAD * heel);
  const side = fromDrag + fromLift * cosφ;
  const drive = flow.push * (polar.lift * cosφ * flow.sinβ - polar.drag * flow.cosβ);
  const resistance = model.resistance(flow.upright, flow.speed, side, heel);
  return {
    sailed,
    incidence: sailed / cosφ,
    flat,
    lift: polar.lift * cosφ,
    drag: polar.drag,
    drive,
    side,
    heel,
    moment: side * model.arm * cosφ,
    resistance,
    excess: drive - resistance,
  };
}

/** The heel whose own moment asks for that heel: secant steps, from upright. */
function heelOf(stability: Stability, arm: number, fromDrag: number, fromLift: number): number {
  if (stability.heelLimit === 0) return 0;
  const asked = (φ: number): number => {
    const cosφ = Math.cos(RAD * φ);
    return stability.heel((fromDrag + fromLift * cosφ) * arm * cosφ);
  };
  let before = 0;
  let heel = asked(0);
  let gapBefore = heel;
  for (let round = 0; round < 30; round++) {
    const gap = asked(heel) - heel;
    if (Math.abs(gap) < 1e-12) return heel + gap;
    const next = heel - (gap * (heel - before)) / (gap - gapBefore);
    [before, gapBefore] = [heel, gap];
    heel = next >= 0 && next < 60 ? next : heel + gap;
  }
  return heel;
}

/** Sheeting angle of a trial state: what is left of beta. */
function sheetingOf(model: ForceModel, flow: Flow, loads: Loads): number {
  return flow.beta - loads.incidence - model.leeway(flow.speed, loads.side, loads.heel);
}

/** Step of the numerical slope of drive over incidence. [deg] */
const SLOPE_STEP = 0.02;

/**
 * The incidence that drives best at a trial speed, within the sheeting's range and the moment that can be held: the
 * sail is eased beyond it, and flattened where it cannot be eased.
 *
 * @param model Boat.
 * @param flow  Wind triangle.
 * @param guess Where the last solve of the same course ended, to save work.
 * @returns Forces there.
 */
export function bestLoads(model: ForceModel, flow: Flow, guess: Guess = { incidence: NaN }): Loads {
  const loads = overpoweredLoads(model, flow) ?? easedLoads(model, flow, freeIncidence(model, flow, guess));
  const sheeting = sheetingOf(model, flow, loads);
  if (sheeting < model.sheetingMin) return sheetedTo(model, flow, model.sheetingMin, loads.sailed);
  return sheeting > model.sheetingMax ? sheetedLoads(model, flow, model.sheetingMax) : loads;
}

/** Apparent wind so far forward that the best trim is short of the stall for any rig. [deg] */
const WELL_FORWARD = 70;

/** The shortcut close-hauled in a breeze: where the moment is the limit and more sail would drive more, that is it. */
function overpoweredLoads(model: ForceModel, flow: Flow): Loads | null {
  if (!model.stability || flow.beta > WELL_FORWARD) return null;
  const { limit } = model.stability;
  if (loadsAt(model, flow, model.stall).moment <= limit) return null;
  const loads = easedLoads(model, flow, model.stall);
  return loadsAt(model, flow, loads.sailed - SLOPE_STEP).excess < loads.excess ? loads : null;
}

/** Forces at an incidence, or where that cannot be held at the one that can. */
function easedLoads(model: ForceModel, flow: Flow, wanted: number): Loads {
  const loads = loadsAt(model, flow, wanted);
  const limit = model.stability?.limit ?? Infinity;
  if (!(loads.moment > limit)) return loads;
  const over = (α: number): number => loadsAt(model, flow, α).moment - limit;
  // A stalled sail (wind aft) is eased on the attached side of the stall where that is where the moment is passed.
  const high = wanted > model.stall && over(model.stall) > 0 ? model.stall : wanted;
  const eased = root(over, model.zeroLift, high, { tolerance: 1e-10 });
  // Even a flapping sail is too much: the boat cannot be sailed so.
  return loadsAt(model, flow, Number.isNaN(eased) ? model.zeroLift : eased);
}

/** Where drive less resistance is greatest over incidence, all else free. [deg] */
function freeIncidence(model: ForceModel, flow: Flow, guess: Guess): number {
  const excess = (α: number): number => loadsAt(model, flow, α).excess;
  const near = newtonMaximum(excess, guess.incidence);
  guess.incidence = near > model.zeroLift + 1 && near < 89 ? near : bracketedMaximum(model, excess);
  return guess.incidence;
}

/** Newton steps to a maximum from a guess; NaN when they do not settle at once. */
function newtonMaximum(f: (x: number) => number, guess: number): number {
  let x = guess;
  for (let round = 0; round < 5 && !Number.isNaN(x); round++) {
    const [left, middle, right] = [f(x - SLOPE_STEP), f(x), f(x + SLOPE_STEP)];
    const curvature = left - 2 * middle + right;
    const step = (SLOPE_STEP * (left - right)) / (2 * curvature);
    if (!(curvature < 0 && Math.abs(step) < 2)) return NaN;
    x += step;
    // The step squares its own error: what is left after one of 0.001 degrees is far below any use.
    if (Math.abs(step) < 1e-3) return x;
  }
  return NaN;
}

/**
 * The incidence with the greatest drive at a trial speed, whatever sheeting and moment it takes.
 *
 * @param model Boat.
 * @param flow  Wind triangle.
 * @returns Incidence as the heeled sail sees it. [deg]
 */
export function driveLimit(model: ForceModel, flow: Flow): number {
  return bracketedMaximum(model, (α) => loadsAt(model, flow, α).excess);
}

function bracketedMaximum(model: ForceModel, excess: (α: number) => number): number {
  const slope = (α: number): number => excess(α + SLOPE_STEP) - excess(α - SLOPE_STEP);
  const low = model.zeroLift + 2 * SLOPE_STEP;
  const atStall = slope(model.stall);
  // Wind forward of the beam: drag hurts, so the best is short of the stall. Aft: drag drives, so it is beyond.
  if (atStall > 0) {
    const square = slope(90);
    return square < 0 ? rootBetween(slope, model.stall, atStall, 90, square, { tolerance: 1e-7 }) : 90;
  }
  const atLow = slope(low);
  return atLow > 0 ? rootBetween(slope, low, atLow, model.stall, atStall, { tolerance: 1e-7 }) : low;
}

/**
 * Forces at a given sheeting angle: incidence and leeway share what the sheeting leaves of beta. A sail that cannot be
 * held is flattened until it can.
 *
 * @param model    Boat.
 * @param flow     Wind triangle.
 * @param sheeting Sheeting angle. [deg]
 * @returns Forces there.
 */
export function sheetedLoads(model: ForceModel, flow: Flow, sheeting: number): Loads {
  const loads = sheetedTo(model, flow, sheeting, flow.beta - sheeting);
  return loads.moment > (model.stability?.limit ?? Infinity) ? flattenedLoads(model, flow, sheeting) : loads;
}

/** Forces of the full sail at a sheeting angle, the incidence being at most `high`. */
function sheetedTo(model: ForceModel, flow: Flow, sheeting: number, high: number): Loads {
  const left = (α: number): number => sheetingOf(model, flow, loadsAt(model, flow, α)) - sheeting;
  // Below no incidence the sail flaps; off the wind the side force, and with it the leeway, can be slightly negative.
  const low = Math.min(model.zeroLift, high) - 30;
  const sailed = root(left, low, high + 5, { tolerance: 1e-11 });
  // More leeway than there is room for, whatever the incidence: no such state. Its excess is negative.
  return loadsAt(model, flow, Number.isNaN(sailed) ? low : sailed);
}

/** Forces at a sheeting angle with the sail flattened to the moment that can be held. */
function flattenedLoads(model: ForceModel, flow: Flow, sheeting: number): Loads {
  const { limit, heelLimit } = model.stability!;
  const cosφ = Math.cos(RAD * heelLimit);
  const side = limit / (model.arm * cosφ);
  const sailed = (flow.beta - sheeting - model.leeway(flow.speed, side, heelLimit)) * cosφ;
  const over = (flat: number): number => loadsAt(model, flow, sailed, flat).moment - limit;
  const flat = root(over, 0, 1, { tolerance: 1e-13 });
  return loadsAt(model, flow, sailed, Number.isNaN(flat) ? (over(1) > 0 ? 0 : 1) : flat);
}

/** The slowest speed looked for, as a share of the wind: below it the boat counts as not sailing. */
const LEAST_SHARE = 0.02;

/**
 * The fastest speed in balance.
 *
 * @param excess Drive less resistance at a speed [m/s]; negative at great speeds.
 * @param tws    True wind. [m/s, > 0]
 * @param hint   A speed near the answer, to save work; the answer does not depend on it.
 * @returns Speed [m/s]; NaN where nothing balances (head to wind, in irons).
 */
export function fastestBalance(excess: (speed: number) => number, tws: number, hint = NaN): number {
  const tolerance = 1e-11 * tws;
  let high = hint > 0 ? hint * 1.04 : tws;
  let atHigh = excess(high);
  for (let round = 0; atHigh > 0 && round < 20; round++) {
    const at = atHigh;
    const low = high;
    high *= hint > 0 ? 1.1 : 1.5;
    atHigh = excess(high);
    if (atHigh <= 0) return rootBetween(excess, low, at, high, atHigh, { tolerance });
  }
  let shrink = hint > 0 ? 0.93 : 0.8;
  while (high > LEAST_SHARE * tws) {
    const low = high * shrink;
    const atLow = excess(low);
    if (atLow > 0) return rootBetween(excess, low, atLow, high, atHigh, { tolerance });
    [high, atHigh, shrink] = [low, atLow, Math.min(shrink, 0.85)];
  }
  return NaN;
}

/**
 * The boat in balance with the sheeting that makes it fastest.
 *
 * @param model Boat.
 * @param tws   True wind. [m/s]
 * @param gamma Course angle, 0 to 180. [deg]
 * @param hint  A speed near the answer. [m/s]
 * @returns State; its speed is NaN where nothing balances.
 */
export function balance(model: ForceModel, tws: number, gamma: number, hint = NaN): SailingState {
  const guess = { incidence: NaN };
  const excess = (v: number): number => bestLoads(model, flowAt(model, v, tws, gamma), guess).excess;
  const flow = flowAt(model, fastestBalance(excess, tws, hint), tws, gamma);
  return stateOf(model, flow, bestLoads(model, flow, guess));
}

/**
 * The boat in balance at a given sheeting angle.
 *
 * @param model    Boat.
 * @param tws      True wind. [m/s]
 * @param gamma    Course angle, 0 to 180. [deg]
 * @param sheeting Sheeting angle. [deg]
 * @param hint     A speed near the answer. [m/s]
 * @returns State; its speed is NaN where nothing balances.
 */
export function balanceSheeted(
  model: ForceModel,
  tws: number,
  gamma: number,
  sheeting: number,
  hint = NaN,
): SailingState {
  const excess = (v: number): number => sheetedLoads(model, flowAt(model, v, tws, gamma), sheeting).excess;
  const flow = flowAt(model, fastestBalance(excess, tws, hint), tws, gamma);
  return stateOf(model, flow, sheetedLoads(model, flow, sheeting));
}

/**
 * The full state out of a flow and the forces in it.
 *
 * @param model Boat.
 * @param flow  Wind triangle.
 * @param loads Forces.
 * @returns State; all angles NaN where the speed is.
 */
export function stateOf(model: ForceModel, flow: Flow, loads: Loads): SailingState {
  const leeway = model.leeway(flow.speed, loads.side, loads.heel);
  return {
    tws: flow.tws,
    gamma: flow.gamma,
    speed: flow.speed,
    vmg: flow.speed * Math.cos(RAD * flow.gamma),
    beta: flow.beta,
    aws: flow.aws,
    aeroDragAngle: dragAngle(loads.drag, loads.lift),
    hydroDragAngle: dragAngle(loads.resistance, loads.side),
    leeway,
    sheeting: flow.beta - loads.incidence - leeway,
    incidence: loads.incidence,
    heel: loads.heel,
    momentUsed: loads.moment / (model.stability?.limit ?? Infinity),
    moment: loads.moment,
    drive: loads.drive,
    side: loads.side,
    resistance: loads.resistance,
    liftCoefficient: loads.lift,
    dragCoefficient: loads.drag,
    flat: loads.flat,
  };
}
