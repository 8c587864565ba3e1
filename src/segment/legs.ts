import { circularMean, directionOf, eastOf, northOf } from '../math/angles.js';
import { lengthOf } from '../math/length.js';
import { median } from '../math/median.js';
import { findStates, steeringAngle } from './point-of-sail.js';
import type { RowRange, Sailing } from './sailing.js';
import type { Thresholds } from './thresholds.js';

export type LegKind = 'upwind' | 'downwind' | 'reach';

export interface Leg extends RowRange {
  readonly kind: LegKind;
  /** 1 for the first leg of its kind, and so on. */
  readonly lap: number;
}

export interface Place {
  readonly x: number;
  readonly y: number;
}

/** What is known of the race beforehand. Rows are fractional seconds from the boat's row 0; null = not known. */
export interface Course {
  readonly gun: number | null;
  readonly finish: number | null;
  /** Practice stretches without a course: each is one leg. */
  readonly runs: readonly RowRange[];
  readonly windward: Place | null;
  readonly leeward: Place | null;
  /** Where the fleet was found to round at the bottom, for the end of the last leg; null = not looked for yet. */
  readonly foundLeeward: Place | null;
  /** The same at the top, for boats that reach to the mark from beyond the lay line. */
  readonly foundWindward: Place | null;
}

/**
 * Legs of one boat.
 *
 * With runs given, each run is a leg of the kind mostly sailed. Else the along-wind position is cut at its turning
 * points (a fall-back of `legTurn` seconds of usual speed ends a leg); a rise is a beat, a fall a downwind leg or a
 * reach. The first beat begins at the gun, or, without one, where sustained close-hauled sailing begins. Beats that no
 * rounding follows count only when none is rounded or when they end at the windward mark: others are the sail out or
 * the sail home.
 */
export function findLegs(sailing: Sailing, course: Course, usual: number, thresholds: Thresholds): Leg[] {
  if (course.runs.length > 0) return numbered(course.runs.flatMap((run) => runLeg(sailing, run)));
  const progress = alongWind(sailing);
  const gun = course.gun === null ? 0 : Math.max(0, Math.ceil(course.gun));
  const end = course.finish === null ? sailing.n : Math.min(sailing.n, Math.floor(course.finish));
  const turnBack = Math.max(50, thresholds.legTurn * usual);
  const pieces = monotonePieces(progress, gun, end, turnBack).filter(
    (piece) => piece.to - piece.from >= thresholds.minLeg && Math.abs(piece.rise) >= 2 * turnBack,
  );
  const angle = steeringAngle(sailing, usual, thresholds);
  const legs: Leg[] = [];
  for (const piece of racingPieces(pieces, sailing, course, thresholds)) {
    legs.push(...legsOf(piece, sailing, angle, course, thresholds));
  }
  return numbered(inTurn(legs).filter((leg) => share(sailing, leg) >= SEEN));
}

/** A leg begins no earlier than the one before it ends. */
function inTurn(legs: readonly Leg[]): Leg[] {
  let end = 0;
  return legs.flatMap((leg) => {
    const from = Math.max(leg.from, end);
    end = Math.max(end, leg.to);
    return from < leg.to ? [{ ...leg, from }] : [];
  });
}

/** A leg of which less than this was seen (a gap, an excluded span, the engine) says nothing. */
const SEEN = 0.6;

function share(sailing: Sailing, leg: RowRange): number {
  let seen = 0;
  for (let i = leg.from; i < leg.to; i++) if (!Number.isNaN(sailing.ux[i])) seen++;
  return seen / (leg.to - leg.from);
}

/** Distance made along the mean wind since row 0, gaps bridged at no progress. [m] */
function alongWind(sailing: Sailing): Float64Array {
  const out = new Float64Array(sailing.n);
  const wind = slowWind(sailing);
  let made = 0;
  for (let i = 0; i < sailing.n; i++) {
    const gain = sailing.ux[i] * eastOf(wind[i]) + sailing.uy[i] * northOf(wind[i]);
    if (!Number.isNaN(gain)) made += gain;
    out[i] = made;
  }
  return out;
}

/** Wind direction averaged over ten minutes: legs are laid to the wind's trend, not to its shifts. [deg] */
function slowWind(sailing: Sailing): Float64Array {
  const half = 300;
  const n = sailing.n;
  const east = new Float64Array(n + 1);
  const north = new Float64Array(n + 1);
  for (let i = 0; i < n; i++) {
    const known = !Number.isNaN(sailing.twd[i]);
    east[i + 1] = east[i] + (known ? eastOf(sailing.twd[i]) : 0);
    north[i + 1] = north[i] + (known ? northOf(sailing.twd[i]) : 0);
  }
  const out = new Float64Array(n);
  for (let i = 0; i < n; i++) {
    const a = Math.max(0, i - half);
    const b = Math.min(n, i + half);
    out[i] = directionOf(east[b] - east[a], north[b] - north[a]);
  }
  return out;
}

interface Piece extends RowRange {
  /** Metres gained to windward, negative going down. */
  readonly rise: number;
  /** Begins where another piece ends: at a mark. */
  readonly follows: boolean;
}

/** Cuts a curve at its turning points: one is final once the curve has gone back by `turnBack`. */
function monotonePieces(progress: Float64Array, from: number, to: number, turnBack: number): Piece[] {
  const pieces: Piece[] = [];
  if (to - from < 2) return pieces;
  let start = from;
  let high = from;
  let low = from;
  let rising: boolean | null = null;
  const close = (at: number): void => {
    if (at > start)
      pieces.push({ from: start, to: at, rise: progress[at] - progress[start], follows: pieces.length > 0 });
    start = at;
  };
  for (let i = from; i < to; i++) {
    if (progress[i] > progress[high]) high = i;
    if (progress[i] < progress[low]) low = i;
    if (rising !== false && progress[high] - progress[i] > turnBack) {
      if (rising === null) start = low < high ? low : start;
      close(high);
      rising = false;
      low = i;
    } else if (rising !== true && progress[i] - progress[low] > turnBack) {
      if (rising === null) start = high < low ? high : start;
      close(low);
      rising = true;
      high = i;
    }
  }
  if (rising !== null) close(rising ? high : low);
  return pieces;
}

/** A rise or fall smaller than this share of the race's beats is waiting or a harbour, not a leg. */
const SMALL = 0.3;
/** A beat that ends within this share of its height of where others were rounded ends at the mark. */
const AT_WINDWARD = 0.15;
const AT_WINDWARD_LEAST = 80;

/** A beat that no rounding follows outweighs a single rounded one when it is this much higher: the log ends on it. */
const HIGHER = 1.3;

/** Leaves out the sail out, waiting and the sail home. */
function racingPieces(
  pieces: readonly Piece[],
  sailing: Sailing,
  course: Course,
  thresholds: Thresholds,
): readonly Piece[] {
  const isRounded = pieces.map((piece, k) => piece.rise > 0 && roundedBy(pieces, k, thresholds));
  const height = Math.max(0, ...pieces.filter((_, k) => isRounded[k]).map((piece) => piece.rise));
  const rounded = isRounded.map((is, k) => is && pieces[k].rise >= SMALL * height);
  if (!rounded.includes(true)) {
    const sustained = pieces.filter((piece) => piece.rise > 0 && piece.to - piece.from > 180);
    return course.gun !== null ? pieces : sustained;
  }
  const tops = pieces.filter((_, k) => rounded[k]);
  const mark = course.windward ?? medianPlace(tops.map((piece) => placeAt(sailing, piece.to)));
  const near = Math.max(AT_WINDWARD_LEAST, AT_WINDWARD * median(tops.map((piece) => piece.rise)));
  const first = rounded.indexOf(true);
  return pieces.flatMap((piece, k) => {
    if (course.gun === null && k < first) return [];
    if (course.gun !== null && k === 0 && piece.rise > 0) return [piece];
    if (Math.abs(piece.rise) < SMALL * height) return [];
    if (rounded[k]) return [piece];
    if (piece.rise < 0) return k > first ? [piece] : [];
    const to = passing(sailing, piece, mark, near);
    if (to !== null && to - piece.from >= thresholds.minLeg) return [{ ...piece, to }];
    return course.gun === null && tops.length === 1 && piece.rise > HIGHER * height ? [piece] : [];
  });
}

/** A beat is rounded when a leg down of at least a third of its height follows within a minute. */
function roundedBy(pieces: readonly Piece[], k: number, thresholds: Thresholds): boolean {
  const up = pieces[k];
  const down = pieces[k + 1];
  return !!down && down.rise < -up.rise / 3 && down.from - up.to <= thresholds.minLeg;
}

function placeAt(sailing: Sailing, row: number): Place {
  const i = Math.min(row, sailing.n - 1);
  return { x: sailing.x[i], y: sailing.y[i] };
}

function medianPlace(places: readonly Place[]): Place {
  return { x: median(places.map((place) => place.x)), y: median(places.map((place) => place.y)) };
}

/** Turns a rise or fall into legs with exact ends, reaches set apart. */
function legsOf(piece: Piece, sailing: Sailing, angle: Float64Array, course: Course, thresholds: Thresholds): Leg[] {
  const from = Math.max(Math.ceil(course.gun ?? 0), legStart(piece, sailing, angle, course, thresholds));
  const to = Math.min(Math.floor(course.finish ?? sailing.n), legEnd(piece, sailing, angle, course));
  if (to - from < thresholds.minLeg) return [];
  if (piece.rise > 0) return [{ kind: 'upwind', lap: 0, from, to }];
  return reachesApart({ from, to }, angle, thresholds).map(({ kind, ...range }) => ({ kind, lap: 0, ...range }));
}

/** Row of the closest approach to a mark within a minute and a half of a row. */
function closest(sailing: Sailing, row: number, mark: Place): number {
  let best = row;
  let least = Infinity;
  for (let i = Math.max(0, row - 90); i < Math.min(sailing.n, row + 90); i++) {
    const distance = lengthOf(sailing.x[i] - mark.x, sailing.y[i] - mark.y);
    if (distance < least) {
      least = distance;
      best = i;
    }
  }
  return best;
}

function legStart(piece: Piece, sailing: Sailing, angle: Float64Array, course: Course, thresholds: Thresholds): number {
  const gun = course.gun === null ? null : Math.max(0, Math.ceil(course.gun));
  if (gun !== null && piece.rise > 0 && piece.from - gun < 120) return gun;
  const mark = piece.rise > 0 ? course.leeward : course.windward;
  if (mark && piece.from > 0) return closest(sailing, piece.from, mark);
  if (piece.from === 0) return 0;
  if (piece.rise < 0) return corner(piece.from, angle, 1);
  if (course.gun !== null || piece.follows) return corner(piece.from, angle, -1);
  return sustainedFrom(piece, angle, thresholds);
}

function legEnd(piece: Piece, sailing: Sailing, angle: Float64Array, course: Course): number {
  const mark = piece.rise > 0 ? course.windward : course.leeward;
  if (mark && piece.to < sailing.n - 1) return closest(sailing, piece.to, mark);
  const turned = corner(piece.to, angle, piece.rise > 0 ? 1 : -1);
  if (piece.rise > 0) return reachedFrom(turned, sailing, course.foundWindward) ?? turned;
  const finish = course.foundLeeward ? passing(sailing, piece, course.foundLeeward, AT_MARK) : null;
  return finish !== null && finish < turned - 10 ? finish : turned;
}

/** A boat that comes this close to where others rounded has been there. [m] */
const AT_MARK = 60;

/** A boat that has come so much nearer to the mark since its beat seemed over had not been there yet. [m] */
const NEARER = 30;
/** So long a reach to the mark is looked for. [s] */
const LONGEST_REACH = 90;

/**
 * A boat that tacks well beyond the lay line reaches to the mark: its way along the wind is over, its leg is not. Row at
 * which it is there; null where it was there already, or never comes.
 */
function reachedFrom(turned: number, sailing: Sailing, mark: Place | null): number | null {
  if (!mark) return null;
  const away = (i: number): number => lengthOf(sailing.x[i] - mark.x, sailing.y[i] - mark.y);
  let best = turned;
  for (let i = turned; i < Math.min(sailing.n, turned + LONGEST_REACH); i++) if (away(i) < away(best)) best = i;
  return away(best) < AT_MARK && away(turned) - away(best) > NEARER ? best : null;
}

/** Row of a leg's closest approach to a place, if it comes close: the finish of a boat that sails on past it. */
function passing(sailing: Sailing, piece: RowRange, place: Place, within: number): number | null {
  let best = -1;
  let least = within;
  for (let i = piece.from; i < piece.to; i++) {
    const distance = lengthOf(sailing.x[i] - place.x, sailing.y[i] - place.y);
    if (distance < least) {
      least = distance;
      best = i;
    }
  }
  return best < 0 ? null : best;
}

/** Half the time over which the turn at a mark is looked at. [s] */
const TURN_HALF = 4;
/** A rounding turns at least this much in that time. [deg] */
const TURN_LEAST = 12;
/** How far from the turning point of the along-wind position the corner may lie. [s] */
const CORNER_BEFORE = 40;
const CORNER_AFTER = 20;

/**
 * The mark rounding near a turning point: where the angle to the wind opens (at the windward mark) or closes (at the
 * leeward mark) fastest over 8 s. A tack's own opening is passed over: it begins head to wind.
 *
 * @param opening +1 at the windward mark, -1 at the leeward mark.
 * @returns Row at which that turn begins; the turning point itself when the course does not turn near it (a finish, the end of the track).
 */
function corner(at: number, angle: Float64Array, opening: 1 | -1): number {
  let best = at;
  let most = TURN_LEAST;
  const first = Math.max(TURN_HALF, at - CORNER_BEFORE);
  const last = Math.min(angle.length - 1 - TURN_HALF, at + CORNER_AFTER);
  for (let i = first; i <= last; i++) {
    const before = Math.abs(angle[i - TURN_HALF]);
    const after = Math.abs(angle[i + TURN_HALF]);
    if (Math.min(before, after) < 35) continue;
    const turned = opening * (after - before);
    if (turned > most) {
      most = turned;
      best = i;
    }
  }
  return best === at ? at : Math.max(0, best - TURN_HALF);
}

/** Without a gun a beat begins with its first close-hauled state that lasts. */
function sustainedFrom(piece: Piece, angle: Float64Array, thresholds: Thresholds): number {
  const states = findStates(angle.subarray(piece.from, piece.to), thresholds);
  const first = states.find((state) => state.point === 'upwind' && state.to - state.from >= thresholds.minSettled);
  return piece.from + (first ? first.from : 0);
}

/** Reaching for `minReach` or longer within a leg down is a reach of its own. */
function reachesApart(
  range: RowRange,
  angle: Float64Array,
  thresholds: Thresholds,
): (RowRange & { kind: 'downwind' | 'reach' })[] {
  const states = findStates(angle.subarray(range.from, range.to), thresholds)
    .filter((state) => state.point === 'reach' && state.to - state.from >= thresholds.minReach)
    .map((state) => ({ from: state.from + range.from, to: state.to + range.from }));
  const out: (RowRange & { kind: 'downwind' | 'reach' })[] = [];
  let at = range.from;
  for (const reach of states) {
    const lead = reach.from - at < thresholds.minLeg / 2 ? at : reach.from;
    const before = out.at(-1);
    if (lead === at && before?.kind === 'reach') {
      out[out.length - 1] = { ...before, to: reach.to };
      at = reach.to;
      continue;
    }
    if (lead > at) out.push({ kind: 'downwind', from: at, to: lead });
    out.push({ kind: 'reach', from: lead, to: reach.to });
    at = reach.to;
  }
  const last = out.at(-1);
  if (range.to - at < thresholds.minLeg / 2 && last) out[out.length - 1] = { ...last, to: range.to };
  else if (range.to > at) out.push({ kind: 'downwind', from: at, to: range.to });
  return out;
}

/** A practice run is one leg of the kind that was mostly sailed. */
function runLeg(sailing: Sailing, run: RowRange): Leg[] {
  const from = Math.max(0, Math.ceil(run.from));
  const to = Math.min(sailing.n, Math.floor(run.to));
  if (to <= from) return [];
  const size = median(Array.from(sailing.gamma.subarray(from, to), Math.abs));
  if (Number.isNaN(size)) return [];
  return [{ kind: size < 72 ? 'upwind' : size > 125 ? 'downwind' : 'reach', lap: 0, from, to }];
}

function numbered(legs: readonly Leg[]): Leg[] {
  const count: Record<LegKind, number> = { upwind: 0, downwind: 0, reach: 0 };
  return legs.map((leg) => ({ ...leg, lap: ++count[leg.kind] }));
}

/** Mean wind direction over a leg. [deg] */
export function meanWindOf(sailing: Sailing, range: RowRange): number {
  return circularMean(sailing.twd.subarray(range.from, range.to)).mean;
}
