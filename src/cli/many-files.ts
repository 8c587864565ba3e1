import { isAscii } from 'node:buffer';
import { closeSync, fstatSync, openSync, readSync } from 'node:fs';

/** Result files by the thousand, as a season reads them. */

/**
 * Reads result files one after another. One buffer serves them all; what a text holds beyond ASCII becomes escapes, which
 * say the same in JSON, so that no text is decoded nor twice as wide as need be.
 *
 * A file laid out as this program writes it is parsed boat by boat: a string of more than some 100 kB gets memory pages
 * of its own from the engine, which costs more than reading and parsing it. No string of valid JSON holds a line break,
 * so what looks like the line on which a boat begins or ends is one; and a part cut wrongly, of a file that somebody laid
 * out anew, lacks a bracket and is no JSON.
 *
 * @returns Reads what is in a file; undefined where that is strange in any way and is to be read as other files are.
 */
export function resultReader(): (path: string) => unknown {
  const file = new GrowingBytes(1 << 18);
  const plain = new GrowingBytes(1 << 18);
  return (path) => {
    // A mark of the byte order is no JSON either.
    if (!readInto(file, path) || file.length === 0 || file.bytes[0] >= 0x80) return undefined;
    plain.length = 0;
    plain.putEscaped(file);
    return unlessWrong(() => byBoats(plain)) ?? unlessWrong(() => JSON.parse(plain.text()));
  };
}

function unlessWrong(parse: () => unknown): unknown {
  try {
    return parse();
  } catch {
    return undefined;
  }
}

/** Short ones: these are found fastest. */
const BOATS = '\n  "boats": [';
const BOATS_END = '\n  ]';
const BOAT_END = '\n    }';
const COMMA = 0x2c;

/** A result parsed boat by boat; undefined where it is not laid out so. */
function byBoats({ bytes, length }: GrowingBytes): unknown {
  const whole = bytes.subarray(0, length);
  const start = whole.indexOf(BOATS);
  const from = start + BOATS.length;
  const end = start < 0 || whole[from] === EMPTY ? -1 : whole.indexOf(BOATS_END, from);
  if (end < 0) return undefined;
  const boats: unknown[] = [];
  for (let at = from; at < end;) {
    const last = whole.indexOf(BOAT_END, at);
    if (last < 0 || last >= end) return undefined;
    const next = last + BOAT_END.length;
    boats.push(JSON.parse(whole.toString('latin1', at, next)));
    if (next < end && whole[next] !== COMMA) return undefined;
    at = next + 1;
  }
  const around = whole.toString('latin1', 0, from) + whole.toString('latin1', end);
  const rest = JSON.parse(around) as { boats: unknown[] };
  rest.boats = boats;
  return rest;
}

const EMPTY = 0x5d;

/** Bytes in a buffer that grows where it must. */
class GrowingBytes {
  bytes: Buffer;
  length = 0;

  constructor(size: number) {
    this.bytes = Buffer.allocUnsafeSlow(size);
  }

  /** Makes room for so many bytes more. */
  room(more: number): void {
    if (this.length + more <= this.bytes.length) return;
    const larger = Buffer.allocUnsafeSlow(Math.ceil(1.5 * (this.length + more)));
    this.bytes.copy(larger, 0, 0, this.length);
    this.bytes = larger;
  }

  put(ascii: string): void {
    this.room(ascii.length);
    this.length += this.bytes.write(ascii, this.length, 'latin1');
  }

  /** UTF-8 as ASCII: outside strings JSON has nothing else, and within them every character has an escape. */
  putEscaped({ bytes, length }: GrowingBytes): void {
    if (isAscii(bytes.subarray(0, length))) return this.copy(bytes, 0, length);
    let from = 0;
    for (let at = nextWide(bytes, 0, length); at < length; at = nextWide(bytes, from, length)) {
      this.copy(bytes, from, at);
      for (from = at; from < length && bytes[from] >= 0x80;) from++;
      this.put(escapes(bytes.toString('utf8', at, from)));
    }
    this.copy(bytes, from, length);
  }

  text(): string {
    return this.bytes.toString('latin1', 0, this.length);
  }

  private copy(bytes: Buffer, from: number, to: number): void {
    this.room(to - from);
    bytes.copy(this.bytes, this.length, from, to);
    this.length += to - from;
  }
}

/** Reads a whole file; false where that is not to be had. */
function readInto(into: GrowingBytes, path: string): boolean {
  into.length = 0;
  let file: number | undefined;
  try {
    file = openSync(path, 'r');
    // A byte more than there should be, to see the end.
    into.room(fstatSync(file).size + 1);
    for (;;) {
      const more = readSync(file, into.bytes, into.length, into.bytes.length - into.length, null);
      if (more === 0) return true;
      into.length += more;
      into.room(1);
    }
  } catch {
    return false;
  } finally {
    if (file !== undefined) closeSync(file);
  }
}

/** The next byte beyond ASCII, four at a time where none is near; `length` where there is none. */
function nextWide(bytes: Buffer, from: number, length: number): number {
  const words = new Int32Array(bytes.buffer, bytes.byteOffset, length >> 2);
  let at = from;
  while (at < length && (at & 3) !== 0 && bytes[at] < 0x80) at++;
  if (at < length && bytes[at] >= 0x80) return at;
  let word = at >> 2;
  while (word < words.length && (words[word] & 0x80808080) === 0) word++;
  at = Math.max(at, word << 2);
  while (at < length && bytes[at] < 0x80) at++;
  return at;
}

function escapes(text: string): string {
  let out = '';
  for (let i = 0; i < text.length; i++) out += `\\u${text.charCodeAt(i).toString(16).padStart(4, '0')}`;
  return out;
}
