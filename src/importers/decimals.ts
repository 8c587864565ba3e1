/** Numbers as logs write them. */
import { latin1 } from './encoding.js';

/** Powers of ten that a double holds exactly. */
const EXACT_TENS = Array.from({ length: 23 }, (_, k) => Number(`1e${k}`));

/**
 * A decimal number, read without a regular expression: up to 15 digits over an exact power of ten is correctly
 * rounded, all else goes to the host's parser.
 *
 * @returns The number, NaN when the text (from `start` to `end`) is anything else: empty, hexadecimal, `Infinity`.
 */
export function readDecimal(text: string, start = 0, end = text.length): number {
  let at = start;
  const sign = text.charCodeAt(at);
  if (sign === 45 || sign === 43) at++;
  let digits = 0;
  let value = 0;
  let places = 0;
  let point = false;
  for (; at < end; at++) {
    const code = text.charCodeAt(at);
    if (code >= 48 && code <= 57) {
      value = value * 10 + (code - 48);
      digits++;
      if (point) places++;
    } else if (code === 46 && !point) point = true;
    else return readOddDecimal(text.slice(start, end));
  }
  if (digits === 0) return NaN;
  if (digits > 15) return readOddDecimal(text.slice(start, end));
  if (places > 0) value /= EXACT_TENS[places];
  return sign === 45 ? -value : value;
}

/** The decimal number that stands in the bytes [start, end): what readDecimal makes of their letters. */
export function readDecimalBytes(bytes: Uint8Array, start: number, end: number): number {
  let at = start;
  const sign = at < end ? bytes[at] : 0;
  if (sign === 45 || sign === 43) at++;
  let digits = 0;
  let value = 0;
  let point = -1;
  for (; at < end; at++) {
    const code = bytes[at];
    if (code >= 48 && code <= 57) {
      value = value * 10 + (code - 48);
      digits++;
    } else if (code === 46 && point < 0) point = at;
    else return readDecimal(latin1(bytes.subarray(start, end)));
  }
  if (digits === 0) return NaN;
  if (digits > 15) return readDecimal(latin1(bytes.subarray(start, end)));
  if (point >= 0 && point < end - 1) value /= EXACT_TENS[end - 1 - point];
  return sign === 45 ? -value : value;
}

let stop = -1;

/** Where the last `readPlainBytes` stopped. */
export function stoppedAt(): number {
  return stop;
}

/**
 * The number that begins at `from` and is ended by the letter `until`, in one pass: what readDecimal makes of it.
 *
 * @returns NaN when it is not plain: digits with at most a sign and a point, 15 at most. Then nothing is said.
 */
export function readPlainBytes(bytes: Uint8Array, from: number, until: number): number {
  let at = from;
  let code = bytes[at];
  const negative = code === 45;
  if (negative || code === 43) code = bytes[++at];
  const first = at;
  let value = 0;
  let point = -1;
  while (code !== until) {
    if (code >= 48 && code <= 57) value = value * 10 + (code - 48);
    else if (code === 46 && point < 0) point = at;
    else return NaN;
    code = bytes[++at];
  }
  const digits = at - first - (point < 0 ? 0 : 1);
  if (digits === 0 || digits > 15) return NaN;
  stop = at;
  if (point >= 0 && point < at - 1) value /= EXACT_TENS[at - 1 - point];
  return negative ? -value : value;
}

const DECIMAL = /^\s*([+-]?(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d{1,3})?)\s*$/;
const DECIMAL_COMMA = /^\s*([+-]?\d*),(\d+)\s*$/;

/** A double has no more digits than this; what is longer is damage, and matching it grows with its length squared. */
const LONGEST_NUMBER = 400;

/** Exponents, many digits, spaces around, a decimal comma. */
function readOddDecimal(written: string): number {
  const text = written.trim();
  if (text.length > LONGEST_NUMBER) return NaN;
  const plain = DECIMAL.exec(text);
  if (plain) {
    const value = Number(plain[1]);
    return Number.isFinite(value) ? value : NaN;
  }
  const comma = DECIMAL_COMMA.exec(text);
  return comma ? Number(`${comma[1]}.${comma[2]}`) : NaN;
}

const SEXAGESIMAL =
  /^([+-]?\d{1,3}(?:[.,]\d+)?)[°\s]*(?:(\d{1,2}(?:[.,]\d+)?)['′\s]*)?(?:(\d{1,2}(?:[.,]\d+)?)["″\s]*)?$/;

/**
 * A latitude or longitude as people and devices write it: decimal degrees, degrees and minutes, degrees, minutes and
 * seconds, with the hemisphere's letter before or after.
 *
 * @returns Degrees, north and east positive; NaN when not understood.
 */
export function readAngle(text: string): number {
  const plain = readDecimal(text);
  if (!Number.isNaN(plain)) return plain;
  const letter = /[NSEWO]/i.exec(text.replace(/deg/i, ''));
  const parts = SEXAGESIMAL.exec(
    text
      .replace(/deg/i, ' ')
      .replace(/[NSEWO]/gi, ' ')
      .trim(),
  );
  if (!parts) return NaN;
  const [degrees, minutes, seconds] = [1, 2, 3].map((k) => Number((parts[k] ?? '0').replace(',', '.')));
  if (minutes >= 60 || seconds >= 60) return NaN;
  const size = Math.abs(degrees) + minutes / 60 + seconds / 3600;
  const negative = parts[1].startsWith('-') || (letter !== null && /[SW]/i.test(letter[0]));
  return negative ? -size : size;
}
