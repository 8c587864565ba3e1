import { readIso } from './times.js';

const DAY = 86400;
/** Letters up to the seconds: `2026-04-18T14:05:`. */
const MINUTE = 17;
const TENS = [1, 10, 100, 1e3, 1e4, 1e5, 1e6, 1e7, 1e8, 1e9];

/**
 * ISO 8601 times in UTC one after another: most are of the same minute as the one before, and only their seconds need
 * reading. What it reads it reads as readIso does, to the last bit.
 */
export class MinuteClock {
  /** The letters of the minute; zeros, which no time has, before there is one. */
  readonly #minute = new Uint8Array(MINUTE);
  #day = NaN;
  #ofDay = NaN;
  /** The time last read. [UTC s] */
  seconds = NaN;

  /** Keeps the minute of a time that readIso has read. */
  remember(text: string, from: number): void {
    const minute = text.slice(from, from + MINUTE);
    const start = readIso(`${minute}00Z`);
    // 24:00 is of the day that ends.
    if (Number.isNaN(start) || !minute.endsWith(':') || minute.startsWith('24', 11)) return;
    for (let at = 0; at < MINUTE; at++) this.#minute[at] = minute.charCodeAt(at);
    this.#day = Math.floor(start / DAY) * DAY;
    this.#ofDay = start - this.#day;
  }

  /** Reads `2026-04-18T14:05:06.25Z` at `from`; returns its end, -1 when it is another minute or not so plain. */
  read(bytes: Uint8Array, from: number): number {
    const minute = this.#minute;
    for (let at = 0; at < MINUTE; at++) if (bytes[from + at] !== minute[at]) return -1;
    const tens = bytes[from + MINUTE] - 48;
    const ones = bytes[from + MINUTE + 1] - 48;
    if (!(tens >= 0 && tens <= 5 && ones >= 0 && ones <= 9)) return -1;
    let at = from + MINUTE + 2;
    let clock = this.#ofDay + tens * 10 + ones;
    let code = bytes[at];
    if (code === 46) {
      const first = ++at;
      let fraction = 0;
      while ((code = bytes[at]) >= 48 && code <= 57) {
        fraction = fraction * 10 + (code - 48);
        at++;
      }
      const places = at - first;
      if (places === 0 || places > 9) return -1;
      if (fraction > 0) clock += fraction / TENS[places];
    }
    if (code !== 90) return -1;
    this.seconds = this.#day + clock;
    return at + 1;
  }

  /** Reads the same of letters; whether [from, to) is such a time. */
  readText(text: string, from: number, to: number): boolean {
    const minute = this.#minute;
    if (text.charCodeAt(to - 1) !== 90 || to - from < MINUTE + 3) return false;
    for (let at = 0; at < MINUTE; at++) if (text.charCodeAt(from + at) !== minute[at]) return false;
    const tens = text.charCodeAt(from + MINUTE) - 48;
    const ones = text.charCodeAt(from + MINUTE + 1) - 48;
    if (!(tens >= 0 && tens <= 5 && ones >= 0 && ones <= 9)) return false;
    let clock = this.#ofDay + tens * 10 + ones;
    const first = from + MINUTE + 3;
    if (to > first) {
      const places = to - 1 - first;
      if (text.charCodeAt(first - 1) !== 46 || places === 0 || places > 9) return false;
      let fraction = 0;
      for (let at = first; at < to - 1; at++) {
        const digit = text.charCodeAt(at) - 48;
        if (!(digit >= 0 && digit <= 9)) return false;
        fraction = fraction * 10 + digit;
      }
      if (fraction > 0) clock += fraction / TENS[places];
    }
    this.seconds = this.#day + clock;
    return true;
  }
}
