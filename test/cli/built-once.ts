/** The program put together once for all test files, and not again while nothing of it changes. */
import { createHash } from 'node:crypto';
import { copyFileSync, existsSync, mkdirSync, readdirSync, readFileSync, renameSync, rmSync, statSync } from 'node:fs';
import { join } from 'node:path';
import { setTimeout } from 'node:timers/promises';
import { fileURLToPath } from 'node:url';
import { bundleProgram, keepCompiled } from '../../.config/bundle.js';

const ROOT = fileURLToPath(new URL('../../', import.meta.url));
/** What a build depends on beside the sources. */
const BESIDE = ['.config/bundle.ts', 'package.json', 'package-lock.json', 'tsconfig.json'];
/** Another process that has not come to an end by then has been killed. [ms] */
const LONGEST = 120_000;
/** Builds of other sources are kept so long: another run may be using them. [ms] */
const KEPT = 3600_000;

/**
 * @param cache A folder within node_modules.
 * @returns The folder of the program as installed; not to be changed.
 */
export async function builtOnce(cache: string): Promise<string> {
  const digest = digestOfSources();
  const place = join(cache, `legwork-built-${digest}`);
  const lock = `${place}.lock`;
  mkdirSync(cache, { recursive: true });
  while (!existsSync(place)) {
    if (isTaken(lock)) {
      await setTimeout(50);
      continue;
    }
    try {
      await build(place);
    } finally {
      rmSync(lock, { recursive: true, force: true });
    }
  }
  sweep(cache, place);
  return place;
}

async function build(place: string): Promise<void> {
  const fresh = `${place}.${process.pid}`;
  const program = join(fresh, 'dist/cli');
  await bundleProgram(program);
  copyFileSync(join(ROOT, 'package.json'), join(fresh, 'package.json'));
  keepCompiled(program);
  if (existsSync(place)) rmSync(fresh, { recursive: true, force: true });
  else renameSync(fresh, place);
}

/** Whether another process holds the lock; else it is ours. */
function isTaken(lock: string): boolean {
  try {
    mkdirSync(lock);
    return false;
  } catch {
    const age = Date.now() - (statSync(lock, { throwIfNoEntry: false })?.mtimeMs ?? Date.now());
    if (age > LONGEST) rmSync(lock, { recursive: true, force: true });
    return true;
  }
}

/** Of all that goes into the program, by name and content, and of the Node that compiles it. */
function digestOfSources(): string {
  const hash = createHash('sha256').update(process.version);
  const sources = readdirSync(join(ROOT, 'src'), { recursive: true, withFileTypes: true })
    .filter((entry) => entry.isFile())
    .map((entry) => join(entry.parentPath, entry.name));
  for (const file of [...sources.sort(), ...BESIDE.map((name) => join(ROOT, name))]) {
    hash.update(file);
    if (existsSync(file)) hash.update(readFileSync(file));
  }
  return hash.digest('hex').slice(0, 16);
}

function sweep(cache: string, keep: string): void {
  for (const name of readdirSync(cache)) {
    const path = join(cache, name);
    if (!name.startsWith('legwork-built-') || path.startsWith(keep)) continue;
    const age = Date.now() - (statSync(path, { throwIfNoEntry: false })?.mtimeMs ?? Date.now());
    if (age > KEPT) rmSync(path, { recursive: true, force: true });
  }
}
