/**
 * Two or more invented boats on one beat, with the truth known, made from nothing the program computes with: a steady
 * wind that swings, a helm that wanders, a boat that slows when pinched, seas, and a receiver with a drifting error.
 */
import type { BetweenBoat } from '../../src/between/boat.js';

export interface BoatTruth {
  /** Speed relative to the others, 1.03 = 3 % faster. */
  readonly speed?: number;
  /** Degrees sailed higher (at the speed of the lower course times `heightCosts`). */
  readonly higher?: number;
  /** Added to the usual leeway. [deg] */
  readonly leeway?: number;
}

export interface Beat {
  readonly seed: number;
  readonly minutes: number;
  readonly boats: readonly BoatTruth[];
  /** Metres between neighbours; the wind differs between them when `decorrelation` is given. */
  readonly apart?: number;
  /** Distance over which the wind's swings lose 63 % of their likeness. [m] */
  readonly decorrelation?: number;
  /** Added to a boat's clock, by index. [s] */
  readonly clock?: readonly number[];
  /** Whether each boat tacks when it likes (default) or all together. */
  readonly together?: boolean;
  /** Memory of the slow wander of each helm's target, 90 s when left out: it is elsewhere in 4 minutes. [s] */
  readonly memory?: number;
  /** Each boat carries a compass and a vane, their offsets put right but for 0.3 degrees of standard deviation. */
  readonly instruments?: boolean;
}

const RAD = Math.PI / 180;
/** Best angle to the wind, and the speed there, of the invented boat. */
const BEST = 43;
const SPEED = 2.5;
const WIND = 6;
/** Where d ln V / d angle = tan(angle), speed made good is flat: 1.63 % of speed a degree at 43. */
const SLOPE = Math.tan(BEST * RAD) * RAD;
const TACK_SECONDS = 8;
const RECOVERY = 20;

/** Multiplicative congruential generator of Lehmer (Park and Miller 1988), warmed up. */
export function generator(seed: number): () => number {
  let state = (seed * 7919 + 104729) % 2147483647;
  const next = (): number => (state = (state * 48271) % 2147483647) / 2147483647;
  for (let k = 0; k < 10; k++) next();
  return next;
}

export function normal(random: () => number): number {
  return Math.sqrt(-2 * Math.log(1 - random())) * Math.cos(2 * Math.PI * random());
}

/** First-order wander of a standard deviation and a memory in seconds. */
export function wander(random: () => number, n: number, sd: number, memory: number): Float64Array {
  const keep = Math.exp(-1 / memory);
  const out = new Float64Array(n);
  let value = sd * normal(random);
  for (let i = 0; i < n; i++) {
    out[i] = value;
    value = keep * value + sd * Math.sqrt(1 - keep * keep) * normal(random);
  }
  return out;
}

/** A swing that changes its period between two bounds as it goes. */
export function swing(random: () => number, n: number, sd: number, shortest: number, longest: number): Float64Array {
  const out = new Float64Array(n);
  let phase = 2 * Math.PI * random();
  let period = shortest;
  for (let i = 0; i < n; i++) {
    if (i % 15 === 0) period = shortest + (longest - shortest) * random();
    phase += (2 * Math.PI) / period;
    out[i] = sd * Math.SQRT2 * Math.sin(phase);
  }
  return out;
}

/** One beat sailed by all boats. The first boat's truth less the second's is what a comparison should find. */
export function sailBeat(beat: Beat): BetweenBoat[] {
  const random = generator(beat.seed);
  const n = beat.minutes * 60;
  const common = { twd: wander(random, n, 5, 120), tws: wander(random, n, 0.5, 60) };
  const station = { twd: wander(random, n, 2, 60), tws: wander(random, n, 0.2, 60) };
  const plan = tackPlan(random, n);
  return beat.boats.map((truth, index) => {
    const lag = beat.together ? 0 : Math.round(20 * random());
    const like = beat.decorrelation ? Math.exp(-(beat.apart ?? 0) / beat.decorrelation) : 1;
    const local = localWind(random, n, common, like);
    const sailed = sail(random, n, truth, local, plan, lag, beat.memory ?? 90);
    const clock = beat.clock?.[index] ?? 0;
    const boat = record(random, n, sailed, common, station, index * (beat.apart ?? 20), `Boat ${index + 1}`, clock);
    if (!beat.instruments) return boat;
    // Its own dice, so that the sailing is the same with and without.
    return { ...boat, trim: onBoard(generator(1000 * beat.seed + index), sailed, local, truth.leeway ?? 0) };
  });
}

/** Standard deviation of what is left of an offset. [deg] */
const OFFSET = 0.3;
const LEEWAY = 4;

/** What compass and vane make of it: leeway that wanders, offsets that stay, a compass and a vane that are a little off. */
function onBoard(
  random: () => number,
  sailed: Sailed,
  wind: WindSeries,
  more: number,
): NonNullable<BetweenBoat['trim']> {
  const n = sailed.ux.length;
  const leeway = wander(random, n, 0.5, 20).map((value) => LEEWAY + more + value);
  const [compass, vane] = [OFFSET * normal(random), OFFSET * normal(random)];
  const [deviation, upwash] = [0.2 * normal(random), 0.4 * normal(random)];
  const heading = new Float64Array(n);
  const awa = new Float64Array(n);
  for (let i = 0; i < n; i++) {
    const [east, north] = [sailed.ux[i], sailed.uy[i]];
    const course = Math.atan2(east, north) / RAD;
    const bow = course + sailed.tack[i] * leeway[i];
    const from = wind.twd[i] * RAD;
    const speed = WIND + wind.tws[i];
    const apparent = Math.atan2(speed * Math.sin(from) + east, speed * Math.cos(from) + north) / RAD;
    heading[i] = (bow + compass + sailed.tack[i] * deviation + 1.5 * normal(random) + 720) % 360;
    awa[i] = ((apparent - bow + vane + sailed.tack[i] * upwash + 2 * normal(random) + 900) % 360) - 180;
  }
  return { heading: { angle: heading, offsetSe: OFFSET }, masthead: { angle: awa, offsetSe: OFFSET } };
}

interface WindSeries {
  readonly twd: Float64Array;
  readonly tws: Float64Array;
}

function localWind(random: () => number, n: number, common: WindSeries, like: number): WindSeries {
  if (like === 1) return common;
  const own = { twd: wander(random, n, 5, 60), tws: wander(random, n, 0.5, 60) };
  // Two boats with sqrt(like) of the common wind each correlate by `like`.
  const mix = (a: Float64Array, b: Float64Array): Float64Array =>
    a.map((value, i) => Math.sqrt(like) * value + Math.sqrt(1 - like) * b[i]);
  return { twd: mix(common.twd, own.twd), tws: mix(common.tws, own.tws) };
}

/** Seconds at which the fleet tacks: every 100 to 200 s. */
function tackPlan(random: () => number, n: number): number[] {
  const plan: number[] = [];
  for (let t = 100 + 100 * random(); t < n - 60; t += 100 + 100 * random()) plan.push(Math.round(t));
  return plan;
}

interface Sailed {
  readonly ux: Float64Array;
  readonly uy: Float64Array;
  readonly tack: Int8Array;
  readonly settled: Uint8Array;
  readonly manoeuvres: BetweenBoat['manoeuvres'];
}

function sail(
  random: () => number,
  n: number,
  truth: BoatTruth,
  wind: WindSeries,
  plan: number[],
  lag: number,
  memory: number,
): Sailed {
  const helm = swing(random, n, 2, 8, 20);
  const target = wander(random, n, 1, memory);
  const surge = swing(random, n, 0.08, 3, 5);
  const out = {
    ux: new Float64Array(n),
    uy: new Float64Array(n),
    tack: new Int8Array(n),
    settled: new Uint8Array(n),
    manoeuvres: plan.map((at) => ({ kind: 'tack', from: at + lag - 4, at: at + lag, to: at + lag + RECOVERY })),
  };
  let speed = SPEED;
  for (let i = 0; i < n; i++) {
    const done = plan.filter((at) => at + lag <= i).length;
    const side = done % 2 === 0 ? 1 : -1;
    const since = Math.min(...plan.map((at) => (i >= at + lag - 4 ? i - at - lag + 4 : Infinity)));
    const angle = BEST - (truth.higher ?? 0) + target[i] + helm[i];
    const wanted = SPEED * (truth.speed ?? 1) * (1 + SLOPE * (angle - BEST)) * (1 + wind.tws[i] / WIND / 2);
    speed += ((since < TACK_SECONDS ? 0.6 : 1) * wanted - speed) / 5;
    const course = (wind.twd[i] - side * angle) * RAD;
    out.ux[i] = (speed + surge[i]) * Math.sin(course);
    out.uy[i] = (speed + surge[i]) * Math.cos(course);
    out.tack[i] = side;
    out.settled[i] = since > TACK_SECONDS + RECOVERY && i > 30 ? 1 : 0;
  }
  return out;
}

/** What a receiver (1.5 m that drifts over 80 s, 0.15 m each second) and a station make of it. */
function record(
  random: () => number,
  n: number,
  sailed: Sailed,
  wind: WindSeries,
  station: WindSeries,
  offset: number,
  name: string,
  clock: number,
): BetweenBoat {
  const x = fixes(random, sailed.ux, offset);
  const y = fixes(random, sailed.uy, 0);
  return {
    name,
    t0: 1_700_000_000 + clock,
    n,
    x,
    y,
    ux: slope(x),
    uy: slope(y),
    twd: wind.twd.map((value, i) => (value + station.twd[i] + 720) % 360),
    tws: wind.tws.map((value, i) => WIND + value + station.tws[i]),
    settled: sailed.settled,
    tack: sailed.tack,
    legs: [{ lap: 1, from: 0, to: n }],
    manoeuvres: sailed.manoeuvres,
  };
}

function fixes(random: () => number, velocity: Float64Array, start: number): Float64Array {
  const drift = wander(random, velocity.length, 1.5, 80);
  let place = start;
  return velocity.map((v, i) => {
    place += v;
    return place + drift[i] + 0.15 * normal(random);
  });
}

function slope(place: Float64Array): Float64Array {
  const last = place.length - 1;
  return place.map((_, i) => {
    const [a, b] = [Math.max(0, i - 1), Math.min(last, i + 1)];
    return (place[b] - place[a]) / (b - a);
  });
}
