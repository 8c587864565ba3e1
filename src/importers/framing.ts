/**
 * Lines of an NMEA 0183 log, and the sentence in each: `$` or `!`, address, fields, `*` and the exclusive or of all
 * bytes between as two hexadecimal digits (IEC 61162-1, 7.3). Before it may stand the logger's own stamp, or a tag
 * block between backslashes (IEC 61162-450, 7.2).
 */
import { latin1 } from './encoding.js';
import { carriesZone, fromUnix, readClock, readIso } from './times.js';
import { readDecimal } from './decimals.js';
import type { Bytes } from './bytes.js';
import { TextFields, type Fields } from './fields.js';

/** No sentence is longer, with its stamps; what is, is not one. */
export const LONGEST = 4096;
const LF = 10;
const CR = 13;
const DOLLAR = 36;
const BANG = 33;
const STAR = 42;
const COMMA = 44;

/** Takes the line (numbered from 1) that begins at `from`, if it can; returns where the next begins, -1 if it cannot. */
export type TakeQuickly = (bytes: Uint8Array, from: number, end: number, number: number) => number;

/** Calls `take` with each line (without its end) and its number, counted from 1, that `quick` does not take. */
export async function eachLine(
  bytes: Bytes,
  take: (line: Uint8Array, number: number, ended: boolean) => void,
  quick: TakeQuickly | null,
): Promise<void> {
  let held = new Uint8Array(0);
  let number = 0;
  let end = LF;
  let first = true;
  for await (const piece of bytes) {
    let data: Uint8Array = piece;
    if (first) {
      if (!piece.includes(LF) && piece.includes(CR)) end = CR;
      first = false;
    }
    if (held.length > 0) {
      data = new Uint8Array(held.length + piece.length);
      data.set(held);
      data.set(piece, held.length);
    }
    let from = 0;
    for (;;) {
      const next = quick ? quick(data, from, end, number + 1) : -1;
      const to = next < 0 ? data.indexOf(end, from) : next - 1;
      if (to < 0) break;
      number++;
      if (next < 0) take(trimmed(data, from, to), number, true);
      from = to + 1;
    }
    held = data.slice(from);
    // A line longer than any sentence is binary: only its end is of use.
    if (held.length > 16 * LONGEST) held = held.slice(-LONGEST);
  }
  if (held.length > 0) take(trimmed(held, 0, held.length), ++number, false);
}

function trimmed(data: Uint8Array, from: number, to: number): Uint8Array {
  let end = to;
  while (end > from && (data[end - 1] <= 32 || data[end - 1] === 0)) end--;
  let start = from;
  while (start < end && data[start] <= 32) start++;
  return data.subarray(start, end);
}

export type Check = 'good' | 'bad' | 'missing';

export interface Sentence {
  /** What stands before the sentence on its line. */
  readonly prefix: string;
  /** Talker and formatter, upper case. */
  readonly address: string;
  /** The fields, taken apart when asked for: most sentences of a log are none of ours. */
  readonly fields: () => Fields;
  readonly check: Check;
}

/** The sentences on a line: as a rule one; more where line ends were lost. Undefined stands for a line without any. */
export function sentencesOf(line: Uint8Array): (Sentence | undefined)[] {
  const starts: number[] = [];
  for (let at = 0; at < line.length; at++) {
    const byte = line[at];
    if (byte !== DOLLAR && byte !== BANG) continue;
    if (starts.length === 0 || line[at - 3] === STAR) starts.push(at);
  }
  if (starts.length === 0) return [undefined];
  return starts.map((start, k) => sentenceAt(line, k === 0 ? 0 : start, start, starts[k + 1] ?? line.length));
}

function sentenceAt(line: Uint8Array, from: number, start: number, end: number): Sentence | undefined {
  if (end - start > LONGEST) return undefined;
  let at = start;
  let check = checkOf(line, at, end);
  if (check !== 'good') {
    // The sentence before was cut in the middle of the line: the last beginning may be whole.
    for (let later = end - 1; later > start; later--) {
      if (line[later] !== DOLLAR && line[later] !== BANG) continue;
      if (checkOf(line, later, end) === 'good') {
        at = later;
        check = 'good';
      }
      break;
    }
  }
  const star = line.subarray(at, end).lastIndexOf(STAR);
  const stop = star < 0 ? end : at + star;
  const comma = line.indexOf(COMMA, at);
  const address = latin1(line.subarray(at + 1, comma < 0 || comma > stop ? stop : comma)).toUpperCase();
  if (!/^[A-Z][A-Z0-9]{2,14}$/.test(address)) return undefined;
  const prefix = at === start && start > from ? latin1(line.subarray(from, start)) : '';
  const fields = (): Fields =>
    new TextFields(
      latin1(line.subarray(at + 1, stop))
        .split(',')
        .slice(1),
    );
  return { prefix, address, fields, check };
}

/** Compares the checksum of the sentence that begins at `start` with the one written behind it. */
function checkOf(line: Uint8Array, start: number, end: number): Check {
  let sum = 0;
  let at = start + 1;
  for (; at < end && line[at] !== STAR; at++) sum ^= line[at];
  if (at >= end - 1) return 'missing';
  const written = hex(line[at + 1]) * 16 + hex(line[at + 2] ?? 0);
  return at + 3 === end && written === sum ? 'good' : 'bad';
}

/** The value of a hexadecimal digit, NaN for any other byte. */
export function hex(byte: number): number {
  if (byte >= 48 && byte <= 57) return byte - 48;
  const letter = byte | 32;
  return letter >= 97 && letter <= 102 ? letter - 87 : NaN;
}

/** When a line was logged, by the logger's own clock. */
export interface Stamp {
  /** UTC epoch seconds, or local seconds as if UTC; NaN when there is none. */
  readonly seconds: number;
  readonly zoned: boolean;
  /** Only a time of the day is written. */
  readonly dayless: boolean;
}

/** No stamp or tag block is longer: what is, is damage, and looking for a stamp in it grows with its length squared. */
const LONGEST_STAMP = 400;

export const NO_STAMP: Stamp = { seconds: NaN, zoned: true, dayless: false };

/** The stamp before a sentence: a tag block, Unix time, ISO 8601 or a time of day; else none. */
export function stampOf(prefix: string): Stamp {
  const text = prefix.trim();
  if (text === '' || text.length > LONGEST_STAMP) return NO_STAMP;
  if (text.startsWith('\\')) return tagStamp(text);
  const bare = text.replace(/^[[("']+|[\])"';,:\s]+$/g, '');
  const unix = fromUnix(readDecimal(/^[\d.]+/.exec(bare)?.[0] ?? ''));
  if (!Number.isNaN(unix)) return { seconds: unix, zoned: true, dayless: false };
  const iso = /^\d{4}[-/]\d\d[-/]\d\d[T ,;]\d\d:\d\d[^\s,;]*(?: ?(?:Z|[+-]\d\d:?\d\d))?/i.exec(bare)?.[0];
  if (iso) {
    const clean = iso.slice(0, 10).replaceAll('/', '-') + 'T' + iso.slice(11);
    return { seconds: readIso(clean), zoned: carriesZone(clean), dayless: false };
  }
  return { seconds: readClock(bare, 0), zoned: false, dayless: true };
}

/** `\s:ab0001,c:1120959341*2a\`: the parameter c is Unix time in seconds or milliseconds. A bad checksum: no stamp. */
function tagStamp(text: string): Stamp {
  const block = /^\\([^\\]*)\*([0-9A-Fa-f]{2})\\/.exec(text);
  if (!block) return NO_STAMP;
  let sum = 0;
  for (let at = 0; at < block[1].length; at++) sum ^= block[1].charCodeAt(at);
  const time = /(?:^|,)c:(\d+(?:\.\d+)?)/.exec(block[1]);
  if (!time || sum !== parseInt(block[2], 16)) return NO_STAMP;
  return { seconds: fromUnix(readDecimal(time[1])), zoned: true, dayless: false };
}
