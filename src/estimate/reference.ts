import type { SpeedCurve } from '../physics/speed-curve.js';
import { evenedLevel, type Tilt } from './wind-response.js';

const RAD = Math.PI / 180;

/** What a ledger is measured against: speed at every course angle and wind. Angles [deg], speeds [m/s]. */
export interface Reference {
  readonly kind: 'model' | 'best' | 'file';
  /** Boat speed at a course angle and wind speed. */
  readonly speed: (gamma: number, tws: number) => number;
  readonly bestVmg: (tws: number) => number;
  readonly bestGamma: (tws: number) => number;
  /** Standard error of its speeds in a wind [m/s] as it was anchored, as a share of them; 0 for a model as it stands. */
  readonly levelSe: (tws: number) => number;
}

/** The model as it stands. */
export function modelReference(curve: SpeedCurve, kind: 'model' | 'file' = 'model'): Reference {
  return {
    kind,
    speed: (gamma, tws) => curve.speed(gamma, tws),
    bestVmg: (tws) => curve.bestVmg(tws),
    bestGamma: (tws) => curve.bestGamma(tws),
    levelSe: () => 0,
  };
}

/** How a model is moved to what was sailed. */
export interface Anchor {
  /** Its speeds, evened over the wind, are multiplied by this and its angles lower by this [deg]. */
  readonly scale: number;
  readonly turn: number;
  /** Wind it was had in [m/s], and the power of W / tws by which its speeds grow more with the wind. */
  readonly tws: number;
  readonly tilt: Tilt;
  /** Standard error of the VMG it was had from, as a share. */
  readonly se: number;
}

/**
 * Anchor that puts the model's best point where the day's best boat settled:
 *
 *     v(gamma, W) = k (W / W_0)^t e(W) v_model(gamma - D, W)
 *
 * where e evens the model over the wind and t, 0 here, is had from the fleet ({@link tiltOf}).
 * A turned curve's best is not the model's best turned: D is set so that the turned curve's best is the achieved angle.
 *
 * @param gamma, speed, tws Settled medians of the boat with the day's best settled VMG. [deg], [m/s], [m/s]
 * @param se Standard error of that VMG, as a share of it.
 */
export function anchorAt(curve: SpeedCurve, gamma: number, speed: number, tws: number, se: number): Anchor {
  const turn = turnFor(curve, gamma, tws);
  const scale = speed / (evenedLevel(curve)(tws) * curve.speed(gamma - turn, tws));
  return { scale, turn, tws, tilt: { power: 0, se: 0 }, se };
}

/** Winds between which the anchored best is drawn straight. [m/s] */
const WIND_STEP = 0.05;

/** The model moved by an anchor. */
export function anchoredReference(curve: SpeedCurve, { scale, turn, tws: middle, tilt, se }: Anchor): Reference {
  const level = evenedLevel(curve);
  const at = (gamma: number, tws: number): number =>
    scale * (tws / middle) ** tilt.power * level(tws) * curve.speed(gamma - turn, tws);
  const found = new Map<number, Best>();
  const best = (step: number): Best => {
    let one = found.get(step);
    if (!one) {
      const tws = step * WIND_STEP;
      one = maximum((gamma) => at(gamma, tws) * Math.cos(gamma * RAD), curve.bestGamma(tws) + turn);
      found.set(step, one);
    }
    return one;
  };
  const between = (tws: number, pick: (one: Best) => number): number => {
    if (Number.isNaN(tws)) return NaN;
    const step = Math.floor(tws / WIND_STEP);
    const part = tws / WIND_STEP - step;
    return pick(best(step)) * (1 - part) + pick(best(step + 1)) * part;
  };
  return {
    kind: 'best',
    speed: at,
    bestVmg: (tws) => between(tws, (one) => one.vmg),
    bestGamma: (tws) => between(tws, (one) => one.gamma),
    levelSe: (tws) => Math.hypot(se, tilt.se * Math.log(tws / middle)),
  };
}

interface Best {
  readonly gamma: number;
  readonly vmg: number;
}

/**
 * The turn D that makes `gamma` the best angle of v(g - D): at a best point d ln v/d gamma = tan gamma, so the model is
 * taken at the angle a where its own logarithmic slope is tan gamma, and D = gamma - a. Bisection; the slope falls with a.
 */
function turnFor(curve: SpeedCurve, gamma: number, tws: number): number {
  const slope = (a: number): number =>
    Math.log(curve.speed(a + 0.5, tws) / curve.speed(a - 0.5, tws)) / RAD - Math.tan(gamma * RAD);
  let low = curve.bestGamma(tws) - 14;
  let high = curve.bestGamma(tws) + 25;
  for (let k = 0; k < 40; k++) {
    const middle = (low + high) / 2;
    if (slope(middle) > 0) low = middle;
    else high = middle;
  }
  return gamma - (low + high) / 2;
}

/** Maximum of a smooth hump within 15 degrees of a guess, by golden section. */
function maximum(f: (gamma: number) => number, guess: number): Best {
  const ratio = (Math.sqrt(5) - 1) / 2;
  let low = guess - 15;
  let high = guess + 15;
  let a = high - ratio * (high - low);
  let b = low + ratio * (high - low);
  let fa = f(a);
  let fb = f(b);
  while (high - low > 1e-3) {
    if (fa > fb) {
      high = b;
      b = a;
      fb = fa;
      a = high - ratio * (high - low);
      fa = f(a);
    } else {
      low = a;
      a = b;
      fa = fb;
      b = low + ratio * (high - low);
      fb = f(b);
    }
  }
  const gamma = (low + high) / 2;
  return { gamma, vmg: f(gamma) };
}
