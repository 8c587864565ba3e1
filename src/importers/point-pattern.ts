/**
 * What nearly every point of a GPX file has in common, matched against the bytes of the log before they are text:
 * the same letters around values that are numbers, a time of the same minute, or of no use. Whatever differs is left.
 */
import { readPlainBytes, stoppedAt } from './decimals.js';
import type { MinuteClock } from './minute-clock.js';

/** What a value of a point is used for, and its place among the values; `nothing` and `again` are read and left. */
export const ROLES = { lat: 0, lon: 1, time: 2, speed: 3, course: 4, again: 5, nothing: 6 } as const;
export type Role = keyof typeof ROLES;

const QUOTE = 34;
const AMPERSAND = 38;
const LESS = 60;
const BRACKET = 93;
const TAB = 9;

/** The values of a point at their places; NaN for what is absent. */
export const newValues = (): Float64Array => new Float64Array(ROLES.again + 1).fill(NaN);

/** The letters between the values of a point, as bytes. */
export class PointPattern {
  readonly #letters: Uint8Array;
  readonly #starts: Int32Array;
  readonly #places: Int32Array;
  readonly #clock: MinuteClock;

  /**
   * @param literals Letters before each value, and behind the last; all of them ASCII.
   * @param roles    Of the values, each once; what comes again has another role.
   * @param clock    Reads the times.
   */
  constructor(literals: readonly string[], roles: readonly Role[], clock: MinuteClock) {
    this.#letters = new TextEncoder().encode(literals.join(''));
    this.#starts = new Int32Array(literals.length + 1);
    literals.forEach((text, k) => (this.#starts[k + 1] = this.#starts[k] + text.length));
    this.#places = Int32Array.from(roles, (role) => ROLES[role]);
    this.#clock = clock;
  }

  /** Whether letters can be matched in the bytes of any encoding that begins with ASCII. */
  static fits(literals: readonly string[]): boolean {
    return literals.every((text) => /^[\t\n\r -~]*$/.test(text));
  }

  /** Reads the point that begins at `at`; returns its end, -1 when it is another, or not whole yet. */
  match(bytes: Uint8Array, at: number, values: Float64Array): number {
    const places = this.#places;
    values[ROLES.speed] = values[ROLES.course] = NaN;
    let p = at;
    for (let k = 0; k < places.length; k++) {
      p = this.#literal(bytes, p, k);
      if (p >= 0) p = this.#value(places[k], bytes, p, k < 2 ? QUOTE : LESS, values);
      if (p < 0) return -1;
    }
    return this.#literal(bytes, p, places.length);
  }

  #literal(bytes: Uint8Array, at: number, k: number): number {
    const letters = this.#letters;
    const to = this.#starts[k + 1];
    let p = at;
    for (let i = this.#starts[k]; i < to; i++) if (bytes[p++] !== letters[i]) return -1;
    return p;
  }

  /** Uses the value at `from`; returns its end, -1 when it is not as usual. */
  #value(place: number, bytes: Uint8Array, from: number, stop: number, values: Float64Array): number {
    if (place === ROLES.nothing) return endOfAscii(bytes, from, stop);
    if (place === ROLES.time) {
      const end = this.#clock.read(bytes, from);
      if (end < 0 || bytes[end] !== stop) return -1;
      values[place] = this.#clock.seconds;
      return end;
    }
    const value = readPlainBytes(bytes, from, stop);
    if (Number.isNaN(value)) return -1;
    values[place] = value;
    return stoppedAt();
  }
}

/** Where a value of plain letters ends; -1 when it holds any other, or does not end. */
function endOfAscii(bytes: Uint8Array, from: number, stop: number): number {
  for (let at = from; at < bytes.length; at++) {
    const byte = bytes[at];
    if (byte === stop) return at;
    if (byte < 32 ? byte !== TAB : byte === AMPERSAND || byte === LESS || byte === BRACKET || byte >= 127) return -1;
  }
  return -1;
}
