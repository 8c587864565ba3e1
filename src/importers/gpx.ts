/**
 * GPX 1.0 and 1.1 (GPX Schema Documentation, topografix.com/GPX/1/1): tracks of points with a position and a time.
 * Speed [m/s] and course [deg true] are elements of a point in 1.0, and extensions of any namespace in 1.1. A new
 * segment is a break. A `heading` in an extension is left alone: some devices put a compass there, some the course.
 */
import { SaxesParser, type SaxesTagPlain } from 'saxes';
import { wrap360 } from '../math/angles.js';
import { readDecimal } from './decimals.js';
import type { LogRows } from './rows.js';
import type { Tally } from './tally.js';
import { carriesZone, readIso } from './times.js';
import type { ColumnReading } from './types.js';
import type { ZoneClock } from './zone.js';

/** Deeper than any extension goes; what is nested deeper is not a track. */
const DEEPEST = 200;
/** Longest text between two tags that is kept. */
const LONGEST = 1 << 20;
/** Entities, names or numbers; any other ampersand was meant as itself. */
const BARE_AMPERSAND = /&(?!(?:#\d{1,7}|#x[0-9a-fA-F]{1,6}|[A-Za-z][A-Za-z0-9]{0,31});)/g;
const ENTITY_BEGUN = /&[#A-Za-z0-9]{0,33}$/;

export interface GpxRead {
  readonly name: string;
  readonly columns: ColumnReading[];
}

/** A point as it was written. */
export interface RawPoint {
  lat: string;
  lon: string;
  time: string;
  speed: string;
  course: string;
  readonly line: number;
}

/** Judges points and adds them to the rows. */
export function createPointTaker(rows: LogRows, tally: Tally, zone: ZoneClock | null): (point: RawPoint) => void {
  const lat = rows.column('lat');
  const lon = rows.column('lon');
  let before = -Infinity;
  return (point) => {
    tally.read++;
    const φ = readDecimal(point.lat);
    const λ = readDecimal(point.lon);
    const fault = faultOfPosition(point.lat, point.lon, φ, λ) ?? (point.time === '' ? 'no time' : undefined);
    if (fault !== undefined) return tally.reject(fault, point.line);
    let time = readIso(point.time);
    if (Number.isNaN(time)) return tally.reject('time not understood', point.line);
    if (!carriesZone(point.time)) {
      if (zone) time = zone.toUtc(time, before);
      else tally.notice('zone-assumed', point.line);
    }
    before = time;
    const row = rows.add(time, point.line);
    lat.set(row, φ);
    lon.set(row, λ === 180 ? -180 : λ);
    const speed = readDecimal(point.speed);
    if (speed >= 0) rows.set('sog', row, speed);
    const course = readDecimal(point.course);
    if (course >= 0 && course <= 360) rows.set('cog', row, wrap360(course));
  };
}

/** Why a position cannot be used, if it cannot. */
export function faultOfPosition(latText: string, lonText: string, lat: number, lon: number): string | undefined {
  if (latText === '' || lonText === '') return 'no position';
  if (Number.isNaN(lat) || Number.isNaN(lon)) return 'position not understood';
  if (Math.abs(lat) > 90 || Math.abs(lon) > 180) return 'position out of range';
  if (lat === 0 && lon === 0) return 'position 0, 0: no fix';
  return undefined;
}

/** Walks the elements of one document and keeps what a track needs. */
class GpxWalk {
  readonly #take: (point: RawPoint) => void;
  readonly #rows: LogRows;
  readonly #tally: Tally;
  readonly #path: string[] = [];
  readonly names: string[] = [];
  readonly seen = new Set<string>();
  #point: RawPoint | null = null;
  #pointDepth = 0;
  #text: string | null = null;
  tracks = 0;

  constructor(take: (point: RawPoint) => void, rows: LogRows, tally: Tally) {
    this.#take = take;
    this.#rows = rows;
    this.#tally = tally;
  }

  get depth(): number {
    return this.#path.length;
  }

  open(tag: SaxesTagPlain, line: number): void {
    const name = localName(tag.name);
    this.#path.push(name);
    this.#text = null;
    if (name === 'trkpt') {
      // A point within a point: the end of the one before is damaged.
      if (this.#point) this.#take(this.#point);
      const { lat = '', lon = '' } = tag.attributes;
      this.#point = { lat: lat.trim(), lon: lon.trim(), time: '', speed: '', course: '', line };
      this.#pointDepth = this.#path.length;
    } else if (this.#point) {
      this.seen.add(name);
      if (isUsed(name, this.#path.length - this.#pointDepth)) this.#text = '';
    } else if (name === 'rtept' || name === 'wpt') {
      this.#tally.read++;
      this.#tally.ignore(name);
    } else if (name === 'trkseg' || name === 'trk') {
      this.#rows.startPiece();
      if (name === 'trk') this.tracks++;
    } else if (name === 'name' && this.#path.at(-2) === 'trk') this.#text = '';
  }

  text(text: string): void {
    if (this.#text !== null && this.#text.length < LONGEST) this.#text += text;
  }

  close(): void {
    const name = this.#path.at(-1)!;
    if (this.#text !== null) this.#use(name, this.#text.trim());
    this.#text = null;
    if (this.#point && this.#path.length === this.#pointDepth) {
      this.#take(this.#point);
      this.#point = null;
    }
    this.#path.pop();
  }

  /** The log ended: a point still open is a record that was cut. */
  end(line: number): void {
    if (!this.#point) return;
    this.#tally.read++;
    this.#tally.reject('cut short', line);
    this.#point = null;
  }

  #use(name: string, text: string): void {
    const point = this.#point;
    if (!point) this.names.push(text);
    else if (name === 'time') point.time ||= text;
    else if (name === 'speed') point.speed ||= text;
    else point.course ||= text;
  }
}

/** Time only as a point's own child; speed and course anywhere below it. */
function isUsed(name: string, depth: number): boolean {
  return name === 'time' ? depth === 1 : name === 'speed' || name === 'course';
}

function localName(name: string): string {
  return name.slice(name.indexOf(':') + 1);
}

/** Reads a GPX document, however damaged: what is complete is kept, what is odd is told. */
export async function readGpx(
  texts: AsyncIterable<string>,
  rows: LogRows,
  tally: Tally,
  zone: ZoneClock | null,
): Promise<GpxRead> {
  const walk = new GpxWalk(createPointTaker(rows, tally, zone), rows, tally);
  const { parser, fault } = openParser(walk, tally);
  const feed = createFilter(tally);
  for await (const text of texts) parser.write(feed(text));
  parser.write(feed(null));
  const open = walk.depth > 0;
  const line = parser.line;
  walk.end(line);
  try {
    parser.close();
  } catch {
    // Everything that can be said of the end has been said by the error handler.
  }
  if (open) tally.issue('file-truncated', `The file is cut at line ${line}; what is complete before it is read.`, line);
  tellOdd(tally, fault());
  return { name: walk.names.find((name) => name !== '') ?? '', columns: gpxColumns(rows, walk.seen) };
}

function openParser(walk: GpxWalk, tally: Tally): { parser: SaxesParser; fault: () => string } {
  const parser = new SaxesParser({ xmlns: false, position: true });
  let fault = '';
  parser.on('error', (error) => {
    fault ||= error.message.replace(/^[\d:]+\s*|\.$/g, '');
    tally.notice('xml', parser.line);
  });
  parser.on('doctype', () =>
    tally.issue('doctype', 'The file declares a document type, which GPX has not; it is not used.', parser.line),
  );
  let tooDeep = 0;
  parser.on('opentag', (tag) => {
    if (tooDeep > 0 || walk.depth >= DEEPEST) tooDeep++;
    else walk.open(tag, parser.line);
    if (tooDeep === 1) tally.notice('too deep', parser.line);
  });
  parser.on('closetag', () => {
    if (tooDeep > 0) tooDeep--;
    else walk.close();
  });
  parser.on('text', (text) => walk.text(text));
  parser.on('cdata', (text) => walk.text(text));
  return { parser, fault: () => fault };
}

/**
 * Makes text fit for the parser: an ampersand that begins no entity becomes one (held back where the text ends within
 * it), and what has no tag for longer than any text may be is left out.
 */
function createFilter(tally: Tally): (text: string | null) => string {
  let held = '';
  let sinceTag = 0;
  return (text) => {
    let all = held + (text ?? '');
    held = '';
    const tag = all.lastIndexOf('<');
    if (tag >= 0) sinceTag = all.length - tag;
    else if ((sinceTag += all.length) > LONGEST) {
      tally.notice('too long', 1);
      return '';
    }
    if (!all.includes('&')) return all;
    const begun = text === null ? null : ENTITY_BEGUN.exec(all);
    if (begun) {
      held = begun[0];
      all = all.slice(0, begun.index);
    }
    return all.replace(BARE_AMPERSAND, () => {
      tally.notice('bare-ampersand', 1);
      return '&amp;';
    });
  };
}

/** What the parser and the filter noticed, as issues. */
function tellOdd(tally: Tally, fault: string): void {
  tally.tellZone();
  tally.tell('xml', 'xml-errors', (n) => `Not well-formed XML in ${n} place(s), the first: ${fault}.`);
  tally.tell('too deep', 'xml-depth', () => `Elements nested more than ${DEEPEST} deep are left out.`);
  tally.tell('too long', 'xml-text', () => `Text longer than ${LONGEST} letters without a tag is left out.`);
  tally.tell('bare-ampersand', 'bare-ampersand', (n) => `${n} ampersand(s) that begin no entity are read as written.`);
}

function gpxColumns(rows: LogRows, seen: ReadonlySet<string>): ColumnReading[] {
  const has = new Set(rows.channels);
  const used: ColumnReading[] = [
    { header: 'lat', means: 'lat', unit: 'deg' },
    { header: 'lon', means: 'lon', unit: 'deg' },
  ];
  if (seen.has('time')) used.push({ header: 'time', means: 'time', unit: 'ISO 8601' });
  if (has.has('sog')) used.push({ header: 'speed', means: 'sog', unit: 'm/s' });
  if (has.has('cog')) used.push({ header: 'course', means: 'cog', unit: 'deg true' });
  const known = new Set(used.map(({ header }) => header));
  const others = [...seen].filter((name) => !known.has(name)).sort();
  return [...used, ...others.map((header) => ({ header, means: null, unit: null }))];
}
