/**
 * The wind of an invented race: one series of direction and speed at the middle of the course, carried downwind as a
 * frozen field (G. I. Taylor, The spectrum of turbulence, Proc. R. Soc. A 164, 1938), with a linear difference across.
 */
import type { Condition } from './condition.js';
import { cosd, sind } from './directions.js';
import { swing, wander, type Chance } from './random.js';

const KNOT = 1852 / 3600;

export interface Wind {
  /** Mean direction [deg, not wrapped] and speed [m/s]. */
  readonly twd: number;
  readonly tws: number;
  /** Writes [direction (not wrapped), speed] at a place and time into `out`. */
  at(x: number, y: number, t: number, out: Float64Array): void;
}

export function drawWind(condition: Condition, chance: Chance, from: number, to: number): Wind {
  const twd = condition.twd ?? chance.between(0, 360);
  const [low, high] = typeof condition.tws === 'number' ? [condition.tws, condition.tws] : condition.tws;
  const tws = chance.between(low, high) * KNOT;
  const first = Math.floor(from) - 600;
  const n = Math.ceil(to) + 600 - first;
  const direction = new Float64Array(n);
  const speed = new Float64Array(n);
  const main = swing(chance, 180, 480);
  const second = swing(chance, 100, 200);
  const eddy = wander(chance, 1.2, 25);
  const slow = wander(chance, 0.05, 500);
  const quick = wander(chance, condition.gust, 40);
  const shift = chance.between(...condition.shift);
  const trend = chance.between(...condition.trend) / (to - from);
  let puff = 0;
  for (let i = 0; i < n; i++) {
    if (chance.happens(condition.gust / 20)) puff += chance.between(0.08, 0.22);
    puff *= 1 - 1 / 30;
    direction[i] = twd + shift * main(1) + 0.2 * shift * second(1) + eddy(1) + trend * (first + i - (from + to) / 2);
    speed[i] = tws * Math.max(0.5, 1 + slow(1) + quick(1) + puff - 0.05);
  }
  const carried = condition.station === 'away';
  const side = chance.between(0, 360);
  const size = 1200;
  const gradient = { east: sind(side) / size, north: cosd(side) / size };
  const turn = carried ? 5 * (chance.happens(0.5) ? 1 : -1) : 0;
  const freshen = carried ? 0.1 * (chance.happens(0.5) ? 1 : -1) : 0;
  const up = { east: sind(twd), north: cosd(twd) };
  const drift = carried ? 1 / tws : 0;
  return {
    twd,
    tws,
    at(x, y, t, out) {
      const place = Math.min(n - 1.001, Math.max(0, t + (x * up.east + y * up.north) * drift - first));
      const i = Math.floor(place);
      const f = place - i;
      const across = x * gradient.east + y * gradient.north;
      out[0] = direction[i] * (1 - f) + direction[i + 1] * f + turn * across;
      out[1] = (speed[i] * (1 - f) + speed[i + 1] * f) * (1 + freshen * across);
    },
  };
}
