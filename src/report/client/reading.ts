import { directionOf, eastOf, northOf, turn, wrap360 } from '../../math/angles.js';
import { toKnots } from '../../math/units.js';
import { doingAt, legAt, rowAt, type Boat, type Race } from './race.js';

/** All that is shown of one boat at one second, in knots and degrees. NaN = not known. */
export interface Reading {
  readonly x: number;
  readonly y: number;
  readonly course: number;
  /** Where the bow points: logged, else course and the leg's mean leeway. */
  readonly bow: number;
  readonly bowLogged: boolean;
  readonly leeway: number;
  readonly speed: number;
  readonly vmg: number;
  readonly angle: number;
  readonly gamma: number;
  readonly twd: number;
  readonly tws: number;
  readonly beta: number;
  readonly aws: number;
  readonly leg: string;
  readonly doing: string;
}

const NOTHING: Reading = {
  x: NaN, y: NaN, course: NaN, bow: NaN, bowLogged: false, leeway: NaN, speed: NaN, vmg: NaN, angle: NaN, gamma: NaN,
  twd: NaN, tws: NaN, beta: NaN, aws: NaN, leg: '–', doing: 'not sailing',
}; // prettier-ignore

/** Below this no leeway is shown: the course is mostly the receiver's error. Common practice, no source. [kn] */
const LEAST_LEEWAY_SPEED = 1;

export function readingAt(race: Race, boat: Boat, time: number): Reading {
  const i = rowAt(race, boat, time);
  if (i < 0) return NOTHING;
  const c = boat.columns;
  const leg = legAt(boat, time);
  const course = directionOf(c.ux[i], c.uy[i]);
  const gamma = c.gamma[i];
  const side = gamma > 0 ? 1 : -1;
  const logged = Number.isFinite(c.heading[i]);
  const mean = leg?.facts.leeway ?? NaN;
  // A boat that hardly moves has a bow and a drift, but no leeway.
  const slow = !(toKnots(c.speed[i]) >= LEAST_LEEWAY_SPEED);
  const leeway = slow ? NaN : logged ? side * turn(course, c.heading[i]) : mean;
  const bow = logged ? c.heading[i] : Number.isFinite(mean) ? wrap360(course + side * mean) : course;
  return {
    x: c.x[i], y: c.y[i], course, bow, bowLogged: logged, leeway,
    speed: toKnots(c.speed[i]), vmg: toKnots(c.vmg[i]), angle: Math.abs(gamma), gamma,
    twd: wrap360(c.twd[i]), tws: toKnots(c.tws[i]), beta: c.beta[i], aws: toKnots(c.aws[i]),
    leg: leg ? `lap ${leg.facts.lap}, ${leg.facts.kind}` : '–',
    doing: doingAt(race, boat, time),
  }; // prettier-ignore
}

/** How far the first boat is to windward of the second, along the wind at the first. [m] */
export function windwardGap(a: Reading, b: Reading): number {
  return (a.x - b.x) * eastOf(a.twd) + (a.y - b.y) * northOf(a.twd);
}

/** Metres behind the reference since the leg began; NaN off the upwind legs or without a reference. */
export function behindAt(race: Race, boat: Boat, time: number): number {
  const leg = legAt(boat, time);
  if (!leg || leg.facts.kind !== 'upwind') return NaN;
  const rate = referenceRate(race, leg.facts.available, leg.to - leg.from);
  const first = rowAt(race, boat, leg.from);
  const last = rowAt(race, boat, time);
  if (first < 0 || last < 0) return NaN;
  return rate * (last - first) * race.step - (boat.made[last] - boat.made[first]);
}

/** Metres a second to windward that count as none lost: the ledger's, else the day's best settled VMG. */
export function referenceRate(race: Race, available: number | null, seconds: number): number {
  if (available !== null) return available / seconds;
  const best = Math.max(...race.boats.flatMap((b) => b.legs.map((l) => l.settledVmg ?? -Infinity)));
  return Number.isFinite(best) ? (best * 1852) / 3600 : NaN;
}
