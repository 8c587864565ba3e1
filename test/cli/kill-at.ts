/**
 * Loaded before a program (`node --import`) it watches how a file comes into the folder FAULT_FOLDER, by the calls to
 * the file system that the program makes.
 *
 * - FAULT_NOTE: a file that says which stage was reached last.
 * - FAULT_KILL: a stage at which the process kills itself, and how far into it (0 to 1), such as `write 0.3`.
 * - FAULT_SLOW: time lost at every stage, so that a kill from outside can meet it. [ms]
 */
import fs from 'node:fs';
import { syncBuiltinESMExports } from 'node:module';
import { dirname, resolve } from 'node:path';

const { FAULT_FOLDER = '', FAULT_NOTE, FAULT_KILL = '', FAULT_SLOW = '0' } = process.env;
const FOLDER = resolve(FAULT_FOLDER);
const [KILL, FAR] = [FAULT_KILL.replace(/ [\d.]+$/, ''), Number(FAULT_KILL.split(' ').at(-1))];

const { openSync, writeSync, fsyncSync, renameSync, writeFileSync, readSync } = fs;
const bell = new Int32Array(new SharedArrayBuffer(4));
const rest = (ms: number): void => void Atomics.wait(bell, 0, 0, ms);

const page = FAULT_NOTE === undefined ? null : openSync(FAULT_NOTE, fs.constants.O_WRONLY | fs.constants.O_CREAT);
/** In one go over the stage before, so that a kill finds one or the other. */
function note(stage: string): void {
  if (page !== null) writeSync(page, stage.padEnd(20), 0);
}

function die(): never {
  process.kill(process.pid, 'SIGKILL');
  for (;;) rest(1000);
}

/** A stage before and after what is done in it. */
function pass<T>(stage: string, act: () => T): T {
  note(stage);
  rest(Number(FAULT_SLOW));
  if (stage === KILL && FAR < 0.5) die();
  const out = act();
  if (stage === KILL) die();
  return out;
}

/** What the handles of the folder are open for. */
const handles = new Map<number, 'file' | 'folder'>();
const within = (path: unknown): path is string => typeof path === 'string' && dirname(resolve(path)) === FOLDER;

Object.assign(fs, {
  openSync: (path: string, ...more: [string]): number => {
    const isFolder = resolve(path) === FOLDER;
    if (!isFolder && !within(path)) return openSync(path, ...more);
    const handle = isFolder ? openSync(path, ...more) : pass('open', () => openSync(path, ...more));
    handles.set(handle, isFolder ? 'folder' : 'file');
    return handle;
  },
  writeSync: (handle: number, bytes: Uint8Array, at: number, length: number): number => {
    if (!handles.has(handle)) return writeSync(handle, bytes, at, length);
    if (KILL !== 'write') return pass('write', () => writeSync(handle, bytes, at, length));
    writeSync(handle, bytes, at, Math.floor(FAR * length));
    note('write');
    return die();
  },
  fsyncSync: (handle: number): void => {
    const kind = handles.get(handle);
    handles.delete(handle);
    if (!kind) return fsyncSync(handle);
    pass(kind === 'file' ? 'flush' : 'folder sync', () => fsyncSync(handle));
    if (kind === 'folder') note('filed');
  },
  renameSync: (from: string, to: string): void => {
    if (within(from)) return pass('rename', () => renameSync(from, to));
    renameSync(from, to);
    note('report written');
  },
  writeFileSync: (path: string, ...more: [string, object]): void => {
    if (within(path)) return pass('lock', () => writeFileSync(path, ...more));
    writeFileSync(path, ...more);
  },
  readSync: (...args: Parameters<typeof readSync>) => {
    note('reading logs');
    return readSync(...args);
  },
});
syncBuiltinESMExports();
note('starting');
