import { directionOf, eastOf, northOf } from '../math/angles.js';
import { lengthOf } from '../math/length.js';
import { placeOf, readWind, type WindSource } from './source.js';

/** A source as corrected: what is added to its direction, and how much later it is than the boats. */
export interface CorrectedSource {
  readonly source: WindSource;
  /** Added to the direction. [deg] */
  readonly offset: number;
  /** For sources whose place is not known: seconds by which the wind reaches the boats after the sensor. [s] */
  readonly lag: number;
  /** Share of the travel time at wind speed by which a boat further downwind has the wind later. */
  readonly carry: number;
  /** For sources whose place is not known: where `lag` holds, the middle of the sailing. [m] */
  readonly middle: { readonly x: number; readonly y: number };
}

/** A source taken as it is: no offset, no lag, carried along by the wind where its place is known. */
export function uncorrected(source: WindSource, carry = 1): CorrectedSource {
  return { source, offset: 0, lag: 0, carry: source.place ? carry : 0, middle: { x: 0, y: 0 } };
}

/** Wind differs by about this over a kilometre of course (the demo's and the harness's too); common practice, no source. */
const DIFFERENCE_PER_KM = 5;
/** A sensor right at the boat still differs by this much. [deg] */
const DIFFERENCE_AT_BOAT = 1;
/** Never average over more than this. [s] */
const LONGEST_WINDOW = 90;

export interface WindAtBoat {
  /** Where from [deg], and speed [m/s; NaN where not known], one a row of the boat. */
  readonly twd: Float64Array;
  readonly tws: Float64Array;
  /** Distance from the nearest sensor with a place, NaN where there is none. [m] */
  readonly distance: Float64Array;
}

/**
 * Wind at a boat, each second. A boat with its own wind uses that; else the sensors are averaged, weighted by their
 * distance. A sensor with a place is read earlier or later by its along-wind distance over the wind speed (the wind is
 * carried along unchanged) and averaged over a third of that time, at least its own shortest window.
 */
export function windAtBoat(
  boat: number,
  rows: { readonly t0: number; readonly n: number; readonly x: Float64Array; readonly y: Float64Array },
  sources: readonly CorrectedSource[],
): WindAtBoat {
  const twd = new Float64Array(rows.n).fill(NaN);
  const tws = new Float64Array(rows.n).fill(NaN);
  const distance = new Float64Array(rows.n).fill(NaN);
  const own = sources.filter(({ source }) => source.boat === boat && boat >= 0);
  const others = sources.filter(({ source }) => source.boat !== boat || boat < 0);
  for (let i = 0; i < rows.n; i++) {
    const x = rows.x[i];
    if (Number.isNaN(x)) continue;
    const here = { x, y: rows.y[i], time: rows.t0 + i };
    const reading = own.length > 0 ? combine(own, here) : null;
    const best = reading && !Number.isNaN(reading.direction) ? reading : combine(others, here);
    twd[i] = best.direction;
    tws[i] = best.speed;
    distance[i] = best.distance;
  }
  return { twd, tws, distance };
}

export interface Here {
  readonly x: number;
  readonly y: number;
  readonly time: number;
}

function combine(
  sources: readonly CorrectedSource[],
  here: Here,
): { direction: number; speed: number; distance: number } {
  let east = 0;
  let north = 0;
  let speed = 0;
  let speedWeight = 0;
  let nearest = NaN;
  for (const corrected of sources) {
    const { direction, speed: s, distance } = readAt(corrected, here);
    const far = Number.isNaN(distance) ? 500 : distance;
    const weight = 1 / (DIFFERENCE_AT_BOAT ** 2 + (DIFFERENCE_PER_KM * (far / 1000)) ** 2);
    if (!Number.isNaN(direction)) {
      east += weight * eastOf(direction);
      north += weight * northOf(direction);
      nearest = Number.isNaN(nearest) ? distance : Math.min(nearest, distance);
    }
    if (!Number.isNaN(s)) {
      speed += weight * s;
      speedWeight += weight;
    }
  }
  const has = east !== 0 || north !== 0;
  return {
    direction: has ? directionOf(east, north) : NaN,
    speed: speedWeight > 0 ? speed / speedWeight : NaN,
    distance: nearest,
  };
}

/** One source's wind as it is at a place and time, and how far away the sensor is. */
export function readAt(
  { source, offset, lag, carry, middle }: CorrectedSource,
  here: Here,
): { direction: number; speed: number; distance: number } {
  const place = placeOf(source, here.time);
  const from = place ?? middle;
  const dx = here.x - from.x;
  const dy = here.y - from.y;
  const delay = (place ? 0 : lag) + (carry > 0 ? carry * travelTime(source, offset, here.time, dx, dy) : 0);
  const window = Math.min(LONGEST_WINDOW, Math.max(source.window, Math.abs(delay) / 3));
  const { direction, speed } = readWind(source, here.time - delay, window);
  return { direction: direction + offset, speed, distance: place ? lengthOf(dx, dy) : NaN };
}

/** Seconds the wind takes to be carried over a displacement, negative upwind; 0 in a calm. */
function travelTime(source: WindSource, offset: number, time: number, dx: number, dy: number): number {
  const slow = readWind(source, time, 240);
  const downwind = -(dx * eastOf(slow.direction + offset) + dy * northOf(slow.direction + offset));
  const travel = slow.speed > 0.5 ? downwind / slow.speed : 0;
  return Number.isNaN(travel) ? 0 : Math.max(-600, Math.min(600, travel));
}
