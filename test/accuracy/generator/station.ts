/** What an anemometer on a boat at anchor or on the shore writes. */
import type { Condition } from './condition.js';
import { compass } from './directions.js';
import { wander, type Chance } from './random.js';
import type { Truth } from './truth.js';
import type { Wind } from './wind.js';

export interface WindRow {
  readonly t: number;
  /** Where the wind comes from [deg]; speed [kn]. */
  readonly twd: number;
  readonly tws: number;
}

const KNOT = 1852 / 3600;

export function drawStation(condition: Condition, wind: Wind, chance: Chance): Truth['station'] {
  const angle = chance.between(0, 2 * Math.PI);
  const mounting = condition.calibration ? 2 * chance.normal() : 0;
  const calibration = condition.calibration ? 0.02 * chance.normal() : 0;
  if (condition.station === 'none') return null;
  const away = condition.station === 'away' ? condition.stationDistance : 0;
  const middle = 450;
  const up = (wind.twd * Math.PI) / 180;
  return {
    direction: mounting + condition.stationOff,
    speed: 1 + calibration,
    late: condition.stationLate,
    carried: condition.station === 'away',
    placed: condition.stationPlaced,
    x: middle * Math.sin(up) + away * Math.cos(angle),
    y: middle * Math.cos(up) + away * Math.sin(angle),
  };
}

export function observe(
  condition: Condition,
  station: NonNullable<Truth['station']>,
  wind: Wind,
  from: number,
  to: number,
  chance: Chance,
): WindRow[] {
  const rows: WindRow[] = [];
  const own = condition.station === 'away' ? 1 : 0;
  const ownTurn = wander(chance, 1.6 * own, 60);
  const ownSpeed = wander(chance, 0.4 * own, 60);
  const out = new Float64Array(2);
  for (let t = from; t <= to; t += condition.stationEvery) {
    wind.at(station.x, station.y, t, out);
    const turn = ownTurn(condition.stationEvery) + station.direction + 1.5 * chance.normal();
    const knots = (out[1] / KNOT) * station.speed + ownSpeed(condition.stationEvery) + 0.15 * chance.normal();
    rows.push({ t: t + station.late, twd: compass(out[0] + turn), tws: Math.max(0, knots) });
  }
  return rows;
}
