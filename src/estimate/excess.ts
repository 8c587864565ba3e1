import { RAD } from '../math/angles.js';
import { median, robustSpread } from '../math/median.js';
import { studentInterval } from '../math/student.js';
import { LABEL } from '../segment/spells.js';
import { tackSign } from '../segment/sailing.js';
import type { Cause, LedgerFigures, LedgerPiece } from './ledger.js';
import { rateDifference, type Rate, type WindErrors } from './rate-difference.js';
import type { ErrorModel } from './steady.js';

/** One beat of a boat, for setting two boats side by side. */
export interface BeatCosts {
  readonly lap: number;
  readonly ledger: LedgerFigures;
  /** Seconds of the leg. */
  readonly seconds: number;
}

export interface BoatCosts {
  readonly beats: readonly BeatCosts[];
  readonly errors: ErrorModel;
}

export interface Excess {
  readonly cause: Cause;
  /** Metres that the boat lost more than the other, over the laps both sailed. */
  readonly metres: number;
  /** Sampling error: what another race of the same two would make of it. [m] */
  readonly se: number;
  /** Shift for one standard deviation of what no race averages: the instruments and the bend of the speed curve. [m] */
  readonly sys: number;
  /** Whether it is beyond what chance makes of so many causes. */
  readonly stands: boolean;
  /** Metres of it that the two ledgers have under `speed`: the curve may be too flat so far from its best angle. */
  readonly fromSpeed: number;
  /** Of manoeuvres: the mean cost of a tack, this boat's and the other's. [m] */
  readonly each?: { readonly mine: number; readonly theirs: number };
}

/** An excess smaller than this, two lengths of a dinghy, is nothing to tell a sailor. [m] */
const LEAST = 8;
/** The same for what goes on all the way (high, low, speed), as a share of the way: no helm repeats itself better. */
const LEAST_SHARE = 0.005;
/**
 * Never below two standard errors; wider for small samples and for looking at six causes that chance moves at once
 * (manoeuvres, start, high, low, speed, overstood): Bonferroni, 5 % one-sided.
 */
const LEVEL = 1 - (2 * 0.05) / 6;
const LEAST_FACTOR = 2;

/** Degrees of freedom of an error that is not told from this race. */
const MANY = 1000;

/** An excess before it is judged. */
interface Found {
  readonly cause: Cause;
  readonly metres: number;
  readonly se: number;
  /** Shift for the instruments. */
  readonly sys: number;
  /** Shift for the speed curve, and whether the excess could be made by it alone. */
  readonly curve: number;
  readonly madeByCurve: boolean;
  readonly freedom: number;
  readonly fromSpeed: number;
  /** Nothing to tell below this. [m] */
  readonly least?: number;
  readonly each?: Excess['each'];
}

/**
 * What `boat` lost more than `other`, cause by cause, over the laps both have: shifts last, the others largest first.
 *
 * High, low and speed: mean rates of the settled blocks, by generalised least squares, in which the error of a shared wind
 * cancels. Manoeuvres: mean cost of a tack, times the boat's number of tacks (tacking more often is no costly tack).
 * Starts and roundings, lay lines: what two boats that do it equally well differ by. Shifts: spread between the stretches
 * on one tack.
 *
 * @param boat, other Their beats and what is known of their instruments.
 * @returns Excesses in metres, positive: lost more than the other; none where no lap is common. Errors are of the habit,
 *   not of the race as sailed: in invented races of boats sailed alike, rms(excess / se) is 0.6 to 1.3 for the causes of
 *   which there is something to see.
 */
export function excesses(boat: BoatCosts, other: BoatCosts): Excess[] {
  const both = (one: BoatCosts, two: BoatCosts): readonly BeatCosts[] =>
    one.beats.filter(({ lap }) => two.beats.some((beat) => beat.lap === lap));
  const [mine, theirs] = [both(boat, other), both(other, boat)];
  if (mine.length === 0) return [];
  const found = [
    ...ratesFound(mine, theirs, boat.errors, other.errors),
    manoeuvresFound(mine, theirs),
    eventFound('start', mine, theirs, START_SECONDS),
    overstoodFound(mine, theirs),
    eventFound('stopped', mine, theirs, STOP_SECONDS),
    trimFound(mine, theirs),
  ].sort((a, b) => b.metres - a.metres);
  return [...found, shiftsFound(mine, theirs)].map(judged);
}

function judged({ cause, metres, se, sys, curve, madeByCurve, freedom, fromSpeed, each, least }: Found): Excess {
  const factor = Math.max(LEAST_FACTOR, studentInterval(LEVEL, Math.max(2, freedom)));
  const stands = metres > Math.max(LEAST, least ?? 0) && metres > factor * Math.hypot(se, sys, madeByCurve ? curve : 0);
  return { cause, metres, se, sys: Math.hypot(sys, curve), stands, fromSpeed, ...(each ? { each } : {}) };
}

function total(beats: readonly BeatCosts[], cause: Cause): number {
  return beats.reduce((sum, { ledger }) => sum + ledger.entries[cause].value, 0);
}

function mean(values: readonly number[]): number {
  return values.reduce((sum, value) => sum + value, 0) / values.length;
}

function settledOf(beats: readonly BeatCosts[]): LedgerPiece[] {
  return beats.flatMap(({ ledger }) => ledger.pieces.filter(({ label }) => label === LABEL.settled));
}

type Sailed = 'high' | 'low' | 'speed';

/**
 * Settled blocks as rates of a cause. How far an error of direction moves high and low is taken alike for all blocks of a
 * boat, else those that happened to lose little would count the most.
 */
function ratesOf(pieces: readonly LedgerPiece[], cause: Sailed): Rate[] {
  const usual = mean(pieces.map(({ offer }) => Math.abs(offer.slope)));
  return pieces.map(({ block, seconds, metres, offer }) => {
    const across = block.speed * Math.sin(block.gamma * RAD) * RAD;
    const side = tackSign(block.tack);
    return {
      time: block.time,
      seconds,
      x: block.x,
      y: block.y,
      value: metres[cause] / seconds,
      turning: side * (cause === 'speed' ? across + offer.slope : cause === 'high' ? usual : -usual),
      offered: cause === 'speed' ? offer.windSlope : 0,
    };
  });
}

/** Boats of one kind, sailed as well as each other, differ in speed by about this: common practice, no source. */
const ALIKE = 0.01;
/**
 * What the bend of a speed curve at its best angle is known to: share of the best speed made good per squared degree.
 * Built-in boats bend by 0.0011 to 0.0024, others of their size by as much again: common practice, no source.
 */
const BEND = 0.001;

/**
 * High, low and speed. A boat sailed off the best angle loses by the bend of the speed curve there, which no boat file
 * knows well; what it loses beyond the curve is then in part the curve's, in part its own, by how much of either is to be
 * expected.
 *
 *     part of speed that goes to the angle = q^2 / (q^2 + (1 % of available)^2),  q = bend x (off best)^2 / 2
 */
function ratesFound(
  mine: readonly BeatCosts[],
  theirs: readonly BeatCosts[],
  errors: ErrorModel,
  others: ErrorModel,
): Found[] {
  const seconds = mine.reduce((sum, beat) => sum + beat.seconds, 0);
  const [a, b] = [settledOf(mine), settledOf(theirs)];
  const of = (cause: Sailed): Found => {
    const [first, second] = [ratesOf(a, cause), ratesOf(b, cause)];
    const { value, se, freedom } = rateDifference(first, second, windOf(errors, others));
    const sys = seconds * instrumentShift(first, second, errors, others);
    const plain = total(mine, cause) - total(theirs, cause);
    const metres = Number.isNaN(value) ? plain : seconds * value;
    const least = LEAST_SHARE * mine.reduce((sum, { ledger }) => sum + ledger.available.value, 0);
    return { cause, metres, se: seconds * se, sys, curve: 0, madeByCurve: false, freedom, fromSpeed: 0, least };
  };
  const speed = of('speed');
  const offBest = (pieces: readonly LedgerPiece[]): number => mean(pieces.map((p) => p.block.gamma - p.offer.gamma));
  const vmg = mean(a.map(({ offer }) => offer.vmg));
  const [offMine, offTheirs] = [offBest(a), offBest(b)];
  const further = Math.abs(offMine) >= Math.abs(offTheirs) ? offMine : offTheirs;
  const q = (Math.abs(offMine ** 2 - offTheirs ** 2) / 2) * BEND * vmg * seconds;
  const share = q > 0 ? q ** 2 / (q ** 2 + (ALIKE * vmg * seconds) ** 2) : 0;
  const curve = q * Math.sqrt(1 - share);
  // What the curve is wrong by lies where the one further off sailed, whichever of the two that is.
  const angle = of(further < 0 ? 'high' : 'low');
  const moved = toward(share * speed.metres, angle.metres);
  const kept = { ...speed, metres: speed.metres - moved, se: (1 - share) * speed.se, curve, madeByCurve: true };
  const more = {
    ...angle,
    metres: angle.metres + moved,
    se: Math.hypot(angle.se, share * speed.se),
    curve,
    madeByCurve: true,
    fromSpeed: moved,
  };
  return [more, of(further < 0 ? 'low' : 'high'), kept];
}

/** A part of speed is moved to an angle's cost up to what takes that cost away. */
function toward(part: number, cost: number): number {
  return part * cost < 0 && Math.abs(part) > Math.abs(cost) ? -cost : part;
}

function windOf({ mismatch }: ErrorModel, other: ErrorModel): WindErrors {
  const shared = mismatch.direction.from !== 'sensor' && other.mismatch.direction.from !== 'sensor';
  return { direction: mismatch.direction, speed: mismatch.speed, shared };
}

/** What one standard deviation of the instruments' offsets does to the difference of mean rates. [m/s] */
function instrumentShift(
  first: readonly Rate[],
  second: readonly Rate[],
  errors: ErrorModel,
  others: ErrorModel,
): number {
  if (first.length === 0 || second.length === 0) return 0;
  const shift = (pick: (rate: Rate) => number, sd: number, other: number): number => {
    const [mine, theirs] = [mean(first.map(pick)) * sd, mean(second.map(pick)) * other];
    return windOf(errors, others).shared ? mine - theirs : Math.hypot(mine, theirs);
  };
  return Math.hypot(
    shift((rate) => rate.turning, errors.sysDirection, others.sysDirection),
    shift((rate) => rate.offered, errors.sysSpeed, others.sysSpeed),
  );
}

/** Least spread of the cost of tacks sailed alike: a wave, a puff. Common practice, no source. [m] */
const TACK_SPREAD = 1.5;
/** Costs further from the middle than so many robust spreads count as no further. */
const LIMIT = 2;

/** The mean cost of a tack beside the other's; few bad ones do not make a habit, and do not hide one. */
function manoeuvresFound(mine: readonly BeatCosts[], theirs: readonly BeatCosts[]): Found {
  const raw = [mine, theirs].map((beats) => beats.flatMap(({ ledger }) => tackCosts(ledger.pieces)));
  const spread = Math.max(TACK_SPREAD, robustSpread(raw.flatMap((costs) => costs.map((cost) => cost - median(costs)))));
  const [a, b] = raw.map((costs) => {
    const middle = median(costs);
    return costs.map((cost) => Math.max(middle - LIMIT * spread, Math.min(middle + LIMIT * spread, cost)));
  });
  const freedom = a.length + b.length - 2;
  const rest = { cause: 'manoeuvres', sys: 0, curve: 0, madeByCurve: false, freedom, fromSpeed: 0 } as const;
  if (a.length === 0 || b.length === 0 || freedom < 2) {
    return { ...rest, metres: total(mine, 'manoeuvres') - total(theirs, 'manoeuvres'), se: Infinity };
  }
  const squares = [a, b].flatMap((costs) => costs.map((cost) => (cost - mean(costs)) ** 2));
  const variance = Math.max(TACK_SPREAD ** 2, squares.reduce((sum, square) => sum + square, 0) / freedom);
  const metres = a.length * (mean(a) - mean(b));
  const each = { mine: mean(a), theirs: mean(b) };
  return { ...rest, metres, each, se: a.length * Math.sqrt(variance * (1 / a.length + 1 / b.length)) };
}

/** Cost of each tack of a beat that was sailed out before the mark, double tacks as one. [m] */
function tackCosts(pieces: readonly LedgerPiece[]): number[] {
  const costs: number[] = [];
  let cost = NaN;
  for (const { label, metres } of pieces) {
    const busy = label === LABEL.manoeuvre || label === LABEL.unsettled;
    if (label === LABEL.manoeuvre && Number.isNaN(cost)) cost = 0;
    if (busy) cost += metres.manoeuvres;
    else if (!Number.isNaN(cost)) {
      if (label !== LABEL.rounding) costs.push(cost);
      cost = NaN;
    }
  }
  return costs;
}

/** Two boats that start and round equally well differ, each time, by about so much time each: common practice, no source. [s] */
const START_SECONDS = 4;
/** A stop is a stop: when it began and ended is read off to about this. [s] */
const STOP_SECONDS = 1.5;

/** A cause of which a leg has one event: its error is a time, at the speed made good. */
function eventFound(cause: Cause, mine: readonly BeatCosts[], theirs: readonly BeatCosts[], seconds: number): Found {
  const vmg = mean([...mine, ...theirs].map((beat) => beat.ledger.available.value / beat.seconds));
  const se = seconds * vmg * Math.sqrt(mine.length + theirs.length);
  const metres = total(mine, cause) - total(theirs, cause);
  return { cause, metres, se, sys: 0, curve: 0, madeByCurve: false, freedom: MANY, fromSpeed: 0 };
}

/** A tack at the lay line is sailed so far beyond it while the boat turns; more is overstood. [m] */
const TURNING = 20;
/** A lay line is judged to about three lengths: common practice, no source. [m] */
const LAY_LINE = 12;

/**
 * How far beyond the lay line a boat tacked for the mark, all told, less how far the other did, times what a metre of it
 * cost the two. What a later shift made of it does not count; but where shifts have made it cost the other more in the end
 * there is nothing to tell.
 */
function overstoodFound(mine: readonly BeatCosts[], theirs: readonly BeatCosts[]): Found {
  const of = (beats: readonly BeatCosts[]): number[] =>
    beats.flatMap(({ ledger }) => ledger.overstood.map(({ past }) => past));
  const sum = (values: readonly number[]): number => values.reduce((total, value) => total + value, 0);
  const [a, b] = [of(mine), of(theirs)];
  const beyond = (values: readonly number[]): number[] =>
    values.filter((past) => past > TURNING).map((past) => past - TURNING);
  const each = (total(mine, 'overstood') + total(theirs, 'overstood')) / Math.max(1, sum(a) + sum(b));
  const events = Math.max(1, beyond(a).length + beyond(b).length);
  const costMore = total(mine, 'overstood') > total(theirs, 'overstood');
  return {
    ...(costMore ? {} : { least: Infinity }),
    cause: 'overstood',
    metres: each * (sum(beyond(a)) - sum(beyond(b))),
    se: each * LAY_LINE * Math.sqrt(events),
    sys: 0,
    curve: 0,
    madeByCurve: false,
    freedom: MANY,
    fromSpeed: 0,
  };
}

function trimFound(mine: readonly BeatCosts[], theirs: readonly BeatCosts[]): Found {
  const se = Math.hypot(...[...mine, ...theirs].map(({ ledger }) => ledger.entries.trim.se));
  const metres = total(mine, 'trim') - total(theirs, 'trim');
  return { cause: 'trim', metres, se, sys: 0, curve: 0, madeByCurve: false, freedom: MANY, fromSpeed: 0 };
}

/**
 * Shifts: which tack was sailed in which wind is chosen once a stretch, so the spread between stretches of the share that
 * was made of the shifts there were is the error.
 */
function shiftsFound(mine: readonly BeatCosts[], theirs: readonly BeatCosts[]): Found {
  const [a, b] = [mine, theirs].map((beats) => stretchSpread(beats));
  const metres = total(mine, 'shifts') - total(theirs, 'shifts');
  const freedom = a.n + b.n - 2;
  return {
    cause: 'shifts',
    metres,
    se: Math.hypot(a.se, b.se),
    sys: 0,
    curve: 0,
    madeByCurve: false,
    freedom,
    fromSpeed: 0,
  };
}

function stretchSpread(beats: readonly BeatCosts[]): { se: number; n: number } {
  const stretches: { size: number; metres: number }[] = [];
  for (const { ledger } of beats) {
    let tack = '';
    for (const { block, metres } of ledger.pieces) {
      if (block.tack !== tack) stretches.push({ size: 0, metres: 0 });
      tack = block.tack;
      const last = stretches.at(-1)!;
      last.size += Math.abs(metres.shifts);
      last.metres += metres.shifts;
    }
  }
  const n = stretches.length;
  const sum = (pick: (s: (typeof stretches)[number]) => number): number =>
    stretches.reduce((s, one) => s + pick(one), 0);
  const share =
    sum((s) => s.metres) /
    Math.max(
      1,
      sum((s) => s.size),
    );
  const squares = sum((s) => (s.metres - share * s.size) ** 2);
  return { se: n > 1 ? Math.sqrt((squares * n) / (n - 1)) : Infinity, n };
}
