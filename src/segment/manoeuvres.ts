import { unwrap } from '../math/angles.js';
import { median } from '../math/median.js';
import { findStates, steeringAngle, usualUpwindSpeed, type State } from './point-of-sail.js';
import type { Sailing, Tack } from './sailing.js';
import type { Thresholds } from './thresholds.js';

export type ManoeuvreKind = 'tack' | 'gybe' | 'round-up' | 'bear-away' | 'full-turn';

export interface Manoeuvre {
  readonly kind: ManoeuvreKind;
  /** Side of the wind before and after. */
  readonly from: Tack;
  readonly to: Tack;
  /** UTC epoch seconds of the bow (or course) through the wind, interpolated. */
  readonly time: number;
  /** Rows: window opens (before helm-down), through the wind, settled again. Window = [entry, exit). */
  readonly entry: number;
  readonly at: number;
  readonly exit: number;
}

export interface Manoeuvres {
  readonly states: readonly State[];
  readonly list: readonly Manoeuvre[];
  /** The boat's usual close-hauled speed. [m/s] */
  readonly usual: number;
}

/**
 * All turns of a recording, in time order.
 *
 * A tack is a passage of the bow (or the course) through the wind's eye between two close-hauled states on opposite
 * sides; a gybe one through dead downwind between two states off the wind; a full turn comes back to where it began.
 */
export function findManoeuvres(sailing: Sailing, thresholds: Thresholds): Manoeuvres {
  const usual = usualUpwindSpeed(sailing, thresholds);
  const angle = steeringAngle(sailing, usual, thresholds);
  const states = findStates(angle, thresholds);
  const turning = unwrap(angle);
  const list: Manoeuvre[] = [];
  for (let k = 0; k + 1 < states.length; k++) {
    const round = fullTurnTo(states, k, turning, thresholds);
    const found = round === null ? between(states, k, turning, thresholds) : fullTurn(states, k, round);
    if (found) list.push(complete(found, sailing, turning, usual, thresholds));
    if (round !== null) k = round - 1;
  }
  list.push(...changesOfPoint(states, sailing, angle, list, thresholds));
  list.sort((a, b) => a.time - b.time);
  return { states, list: trimToNext(list), usual };
}

interface Turn {
  readonly kind: ManoeuvreKind;
  readonly before: State;
  readonly after: State;
}

/**
 * Index of the state in which a full turn out of state k ends; null where there was none. A slow one has states of its
 * own on the way: they are part of it.
 */
function fullTurnTo(states: readonly State[], k: number, turning: Float64Array, thresholds: Thresholds): number | null {
  const before = states[k];
  for (let m = k + 1; m < states.length && states[m].from - before.to <= thresholds.maxTurn; m++) {
    const net = turning[states[m].from] - turning[before.to - 1];
    if (Math.abs(net) >= thresholds.fullTurn) return m;
  }
  return null;
}

const fullTurn = (states: readonly State[], k: number, to: number): Turn => ({
  kind: 'full-turn',
  before: states[k],
  after: states[to],
});

/** What happened between state k and the one that follows it, if it was a tack or a gybe. */
function between(states: readonly State[], k: number, turning: Float64Array, thresholds: Thresholds): Turn | null {
  const before = states[k];
  const after = states[k + 1];
  if (after.from - before.to > thresholds.maxTurn) return null;
  const net = turning[after.from] - turning[before.to - 1];
  if (before.side === after.side) return null;
  const throughWind = before.side > 0 ? net < 0 : net > 0;
  if (throughWind) return tackTo(states, k, thresholds);
  const offTheWind = before.point !== 'upwind' && after.point !== 'upwind';
  if (!offTheWind || gybeTurn(before, after, turning) < thresholds.gybeTurn) return null;
  return { kind: 'gybe', before, after };
}

/**
 * The state after a turn through the wind, if it was a tack: at least one of the two is close-hauled, neither is a run.
 * Off a tack a boat may come out on a short reach, or reach to the mark from an overstood lay line.
 */
function tackTo(states: readonly State[], k: number, thresholds: Thresholds): Turn | null {
  const entered = states[k];
  const earlier = states[k - 1];
  const viaReach =
    entered.point === 'reach' &&
    earlier?.point === 'upwind' &&
    earlier.side === entered.side &&
    entered.to - earlier.to <= thresholds.maxTurn;
  const before = viaReach ? earlier : entered;
  const after = states[k + 1];
  if (before.point === 'run' || after.point === 'run') return null;
  return before.point === 'upwind' || after.point === 'upwind' ? { kind: 'tack', before, after } : null;
}

/** Change of course between the middles of the two states' nearest ten seconds. [deg] */
function gybeTurn(before: State, after: State, turning: Float64Array): number {
  const a = median(turning.subarray(Math.max(before.from, before.to - 10), before.to));
  const b = median(turning.subarray(after.from, Math.min(after.to, after.from + 10)));
  return Math.abs(b - a);
}

function sideName(side: 1 | -1): Tack {
  return side > 0 ? 'starboard' : 'port';
}

/** Unknown rows within a turn from which on its moment is told from the courses before and after. [s] */
const BLIND = 4;

/** Row (fractional) at which the unwrapped angle passes the wind's eye (or dead downwind) between two rows. */
function passage(sailing: Sailing, turning: Float64Array, from: number, to: number, downwind: boolean): number {
  const middle = (turning[from] + turning[to]) / 2;
  const level = downwind ? 360 * Math.round((middle - 180) / 360) + 180 : 360 * Math.round(middle / 360);
  const crossings: number[] = [];
  let last = from;
  for (let i = from + 1; i <= to; i++) {
    if (Number.isNaN(turning[i])) continue;
    const a = turning[last] - level;
    const b = turning[i] - level;
    if (a === 0 || a * b < 0) {
      const blind = i - last > BLIND ? meeting(sailing, last, i) : null;
      crossings.push(blind ?? last + ((i - last) * a) / (a - b || 1));
    }
    last = i;
  }
  return crossings.length > 0 ? crossings[Math.floor((crossings.length - 1) / 2)] : (from + to) / 2;
}

/**
 * Row at which a boat turned while it was not seen: where the straight lines sailed before and after meet.
 *     p1 + a v1 = p2 - b v2,  a, b >= 0
 *
 * @returns null where the lines do not meet within the gap.
 */
function meeting(sailing: Sailing, before: number, after: number): number | null {
  const { x, y, ux, uy } = sailing;
  const cross = ux[before] * uy[after] - uy[before] * ux[after];
  const dx = x[after] - x[before];
  const dy = y[after] - y[before];
  const a = (dx * uy[after] - dy * ux[after]) / cross;
  return a >= 0 && a <= after - before ? before + a : null;
}

/** Adds times to a turn: passage, entry and exit. */
function complete(
  found: Turn,
  sailing: Sailing,
  turning: Float64Array,
  usual: number,
  thresholds: Thresholds,
): Manoeuvre {
  const { kind, before, after } = found;
  const first = before.to - 1;
  const row = passage(sailing, turning, first, after.from, kind === 'gybe');
  const at = Math.round(row);
  const entry = helmDown(turning, Math.max(before.from, at - thresholds.maxTurn), at) - thresholds.beforeTack;
  const exit = settledAgain(sailing, at, after, usual, thresholds);
  return {
    kind,
    from: sideName(before.side),
    to: sideName(after.side),
    time: sailing.t0 + row,
    entry: Math.max(0, Math.round(entry)),
    at,
    exit,
  };
}

/** Last row before `at` on which the boat still steered as before: within 8 degrees of its median angle there. */
function helmDown(turning: Float64Array, from: number, at: number): number {
  const steady = median(turning.subarray(from, Math.max(from + 1, at - 8)));
  for (let i = at; i > from; i--) if (Math.abs(turning[i] - steady) <= 8) return i;
  return from;
}

/**
 * Row at which speed is back: the first, between `settleMin` and `settleMax` after the passage, from which the 5 s mean
 * speed stays at 97 % of the median of what follows on that tack. Common practice, no source; 14 s leaves most of a bad
 * tack's cost in the settled sailing.
 */
function settledAgain(sailing: Sailing, at: number, after: State, usual: number, thresholds: Thresholds): number {
  const first = Math.round(at + thresholds.settleMin);
  const last = Math.round(at + thresholds.settleMax);
  const end = Math.min(after.to, last + 45);
  const settled = end - last >= 10 ? median(sailing.speed.subarray(last, end)) : usual;
  for (let i = first; i < last && i + 3 <= sailing.n; i++) {
    if (meanOf(sailing.speed, i - 2, i + 3) >= 0.97 * settled) return i;
  }
  return Math.min(last, sailing.n);
}

function meanOf(values: Float64Array, from: number, to: number): number {
  let sum = 0;
  for (let i = from; i < to; i++) sum += values[i];
  return sum / (to - from);
}

/** Rounding up or bearing away changes the course by at least this ... [deg] */
const POINT_CHANGE = 25;
/** ... between the means of this long before and after. [s] */
const POINT_SECONDS = 20;

/** Rounding up and bearing away: close-hauled for a while, then off the wind for a while, or back. */
function changesOfPoint(
  states: readonly State[],
  sailing: Sailing,
  angle: Float64Array,
  turns: readonly Manoeuvre[],
  thresholds: Thresholds,
): Manoeuvre[] {
  const long = states.filter((state) => state.to - state.from >= 2 * thresholds.minState);
  const size = (from: number, to: number): number =>
    median(Array.from(angle.subarray(Math.max(0, from), Math.min(angle.length, to)), Math.abs));
  const out: Manoeuvre[] = [];
  for (let k = 0; k + 1 < long.length; k++) {
    const before = long[k];
    const after = long[k + 1];
    const up = before.point !== 'upwind' && after.point === 'upwind';
    const away = before.point === 'upwind' && after.point !== 'upwind';
    if ((!up && !away) || after.from - before.to > 2 * thresholds.maxTurn) continue;
    const change = size(after.from, after.from + POINT_SECONDS) - size(before.to - POINT_SECONDS, before.to);
    if (Math.abs(change) < POINT_CHANGE) continue;
    const at = Math.round((before.to + after.from) / 2);
    if (turns.some((turn) => turn.at >= before.to - 2 && turn.at <= after.from + 2)) continue;
    out.push({
      kind: up ? 'round-up' : 'bear-away',
      from: sideName(before.side),
      to: sideName(after.side),
      time: sailing.t0 + at,
      entry: Math.max(0, Math.round(before.to - thresholds.beforeTack)),
      at,
      exit: Math.min(sailing.n, Math.round(after.from + thresholds.settleMin)),
    });
  }
  return out;
}

/** A window ends where the next one begins. */
function trimToNext(list: readonly Manoeuvre[]): Manoeuvre[] {
  return list.map((manoeuvre, k) => {
    const next = list[k + 1];
    if (!next || next.entry >= manoeuvre.exit) return manoeuvre;
    return { ...manoeuvre, exit: Math.max(manoeuvre.at + 1, Math.min(manoeuvre.exit, next.entry)) };
  });
}
