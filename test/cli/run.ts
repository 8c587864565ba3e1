import { spawn } from 'node:child_process';
import type { ChildProcess } from 'node:child_process';
import { cpSync, mkdirSync, mkdtempSync, readdirSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { dirname, join } from 'node:path';
import { fileURLToPath } from 'node:url';
import * as esbuild from 'esbuild';
import { builtOnce } from './built-once.js';

/** Root of the project. */
export const ROOT = fileURLToPath(new URL('../../', import.meta.url));

/**
 * The program as one would install it, a copy for a test file: what is tested does not change under the test. The few
 * packages that are not in it are found from inside node_modules.
 */
async function build(helpers: readonly string[]): Promise<string> {
  const place = join(CACHE, `legwork-${process.pid}-${Date.now()}`);
  cpSync(await builtOnce(CACHE), place, { recursive: true });
  await esbuild.build({
    entryPoints: helpers.map((name) => join(ROOT, 'test/cli', `${name}.ts`)),
    outdir: join(place, 'dist/cli'),
    bundle: true,
    format: 'esm',
    platform: 'node',
    packages: 'external',
    logLevel: 'silent',
  });
  return place;
}

const CACHE = join(ROOT, 'node_modules/.cache');

let place: string | undefined;
/** For `beforeAll`. `helpers`: programs of test/cli that are put together with it, by name. */
export async function buildProgram(...helpers: string[]): Promise<void> {
  place = await build(helpers);
}
/** Where a file of the program lies. */
export const programPath = (file: string): string => join(place!, 'dist/cli', file);
/** Where a helper lies that `buildProgram` was given. */
export const helperPath = (name: string): string => programPath(`${name}.js`);
/** For `afterAll`. */
export function dropProgram(): void {
  if (place) drop(place);
}

export interface Ran {
  readonly code: number | null;
  readonly out: string;
  readonly err: string;
}

export interface RunOptions {
  readonly cwd: string;
  readonly env?: Readonly<Record<string, string>>;
  readonly input?: string | Buffer;
}

/** Starts the program as a process of its own. */
export function start(args: readonly string[], { cwd, env = {} }: RunOptions): ChildProcess {
  return spawn(process.execPath, [join(place!, 'dist/cli/legwork.js'), ...args], {
    cwd,
    env: { ...process.env, NO_COLOR: '1', FORCE_COLOR: undefined, LEGWORK_DEBUG: undefined, ...env },
    stdio: ['pipe', 'pipe', 'pipe'],
  });
}

/** Runs the program to its end. */
export function run(args: readonly string[], options: RunOptions): Promise<Ran> {
  const child = start(args, options);
  child.stdin!.on('error', () => undefined);
  child.stdin!.end(options.input ?? '');
  return ended(child);
}

export async function ended(child: ChildProcess): Promise<Ran> {
  const parts = { out: '', err: '' };
  child.stdout!.setEncoding('utf8').on('data', (text: string) => (parts.out += text));
  child.stderr!.setEncoding('utf8').on('data', (text: string) => (parts.err += text));
  const code = await new Promise<number | null>((resolve) => child.on('close', resolve));
  return { code, ...parts };
}

/** A folder for one test file; `files` by name. */
export function folder(files: Readonly<Record<string, string | Buffer>> = {}): string {
  const path = mkdtempSync(join(tmpdir(), 'legwork-test-'));
  fill(path, files);
  return path;
}

export function fill(path: string, files: Readonly<Record<string, string | Buffer>>): void {
  for (const [name, content] of Object.entries(files)) {
    mkdirSync(dirname(join(path, name)), { recursive: true });
    writeFileSync(join(path, name), content);
  }
}

export const drop = (path: string): void => rmSync(path, { recursive: true, force: true });

/** Every file below a folder, hidden ones too, `/` between. */
export function filesBelow(path: string): string[] {
  return readdirSync(path, { recursive: true, withFileTypes: true })
    .filter((entry) => entry.isFile())
    .map((entry) => join(entry.parentPath, entry.name).slice(path.length + 1))
    .sort();
}
