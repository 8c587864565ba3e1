/** The afternoon as files: what each receiver and instrument would have written. */
import { heelAt } from './boat.js';
import { apart, bearingOf, compass, cosine, dice, lengthOf, sine, type Dice } from './exact.js';
import type { Moment, Place } from './sail.js';
import type { WindAt } from './wind.js';

const KNOT = 1852 / 3600;

/** Middle of the start line; metres a degree there (WGS84 at 46.912 N). */
export const ORIGIN = { lat: 46.912, lon: 9.061, metresLat: 111169.1, metresLon: 76180.8 } as const;

export function position({ x, y }: Place): [string, string] {
  return [(ORIGIN.lat + y / ORIGIN.metresLat).toFixed(7), (ORIGIN.lon + x / ORIGIN.metresLon).toFixed(7)];
}

const stamp = (t: number): string => `${new Date(t * 1000).toISOString().slice(0, 19)}Z`;

/** A receiver's error of place: slow wander of about 1.2 m, and a little that changes from fix to fix. */
function receiver(lot: Dice): (place: Place) => Place {
  let x = lot.bell();
  let y = lot.bell();
  return (place) => {
    x += -x / 80 + 0.19 * lot.bell();
    y += -y / 80 + 0.19 * lot.bell();
    return { x: place.x + x + 0.12 * lot.bell(), y: place.y + y + 0.12 * lot.bell() };
  };
}

export function gpxTrack(name: string, moments: readonly Moment[], t0: number, seed: number): string {
  const seen = receiver(dice(seed));
  const points = moments.map((moment, i) => {
    const [lat, lon] = position(seen(moment));
    return `   <trkpt lat="${lat}" lon="${lon}"><time>${stamp(t0 + i)}</time></trkpt>`;
  });
  return [
    '<?xml version="1.0" encoding="UTF-8"?>',
    '<gpx version="1.1" creator="legwork demo" xmlns="http://www.topografix.com/GPX/1/1">',
    ` <trk><name>${name}</name>`,
    '  <trkseg>',
    ...points,
    '  </trkseg>',
    ' </trk>',
    '</gpx>',
    '',
  ].join('\n');
}

export function tableTrack(moments: readonly Moment[], t0: number, seed: number): string {
  const lot = dice(seed);
  const seen = receiver(lot);
  const rows = moments.map((moment, i) => {
    const [lat, lon] = position(seen(moment));
    const vx = moment.vx + 0.05 * lot.bell();
    const vy = moment.vy + 0.05 * lot.bell();
    const sog = (lengthOf(vx, vy) / KNOT).toFixed(2);
    return `${stamp(t0 + i)},${lat},${lon},${sog},${direction(bearingOf(vx, vy))}`;
  });
  return `time,lat,lon,sog_kn,cog_deg\n${rows.join('\n')}\n`;
}

/** One decimal, and never 360.0. */
function direction(angle: number): string {
  const text = compass(angle).toFixed(1);
  return text === '360.0' ? '0.0' : text;
}

export interface Sensors {
  /** What the instruments add to the truth. [deg] */
  readonly compass: number;
  readonly masthead: number;
  readonly seed: number;
}

/** Heading (true), heel, apparent wind and speed through the water. */
export function mastTable(moments: readonly Moment[], t0: number, sensors: Sensors): string {
  const lot = dice(sensors.seed);
  const rows = moments.map((moment, i) => {
    const { wind } = moment;
    const east = -wind.speed * KNOT * sine(wind.direction) - moment.vx;
    const north = -wind.speed * KNOT * cosine(wind.direction) - moment.vy;
    const awa = apart(0, bearingOf(-east, -north) - moment.heading + sensors.masthead + 1.8 * lot.bell());
    const aws = lengthOf(east, north) / KNOT + 0.25 * lot.bell();
    const heel = (moment.angle >= 0 ? -1 : 1) * heelAt(wind.speed, Math.abs(moment.angle)) + 1.5 * lot.bell();
    const stw = Math.max(0, moment.speed + 0.08 * lot.bell());
    const heading = direction(moment.heading + sensors.compass + 1.2 * lot.bell());
    return [stamp(t0 + i), heading, heel.toFixed(1), awa.toFixed(1), aws.toFixed(1), stw.toFixed(2)].join(',');
  });
  return `time,heading_true_deg,heel_deg,awa_deg,aws_kn,stw_kn\n${rows.join('\n')}\n`;
}

/** The committee boat's anemometer, a row every two seconds. */
export function windTable(windAt: WindAt, at: Place, t0: number, seconds: number, seed: number): string {
  const lot = dice(seed);
  const rows: string[] = [];
  let turn = 0;
  for (let i = 0; i < seconds; i += 2) {
    turn += -turn / 20 + 0.3 * lot.bell();
    const { direction: from, speed } = windAt(at.x, at.y, i);
    const knots = Math.max(0, speed + 0.25 * lot.bell()).toFixed(1);
    rows.push(`${stamp(t0 + i)},${direction(from + turn + 1.5 * lot.bell())},${knots}`);
  }
  return `time,twd_deg,tws_kn\n${rows.join('\n')}\n`;
}
