import { DEG, turn } from '../math/angles.js';
import { toKnots } from '../math/units.js';

/** The columns a turn is read off; units and signs as in the series. */
export interface TurnColumns {
  readonly speed: Float64Array;
  readonly gamma: Float64Array;
  readonly ux: Float64Array;
  readonly uy: Float64Array;
  readonly heading: Float64Array;
}

/** Rows of a turn: its window begins, through the wind, settled again. */
export interface TurnRows {
  readonly entry: number;
  readonly at: number;
  readonly exit: number;
}

/** What a turn did to the boat. NaN where it cannot be told. */
export interface TurnFigures {
  /** Mean of the ten seconds before, and the least in the turn. [kn] */
  readonly before: number;
  readonly lowest: number;
  /** Seconds from head to wind until nineteen twentieths of the speed before are had again. */
  readonly back: number;
  /** Fastest turning, over three seconds. [deg/s] */
  readonly rate: number;
  /** Widest course angle in the quarter minute after. [deg] */
  readonly out: number;
}

const BEFORE = 10;
const AFTER = 15;
const AGAIN = 0.95;
/** Back later than this is not of the turn. [s] */
const LATEST = 60;

/**
 * Reads a turn off the columns.
 *
 * @param step Seconds a row.
 */
export function turnFigures(columns: TurnColumns, { entry, at, exit }: TurnRows, step = 1): TurnFigures {
  const knots = (from: number, to: number): number[] => {
    const rows = columns.speed.subarray(Math.max(0, from), Math.max(0, to));
    return [...rows].filter(Number.isFinite).map(toKnots);
  };
  const earlier = knots(entry - Math.round(BEFORE / step), entry);
  const before = earlier.reduce((sum, v) => sum + v, 0) / earlier.length;
  const during = knots(entry, exit);
  const angles = [...columns.gamma.subarray(at, at + Math.round(AFTER / step))].filter(Number.isFinite).map(Math.abs);
  return {
    before,
    lowest: during.length > 0 ? Math.min(...during) : NaN,
    back: backAfter(columns.speed, at, before, step),
    rate: fastest(columns, at, step),
    out: angles.length > 0 ? Math.max(...angles) : NaN,
  };
}

/** From the slowest second after head to wind on. */
function backAfter(speed: Float64Array, at: number, before: number, step: number): number {
  const last = Math.min(speed.length - 1, at + Math.round(LATEST / step));
  let slowest = at;
  for (let i = at; i <= Math.min(last, at + Math.round(AFTER / step)); i++) if (speed[i] < speed[slowest]) slowest = i;
  for (let i = slowest; i <= last; i++) if (toKnots(speed[i]) >= AGAIN * before) return (i - at) * step;
  return NaN;
}

/** By the bow where it was logged, else by the course. */
function fastest({ ux, uy, heading }: TurnColumns, at: number, step: number): number {
  const direction = (i: number): number => (Number.isFinite(heading[i]) ? heading[i] : DEG * Math.atan2(ux[i], uy[i]));
  const half = Math.max(1, Math.round(1.5 / step));
  const reach = Math.round(8 / step);
  let most = NaN;
  for (let i = Math.max(0, at - reach); i + 2 * half <= Math.min(ux.length - 1, at + reach); i++) {
    const rate = Math.abs(turn(direction(i), direction(i + 2 * half))) / (2 * half * step);
    if (!(rate <= most)) most = Number.isFinite(rate) ? rate : most;
  }
  return most;
}
