import { mannKendall } from '../math/kendall.js';
import { median, robustSpread } from '../math/median.js';
import { normalUpperQuantile } from '../math/normal.js';
import { standardDeviation, weightedMean } from '../math/stats.js';
import { theilSen } from '../math/theil-sen.js';

/** Whether a quantity changed from race to race, the wind allowed for. */

export interface RacePoint {
  /** [days] */
  readonly day: number;
  readonly value: number;
  /** NaN where not stated. */
  readonly se: number;
  /** [kn, NaN where not known] */
  readonly wind: number;
}

export interface Trend {
  readonly n: number;
  /** Change a day, its standard error, and the level at day 0. NaN where two days do not differ. */
  readonly slope: number;
  readonly se: number;
  readonly intercept: number;
  /** Two-sided p-value before any adjustment; NaN for fewer races than a verdict needs. */
  readonly p: number;
  /** Whether the wind was allowed for; `one with time`: it rose or fell so evenly that the two cannot be told apart. */
  readonly wind: 'allowed for' | 'not known' | 'one with time';
  /** Standard deviation of races about the line. */
  readonly scatter: number;
}

/** Below this many races no verdict: of 5 races in order, chance deals the best order once in 60. */
export const LEAST_RACES = 6;
/** Beyond this many, neighbours in time are averaged: every pair of points is looked at. */
const MOST_POINTS = 120;
/** Errors that differ by less than this do not weigh: all alike, the test is exact. */
const ALIKE = 1.1;
/** Where less than this of the spread of the days is left once the wind is taken off, wind and time are one. */
const LEAST_OWN_TIME = 0.15;

/**
 * Trend of one quantity: Theil-Sen slope, Mann-Kendall significance.
 *
 * The wind is a covariate: both the values and the days are first cleared of it by a Theil-Sen line on wind speed, and
 * the trend is that between the residuals [1, 2]; so neither a windy spring nor a season of rising wind reads as skill.
 * Races weigh by their standard error with the scatter between races in it. Standard error: half the 68 % interval.
 *
 * @param points One a race, any order.
 * @returns The trend.
 *
 * [1] W. M. Alley, Using exogenous variables in testing for monotonic trends in hydrologic time series, Water Resources
 *     Research 24, 1988.
 * [2] D. R. Helsel et al., Statistical Methods in Water Resources, USGS Techniques and Methods 4-A3, 2020, chapter 12.
 */
export function raceTrend(points: readonly RacePoint[]): Trend {
  const races = thin([...points].sort((a, b) => a.day - b.day));
  const { t, y, usable, wind } = clearOfWind(races);
  const told = wind !== 'one with time';
  const errors = raceErrors(t, y, usable);
  const alike = Math.max(...errors) <= ALIKE * Math.min(...errors);
  const line = told ? theilSen(t, y, 0.6827, alike ? undefined : errors) : NO_LINE;
  const weight = alike ? undefined : (i: number, j: number): number => 1 / Math.hypot(errors[i], errors[j]);
  const enough = told && points.length >= LEAST_RACES;
  return {
    n: points.length,
    slope: line.slope,
    se: (line.high - line.low) / 2,
    intercept: median(usable.map(({ value, day }) => value - line.slope * day)),
    p: enough ? mannKendall(t, y, weight, wind === 'allowed for' ? 1 : 0).p : NaN,
    wind,
    scatter: robustSpread(y.map((value, i) => value - line.slope * t[i])),
  };
}

const NO_LINE = { slope: NaN, low: NaN, high: NaN };

interface Cleared {
  readonly t: readonly number[];
  readonly y: readonly number[];
  readonly usable: readonly RacePoint[];
  readonly wind: Trend['wind'];
}

function clearOfWind(races: readonly RacePoint[]): Cleared {
  const days = races.map(({ day }) => day);
  const plain = { t: days, y: races.map(({ value }) => value), usable: races };
  if (races.length < LEAST_RACES || !windKnown(races)) return { ...plain, wind: 'not known' };
  const usable = races.filter(({ wind }) => Number.isFinite(wind));
  const winds = usable.map(({ wind }) => wind);
  const t = residuals(
    winds,
    usable.map(({ day }) => day),
  );
  const y = residuals(
    winds,
    usable.map(({ value }) => value),
  );
  const left = [standardDeviation, robustSpread].map((spread) => spread(t) / spread(usable.map(({ day }) => day)));
  return { t, y, usable, wind: Math.min(...left) < LEAST_OWN_TIME ? 'one with time' : 'allowed for' };
}

/** The wind must be known for two races in three, six at least, and differ. */
function windKnown(points: readonly RacePoint[]): boolean {
  const winds = points.map(({ wind }) => wind).filter(Number.isFinite);
  return winds.length >= Math.max(LEAST_RACES, (2 / 3) * points.length) && Math.max(...winds) > Math.min(...winds);
}

function residuals(x: readonly number[], y: readonly number[]): number[] {
  const { slope, intercept } = theilSen(x, y);
  return y.map((value, i) => value - intercept - slope * x[i]);
}

/** Error of each race about the line: its own, and the scatter between races its own error does not explain. */
function raceErrors(t: readonly number[], y: readonly number[], points: readonly RacePoint[]): number[] {
  const stated = points.map(({ se }) => se);
  const typical = median(stated);
  const own = stated.map((se) => (Number.isNaN(se) ? (Number.isNaN(typical) ? 0 : typical) : se));
  const { slope } = theilSen(t, y);
  const spread = robustSpread(y.map((value, i) => value - (Number.isNaN(slope) ? 0 : slope) * t[i]));
  const between = Math.sqrt(Math.max(0, spread ** 2 - median(own.map((se) => se * se))));
  const errors = own.map((se) => Math.hypot(se, between));
  const least = Math.max(...errors) / 20;
  return errors.map((error) => (least > 0 ? Math.max(error, least) : 1));
}

/** So many neighbours averaged that no more than the most points are left. */
function thin(points: readonly RacePoint[]): readonly RacePoint[] {
  const size = Math.ceil(points.length / MOST_POINTS);
  if (size <= 1) return points;
  return Array.from({ length: Math.ceil(points.length / size) }, (_, k) =>
    average(points.slice(k * size, (k + 1) * size)),
  );
}

function average(points: readonly RacePoint[]): RacePoint {
  const mean = (of: (point: RacePoint) => number): number => {
    const values = points.map(of).filter(Number.isFinite);
    return weightedMean(values, new Array<number>(values.length).fill(1));
  };
  return {
    day: mean(({ day }) => day),
    value: mean(({ value }) => value),
    se: mean(({ se }) => se) / Math.sqrt(points.length),
    wind: mean(({ wind }) => wind),
  };
}

/** Chance with which the races asked for would show the trend, if it is as it looks now. */
const POWER = 0.8;
/** A trend that needs more races than this is as good as none. */
const MOST_NEEDED = 200;

/**
 * How many more races, sailed as often as so far, would show a trend of the size it has now in four cases of five. The
 * error of a slope falls with the number of races to the power 3/2.
 *
 * @param trend The trend as it stands.
 * @param level Chance of a false verdict it must beat. [0..1]
 * @returns Races, at least 1; null where none in sight would do.
 */
export function racesNeeded(trend: Trend, level: number): number | null {
  const now = Math.abs(trend.slope) / trend.se;
  if (!(now > 0) || !Number.isFinite(now)) return null;
  const wanted = normalUpperQuantile(level / 2) + normalUpperQuantile(1 - POWER);
  const total = Math.max(LEAST_RACES, Math.ceil(trend.n * (wanted / now) ** (2 / 3)));
  const more = Math.max(1, total - trend.n);
  return more > MOST_NEEDED ? null : more;
}
