import type { Bytes } from './bytes.js';
import type { Tally } from './tally.js';

/**
 * In what encoding a log is written: by its byte-order mark, by the zeros that UTF-16 puts between plain letters, by
 * its XML declaration (XML 1.0, appendix F), else UTF-8 where the bytes are valid, else the Windows code page 1252.
 *
 * @returns A label of the WHATWG Encoding Standard.
 */
export function detectEncoding(head: Uint8Array): string {
  const [a, b, c, d] = head;
  if (a === 0xef && b === 0xbb && c === 0xbf) return 'utf-8';
  if (a === 0xff && b === 0xfe) return 'utf-16le';
  if (a === 0xfe && b === 0xff) return 'utf-16be';
  if (b === 0 && d === 0 && a !== 0 && c !== 0 && a !== undefined) return 'utf-16le';
  if (a === 0 && c === 0 && b !== 0 && d !== 0 && b !== undefined) return 'utf-16be';
  const declared = /^\s*<\?xml[^>]*?encoding\s*=\s*["']([\w.:-]+)["']/.exec(latin1(head.subarray(0, 300)))?.[1];
  if (declared && !/^(utf-?16|ucs-?2)/i.test(declared) && isKnown(declared)) return declared.toLowerCase();
  return isUtf8(head) ? 'utf-8' : 'windows-1252';
}

/** Bytes as the letters of the same number: enough to look for ASCII in them. */
export function latin1(bytes: Uint8Array): string {
  let text = '';
  for (let at = 0; at < bytes.length; at += 8192) {
    text += String.fromCharCode.apply(null, bytes.subarray(at, at + 8192) as unknown as number[]);
  }
  return text;
}

function isKnown(label: string): boolean {
  try {
    return new TextDecoder(label).encoding !== '';
  } catch {
    return false;
  }
}

function isUtf8(head: Uint8Array): boolean {
  try {
    new TextDecoder('utf-8', { fatal: true }).decode(head, { stream: true });
    return true;
  } catch {
    return false;
  }
}

/**
 * Turns the pieces of a stream into text, without a byte-order mark and without the zero bytes that a failing card
 * leaves behind; null ends it.
 */
export function createDecoder(encoding: string, tally: Tally): (piece: Uint8Array | null) => string {
  const decoder = new TextDecoder(encoding);
  return (piece) => {
    const text = piece ? decoder.decode(piece, { stream: true }) : decoder.decode();
    if (!text.includes('\0')) return text;
    tally.notice('zero-bytes', 1);
    return text.replaceAll('\0', '');
  };
}

/** The stream as text. */
export async function* decoded(bytes: Bytes, encoding: string, tally: Tally): AsyncIterable<string> {
  const decode = createDecoder(encoding, tally);
  for await (const piece of bytes) {
    const text = decode(piece);
    if (text !== '') yield text;
  }
  const rest = decode(null);
  if (rest !== '') yield rest;
}

/** Encodings whose bytes below 128 are those letters, wherever they stand. */
const ASCII_BASED = /^(utf-8|windows-\d+|iso-8859-\d+|latin1|us-ascii|ascii)$/;

/** Bytes that are ASCII where the text is, and their encoding: the stream itself, or made UTF-8. */
export function asciiBased(bytes: Bytes, encoding: string, tally: Tally): { bytes: Bytes; encoding: string } {
  if (ASCII_BASED.test(encoding)) return { bytes: withoutMark(bytes), encoding };
  return { bytes: encoded(decoded(bytes, encoding, tally)), encoding: 'utf-8' };
}

async function* encoded(texts: AsyncIterable<string>): Bytes {
  const encoder = new TextEncoder();
  for await (const text of texts) yield encoder.encode(text);
}

async function* withoutMark(bytes: Bytes): Bytes {
  let first = true;
  for await (const piece of bytes) {
    const marked = first && piece[0] === 0xef && piece[1] === 0xbb && piece[2] === 0xbf;
    yield marked ? piece.subarray(3) : piece;
    first = false;
  }
}
