/**
 * A day's sailing of stated size, invented, the same for the same size: a boat beating and running in one wind, as a
 * GPX track at 10 Hz, its own apparent wind at 1 Hz, the track as a table, and all of it as sentences.
 */
import { closeSync, openSync, writeFileSync, writeSync } from 'node:fs';

const START = Date.UTC(2026, 5, 6, 11, 0, 0);
const RATE = 10;
const WIND = { from: 230, speed: 6 };
const PLACE = { lat: 46.9, lon: 9.05 };
const METRES_PER_DEGREE = 111_200;
const RAD = Math.PI / 180;

/** Marsaglia's xorshift32 (Journal of Statistical Software 8(14), 2003), as numbers in [0, 1). */
function random(seed: number): () => number {
  let state = seed;
  return () => {
    state ^= state << 13;
    state ^= state >>> 17;
    state ^= state << 5;
    return (state >>> 0) / 2 ** 32;
  };
}

interface Moment {
  readonly iso: string;
  readonly lat: string;
  readonly lon: string;
  readonly speed: number;
  readonly course: number;
}

/** Beats of eight minutes with a tack every two, runs of six minutes with a gybe every three. */
function headingAt(second: number): number {
  const inLap = second % 840;
  const side = Math.floor(inLap < 480 ? inLap / 120 : inLap / 180) % 2 === 0 ? 1 : -1;
  return WIND.from + side * (inLap < 480 ? 44 : 150);
}

function* moments(seed = 2026): Generator<Moment> {
  const draw = random(seed);
  let [east, north, heading] = [0, 0, headingAt(0)];
  for (let n = 0; ; n++) {
    const wanted = headingAt(n / RATE);
    heading += Math.max(-1.5, Math.min(1.5, ((wanted - heading + 540) % 360) - 180));
    const speed = 2.6 + 0.4 * Math.sin(n / 700);
    east += (speed / RATE) * Math.sin(heading * RAD);
    north += (speed / RATE) * Math.cos(heading * RAD);
    const noise = (): number => (draw() + draw() - 1) * 0.8;
    yield {
      iso: new Date(START + (n * 1000) / RATE).toISOString(),
      lat: (PLACE.lat + (north + noise()) / METRES_PER_DEGREE).toFixed(7),
      lon: (PLACE.lon + (east + noise()) / (METRES_PER_DEGREE * Math.cos(PLACE.lat * RAD))).toFixed(7),
      speed,
      course: heading,
    };
  }
}

/** The wind as the boat feels it: angle off the bow, positive to starboard [deg], and speed [kn]. */
function apparent({ speed, course }: Moment): string {
  const ahead = WIND.speed * Math.cos((WIND.from - course) * RAD) + speed;
  const abeam = WIND.speed * Math.sin((WIND.from - course) * RAD);
  return `${(Math.atan2(abeam, ahead) / RAD).toFixed(1)},${(Math.hypot(ahead, abeam) * 1.943844).toFixed(2)}`;
}

/** Writes pieces to a file until so many bytes are there; returns how many pieces it took. */
function write(path: string, head: string, pieces: Iterable<string>, bytes: number, tail = ''): number {
  const handle = openSync(path, 'w');
  let [count, size, text] = [0, 0, head];
  for (const piece of pieces) {
    text += piece;
    count++;
    if (text.length > 1 << 20) {
      size += writeSync(handle, text);
      text = '';
    }
    if (size + text.length >= bytes) break;
  }
  writeSync(handle, text + tail);
  closeSync(handle);
  return count;
}

function* points(wind: string[], seed: number): Generator<string> {
  let n = 0;
  for (const moment of moments(seed)) {
    if (n++ % RATE === 0) wind.push(`${moment.iso},${apparent(moment)}`);
    const { lat, lon, iso, speed } = moment;
    yield `<trkpt lat="${lat}" lon="${lon}"><time>${iso}</time><extensions><s:speed>${speed.toFixed(2)}</s:speed></extensions></trkpt>\n`;
  }
}

/** A track of about so many megabytes and the wind aboard. */
export function generateTrack(path: string, windPath: string, megabytes: number, seed = 2026): void {
  const wind = ['time,awa,aws'];
  const head =
    '<?xml version="1.0" encoding="UTF-8"?>\n<gpx version="1.1" creator="bench" xmlns="http://www.topografix.com/GPX/1/1" xmlns:s="urn:bench"><trk><name>bench</name><trkseg>\n';
  write(path, head, points(wind, seed), megabytes * 1e6, '</trkseg></trk></gpx>\n');
  writeFileSync(windPath, wind.join('\n') + '\n');
}

function* rows(): Generator<string> {
  for (const { iso, lat, lon, speed, course } of moments()) {
    yield `${iso},${lat},${lon},${(speed * 1.943844).toFixed(2)},${((course + 720) % 360).toFixed(1)}\n`;
  }
}

/** The same as a table. */
export function generateTable(path: string, megabytes: number): void {
  write(path, 'time,lat,lon,sog,cog\n', rows(), megabytes * 1e6);
}

/** A sentence of IEC 61162-1: the exclusive or of its letters behind it. */
function sentence(body: string): string {
  let sum = 0;
  for (let at = 0; at < body.length; at++) sum ^= body.charCodeAt(at);
  return `$${body}*${sum.toString(16).toUpperCase().padStart(2, '0')}\r\n`;
}

/** Degrees and minutes, as sentences write them, of a position north and east. */
function minutes(degrees: string, digits: number): string {
  const value = Number(degrees);
  return String(Math.floor(value)).padStart(digits, '0') + ((value % 1) * 60).toFixed(5).padStart(8, '0');
}

/** Once a second what a boat's instruments say: fix twice, course, compass, wind, log, depth, satellites. */
function* sentences(): Generator<string> {
  let n = 0;
  for (const moment of moments()) {
    if (n++ % RATE !== 0) continue;
    const { iso, lat, lon, speed, course } = moment;
    const clock = `${iso.slice(11, 19).replaceAll(':', '')}.00`;
    const day = iso.slice(8, 10) + iso.slice(5, 7) + iso.slice(2, 4);
    const place = `${minutes(lat, 2)},N,${minutes(lon, 3)},E`;
    const knots = (speed * 1.943844).toFixed(2);
    const cog = ((course + 720) % 360).toFixed(1);
    const [angle, wind] = apparent(moment).split(',');
    yield [
      `GPRMC,${clock},A,${place},${knots},${cog},${day},,,A`,
      `GPGGA,${clock},${place},1,09,0.9,412.3,M,47.0,M,,`,
      `GPVTG,${cog},T,,M,${knots},N,${(speed * 3.6).toFixed(2)},K,A`,
      `IIHDG,${cog},,,2.3,E`,
      `IIMWV,${((Number(angle) + 360) % 360).toFixed(1)},R,${wind},N,A`,
      `IIVHW,,T,${cog},M,${knots},N,,K`,
      'IIDPT,007.2,+0.3,',
      'GPGSV,3,1,11,03,03,111,00,04,15,270,00,06,01,010,00,13,06,292,00',
    ]
      .map(sentence)
      .join('');
  }
}

/** The same day, longer, as a log of sentences. */
export function generateSentences(path: string, megabytes: number): void {
  write(path, '', sentences(), megabytes * 1e6);
}
