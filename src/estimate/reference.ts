/** What a ledger is measured against: speed at every course angle and wind. Angles [deg], speeds [m/s]. */
export interface Reference {
  readonly kind: 'model' | 'best' | 'file';
  /** Boat speed at a course angle and wind speed. */
  readonly speed: (gamma: number, tws: number) => number;
  readonly bestVmg: (tws: number) => number;
  readonly bestGamma: (tws: number) => number;
}

/** Speed of a boat over course angle and wind, and its best; a model's speed curve. */
export interface SpeedCurve {
  readonly speed: (gamma: number, tws: number) => number;
  readonly bestVmg: (tws: number) => number;
  readonly bestGamma: (tws: number) => number;
}

/** The model as it stands. */
export function modelReference(curve: SpeedCurve, kind: 'model' | 'file' = 'model'): Reference {
  return { kind, speed: curve.speed, bestVmg: curve.bestVmg, bestGamma: curve.bestGamma };
}

/**
 * The model moved so that its best point is what the day's best boat settled at:
 *
 *     v(gamma, W) = k v_model(gamma - D, W),   D = gamma_best - gamma*(W_best),   k from the speeds there.
 *
 * A turned curve's best is not the model's best turned: D is set so that the turned curve's best is the achieved angle.
 *
 * @param gamma, speed, tws Settled medians of the boat with the day's best settled VMG.
 */
export function bestReference(curve: SpeedCurve, gamma: number, speed: number, tws: number): Reference {
  const turned = turnFor(curve, gamma, tws);
  const scale = speed / curve.speed(gamma - turned, tws);
  const at = (g: number, w: number): number => scale * curve.speed(g - turned, w);
  const cache = new Map<number, { gamma: number; vmg: number }>();
  const best = (w: number): { gamma: number; vmg: number } => {
    const key = Math.round(w * 20);
    let found = cache.get(key);
    if (!found) {
      found = maximum((g) => at(g, key / 20) * Math.cos((g * Math.PI) / 180), curve.bestGamma(key / 20) + turned);
      cache.set(key, found);
    }
    return found;
  };
  const between = (w: number, pick: (b: { gamma: number; vmg: number }) => number): number => {
    if (Number.isNaN(w)) return NaN;
    const low = Math.floor(w * 20) / 20;
    const part = (w - low) * 20;
    return pick(best(low)) * (1 - part) + pick(best(low + 0.05)) * part;
  };
  return {
    kind: 'best',
    speed: at,
    bestVmg: (w) => between(w, (b) => b.vmg),
    bestGamma: (w) => between(w, (b) => b.gamma),
  };
}

/**
 * The turn D that makes `gamma` the best angle of v(g - D): at a best point d ln v/d gamma = tan gamma, so the model is
 * taken at the angle a where its own logarithmic slope is tan gamma, and D = gamma - a. Bisection; the slope falls with a.
 */
function turnFor(curve: SpeedCurve, gamma: number, tws: number): number {
  const RAD = Math.PI / 180;
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
function maximum(f: (gamma: number) => number, guess: number): { gamma: number; vmg: number } {
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
