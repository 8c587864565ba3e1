/**
 * The rig: lift and drag of sails, mast, crew and hull above the water, as functions of incidence (the angle from the
 * apparent wind to the boom). Coefficients are per sail area and apparent dynamic pressure.
 *
 * Attached:  CL = CLmax sin(a (alpha + camber) / CLmax),  CD = CD0 + k (a (alpha + camber))^2 + CL^2/(pi AR_e)
 * Stalled:   CL = C_N cos alpha,  CD = CD0 + C_N sin alpha      (force square to the boom)
 *
 * The lift slope a is the lifting line's; the sine rounds it off to the stated maximum. A cambered plate lifts at no
 * incidence; a soft sail does not, it luffs: its camber grows as 1 - exp(-alpha/4 deg), so that lift begins at zero.
 * The viscous drag goes with the square of the lift that the slope alone would give: k CL^2 at small incidence, more
 * where the lift falls behind the slope because the flow begins to separate. From the greatest lift on, attached and stalled flow are blended over 20 degrees with two continuous derivatives.
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

/**
 * Force coefficient of a stalled sail, square to it: 1.2 across the wind as for a plate of aspect ratio 3 to 5 [3],
 * a fifth more when oblique, where the flow still turns (assumed; wind tunnel sails are near there).
 */
function stalledNormal(α: number): number {
  return 1.2 * (1 + 0.2 * Math.sin(2 * α) ** 2);
}

/** Incidence over which a luffing sail takes up its camber. [deg] Assumed. */
const LUFF = 4;
/** Width of the blend from attached to stalled, beyond the greatest lift. [deg] Assumed. */
const STALL_WIDTH = 20;

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
  return (incidence, flat = 1) => {
    const straight = slope * RAD * cambered(rig, incidence);
    const cl = straight < Math.PI * rig.clMax ? rig.clMax * Math.sin(straight / rig.clMax) : 0;
    const cd = rig.viscous * straight * straight + induced * (flat * cl) ** 2;
    const stalled = smoothStep((incidence - stall) / STALL_WIDTH);
    if (stalled === 0) return { lift: flat * cl, drag: dragFactor * (cd0 + cd) };
    const α = RAD * incidence;
    const normal = stalled * stalledNormal(α);
    const lift = flat * ((1 - stalled) * cl + normal * Math.cos(α));
    return { lift, drag: dragFactor * (cd0 + (1 - stalled) * cd + normal * Math.sin(α)) };
  };
}

/** 0 below 0, 1 above 1, between them a quintic with two continuous derivatives. */
function smoothStep(t: number): number {
  if (t <= 0) return 0;
  if (t >= 1) return 1;
  return t * t * t * (10 + t * (6 * t - 15));
}
