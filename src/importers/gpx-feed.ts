/** How a GPX document comes to its parser: all of it, or all but the points that are plain. */
import type { Bytes } from './bytes.js';
import type { PlainPoints } from './plain-points.js';

/** Held back for a point that is not yet whole, at most. */
const MOST_HELD = 1 << 16;
/** Points in a row that were not plain: what follows in the piece will hardly be. */
const MOST_MISSES = 16;

const ascii = (text: string): Uint8Array => new TextEncoder().encode(text);
const POINT = ascii('<trkpt ');
const POINT_END = ascii('</trkpt>');
const SEGMENT = ascii('<trkseg>');
const LESS = 60;

/** What reads a document beside the plain points. */
export interface Reader {
  /** The last tag read began a segment or ended a point in one: what follows are points. */
  atPoints(): boolean;
  /** Line reached, less what was taken as points. */
  line(): number;
  decode(bytes: Uint8Array): string;
  /** Reads more of the document; points may follow only where it says so again. */
  write(text: string): void;
}

/** Hands plain points past the reader and all else to it, in the order of the document. */
export async function feedAround(bytes: Bytes, points: PlainPoints, reader: Reader): Promise<void> {
  let held = new Uint8Array(0);
  for await (const piece of bytes) {
    let rest = piece;
    if (held.length > 0) {
      // What was held back is joined to the end of its point only: to copy every piece would cost.
      const end = find(piece, POINT_END, 0);
      const cut = end < 0 ? piece.length : end;
      const first = joined(held, piece.subarray(0, cut));
      const to = feedPiece(first, points, reader);
      rest = to === first.length ? piece.subarray(cut) : joined(first.subarray(to), piece.subarray(cut));
    }
    held = rest.slice(feedPiece(rest, points, reader));
  }
  reader.write(reader.decode(held));
}

function joined(a: Uint8Array, b: Uint8Array): Uint8Array {
  const both = new Uint8Array(a.length + b.length);
  both.set(a);
  both.set(b, a.length);
  return both;
}

/** Returns where what is held back begins: a point that is not yet whole. */
function feedPiece(data: Uint8Array, points: PlainPoints, reader: Reader): number {
  let at = 0;
  for (let misses = 0; at < data.length && misses < MOST_MISSES;) {
    if (reader.atPoints()) {
      at = points.takeAlike(data, at, reader.line());
      const end = find(data, POINT_END, at);
      if (end < 0) return data.length - at < MOST_HELD && isPointBegun(data, at) ? at : writeRest(data, at, reader);
      const text = reader.decode(data.subarray(at, end));
      at = end;
      const taken = Math.max(0, points.takeApart(text, 0, reader.line()));
      misses = taken > 0 ? 0 : misses + 1;
      if (taken < text.length) reader.write(text.slice(taken));
    } else {
      const fence = fenceAfter(data, at);
      reader.write(reader.decode(data.subarray(at, fence)));
      at = fence;
    }
  }
  return writeRest(data, at, reader);
}

function writeRest(data: Uint8Array, at: number, reader: Reader): number {
  if (at < data.length) reader.write(reader.decode(data.subarray(at)));
  return data.length;
}

/** Whether nothing but (the beginning of) a point stands from `at` to the end. */
function isPointBegun(data: Uint8Array, at: number): boolean {
  let start = at;
  while (start < data.length && data[start] <= 32) start++;
  for (let k = 0; k < POINT.length && start + k < data.length; k++) if (data[start + k] !== POINT[k]) return false;
  return true;
}

/** Behind the next tag after which points may come; the end when there is none. */
function fenceAfter(data: Uint8Array, at: number): number {
  for (let less = data.indexOf(LESS, at); less >= 0; less = data.indexOf(LESS, less + 1)) {
    if (stands(POINT_END, data, less) || stands(SEGMENT, data, less)) return less + SEGMENT.length;
  }
  return data.length;
}

/** Where the first of some letters from `at` on ends; -1 when they are not there. */
function find(data: Uint8Array, letters: Uint8Array, at: number): number {
  for (let less = data.indexOf(letters[0], at); less >= 0; less = data.indexOf(letters[0], less + 1)) {
    if (stands(letters, data, less)) return less + letters.length;
  }
  return -1;
}

function stands(letters: Uint8Array, data: Uint8Array, at: number): boolean {
  for (let k = 0; k < letters.length; k++) if (data[at + k] !== letters[k]) return false;
  return true;
}
