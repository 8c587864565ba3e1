/**
 * The fast way through what most of a GPX file is: track points whose elements have no attributes and hold numbers and
 * times, one after another. Anything else (an entity, a comment, an attribute, a bad value, a time without a zone) is
 * left where it stands for the XML parser, which is the reference.
 */
import { readDecimal, readPlainDecimal, stoppedAt } from './decimals.js';
import { MinuteClock } from './minute-clock.js';
import { readIso } from './times.js';

const CLOSE = '</trkpt>';
const OPEN_TAG = /<([A-Za-z_][\w.-]*(?::[A-Za-z_][\w.-]*)?)>/y;
const QUOTE = 34;
const LESS = 60;

/** What a value of a point is used for. */
type Role = 'lat' | 'lon' | 'time' | 'speed' | 'course' | null;

/** Takes a judged point: degrees, UTC seconds, m/s, degrees; NaN for what is absent. */
export type TakePoint = (lat: number, lon: number, time: number, speed: number, course: number, line: number) => void;

/** The values of a point, where they stand. */
interface Value {
  readonly role: Role;
  readonly from: number;
  readonly to: number;
}

/** What stands between the values of a point, the same in nearly every point of a file. */
interface Skeleton {
  /** Text before each value, and behind the last; begins with the blanks before the point. */
  readonly literals: readonly string[];
  readonly roles: readonly Role[];
  /** Line ends before the end of the point's own tag, and in all. */
  readonly linesToTag: number;
  readonly lines: number;
}

/** Reads plain points. A point like the one before is matched by its skeleton, any other is taken apart by its tags. */
export class PlainPoints {
  readonly #take: TakePoint;
  readonly #seen: Set<string>;
  readonly #clock = new MinuteClock();
  #skeleton: Skeleton | null = null;
  #lat = NaN;
  #lon = NaN;
  #time = NaN;
  #speed = NaN;
  #course = NaN;
  /** Line ends in all that was taken. */
  lines = 0;

  constructor(take: TakePoint, seen: Set<string>) {
    this.#take = take;
    this.#seen = seen;
  }

  /**
   * Takes the plain points that stand whole in `text` from `from` on.
   *
   * @param line Line on which `from` stands, less what was taken before.
   * @returns Where it stopped: behind the last point taken.
   */
  take(text: string, from: number, line: number): number {
    let at = from;
    for (;;) {
      let to = this.#match(text, at, line);
      if (to < 0) to = this.#takeApart(text, at, line);
      if (to < 0) return at;
      at = to;
    }
  }

  #forget(): void {
    this.#lat = this.#lon = this.#time = this.#speed = this.#course = NaN;
  }

  /** Takes the point at `at` if it is like the one before; returns its end, -1 when it is not. */
  #match(text: string, at: number, line: number): number {
    const skeleton = this.#skeleton;
    if (!skeleton) return -1;
    const { literals, roles } = skeleton;
    this.#forget();
    let p = at;
    for (let k = 0; k < roles.length; k++) {
      if (!text.startsWith(literals[k], p)) return -1;
      p = this.#value(roles[k], text, p + literals[k].length, k < 2 ? QUOTE : LESS);
      if (p < 0) return -1;
    }
    const last = literals[roles.length];
    if (!text.startsWith(last, p) || !this.#add(line + skeleton.linesToTag)) return -1;
    this.lines += skeleton.lines;
    return p + last.length;
  }

  /** Uses the value that begins at `from` in one go where it is as usual; returns its end, -1 when it is not plain. */
  #value(role: Role, text: string, from: number, stop: number): number {
    if (role === 'time' && Number.isNaN(this.#time)) {
      const end = this.#clock.read(text, from);
      if (end > 0 && text.charCodeAt(end) === stop) {
        this.#time = this.#clock.seconds;
        return end;
      }
    } else if (role !== null && role !== 'time') {
      const value = readPlainDecimal(text, from, stop);
      if (!Number.isNaN(value)) {
        this.#set(role, value);
        return stoppedAt();
      }
    }
    const end = endOfValue(text, from, stop);
    return end >= 0 && this.#use(role, text, from, end) ? end : -1;
  }

  /** Hands a point on if it has all it needs. */
  #add(line: number): boolean {
    if (!(Math.abs(this.#lat) <= 90 && Math.abs(this.#lon) <= 180) || (this.#lat === 0 && this.#lon === 0))
      return false;
    if (Number.isNaN(this.#time)) return false;
    this.#take(this.#lat, this.#lon, this.#time, this.#speed, this.#course, line + this.lines);
    return true;
  }

  /** Takes the point at `at` by its tags and keeps its skeleton; returns its end, -1 when it is not plain or not whole. */
  #takeApart(text: string, at: number, line: number): number {
    const start = skipBlanks(text, at, text.length);
    if (!text.startsWith('<trkpt l', start)) return -1;
    const end = text.indexOf(CLOSE, start);
    const values = end < 0 ? null : this.#attributes(text, start, end);
    const tag = values ? values[1].to + 2 : 0;
    if (!values || text.charCodeAt(tag - 1) !== 62 || !this.#elements(text, tag, end, values)) return -1;
    this.#forget();
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
    this.#skeleton = single ? { literals, roles: values.map(({ role }) => role), linesToTag, lines } : null;
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
        values.push({ role: used ? local : null, from: inner, to: close });
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
    if (role === null) return true;
    let start = from;
    let end = to;
    while (start < end && text.charCodeAt(start) <= 32) start++;
    while (end > start && text.charCodeAt(end - 1) <= 32) end--;
    if (start === end) return role !== 'lat' && role !== 'lon';
    if (role === 'time') {
      if (!Number.isNaN(this.#time)) return true;
      this.#time = text.charCodeAt(end - 1) === 90 ? readIso(text, start, end) : NaN;
      this.#clock.remember(text, start);
      return !Number.isNaN(this.#time);
    }
    const value = readDecimal(text, start, end);
    this.#set(role, value);
    return !Number.isNaN(value);
  }

  #set(role: Exclude<Role, 'time' | null>, value: number): void {
    if (role === 'lat') this.#lat = value;
    else if (role === 'lon') this.#lon = value;
    else if (role === 'speed') this.#speed = Number.isNaN(this.#speed) ? value : this.#speed;
    else this.#course = Number.isNaN(this.#course) ? value : this.#course;
  }
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
