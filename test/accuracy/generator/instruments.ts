/** A masthead and compass log: one row a second, each sensor with its own planted error. */
import { compass, cosd, pointing, signed, sind } from './directions.js';
import type { Chance } from './random.js';
import type { TrueBoat } from './truth.js';

export interface InstrumentRow {
  readonly t: number;
  /** True heading as the compass shows it. [deg] */
  readonly heading: number;
  /** Off the bow, positive to starboard [deg]; speeds [kn]. */
  readonly awa: number;
  readonly aws: number;
  readonly stw: number;
  readonly heel: number;
}

const KNOT = 1852 / 3600;

export function readInstruments(boat: TrueBoat, chance: Chance): InstrumentRow[] {
  const rows: InstrumentRow[] = [];
  for (let i = 0; i < boat.n; i++) {
    const air = -boat.groundTws[i];
    const east = air * sind(boat.groundTwd[i]) - boat.vx[i];
    const north = air * cosd(boat.groundTwd[i]) - boat.vy[i];
    const from = pointing(-east, -north);
    rows.push({
      t: boat.t0 + i,
      heading: compass(boat.heading[i] + (boat.compassError ?? 0) + 1.5 * chance.normal()),
      awa: signed(from - boat.heading[i] + (boat.mastheadError ?? 0) + 2 * chance.normal()),
      aws: Math.max(0, Math.hypot(east, north) / KNOT + 0.3 * chance.normal()),
      stw: Math.max(0, boat.speed[i] / KNOT + 0.1 * chance.normal()),
      heel: boat.heel[i] + 1.5 * chance.normal(),
    });
  }
  return rows;
}
