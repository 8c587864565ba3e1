/** Logs as text: GPX 1.0 and 1.1, tables, NMEA 0183 sentences. */
import type { Fix } from './receiver.js';
import type { InstrumentRow } from './instruments.js';
import type { WindRow } from './station.js';

const KNOT = 1852 / 3600;

export interface Venue {
  readonly lat: number;
  readonly lon: number;
}

/** Metres a degree of latitude and longitude on WGS84: the usual series (Geodesy for the Layman, DMA TR 80-003; from memory). */
export function degreeLengths(lat: number): { lat: number; lon: number } {
  const p = (lat * Math.PI) / 180;
  return {
    lat: 111132.954 - 559.822 * Math.cos(2 * p) + 1.175 * Math.cos(4 * p) - 0.0023 * Math.cos(6 * p),
    lon: 111412.84 * Math.cos(p) - 93.5 * Math.cos(3 * p) + 0.118 * Math.cos(5 * p),
  };
}

/** A place in the local plane as latitude and longitude. */
export function placer(venue: Venue): (x: number, y: number) => Venue {
  const length = degreeLengths(venue.lat);
  return (x, y) => {
    const lon = venue.lon + x / length.lon;
    return { lat: venue.lat + y / length.lat, lon: lon >= 180 ? lon - 360 : lon < -180 ? lon + 360 : lon };
  };
}

/** Stamps: whole seconds are common, so the last one is kept. */
export function isoTime(t: number): string {
  const text = new Date(Math.round(t * 1000)).toISOString();
  return text.endsWith('.000Z') ? `${text.slice(0, 19)}Z` : text;
}

export function gpx(name: string, fixes: readonly Fix[], venue: Venue): string {
  const place = placer(venue);
  const points = fixes.map((fix) => {
    const { lat, lon } = place(fix.x, fix.y);
    const more = Number.isNaN(fix.sog)
      ? ''
      : `<course>${fix.cog.toFixed(1)}</course><speed>${fix.sog.toFixed(2)}</speed>`;
    return `<trkpt lat="${lat.toFixed(7)}" lon="${lon.toFixed(7)}"><time>${isoTime(fix.t)}</time>${more}</trkpt>`;
  });
  const version = fixes.length > 0 && !Number.isNaN(fixes[0].sog) ? '1/0' : '1/1';
  const head = `<gpx version="${version.replace('/', '.')}" creator="invented" xmlns="http://www.topografix.com/GPX/${version}">`;
  return `<?xml version="1.0" encoding="UTF-8"?>\n${head}<trk><name>${name}</name><trkseg>\n${points.join('\n')}\n</trkseg></trk></gpx>\n`;
}

export function trackTable(fixes: readonly Fix[], venue: Venue): string {
  const place = placer(venue);
  const doppler = fixes.length > 0 && !Number.isNaN(fixes[0].sog);
  const rows = fixes.map((fix) => {
    const { lat, lon } = place(fix.x, fix.y);
    const more = doppler ? `,${(fix.sog / KNOT).toFixed(2)},${fix.cog.toFixed(1)}` : '';
    return `${isoTime(fix.t)},${lat.toFixed(7)},${lon.toFixed(7)}${more}`;
  });
  return `time,lat,lon${doppler ? ',sog_kn,cog_deg' : ''}\n${rows.join('\n')}\n`;
}

/** A sentence with its checksum. */
function sentence(body: string): string {
  let sum = 0;
  for (let i = 0; i < body.length; i++) sum ^= body.charCodeAt(i);
  return `$${body}*${sum.toString(16).toUpperCase().padStart(2, '0')}`;
}

function minutes(angle: number, width: number): string {
  const whole = Math.floor(angle);
  const rest = ((angle - whole) * 60).toFixed(5);
  const carried = rest.startsWith('60') ? [whole + 1, '0.00000'] : [whole, rest];
  return `${String(carried[0]).padStart(width, '0')}${String(carried[1]).padStart(8, '0')}`;
}

export function nmea(fixes: readonly Fix[], instruments: readonly InstrumentRow[] | null, venue: Venue): string {
  const place = placer(venue);
  const byTime = new Map(instruments?.map((row) => [row.t, row]));
  const lines: string[] = [];
  for (const fix of fixes) {
    const { lat, lon } = place(fix.x, fix.y);
    const date = new Date(Math.round(fix.t * 1000)).toISOString();
    const clock = `${date.slice(11, 13)}${date.slice(14, 16)}${date.slice(17, 19)}.${date.slice(20, 22)}`;
    const day = `${date.slice(8, 10)}${date.slice(5, 7)}${date.slice(2, 4)}`;
    const at = `${minutes(Math.abs(lat), 2)},${lat < 0 ? 'S' : 'N'},${minutes(Math.abs(lon), 3)},${lon < 0 ? 'W' : 'E'}`;
    const moving = Number.isNaN(fix.sog) ? ',' : `${(fix.sog / KNOT).toFixed(2)},${fix.cog.toFixed(1)}`;
    lines.push(sentence(`GPRMC,${clock},A,${at},${moving},${day},,,A`));
    const row = byTime.get(fix.t);
    if (!row) continue;
    lines.push(sentence(`IIHDT,${row.heading.toFixed(1)},T`));
    if (!Number.isNaN(row.stw)) lines.push(sentence(`IIVHW,,T,,M,${row.stw.toFixed(2)},N,,K`));
    const angle = row.awa < 0 ? row.awa + 360 : row.awa;
    lines.push(sentence(`WIMWV,${angle.toFixed(1)},R,${row.aws.toFixed(1)},N,A`));
  }
  return `${lines.join('\r\n')}\r\n`;
}

export function windTable(rows: readonly WindRow[]): string {
  return `time,twd_deg,tws_kn\n${rows.map((r) => `${isoTime(r.t)},${r.twd.toFixed(1)},${r.tws.toFixed(2)}`).join('\n')}\n`;
}

export function instrumentTable(rows: readonly InstrumentRow[], heel: boolean, waterSpeed: boolean): string {
  const head = `time,heading_true_deg,awa_deg,aws_kn${waterSpeed ? ',stw_kn' : ''}${heel ? ',heel_deg' : ''}`;
  const body = rows.map(
    (r) =>
      `${isoTime(r.t)},${r.heading.toFixed(1)},${r.awa.toFixed(1)},${r.aws.toFixed(2)}` +
      (waterSpeed ? `,${r.stw.toFixed(2)}` : '') +
      (heel ? `,${r.heel.toFixed(1)}` : ''),
  );
  return `${head}\n${body.join('\n')}\n`;
}
