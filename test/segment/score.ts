/**
 * Sailing written as a score: what a helm did, second by second, as a detector gets to see it.
 *
 *     'P60 t S45 t P30 gap10 P20'
 *
 * P, S: seconds close-hauled on port, starboard. R, B: seconds running, reaching, on the side last sailed.
 * t: tack. a: aborted tack (to the wind's eye, two seconds past it, back on the same tack). g: gybe. f: full turn.
 * l: seconds luffing almost head to wind. i: seconds stopped. gap: seconds not seen.
 * tgap: seconds not seen, with a tack in their middle.
 */
import { makeSailing, type Sailing } from '../../src/segment/sailing.js';
import { chanceOf, wander } from '../accuracy/generator/random.js';

export interface Noise {
  /** Standard deviation of the helm's wander (correlated over 6 s) and of single seconds. [deg] */
  readonly noise?: number;
  readonly seed?: number;
  /** Where the wind comes from. [deg] */
  readonly twd?: number;
  /** Course angle close-hauled. [deg] */
  readonly angle?: number;
  /** The bow is logged too. */
  readonly heading?: boolean;
}

export interface Played {
  readonly sailing: Sailing;
  /** UTC seconds at which the bow passed the wind's eye, or dead downwind in a gybe; the middle of an aborted tack. */
  readonly events: readonly { readonly kind: 'tack' | 'gybe' | 'full-turn' | 'aborted'; readonly time: number }[];
}

export const T0 = 1_777_000_000;
/** Speeds close-hauled, reaching, running. [m/s] */
const UPWIND = 2.6;
const REACH = 3.4;
const RUN = 2.8;
/** A dinghy's bow comes round at about this. [deg/s] */
const RATE = 12;
const WORDS = /^([PSRBli]|gap|tgap)(\d+)$|^[tagf]$/;

/** Angle to the wind, unwrapped and signed, and speed: one a second. */
class Log {
  readonly angle: number[] = [];
  readonly speed: number[] = [];
  readonly seen: boolean[] = [];
  readonly events: { kind: Played['events'][number]['kind']; time: number }[] = [];
  now = NaN;
  v = 0;

  step(angle: number, target: number, tau: number, seen = true): void {
    this.v += (target - this.v) / tau;
    this.now = angle;
    this.angle.push(angle);
    this.speed.push(this.v);
    this.seen.push(seen);
  }

  /** Turns to an unwrapped angle at the usual rate, slowing down to `least`. */
  turnTo(to: number, least: number, tau = 4, seen = true): void {
    const from = this.now;
    const steps = Math.max(1, Math.round(Math.abs(to - from) / RATE));
    for (let i = 1; i <= steps; i++) this.step(from + ((to - from) * i) / steps, least, tau, seen);
  }

  mark(kind: Played['events'][number]['kind'], time: number): void {
    this.events.push({ kind, time });
  }
}

export function synth(
  score: string,
  { noise = 0, seed = 1, twd = 215, angle = 45, heading = false }: Noise = {},
): Played {
  const log = new Log();
  for (const word of score.trim().split(/\s+/)) play(log, word, angle);
  return { sailing: toSailing(log, noise, chanceOf(`${score}/${seed}`), twd, heading), events: log.events };
}

const sideOf = (angle: number): 1 | -1 => ((((angle % 360) + 540) % 360) - 180 >= 0 ? 1 : -1);
/** The unwrapped angle that is `angle` modulo 360, nearest to where the boat is. */
const near = (angle: number, now: number): number => angle + 360 * Math.round((now - angle) / 360);

function play(log: Log, word: string, close: number): void {
  const match = WORDS.exec(word);
  if (!match) throw new Error(`synth: ${word} is no word of a score`);
  const what = match[1] ?? word;
  const seconds = Number(match[2] ?? 0);
  if (Number.isNaN(log.now)) {
    if (what !== 'P' && what !== 'S') throw new Error(`synth: a score begins with P or S, not with ${word}`);
    log.now = what === 'S' ? close : -close;
    log.v = UPWIND;
  }
  const side = sideOf(log.now);
  if (what === 'P' || what === 'S') hold(log, near(what === 'S' ? close : -close, log.now), seconds, UPWIND);
  else if (what === 'R') hold(log, near(side * 160, log.now), seconds, RUN);
  else if (what === 'B') hold(log, near(side * 92, log.now), seconds, REACH);
  else if (what === 'l') hold(log, near(side * 8, log.now), seconds, 0.5);
  else if (what === 'i') for (let i = 0; i < seconds; i++) log.step(log.now, 0.05, 3);
  else if (what === 'gap') for (let i = 0; i < seconds; i++) log.step(log.now, UPWIND, 8, false);
  else turnOf(log, what, side, seconds);
}

/** On one course: first the boat turns to it, then holds it; speed comes back within some fifteen seconds. */
function hold(log: Log, angle: number, seconds: number, speed: number): void {
  if (Math.abs(angle - log.now) > RATE) log.turnTo(angle, 0.8 * speed);
  for (let i = 0; i < seconds; i++) log.step(angle, speed, 6);
}

function turnOf(log: Log, what: string, side: 1 | -1, seconds: number): void {
  const begun = log.angle.length;
  const middle = (): number => T0 + (begun + log.angle.length - 1) / 2;
  if (what === 't') {
    log.turnTo(log.now - 2 * foldedSize(log.now) * side, 0.9);
    log.mark('tack', middle());
  } else if (what === 'g') {
    log.turnTo(log.now + 2 * (180 - foldedSize(log.now)) * side, 2);
    log.mark('gybe', middle());
  } else if (what === 'f') {
    const close = foldedSize(log.now);
    log.turnTo(log.now + 360 * side, 1.2);
    // Away from the wind, through dead downwind, and through its eye near the end.
    log.mark('full-turn', T0 + begun + ((360 - close) / 360) * (log.angle.length - begun) - 1);
  } else if (what === 'a') {
    const before = log.now;
    log.turnTo(before - side * (foldedSize(before) + 12), 0.9);
    log.step(log.now, 0.8, 4);
    log.turnTo(before, 0.9);
    log.mark('aborted', middle());
  } else {
    const half = Math.floor((seconds - 8) / 2);
    for (let i = 0; i < half; i++) log.step(log.now, UPWIND, 8, false);
    const at = log.angle.length;
    log.turnTo(log.now - 2 * foldedSize(log.now) * side, 0.9, 4, false);
    log.mark('tack', T0 + (at + log.angle.length - 1) / 2);
    while (log.angle.length < begun + seconds) log.step(log.now, UPWIND, 6, false);
  }
}

/** Size of an unwrapped angle on 0..180. */
const foldedSize = (angle: number): number => Math.abs((((angle % 360) + 540) % 360) - 180);

function toSailing(
  log: Log,
  noise: number,
  chance: ReturnType<typeof chanceOf>,
  twd: number,
  heading: boolean,
): Sailing {
  const n = log.angle.length;
  const helm = wander(chance, noise, 6);
  const rows = { x: new Float64Array(n), y: new Float64Array(n), ux: new Float64Array(n), uy: new Float64Array(n) };
  const bow = new Float64Array(n);
  let [x, y] = [0, 0];
  for (let i = 0; i < n; i++) {
    const course = ((twd - log.angle[i] + helm(1) + 0.5 * noise * chance.normal()) * Math.PI) / 180;
    const [east, north] = [log.speed[i] * Math.sin(course), log.speed[i] * Math.cos(course)];
    x += east;
    y += north;
    const seen = log.seen[i];
    rows.x[i] = seen ? x : NaN;
    rows.y[i] = seen ? y : NaN;
    rows.ux[i] = seen ? east : NaN;
    rows.uy[i] = seen ? north : NaN;
    bow[i] = seen ? (course * 180) / Math.PI : NaN;
  }
  return makeSailing({ t0: T0, ...rows, twd: new Float64Array(n).fill(twd), ...(heading ? { heading: bow } : {}) });
}
