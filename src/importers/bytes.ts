import { Gunzip, Unzip, UnzipInflate, UnzipPassThrough } from 'fflate';
import { UserError } from '../recording/issues.js';
import type { StreamHash } from '../math/sha256.js';
import type { LogSource } from './types.js';
import type { Tally } from './tally.js';

/** Bytes are handled in pieces of this size at most, however they come. */
const PIECE = 1 << 16;
/** What a compressed log may grow to. The longest log we know of has 0.5 GB. */
const LARGEST = 8e9;
/** Logs shrink to a tenth, at best to a fiftieth; what grows so many times beyond so many bytes was made to do harm. */
const MOST_GROWTH = 250;
const GROWN = 64e6;

export type Bytes = AsyncIterable<Uint8Array>;

/** The source's bytes, in small pieces, each seen by the digest as it passes. */
export async function* hashed(source: LogSource, hash: StreamHash): Bytes {
  for await (const chunk of source.chunks) {
    for (let at = 0; at < chunk.length; at += PIECE) {
      // Some hosts' arrays have a `slice` that copies nothing.
      const piece = new Uint8Array(chunk.buffer, chunk.byteOffset + at, Math.min(PIECE, chunk.length - at));
      hash.update(piece);
      yield piece;
    }
  }
}

/**
 * The beginning of a stream (at least `size` bytes, if it has as many), and the whole stream again. A piece is done
 * with when the next is asked for: what is held longer is copied.
 */
export async function peek(bytes: Bytes, size: number): Promise<{ head: Uint8Array; all: Bytes }> {
  const iterator = bytes[Symbol.asyncIterator]();
  const held: Uint8Array[] = [];
  let length = 0;
  while (length < size) {
    const next = await iterator.next();
    if (next.done) break;
    length += next.value.length;
    held.push(length < size ? next.value.slice() : next.value);
  }
  const head = join(held, length);
  return { head, all: chain(head, iterator) };
}

async function* chain(head: Uint8Array, rest: AsyncIterator<Uint8Array>): Bytes {
  if (head.length > 0) yield head;
  for (let next = await rest.next(); !next.done; next = await rest.next()) yield next.value;
}

export function join(pieces: readonly Uint8Array[], length: number): Uint8Array {
  if (pieces.length === 1) return pieces[0];
  const all = new Uint8Array(length);
  let at = 0;
  for (const piece of pieces) {
    all.set(piece, at);
    at += piece.length;
  }
  return all;
}

/** What is inside a gzip (RFC 1952) or zip (APPNOTE.TXT 6.3) wrapping, judged by the first bytes; else the bytes. */
export async function unwrapped(bytes: Bytes, tally: Tally): Promise<Bytes> {
  const { head, all } = await peek(bytes, 4);
  const wrapping = wrappingOf(head);
  if (wrapping === null) return all;
  if (wrapping === 'empty') throw new UserError(`${tally.file}: the archive holds no file.`, { exitCode: 2 });
  const inner = await peek(inflated(all, tally, wrapping === 'gzip' ? gunzip : unzip), 4);
  if (wrappingOf(inner.head) === null) return inner.all;
  throw new UserError(`${tally.file}: an archive within an archive.`, {
    exitCode: 2,
    suggestion: 'Unpack it and give the log itself.',
  });
}

function wrappingOf([a, b, c, d]: Uint8Array): 'gzip' | 'zip' | 'empty' | null {
  if (a === 0x1f && b === 0x8b) return 'gzip';
  if (a !== 0x50 || b !== 0x4b) return null;
  return c === 3 && d === 4 ? 'zip' : c === 5 && d === 6 ? 'empty' : null;
}

/** Takes compressed bytes, hands on what they hold. */
interface Inflater {
  push(piece: Uint8Array, final: boolean): void;
}

function gunzip(out: (bytes: Uint8Array) => void): Inflater {
  return new Gunzip((bytes) => out(bytes));
}

/** The first file of the archive that is not a folder, a hidden file or a resource fork; others are told. */
function unzip(out: (bytes: Uint8Array) => void, tally: Tally): Inflater {
  let taken = '';
  const archive = new Unzip((file) => {
    const base = file.name.split('/').at(-1)!;
    if (base === '' || base.startsWith('.') || file.name.startsWith('__MACOSX')) return;
    if (taken !== '') {
      tally.issue('archive-rest', `The archive holds more than one file: '${taken}' is read, '${file.name}' is not.`);
      return;
    }
    taken = file.name;
    file.ondata = (error, bytes) => {
      if (error) throw error;
      out(bytes);
    };
    file.start();
  });
  archive.register(UnzipInflate);
  archive.register(UnzipPassThrough);
  return archive;
}

async function* inflated(
  bytes: Bytes,
  tally: Tally,
  open: (out: (bytes: Uint8Array) => void, tally: Tally) => Inflater,
): Bytes {
  let ready: Uint8Array[] = [];
  let given = 0;
  let size = 0;
  const inflater = open((piece) => {
    size += piece.length;
    if (piece.length > 0) ready.push(piece);
  }, tally);
  let broken = false;
  for await (const chunk of bytes) {
    for (let at = 0; at < chunk.length && !broken; at += 4096) {
      given += Math.min(4096, chunk.length - at);
      // The inflater holds on to what it has not yet used.
      broken = !pushed(inflater, chunk.slice(at, at + 4096), false, tally);
      const done = ready;
      ready = [];
      for (const piece of done) yield piece;
      if (size > LARGEST || (size > GROWN && size > MOST_GROWTH * given)) throw tooLarge(tally.file, size, given);
    }
  }
  if (!broken) pushed(inflater, new Uint8Array(0), true, tally);
  for (const piece of ready) yield piece;
}

/** Damaged or cut: what came before it is kept. */
function pushed(inflater: Inflater, piece: Uint8Array, final: boolean, tally: Tally): boolean {
  try {
    inflater.push(piece, final);
    return true;
  } catch (error) {
    const why = error instanceof Error ? error.message : 'unknown';
    tally.issue('file-truncated', `The compressed file is cut or damaged (${why}); what comes before is read.`);
    return false;
  }
}

function tooLarge(file: string, size: number, given: number): UserError {
  const grown = size > LARGEST ? `more than ${LARGEST / 1e9} GB` : `${Math.round(size / given)} times its size`;
  return new UserError(`${file}: unpacks to ${grown}, which no log does.`, {
    exitCode: 2,
    suggestion: 'Unpack it and give the part that was sailed.',
  });
}
