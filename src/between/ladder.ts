import { eastOf, northOf } from '../math/angles.js';
import { rowAt, type BetweenBoat } from './boat.js';
import { sharedDirection, WindSum, type UnitVector } from './shared-wind.js';

/**
 * The ladder: rungs square to the mean wind of a leg, every boat on one. The gain of one boat over the other along the
 * leg, where each tacked, and what the gain is made of.
 */
export interface LadderLeg {
  readonly lap: number;
  /** UTC epoch seconds: both on the leg, until the first of them leaves it. */
  readonly from: number;
  readonly to: number;
  /** Unit vector to where the mean wind comes from. */
  readonly wind: UnitVector;
  /** Metres to windward the first boat was ahead at the start (negative: behind). */
  readonly lead: number;
  /** Metres it gained on the leg; the parts sum to it. */
  readonly gain: number;
  readonly parts: LadderParts;
  readonly rows: readonly LadderRow[];
  readonly tacks: readonly LadderTack[];
}

export interface LadderParts {
  /** Speed made good against each boat's own wind of the second, outside manoeuvres. [m] */
  readonly sailing: number;
  /** The same while either is in a manoeuvre. [m] */
  readonly manoeuvres: number;
  /** Sailing toward the mean wind rather than the wind of the second: being on the lifted tack. [m] */
  readonly shifts: number;
  /** What positions show and velocities do not: gaps, a current that is not the same at both. [m] */
  readonly rest: number;
}

export interface LadderRow {
  readonly time: number;
  /** Metres gained by the first boat since the start of the leg. */
  readonly gain: number;
  /** Of them by shifts. */
  readonly shifts: number;
}

export interface LadderTack {
  /** 0 the first boat, 1 the second. */
  readonly boat: 0 | 1;
  readonly time: number;
  /** Metres to windward, and to the right when looking to windward, of where the first boat was at the start. */
  readonly rung: number;
  readonly across: number;
  /** Metres the first boat had gained by then. */
  readonly gain: number;
}

/** Seconds between rows of the gain. */
const STEP = 5;
/** A leg on which both are for less than this is not compared. [s] */
const LEAST_SECONDS = 60;

/**
 * Gains along every leg both boats sailed.
 *
 * Velocity of each boat, second by second, splits as U . w_mean = U . w + U . (w_mean - w): what it made against the
 * wind at that second, and what the shifts gave.
 *
 * @param first  First boat: gains are its.
 * @param second Second boat.
 * @returns One entry a lap on which both were upwind at the same time and the wind is known.
 */
export function ladder(first: BetweenBoat, second: BetweenBoat): LadderLeg[] {
  return first.legs.flatMap((leg) => {
    const other = second.legs.find(({ lap }) => lap === leg.lap);
    if (!other) return [];
    const from = Math.max(first.t0 + leg.from, second.t0 + other.from);
    const to = Math.min(first.t0 + leg.to, second.t0 + other.to);
    const wind = to - from >= LEAST_SECONDS ? meanWind(first, second, from, to) : null;
    const climbed = wind && climb(first, second, from, to, wind);
    return climbed ? [{ lap: leg.lap, ...climbed }] : [];
  });
}

function meanWind(first: BetweenBoat, second: BetweenBoat, from: number, to: number): UnitVector | null {
  const sum = new WindSum();
  for (let time = from; time < to; time++) {
    const [i, j] = [rowAt(first, time), rowAt(second, time)];
    if (i >= 0 && j >= 0) sum.add(sharedDirection(first, i, second, j));
  }
  return sum.mean();
}

/** Metres to windward, and to the right. */
function onLadder(boat: BetweenBoat, time: number, wind: UnitVector): { rung: number; across: number } {
  const row = rowAt(boat, time);
  const [x, y] = row < 0 ? [NaN, NaN] : [boat.x[row], boat.y[row]];
  return { rung: x * wind.east + y * wind.north, across: x * wind.north - y * wind.east };
}

function climb(
  first: BetweenBoat,
  second: BetweenBoat,
  from: number,
  to: number,
  wind: UnitVector,
): Omit<LadderLeg, 'lap'> | null {
  const ahead = (time: number): number => onLadder(first, time, wind).rung - onLadder(second, time, wind).rung;
  const known = times(from, to, 1).filter((time) => Number.isFinite(ahead(time)));
  if (known.length < LEAST_SECONDS) return null;
  const [start, end] = [known[0], known[known.length - 1]];
  const lead = ahead(start);
  const gain = ahead(end) - lead;
  const origin = onLadder(first, start, wind);
  const tacks = [first, second].flatMap((boat, index) =>
    tackTimes(boat, start, end).map((time) => {
      const place = onLadder(boat, time, wind);
      const [rung, across] = [place.rung - origin.rung, place.across - origin.across];
      return { boat: index as 0 | 1, time, rung, across, gain: ahead(time) - lead };
    }),
  );
  tacks.sort((a, b) => a.time - b.time || a.boat - b.boat);
  const { parts, shifts } = split(first, second, start, end, wind);
  const rows = times(start, end, STEP).map((time) => ({
    time,
    gain: ahead(time) - lead,
    shifts: shifts[time - start],
  }));
  const rest = gain - parts.sailing - parts.manoeuvres - parts.shifts;
  return { from: start, to: end, wind, lead, gain, parts: { ...parts, rest }, rows, tacks };
}

function times(from: number, to: number, step: number): number[] {
  return Array.from({ length: Math.floor((to - from) / step) + 1 }, (_, k) => from + k * step);
}

function tackTimes(boat: BetweenBoat, from: number, to: number): number[] {
  return boat.manoeuvres
    .filter(({ kind }) => kind === 'tack')
    .map(({ at }) => boat.t0 + at)
    .filter((time) => time >= from && time <= to);
}

/** The parts, and what shifts gave up to each second. */
function split(
  first: BetweenBoat,
  second: BetweenBoat,
  from: number,
  to: number,
  wind: UnitVector,
): { parts: Omit<LadderParts, 'rest'>; shifts: Float64Array } {
  const parts = { sailing: 0, manoeuvres: 0, shifts: 0 };
  const shifts = new Float64Array(to - from + 1);
  const busy = [inManoeuvre(first), inManoeuvre(second)] as const;
  for (let time = from; time < to; time++) {
    const [i, j] = [rowAt(first, time), rowAt(second, time)];
    const a = progress(first, i, wind);
    const b = progress(second, j, wind);
    if (a && b) {
      parts[busy[0][i] || busy[1][j] ? 'manoeuvres' : 'sailing'] += a.own - b.own;
      parts.shifts += a.shift - b.shift;
    }
    shifts[time - from + 1] = parts.shifts;
  }
  return { parts, shifts };
}

/** One second's metres against the boat's own wind, and what is left toward the mean wind; null in a gap. */
function progress(boat: BetweenBoat, row: number, wind: UnitVector): { own: number; shift: number } | null {
  if (row < 0 || Number.isNaN(boat.ux[row])) return null;
  const along = boat.ux[row] * wind.east + boat.uy[row] * wind.north;
  const twd = boat.twd[row];
  const own = Number.isNaN(twd) ? along : boat.ux[row] * eastOf(twd) + boat.uy[row] * northOf(twd);
  return { own, shift: along - own };
}

function inManoeuvre(boat: BetweenBoat): Uint8Array {
  const busy = new Uint8Array(boat.n);
  for (const { from, to } of boat.manoeuvres) busy.fill(1, Math.max(0, from), Math.max(0, to));
  return busy;
}
