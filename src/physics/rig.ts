/**
 * The rig: lift and drag of sails, mast, crew and hull above the water, as functions of incidence (the angle from the
 * apparent wind to the boom). Coefficients are per sail area and apparent dynamic pressure.
 *
 * Attached:  CL = CLmax sin(a (alpha + camber) / CLmax),  CD = CD0 + k (a (alpha + camber))^2 + CL^2/(pi AR_e)
 * Stalled:   CL = CLmax cos theta,  CD = CD_stall + (CD_90 - CD_stall) sin theta,  theta from 0 to 90 as alpha to 90
 *
 * The lift slope a is the lifting line's; the sine rounds it off to the stated maximum. A cambered plate lifts at no
 * incidence; a soft sail does not, it luffs: its camber grows as 1 - exp(-alpha/4 deg), so that lift begins at zero.
 * The viscous drag goes with the square of the lift that the slope alone would give: k CL^2 at small incidence, more
 * where the lift falls behind the slope because the flow begins to separate. Beyond the greatest lift the polar turns
 * through a quarter of an ellipse to the drag of a sail across the wind; at 50 degrees that is lift and drag of about
 * 1 each, as wind tunnel sails have (from memory). The whole polar is convex, so that for any apparent wind there is
 * one best incidence, and slope is continuous.
 * Close-hauled lift over drag of a whole small rig is between 4 and 6
 * (common practice, no source); Southampton tunnel tests of a small two-sail rig gave about 1.3 / 0.25 at best (second hand).
 *
 * [1] G. Hazen, A model of sail aerodynamics for diverse rig types, 1980 (aspect ratio over 1.1 times the height; from
 *     memory). [2] J. E. Kerwin, A velocity prediction program for ocean racing yachts, MIT report 78-11, 1978
 *     (flattening, from memory). [3] S. F. Hoerner, Fluid-Dynamic Drag, 1965 (plates across the flow; from memory).
 */
import { DEG, RAD } from '../math/angles.js';
import { root } from '../math/solve.js';
import type { RigSpec } from './boat-spec.js';
import { liftingLineSlope } from './foils.js';

export interface LiftDrag {
  readonly lift: number;
  readonly drag: number;
}

/** Drag coefficient of a sail across the wind: a plate of aspect ratio 3 to 5 has 1.2 [3], a soft sail less [1]. */
const ACROSS = 0.93;
/** Over what share of the way from stall to 90 degrees the stall sets in. Assumed. */
const ONSET = 0.08;
/** Incidence over which a luffing sail takes up its camber. [deg] Assumed. */
const LUFF = 4;

/**
 * Drag coefficient of a rig with attached flow.
 *
 *     CD = CD0 + k CL^2 + CL^2 / (pi AR_e)
 *
 * @param cl          Lift coefficient.
 * @param cd0         Drag without lift.
 * @param viscous     k.
 * @param aspectRatio Effective aspect ratio.
 * @returns Drag coefficient.
 */
export function attachedDrag(cl: number, cd0: number, viscous: number, aspectRatio: number): number {
  return cd0 + cl * cl * (viscous + 1 / (Math.PI * aspectRatio));
}

/**
 * Span efficiency of a loading with a second harmonic, Glauert's series with A2 = k A1.
 *
 *     e = 1 / (1 + 2 k^2)
 *
 * @param k Ratio of the harmonics; of the order of 0.5 for an upright triangular mainsail.
 * @returns Span efficiency, 0 to 1.
 *
 * [1] H. Glauert, The Elements of Aerofoil and Airscrew Theory, 1926, chapter 11; k from an application of lifting line
 *     theory to an upright triangular mainsail in The Aeronautical Journal (abstract read).
 */
export function spanEfficiency(k: number): number {
  return 1 / (1 + 2 * k * k);
}

/**
 * Effective aspect ratio of a rig: the water mirrors it in part, as if it were a tenth taller than its head is high.
 *
 *     AR_e = e (1.1 h)^2 / S        [1]
 *
 * @param rig Rig.
 * @returns Effective aspect ratio.
 */
export function rigAspectRatio(rig: Pick<RigSpec, 'area' | 'head' | 'efficiency'>): number {
  return (rig.efficiency * (1.1 * rig.head) ** 2) / rig.area;
}

/** Drag coefficient without lift: parasite drag of the sail and everything else in the wind. */
export function rigParasite(rig: Pick<RigSpec, 'area' | 'parasite' | 'windage'>): number {
  return rig.parasite + rig.windage / rig.area;
}

/** Incidence of a flat wing with the same lift: what camber there is at that incidence adds to it. [deg] */
function cambered(rig: RigSpec, incidence: number): number {
  return incidence > 0 ? incidence + rig.camber * (1 - Math.exp(-incidence / LUFF)) : 0;
}

/**
 * Incidence of the greatest lift.
 *
 * @param rig Rig.
 * @returns Incidence at which alpha + camber = (pi/2) CLmax/a. [deg]
 */
export function stallIncidence(rig: RigSpec): number {
  const flat = (DEG * (Math.PI / 2) * rig.clMax) / liftingLineSlope(rigAspectRatio(rig));
  return root((α) => cambered(rig, α) - flat, 0, flat);
}

/**
 * Lift and drag over incidence, upright.
 *
 * At no incidence and below the sail flaps: no lift, drag CD0 (a flapping sail drags more; that state is never sailed
 * on purpose). Flattening f < 1 takes lift and induced drag off an attached sail and leaves viscous drag [2].
 *
 * @param rig        Rig.
 * @param dragFactor Factor on all drag, 1 = as described.
 * @returns Function of incidence [deg, up to 180] and flattening f [0..1] giving both coefficients.
 */
export function rigCurve(rig: RigSpec, dragFactor = 1): (incidence: number, flat?: number) => LiftDrag {
  const aspectRatio = rigAspectRatio(rig);
  const slope = liftingLineSlope(aspectRatio);
  const induced = 1 / (Math.PI * aspectRatio);
  const cd0 = rigParasite(rig);
  const stall = stallIncidence(rig);
  const full = cambered(rig, stall) * RAD * slope;
  const cdStall = rig.viscous * full * full + induced * rig.clMax ** 2;
  const filling = 1 + (rig.camber / LUFF) * Math.exp(-stall / LUFF);
  const turned = stallTurn(stall, (2 * rig.viscous * full * slope * filling) / (ACROSS - cdStall));
  return (incidence, flat = 1) => {
    if (incidence > stall) {
      const θ = turned(incidence);
      const cd = cdStall + (ACROSS - cdStall) * Math.sin(θ) - induced * rig.clMax ** 2 * (1 - flat * flat);
      return { lift: flat * rig.clMax * Math.cos(θ), drag: dragFactor * (cd0 + cd) };
    }
    const straight = slope * RAD * cambered(rig, incidence);
    const cl = flat * rig.clMax * Math.sin(straight / rig.clMax);
    return { lift: cl, drag: dragFactor * (cd0 + rig.viscous * straight * straight + induced * cl * cl) };
  };
}

/**
 * Position on the stalled quarter of the polar: 0 at the stall, 90 degrees across the wind. It starts at the rate that
 * makes the drag grow on without a kink and soon goes on evenly.
 */
function stallTurn(stall: number, rate: number): (incidence: number) => number {
  const span = 90 - stall;
  const even = (rate * RAD * span) / (Math.PI / 2);
  const start = (even * (1 - ONSET)) / (1 - even * ONSET);
  const turn = (t: number): number => t - (1 - start) * ONSET * (1 - Math.exp(-t / ONSET));
  const whole = turn(1);
  return (incidence) => ((Math.PI / 2) * turn((incidence - stall) / span)) / whole;
}
