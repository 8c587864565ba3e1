import { createHash, randomBytes } from 'node:crypto';
import {
  closeSync,
  createReadStream,
  fsyncSync,
  openSync,
  readFileSync,
  readSync,
  renameSync,
  rmSync,
  writeSync,
} from 'node:fs';
import { mkdir, readFile, realpath, stat } from 'node:fs/promises';
import { basename, dirname, join, relative, resolve, sep } from 'node:path';
import { UserError } from '../index.js';
import type { LogSource } from '../index.js';
import { asUserError } from './failures.js';

/** Files that are there for a moment only. */
const temporaries = new Set<string>();

/** Told of a file that an interruption must take away, and that it is gone or done. */
export const dropAtEnd = (path: string): void => void temporaries.add(path);
export const keep = (path: string): void => void temporaries.delete(path);

/** Takes away what an interruption left unfinished. */
export function dropTemporaries(): void {
  for (const path of temporaries) rmSync(path, { force: true });
  temporaries.clear();
}

/** Written in one go, in pieces of this many bytes. */
const PIECE = 1 << 20;

/**
 * Writes a file whole or not at all: beside its place, flushed, then renamed. Folders are made. What is no plain file
 * (a pipe, a device) is written to directly.
 */
export async function writeWhole(path: string, content: string | Uint8Array, options?: { syncFolder?: boolean }) {
  const shown = forMessages(path);
  try {
    const target = await realTarget(path);
    await makeFolders(dirname(target));
    const bytes = typeof content === 'string' ? Buffer.from(content, 'utf8') : content;
    if (await isSpecial(target)) writeBytes(target, 'w', bytes, false);
    else writeThenRename(target, bytes);
    if (options?.syncFolder) syncFolder(dirname(target));
  } catch (error) {
    throw asUserError(error, shown);
  }
}

/** Names of files half written, as `writeThenRename` makes them. */
export const TEMPORARY = /^\..+\.[0-9a-f]{12}\.tmp$/;

/** Makes a folder and those above it where they are not there. */
export async function makeFolder(path: string): Promise<void> {
  try {
    await makeFolders(path);
  } catch (error) {
    throw asUserError(error, forMessages(path));
  }
}

/** On a read-only disk Node's own way says that nothing is there. */
async function makeFolders(path: string): Promise<void> {
  try {
    await mkdir(path, { recursive: true });
  } catch (error) {
    if ((error as NodeJS.ErrnoException).code !== 'ENOENT') throw error;
    if ((await kindOf(dirname(path))) === null) await makeFolders(dirname(path));
    await mkdir(path);
  }
}

function writeThenRename(target: string, bytes: Uint8Array): void {
  const temporary = join(dirname(target), `.${basename(target).slice(0, 80)}.${randomBytes(6).toString('hex')}.tmp`);
  temporaries.add(temporary);
  try {
    writeBytes(temporary, 'wx', bytes, true);
    renameSync(temporary, target);
  } catch (error) {
    rmSync(temporary, { force: true });
    throw error;
  } finally {
    temporaries.delete(temporary);
  }
}

function writeBytes(path: string, flags: string, bytes: Uint8Array, flush: boolean): void {
  const handle = openSync(path, flags);
  try {
    for (let at = 0; at < bytes.length;) at += writeSync(handle, bytes, at, Math.min(PIECE, bytes.length - at));
    if (flush) fsyncSync(handle);
  } finally {
    closeSync(handle);
  }
}

/** The name itself reaches the disk; some systems cannot, and then need not, be asked. */
function syncFolder(folder: string): void {
  try {
    const handle = openSync(folder, 'r');
    fsyncSync(handle);
    closeSync(handle);
  } catch {
    return;
  }
}

/** A link is written through, not replaced. */
async function realTarget(path: string): Promise<string> {
  try {
    return await realpath(path);
  } catch {
    return resolve(path);
  }
}

async function isSpecial(path: string): Promise<boolean> {
  try {
    const found = await stat(path);
    if (found.isDirectory()) throw Object.assign(new Error(path), { code: 'EISDIR' });
    return !found.isFile();
  } catch (error) {
    if ((error as NodeJS.ErrnoException).code === 'ENOENT') return false;
    throw error;
  }
}

/** A path as messages show it: from the working folder where it lies below it. */
export function forMessages(path: string): string {
  const below = relative(process.cwd(), resolve(path));
  return below !== '' && !below.startsWith('..') ? below.split(sep).join('/') : path;
}

/** Contents of a small text file. */
export async function readText(path: string): Promise<string> {
  try {
    return textOf(await readFile(path));
  } catch (error) {
    throw asUserError(error, forMessages(path));
  }
}

/** The same without giving way to anything else: thousands of files take far less time so. */
export function readTextNow(path: string): string {
  try {
    return textOf(readFileSync(path));
  } catch (error) {
    throw asUserError(error, forMessages(path));
  }
}

function textOf(bytes: Buffer): string {
  const encoding = encodingOf(bytes);
  // The decoder drops a mark of the byte order; without one there is a shorter way.
  return encoding === 'utf-8' && bytes[0] !== 0xef ? bytes.toString('utf8') : new TextDecoder(encoding).decode(bytes);
}

/** By its byte-order mark; some editors write UTF-16. */
function encodingOf([a, b]: Uint8Array): string {
  if (a === 0xff && b === 0xfe) return 'utf-16le';
  return a === 0xfe && b === 0xff ? 'utf-16be' : 'utf-8';
}

/** Whether there is something at a path, and what. */
export async function kindOf(path: string): Promise<'file' | 'folder' | null> {
  try {
    return (await stat(path)).isDirectory() ? 'folder' : 'file';
  } catch (error) {
    const { code } = error as NodeJS.ErrnoException;
    if (code === 'ENOENT' || code === 'ENOTDIR') return null;
    throw asUserError(error, forMessages(path));
  }
}

/** Standard input, read once. */
let input: Promise<Buffer> | undefined;
export function standardInput(): Promise<Buffer> {
  input ??= (async () => {
    const parts: Buffer[] = [];
    for await (const part of process.stdin) parts.push(part as Buffer);
    return Buffer.concat(parts);
  })();
  return input;
}

/** The name standard input goes by in messages and results. */
export const STDIN_NAME = 'standard-input';

/** A log as a stream, so that its size does not matter. `most`: only its first bytes. */
export function logSource(
  name: string,
  path: string,
  options: { most?: number; onBytes?: (n: number) => void } = {},
): LogSource {
  return {
    name,
    chunks: path === '-' ? inputChunks(options.most) : fileChunks(name, path, options),
    createHash: sha256,
  };
}

/** The host's SHA-256: five to ten times as fast as ours. */
function sha256(): ReturnType<NonNullable<LogSource['createHash']>> {
  const hash = createHash('sha256');
  return { update: (bytes) => void hash.update(bytes), digest: () => hash.digest('hex') };
}

async function* inputChunks(most?: number): AsyncGenerator<Uint8Array> {
  const bytes = await standardInput();
  yield most === undefined ? bytes : bytes.subarray(0, most);
}

/** Read at a time. [bytes] */
const CHUNK = 1 << 18;
/** Between two looks at what else is to be done (an interruption, say). [bytes] */
const BREATH = 1 << 24;

interface ChunkOptions {
  readonly most?: number;
  readonly onBytes?: (n: number) => void;
}

/** A plain file is read into one and the same buffer; what is none (a pipe, a device) comes when it comes. */
async function* fileChunks(name: string, path: string, options: ChunkOptions): AsyncGenerator<Uint8Array> {
  const { most = Infinity, onBytes } = options;
  try {
    const chunks = (await stat(path)).isFile() ? plainChunks(path, most) : streamChunks(path, most);
    for await (const chunk of chunks) {
      onBytes?.(chunk.length);
      yield chunk;
    }
  } catch (error) {
    throw asUserError(error, name);
  }
}

async function* plainChunks(path: string, most: number): AsyncGenerator<Uint8Array> {
  const handle = openSync(path, 'r');
  try {
    const buffer = new Uint8Array(CHUNK);
    for (let at = 0, breath = BREATH; at < most;) {
      const read = readSync(handle, buffer, 0, Math.min(CHUNK, most - at), null);
      if (read === 0) return;
      yield buffer.subarray(0, read);
      at += read;
      if (at < breath) continue;
      breath = at + BREATH;
      await new Promise(setImmediate);
    }
  } finally {
    closeSync(handle);
  }
}

async function* streamChunks(path: string, most: number): AsyncGenerator<Uint8Array> {
  const stream = createReadStream(path, { highWaterMark: CHUNK, ...(most === Infinity ? {} : { end: most - 1 }) });
  try {
    for await (const chunk of stream) yield chunk as Buffer;
  } finally {
    stream.destroy();
  }
}

export function unusable(message: string, suggestion?: string): UserError {
  return new UserError(message, { exitCode: 2, ...(suggestion === undefined ? {} : { suggestion }) });
}
