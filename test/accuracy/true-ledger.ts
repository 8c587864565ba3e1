/** True metres to windward that turns and shifts cost, from the noise-free second-by-second truth. */
import { performanceOf, SINGLE_HANDER } from './generator/boat.js';
import { cosd } from './generator/directions.js';
import { PHASES, type TrueBoat, type TrueLeg, type TrueTurn } from './generator/index.js';

const CLEAN = performanceOf(SINGLE_HANDER, 0);
const FETCH = PHASES.indexOf('fetch');

/** Seconds on each side of a turn in which settled sailing says what would have been sailed instead. */
const NEAR_S = 90;

/** Mean VMG of settled sailing near a turn: apart before and after, then averaged, so that a shift between does not lean it. [m/s] */
function usualVmg(boat: TrueBoat, from: number, to: number): number {
  const mean = (a: number, b: number): number => {
    let sum = 0;
    let n = 0;
    for (let i = Math.max(0, a); i < Math.min(boat.n, b); i++) {
      if (!boat.settled[i]) continue;
      sum += boat.vmg[i];
      n += 1;
    }
    return n > 0 ? sum / n : NaN;
  };
  const before = mean(from - NEAR_S, from);
  const after = mean(to, to + NEAR_S);
  if (Number.isNaN(before)) return after;
  return Number.isNaN(after) ? before : 0.5 * (before + after);
}

function lossOver(boat: TrueBoat, from: number, to: number, fetching: boolean): number {
  const usual = usualVmg(boat, from, to);
  if (Number.isNaN(usual)) return NaN;
  let sum = 0;
  for (let i = from; i < to; i++)
    sum += (fetching && boat.phase[i] === FETCH ? usualFetching(boat, i) : usual) - boat.vmg[i];
  return sum;
}

/** What a boat makes good that fetches the mark at its course angle: what it loses by that angle is overstood, not the turn's. [m/s] */
function usualFetching(boat: TrueBoat, i: number): number {
  const gamma = Math.abs(boat.gamma[i]);
  const best = CLEAN.bestUp(boat.tws[i]);
  const made = (angle: number): number => CLEAN.speed(boat.tws[i], angle) * cosd(angle);
  return (boat.bestVmg[i] * made(gamma)) / made(best);
}

/** Metres one turn cost, from 3 s before it until its recovery, 3 s before the next, or the mark. [m, positive lost] */
export function trueTackLoss(boat: TrueBoat, turn: TrueTurn): number {
  const next = boat.turns.find((other) => other.start >= turn.end);
  const leg = boat.legs.find((l) => turn.time >= l.start && turn.time < l.end);
  const to = Math.min(turn.settled, next ? next.start - 3 : Infinity, leg ? leg.end : Infinity);
  return lossOver(boat, Math.round(turn.start - 3 - boat.t0), Math.round(to - boat.t0), false);
}

/** Metres all tacks of a leg cost; turns that follow before recovery share one window. [m, positive lost] */
export function trueManoeuvreLoss(boat: TrueBoat, leg: TrueLeg): number {
  const windows: [number, number][] = [];
  for (const turn of boat.turns) {
    if (turn.time < leg.start || turn.time > leg.end || turn.atMark || turn.kind !== 'tack') continue;
    const from = Math.round(turn.start - 3 - boat.t0);
    const to = Math.min(Math.round(turn.settled), leg.end) - boat.t0;
    const last = windows.at(-1);
    if (last && from <= last[1]) last[1] = Math.max(last[1], to);
    else windows.push([from, to]);
  }
  return windows.reduce((sum, [from, to]) => sum + (lossOver(boat, from, to, true) || 0), 0);
}

/** Metres along the wind of the moment less metres along the leg's mean wind. [m, negative: the lifted tack was sailed] */
export function trueShifts(boat: TrueBoat, leg: TrueLeg): number {
  const from = leg.start - boat.t0;
  const to = leg.end - boat.t0;
  let east = 0;
  let north = 0;
  for (let i = from; i < to; i++) {
    const θ = (boat.twd[i] * Math.PI) / 180;
    east += Math.sin(θ);
    north += Math.cos(θ);
  }
  const length = Math.hypot(east, north);
  let sum = 0;
  for (let i = from; i < to; i++) sum += boat.vmg[i] - (boat.ux[i] * east + boat.uy[i] * north) / length;
  return sum;
}
