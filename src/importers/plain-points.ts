/**
 * The fast way through what most of a GPX file is: track points whose elements have no attributes and hold numbers and
 * times, one after another. Anything else (an entity, a comment, an attribute, a bad value, a time without a zone) is
 * left where it stands for the XML parser, which is the reference.
 */
import { readDecimal } from './decimals.js';
import { MinuteClock } from './minute-clock.js';
import { newValues, PointPattern, ROLES, type Role } from './point-pattern.js';
import { readIso } from './times.js';

const CLOSE = '</trkpt>';
const OPEN_TAG = /<([A-Za-z_][\w.-]*(?::[A-Za-z_][\w.-]*)?)>/y;
const QUOTE = 34;
const LESS = 60;

/** Takes a judged point: degrees, UTC seconds, m/s, degrees; NaN for what is absent. */
export type TakePoint = (lat: number, lon: number, time: number, speed: number, course: number, line: number) => void;

/** The values of a point, where they stand. */
interface Value {
  readonly role: Role;
  readonly from: number;
  readonly to: number;
}

/** A point like most of the file. */
interface Usual {
  readonly pattern: PointPattern;
  /** Line ends before the end of the point's own tag, and in all. */
  readonly linesToTag: number;
  readonly lines: number;
}

/** Reads plain points: one like the one before is matched as bytes, any other is taken apart by its tags. */
export class PlainPoints {
  readonly #take: TakePoint;
  readonly #seen: Set<string>;
  readonly #clock = new MinuteClock();
  readonly #values = newValues();
  #usual: Usual | null = null;
  /** Line ends in all that was taken. */
  lines = 0;

  constructor(take: TakePoint, seen: Set<string>) {
    this.#take = take;
    this.#seen = seen;
  }

  /**
   * Takes the points that stand whole from `from` on and are like the one taken apart last.
   *
   * @param line Line on which `from` stands, less what was taken before.
   * @returns Where it stopped: behind the last point taken.
   */
  takeAlike(bytes: Uint8Array, from: number, line: number): number {
    const usual = this.#usual;
    if (!usual) return from;
    let at = from;
    for (;;) {
      const end = usual.pattern.match(bytes, at, this.#values);
      if (end < 0 || !this.#add(line + usual.linesToTag)) return at;
      this.lines += usual.lines;
      at = end;
    }
  }

  /** Hands a point on if it has all it needs: a position on earth, not 0, 0, and a time. */
  #add(line: number): boolean {
    const values = this.#values;
    const lat = values[ROLES.lat];
    const lon = values[ROLES.lon];
    const time = values[ROLES.time];
    if (!(Math.abs(lat) <= 90 && Math.abs(lon) <= 180) || (lat === 0 && lon === 0) || Number.isNaN(time)) return false;
    this.#take(lat, lon, time, values[ROLES.speed], values[ROLES.course], line + this.lines);
    return true;
  }

  /** Takes the point at `at` by its tags; returns its end, -1 when it is not plain or not whole. */
  takeApart(text: string, at: number, line: number): number {
    const start = skipBlanks(text, at, text.length);
    if (!text.startsWith('<trkpt l', start)) return -1;
    const end = text.indexOf(CLOSE, start);
    const values = end < 0 ? null : this.#attributes(text, start, end);
    const tag = values ? values[1].to + 2 : 0;
    if (!values || text.charCodeAt(tag - 1) !== 62 || !this.#elements(text, tag, end, values)) return -1;
    this.#values.fill(NaN);
    for (const { role, from, to } of values) if (!this.#use(role, text, from, to)) return -1;
    const linesToTag = countLines(text, at, tag);
    if (!this.#add(line + linesToTag)) return -1;
    const stop = end + CLOSE.length;
    const lines = countLines(text, at, stop);
    this.lines += lines;
    const literals = [...values, { from: stop }].map(({ from }, k) =>
      text.slice(k === 0 ? at : values[k - 1].to, from),
    );
    // A value that runs over lines is not matched: its line ends would be miscounted.
    const single = values.every(({ from, to }) => countLines(text, from, to) === 0);
    const roles = values.map(({ role }) => role);
    const fits = single && roles.filter((role) => role === 'time').length === 1 && PointPattern.fits(literals);
    this.#usual = fits
      ? { pattern: new PointPattern(literals, onceEach(roles), this.#clock), linesToTag, lines }
      : null;
    return stop;
  }

  #attributes(text: string, start: number, end: number): Value[] | null {
    const latFirst = text.startsWith('at="', start + 8);
    if (!latFirst && !text.startsWith('on="', start + 8)) return null;
    const first = start + 12;
    const firstEnd = endOfValue(text, first, QUOTE);
    const second = firstEnd + 7;
    if (firstEnd < 0 || !text.startsWith(latFirst ? '" lon="' : '" lat="', firstEnd)) return null;
    const secondEnd = endOfValue(text, second, QUOTE);
    if (secondEnd < 0 || secondEnd > end) return null;
    return [
      { role: latFirst ? 'lat' : 'lon', from: first, to: firstEnd },
      { role: latFirst ? 'lon' : 'lat', from: second, to: secondEnd },
    ];
  }

  /** Walks the elements of a point and notes their values; false where one is not plain. */
  #elements(text: string, from: number, end: number, values: Value[]): boolean {
    const open: string[] = [];
    for (let at = skipBlanks(text, from, end); at < end; at = skipBlanks(text, at, end)) {
      const top = open.at(-1);
      if (top !== undefined && text.startsWith(`</${top}>`, at)) {
        open.pop();
        at += top.length + 3;
        continue;
      }
      OPEN_TAG.lastIndex = at;
      const name = OPEN_TAG.exec(text)?.[1];
      if (name === undefined) return false;
      const local = name.slice(name.indexOf(':') + 1);
      if (local === 'trkpt') return false;
      const used = local === 'speed' || local === 'course' || (local === 'time' && open.length === 0);
      const inner = at + name.length + 2;
      const close = endOfValue(text, inner, LESS, true);
      if (close < 0) return false;
      if (text.startsWith(`</${name}>`, close)) {
        values.push({ role: used ? local : 'nothing', from: inner, to: close });
        at = close + name.length + 3;
      } else {
        if (used || text.charCodeAt(close + 1) === 47) return false;
        open.push(name);
        at = close;
      }
      this.#seen.add(local);
    }
    return open.length === 0;
  }

  /** Uses the text of a value, blanks around it left out; an empty one says nothing, the first that speaks holds. */
  #use(role: Role, text: string, from: number, to: number): boolean {
    if (role === 'nothing') return true;
    let start = from;
    let end = to;
    while (start < end && text.charCodeAt(start) <= 32) start++;
    while (end > start && text.charCodeAt(end - 1) <= 32) end--;
    if (start === end) return role !== 'lat' && role !== 'lon';
    const first = Number.isNaN(this.#values[ROLES[role]]);
    if (role === 'time' && !first) return true;
    const value = role === 'time' ? this.#readTime(text, start, end) : readDecimal(text, start, end);
    if (first) this.#values[ROLES[role]] = value;
    return !Number.isNaN(value);
  }

  #readTime(text: string, start: number, end: number): number {
    this.#clock.remember(text, start);
    return text.charCodeAt(end - 1) === 90 ? readIso(text, start, end) : NaN;
  }
}

/** The first of a kind that speaks holds; later ones are only read. */
function onceEach(roles: readonly Role[]): Role[] {
  return roles.map((role, k) => (role !== 'nothing' && roles.indexOf(role) < k ? 'again' : role));
}

/** Behind the blanks at `at`. Stops at a carriage return that stands alone. */
function skipBlanks(text: string, at: number, end: number): number {
  let p = at;
  for (; p < end; p++) {
    const code = text.charCodeAt(p);
    if (code === 13 ? text.charCodeAt(p + 1) !== 10 : code !== 10 && code !== 32 && code !== 9) break;
  }
  return p;
}

/** Where the value that begins at `from` is ended by `stop`; -1 when it is not plain, or ends nowhere. */
function endOfValue(text: string, from: number, stop: number, lines = false): number {
  for (let at = from; at < text.length; at++) {
    const code = text.charCodeAt(at);
    if (code === stop) return at;
    if (code < 32 ? !isBlank(text, at, code, lines) : isSpecial(code)) return -1;
  }
  return -1;
}

function isBlank(text: string, at: number, code: number, lines: boolean): boolean {
  return code === 9 || (lines && (code === 10 || (code === 13 && text.charCodeAt(at + 1) === 10)));
}

/** `&`, `<`, `]` and all that is not surely a letter of XML. */
function isSpecial(code: number): boolean {
  return code === 38 || code === LESS || code === 93 || (code >= 0x7f && code < 0xa0) || code > 0xd7ff;
}

function countLines(text: string, from: number, to: number): number {
  let lines = 0;
  for (let at = text.indexOf('\n', from); at >= 0 && at < to; at = text.indexOf('\n', at + 1)) lines++;
  return lines;
}
