/** The fields of a sentence, as letters or as the bytes of the log. They answer alike, whichever they are. */
import { readDecimal, readDecimalBytes } from './decimals.js';
import { latin1 } from './encoding.js';

/** Fields counted from 0 behind the address; one that is not there is empty. */
export interface Fields {
  readonly count: number;
  length(k: number): number;
  /** The decimal number that the letters [from, to) of a field write; NaN when they are anything else. */
  number(k: number, from?: number, to?: number): number;
  /** In upper case. */
  letters(k: number): string;
  /** Letters behind the first point. */
  decimals(k: number): number;
}

/** Fields already taken apart. */
export class TextFields implements Fields {
  readonly #fields: readonly string[];

  constructor(fields: readonly string[]) {
    this.#fields = fields;
  }

  get count(): number {
    return this.#fields.length;
  }

  length(k: number): number {
    return this.#text(k).length;
  }

  number(k: number, from = 0, to?: number): number {
    return readDecimal(this.#text(k), from, to);
  }

  letters(k: number): string {
    return this.#text(k).toUpperCase();
  }

  decimals(k: number): number {
    const point = this.#text(k).indexOf('.');
    return point < 0 ? 0 : this.#text(k).length - point - 1;
  }

  #text(k: number): string {
    return this.#fields[k] ?? '';
  }
}

const POINT = 46;
/** More fields than any sentence has: one with more is not plain. */
export const MOST_FIELDS = 64;

/** Upper case of the letters that ASCII has. */
const UPPER = Array.from({ length: 128 }, (_, code) => String.fromCharCode(code).toUpperCase());

/** Fields where they stand in the log: between commas at places that are found once. */
export class ByteFields implements Fields {
  #bytes: Uint8Array = new Uint8Array(0);
  /** Places of the commas, the first before field 0, and of what ends the last field. */
  readonly #edges = new Int32Array(MOST_FIELDS + 1);
  count = 0;

  /** Begins with the sentence whose first comma is at `first`. */
  begin(bytes: Uint8Array, first: number): void {
    this.#bytes = bytes;
    this.#edges[0] = first;
    this.count = 0;
  }

  /** A field ends at `at`; false when they are too many. */
  end(at: number): boolean {
    if (this.count === MOST_FIELDS) return false;
    this.#edges[++this.count] = at;
    return true;
  }

  length(k: number): number {
    return k < this.count ? this.#edges[k + 1] - this.#edges[k] - 1 : 0;
  }

  number(k: number, from = 0, to = Infinity): number {
    if (k >= this.count) return NaN;
    const start = this.#edges[k] + 1;
    return readDecimalBytes(this.#bytes, start + from, Math.min(start + to, this.#edges[k + 1]));
  }

  letters(k: number): string {
    const length = this.length(k);
    if (length === 0) return '';
    const start = this.#edges[k] + 1;
    if (length === 1 && this.#bytes[start] < 128) return UPPER[this.#bytes[start]];
    return latin1(this.#bytes.subarray(start, start + length)).toUpperCase();
  }

  decimals(k: number): number {
    if (k >= this.count) return 0;
    const end = this.#edges[k + 1];
    for (let at = this.#edges[k] + 1; at < end; at++) if (this.#bytes[at] === POINT) return end - at - 1;
    return 0;
  }
}
