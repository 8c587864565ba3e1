import { median } from '../math/median.js';
import type { BetweenBoat } from './boat.js';
import { impliedSwings } from './implied-wind.js';
import { meanWindByLap } from './mean-wind.js';
import { CLOSE, together, TOGETHER_AT_ALL } from './together.js';

/** Whether two boats' clocks agree, told from what both must have met at the same time: the swings of the wind. */

export interface ClockSkew {
  /** How far the second boat's clock is ahead of the first's; NaN where it cannot be told. [s] */
  readonly skew: number;
  /** Standard error, the travel of the swings from boat to boat included. [s] */
  readonly se: number;
  /** True when it is certain that the clocks differ, by about this much. */
  readonly sure: boolean;
  /** To be added to the second boat's clock: whole seconds, 0 unless sure. [s] */
  readonly correction: number;
  readonly note: string;
}

/** Farthest apart the clocks are searched by the second, beside whole quarter hours. [s] */
const REACH = 90;
/** Stretches of time the match is told for one by one, and seconds each must hold. */
const STRETCHES = 10;
const LEAST_COMMON = 12;
/** How far from the best skew the misfit is looked at to place it: as far as one swing. [s] */
const NEIGHBOUR = 10;
/** Errors on invented beats were 1.5 to 1.9 times what the jackknife said. */
const JACKKNIFE_SHORT = 1.7;
/** Wind speed swings travel at where none is known. [m/s] */
const USUAL_WIND = 5;
/** Swings travel with the wind within this share of its speed. Common practice, no source. */
const TRAVEL_ERROR = 0.3;
/** What GPS time has been ahead of UTC by since 2017 (IERS Bulletin C 52): a receiver that leaves it in. [s] */
const LEAP_SECONDS = 18;
/** So many standard errors from zero, and so many seconds, before clocks are called different. */
const SURE = 4;
const LEAST_SKEW = 8;

/**
 * How far the second boat's clock is ahead of the first's.
 *
 * Whole quarter hours (a wrong zone) show in where the boats were: racing, they are together. Seconds show in the swings
 * of the wind that both courses follow: the skew with the least mean square difference, each swing given the time to
 * travel from one boat to the other. The error is that of leaving out each tenth of the time in turn (jackknife). Sure
 * only when zero is 4 standard errors off and fits worse in nine tenths of ten or more.
 *
 * @param first  First boat, taken as right.
 * @param second Second boat.
 * @returns The skew; `sure` is false where both clocks may be right.
 */
export function clockSkew(first: BetweenBoat, second: BetweenBoat): ClockSkew {
  const quarter = quarterHours(first, second);
  const fine = matchSwings(first, second, quarter);
  if (!fine) {
    return quarter === 0
      ? { skew: NaN, se: NaN, sure: false, correction: 0, note: 'too little sailed at the same time to tell' }
      : { skew: quarter, se: REACH / 2, sure: true, correction: -quarter, note: noteOf(quarter, false) };
  }
  const far = Math.abs(fine.skew) >= Math.max(SURE * fine.se, LEAST_SKEW) && fine.worse >= 0.9;
  const seconds = far ? wholeSeconds(fine.skew, fine.se) : 0;
  const sure = far || quarter !== 0;
  return {
    skew: quarter + fine.skew,
    se: fine.se,
    sure,
    correction: sure ? -(quarter + seconds) : 0,
    note: noteOf(quarter, far),
  };
}

function noteOf(quarter: number, far: boolean): string {
  const ways = [...(quarter === 0 ? [] : ['by where the boats were']), ...(far ? ['by the swings of the wind'] : [])];
  return ways.join(' and ') || 'not told from clocks that agree';
}

/** Whole seconds; the leap seconds where they are as likely. */
function wholeSeconds(skew: number, se: number): number {
  const leap = Math.sign(skew) * LEAP_SECONDS;
  return Math.abs(skew - leap) <= 2 * se ? leap : Math.round(skew);
}

const QUARTER = 900;

/**
 * Whole quarter hours the clocks differ by: 0 unless the boats are hardly ever together as the clocks stand, together
 * most of the time at one other setting, and clearly less at any third: a lap more or less leaves at most two thirds.
 */
function quarterHours(first: BetweenBoat, second: BetweenBoat): number {
  if (together(first, second, 0) > TOGETHER_AT_ALL) return 0;
  const all = Array.from({ length: 113 }, (_, k) => QUARTER * (k - 56)).map((skew) => ({
    skew,
    share: together(first, second, skew, CLOSE),
  }));
  all.sort((a, b) => b.share - a.share);
  const [best, next] = all;
  return best.share > 0.5 && next.share < 0.75 * best.share ? best.skew : 0;
}

interface Match {
  /** Beyond the whole quarter hours. [s] */
  readonly skew: number;
  readonly se: number;
  /** Share of the stretches in which no skew fits worse. */
  readonly worse: number;
}

/** Sums over one stretch of time at one skew. */
interface Misfit {
  readonly n: number;
  readonly sum: number;
  readonly squares: number;
}

/** Boats are placed as the clocks stand, then as they stand corrected: each round leaves about a third of the error. */
const ROUNDS = 4;

function matchSwings(first: BetweenBoat, second: BetweenBoat, quarter: number): Match | null {
  let match: Match | null = null;
  for (let round = 0; round < ROUNDS; round++) {
    match = matchPlaced(first, second, quarter, quarter + Math.round(match?.skew ?? 0));
    if (!match) return null;
  }
  return match;
}

/** `placed`: the skew by which the second boat's places are looked up. [s] */
function matchPlaced(first: BetweenBoat, second: BetweenBoat, quarter: number, placed: number): Match | null {
  const travel = travelTimes(first, second, placed);
  const usable = misfits(first, second, quarter, travel).filter((curve) => curve.every(({ n }) => n >= LEAST_COMMON));
  if (usable.length < STRETCHES - 2) return null;
  const whole = bestSkew(usable);
  if (Math.abs(whole) >= REACH - NEIGHBOUR) return null;
  const without = usable.map((curve) => bestSkew(usable.filter((other) => other !== curve)));
  const mean = without.reduce((sum, skew) => sum + skew, 0) / without.length;
  const jackknife = ((without.length - 1) / without.length) * without.reduce((sum, s) => sum + (s - mean) ** 2, 0);
  const travelError = TRAVEL_ERROR * median(travel.map(Math.abs));
  const worse = usable.filter((curve) => meanSquare([curve[REACH]]) > meanSquare([curve[Math.round(whole) + REACH]]));
  return {
    skew: whole,
    se: Math.max(1, Math.hypot(JACKKNIFE_SHORT * Math.sqrt(jackknife), travelError)),
    worse: worse.length / usable.length,
  };
}

/** For each stretch, the misfit at every skew from -REACH to REACH. */
function misfits(first: BetweenBoat, second: BetweenBoat, quarter: number, travel: Float64Array): Misfit[][] {
  const [a, b] = [impliedSwings(first), impliedSwings(second)];
  const rows = Array.from({ length: first.n }, (_, i) => i).filter((i) => !Number.isNaN(a[i] + travel[i]));
  return Array.from({ length: STRETCHES }, (_, k) => {
    const own = rows.slice(Math.round((k * rows.length) / STRETCHES), Math.round(((k + 1) * rows.length) / STRETCHES));
    return Array.from({ length: 2 * REACH + 1 }, (_unused, step) => {
      const total = { n: 0, sum: 0, squares: 0 };
      for (const i of own) {
        const j = Math.round(first.t0 + i + quarter + step - REACH + travel[i] - second.t0);
        if (j < 0 || j >= second.n || Number.isNaN(b[j])) continue;
        const difference = a[i] - b[j];
        total.n++;
        total.sum += difference;
        total.squares += difference * difference;
      }
      return total;
    });
  });
}

/** Seconds a swing takes from the first boat to the second, by row of the first; NaN where either is not known. */
function travelTimes(first: BetweenBoat, second: BetweenBoat, skew: number): Float64Array {
  const wind = [...meanWindByLap(first, second, -skew).values()][0];
  const out = new Float64Array(first.n).fill(NaN);
  if (!wind) return out;
  for (let i = 0; i < first.n; i++) {
    const j = first.t0 + i + skew - second.t0;
    if (j < 0 || j >= second.n) continue;
    const apart = (first.x[i] - second.x[j]) * wind.east + (first.y[i] - second.y[j]) * wind.north;
    out[i] = apart / (first.tws[i] > 1 ? first.tws[i] : USUAL_WIND);
  }
  return out;
}

/** The skew of least misfit, to a part of a second by the parabola through it and neighbours 10 s off. */
function bestSkew(stretches: readonly (readonly Misfit[])[]): number {
  const curve = Array.from({ length: 2 * REACH + 1 }, (_, step) => meanSquare(stretches.map((own) => own[step])));
  let best = 0;
  curve.forEach((value, step) => {
    if (value < curve[best]) best = step;
  });
  const [left, right] = [curve[best - NEIGHBOUR], curve[best + NEIGHBOUR]];
  const bend = left + right - 2 * curve[best];
  return best - REACH + (bend > 0 ? ((NEIGHBOUR / 2) * (left - right)) / bend : 0);
}

function meanSquare(parts: readonly Misfit[]): number {
  const n = parts.reduce((total, part) => total + part.n, 0);
  const sum = parts.reduce((total, part) => total + part.sum, 0);
  return parts.reduce((total, part) => total + part.squares, 0) / n - (sum / n) ** 2;
}
