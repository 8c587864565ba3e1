/**
 * How a reference's speeds go with the wind, so that two boats in different winds are measured alike. The model's own
 * answer hangs on where the log puts the wind, most of all where a crew runs out of weight to hold the boat up: within
 * a few per cent of wind the best speed made good goes over from growing with the wind to standing still. Two things make
 * an anchored reference nearly blind to the scale of the wind log: its curve is evened over what that scale is good
 * to, and its power of the wind is had from the fleet itself.
 *
 * In 60 invented races 5 % of wind then moved two entries of 1,080, boat less boat, by more than a metre (1.15 m), where
 * without them it had moved 22, by up to 4.1 m; the entries themselves came no further from the truth.
 */
import type { SpeedCurve } from '../physics/speed-curve.js';

/** What the scale of a wind log and the wind in which a model's boat is overpowered are good to: common practice, no source. */
const SCALE_ERROR = 0.1;
/** Places of the normal curve, in standard deviations, over which a curve is evened. */
const PLACES = Array.from({ length: 13 }, (_, k) => (k - 6) / 2);
/** Winds between which the evened level is drawn straight. [m/s] */
const WIND_STEP = 0.05;

/**
 * Best speed made good evened over winds some 10 % weaker and stronger, as a share of the curve's own: a factor for all
 * its speeds in that wind.
 *
 * @returns Of a true wind [m/s], dimensionless; NaN for NaN. It remembers what it was asked.
 */
export function evenedLevel(curve: SpeedCurve): (tws: number) => number {
  const found = new Map<number, number>();
  const at = (step: number): number => {
    let level = found.get(step);
    if (level === undefined) found.set(step, (level = levelAt(curve, step * WIND_STEP)));
    return level;
  };
  return (tws) => {
    if (Number.isNaN(tws)) return NaN;
    const step = Math.max(1, Math.floor(tws / WIND_STEP));
    const part = tws / WIND_STEP - step;
    return at(step) * (1 - part) + at(step + 1) * part;
  };
}

function levelAt(curve: SpeedCurve, tws: number): number {
  let sum = 0;
  let weights = 0;
  for (const place of PLACES) {
    const weight = Math.exp(-0.5 * place * place);
    sum += weight * Math.log(curve.bestVmg(tws * Math.exp(SCALE_ERROR * place)));
    weights += weight;
  }
  return Math.exp(sum / weights) / curve.bestVmg(tws);
}

/** One settled block: its wind, and its speed over the reference's in that wind at that angle, as logarithms. */
export interface WindPoint {
  /** ln(wind / the anchor's wind) */
  readonly wind: number;
  /** ln(speed / the reference's) */
  readonly excess: number;
}

/** By what power of the wind speeds grow more than the reference's, with its standard error. */
export interface Tilt {
  readonly power: number;
  readonly se: number;
}

/** How far a model's power of the wind may be out, one standard deviation: common practice, no source. */
const PRIOR = 0.5;
/** Settled blocks follow one another: their scatter counts for half as many. */
const TOGETHER = 2;
/** Least sum of squares of ln(wind): below it one wind blew. */
const LEAST = 1e-6;

/**
 * The power t by which what was sailed grows with the wind beyond the reference:
 *
 *     ln(v / v_ref) = a_group + t ln(W / W_0)
 *
 * Least squares with one level for each group (a boat on a tack), drawn towards 0 as a prior of 0.5 and the blocks'
 * scatter say.
 *
 * @param groups Settled blocks of each boat on each tack; those without wind or reference (NaN) are passed over.
 * @returns t and its standard error; 0 and the prior's where nothing tells it.
 */
export function tiltOf(groups: readonly (readonly WindPoint[])[]): Tilt {
  let xx = 0;
  let xy = 0;
  let yy = 0;
  let free = -1;
  for (const group of groups) {
    const points = group.filter(({ wind, excess }) => Number.isFinite(wind + excess));
    if (points.length < 2) continue;
    const x = mean(points.map(({ wind }) => wind));
    const y = mean(points.map(({ excess }) => excess));
    for (const { wind, excess } of points) {
      xx += (wind - x) ** 2;
      xy += (wind - x) * (excess - y);
      yy += (excess - y) ** 2;
    }
    free += points.length - 1;
  }
  if (free < 2 || !(xx > LEAST)) return { power: 0, se: PRIOR };
  const noise = (TOGETHER * Math.max(0, yy - (xy * xy) / xx)) / free;
  const whole = xx + noise / PRIOR ** 2;
  return { power: xy / whole, se: Math.sqrt(noise / whole) };
}

function mean(values: readonly number[]): number {
  return values.reduce((sum, value) => sum + value, 0) / values.length;
}
