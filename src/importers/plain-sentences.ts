/**
 * The fast way through what most of an NMEA log is: a sentence alone on its line, talker and formatter in five upper
 * case letters, fields, and the right checksum. Any other line is left where it stands for the tolerant reader, which
 * is the reference.
 */
import { latin1 } from './encoding.js';
import { ByteFields } from './fields.js';
import { hex, LONGEST } from './framing.js';
import { addressOf, type Address } from './sentences.js';

const CR = 13;
const DOLLAR = 36;
const BANG = 33;
const STAR = 42;
const COMMA = 44;
const ADDRESS = 5;

export class PlainSentences {
  readonly fields = new ByteFields();
  /** Of the sentence read last. */
  address: Address = addressOf('');
  readonly #known = new Map<number, Address>();

  /**
   * Reads the line that begins at `from`.
   *
   * @param end The letter that ends lines.
   * @returns Where the next line begins; -1 when this one is not plain, or not whole yet.
   */
  read(bytes: Uint8Array, from: number, end: number): number {
    const comma = from + 1 + ADDRESS;
    if (bytes[from] !== DOLLAR || bytes[comma] !== COMMA) return -1;
    const name = this.#name(bytes, from + 1);
    if (!name) return -1;
    const star = this.#split(bytes, from + 1, comma);
    if (star < 0) return -1;
    let at = star + 3;
    if (end !== CR) while (bytes[at] === CR) at++;
    if (bytes[at] !== end) return -1;
    this.address = name;
    return at + 1;
  }

  /** Finds the ends of the fields; returns where the checksum stands, -1 when it is wrong or the sentence is not plain. */
  #split(bytes: Uint8Array, from: number, comma: number): number {
    const { fields } = this;
    fields.begin(bytes, comma);
    let sum = COMMA;
    for (let at = from; at < comma; at++) sum ^= bytes[at];
    const most = Math.min(bytes.length, from + LONGEST - 4);
    for (let at = comma + 1; at < most; at++) {
      const byte = bytes[at];
      if (byte === COMMA) {
        if (!fields.end(at)) return -1;
      } else if (byte === STAR) {
        return fields.end(at) && hex(bytes[at + 1]) * 16 + hex(bytes[at + 2]) === sum ? at : -1;
      } else if (byte === DOLLAR || byte === BANG || byte < 32) return -1;
      sum ^= byte;
    }
    return -1;
  }

  /** The address of five letters or digits at `from`, kept once it was met: six bits tell them apart. */
  #name(bytes: Uint8Array, from: number): Address | undefined {
    let key = 0;
    for (let at = from; at < from + ADDRESS; at++) {
      const byte = bytes[at];
      if (!((byte >= 65 && byte <= 90) || (byte >= 48 && byte <= 57 && at > from))) return undefined;
      key = (key << 6) | (byte & 63);
    }
    let known = this.#known.get(key);
    if (!known) this.#known.set(key, (known = addressOf(latin1(bytes.subarray(from, from + ADDRESS)))));
    return known;
  }
}
