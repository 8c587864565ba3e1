import type { SpeedCurve } from '../physics/speed-curve.js';
import { apparentWind } from '../physics/triangle.js';
import type { Figure } from './steady.js';

/** Winds in which dinghies race: median [m/s] and spread of the logarithm; common practice, no source. */
const USUAL_WIND = 5;
const USUAL_SPREAD = 0.5;
/** Winds that are tried, evenly in their logarithm. [m/s] */
const LEAST = 1;
const MOST = 20;
const COUNT = 150;
const WINDS = Array.from({ length: COUNT }, (_, k) => LEAST * (MOST / LEAST) ** (k / (COUNT - 1)));
/** Winds so strong that the model falls below this share of its greatest speed are none that it is raced in. */
const OVERCOME = 0.9;

/**
 * The wind in which a boat of the model would go as fast: the model inverted, for show where no log has the wind's
 * speed. What winds are usual is the prior, for where a boat is overpowered its speed hardly tells one wind from
 * another; the model's own error is in the likelihood. It must judge nobody: against it every boat sails at the
 * model's speed by construction.
 *
 * @param curve The boat's model.
 * @param speed Settled speed through the water. [m/s]
 * @param gamma Settled course angle. [deg]
 * @param share What the model's speed is good to, as a share of it, one standard deviation.
 * @returns True wind speed: mean of the posterior and its standard deviation [m/s]; null where no wind fits.
 */
export function windBySpeed(curve: SpeedCurve, speed: Figure, gamma: Figure, share: number): Figure | null {
  let total = 0;
  let first = 0;
  let second = 0;
  let greatest = 0;
  for (const tws of WINDS) {
    const modelled = curve.speed(gamma.value, tws);
    greatest = Math.max(greatest, modelled);
    if (!(modelled > 0)) continue;
    if (modelled < OVERCOME * greatest) break;
    const turned = (curve.speed(gamma.value + 1, tws) - curve.speed(gamma.value - 1, tws)) / 2;
    const spread = Math.hypot(share * modelled, speed.se, turned * Math.hypot(gamma.se, gamma.sys));
    const off = ((speed.value - modelled) / spread) ** 2 + (Math.log(tws / USUAL_WIND) / USUAL_SPREAD) ** 2;
    const weight = Math.exp(-0.5 * off) / spread;
    total += weight;
    first += weight * tws;
    second += weight * tws * tws;
  }
  if (!(total > 1e-12)) return null;
  const value = first / total;
  return { value, se: Math.sqrt(Math.max(0, second / total - value * value)), sys: 0 };
}

/**
 * Apparent wind of settled means in an inferred wind, with what that wind's error makes of it.
 *
 * @returns Speed [m/s] and angle to the course, beta [deg].
 */
export function apparentBy(
  tws: Figure,
  { speed, gamma }: { readonly speed: Figure; readonly gamma: Figure },
): { aws: Figure; beta: Figure } {
  const at = (wind: number, angle: number) => apparentWind(speed.value, wind, angle);
  const middle = at(tws.value, gamma.value);
  const [weaker, stronger] = [-1, 1].map((side) => at(Math.max(0.1, tws.value + side * tws.se), gamma.value));
  const [closer, wider] = [-1, 1].map((side) => at(tws.value, gamma.value + side * gamma.se));
  const figure = (pick: (one: { aws: number; beta: number }) => number): Figure => ({
    value: pick(middle),
    se: Math.hypot(pick(stronger) - pick(weaker), pick(wider) - pick(closer)) / 2,
    sys: 0,
  });
  return { aws: figure((one) => one.aws), beta: figure((one) => one.beta) };
}
