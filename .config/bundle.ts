/**
 * The command as it is shipped: all of its code and of the packages it needs in one file (a start finds and reads one
 * file, not five hundred), beside it what V8 made of that file, and the licences of what is in it. Packages that few
 * runs need stay outside.
 */
import { spawnSync } from 'node:child_process';
import { createHash } from 'node:crypto';
import { mkdirSync, mkdtempSync, readdirSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath, pathToFileURL } from 'node:url';
import * as esbuild from 'esbuild';

const ROOT = fileURLToPath(new URL('..', import.meta.url));
/** Few runs need the one; the other carries no licence text that could go along. */
const OUTSIDE = ['@turf/turf', 'saxes'];

/** Lays the command into a folder, which is emptied first. */
export async function bundleProgram(folder: string): Promise<void> {
  rmSync(folder, { recursive: true, force: true });
  mkdirSync(folder, { recursive: true });
  await putTogether(folder);
  await esbuild.build({
    absWorkingDir: ROOT,
    entryPoints: ['legwork', 'thread', 'load'].map((name) => `src/cli/${name}.ts`),
    outdir: folder,
    format: 'esm',
    platform: 'node',
    target: 'node20',
    logLevel: 'warning',
  });
}

async function putTogether(folder: string): Promise<void> {
  const { outputFiles, metafile } = await esbuild.build({
    absWorkingDir: ROOT,
    entryPoints: ['src/cli/whole.ts'],
    bundle: true,
    write: false,
    metafile: true,
    format: 'cjs',
    platform: 'node',
    target: 'node20',
    // Nothing is left to be imported later: what is not in the file is required.
    supported: { 'dynamic-import': false },
    external: OUTSIDE,
    define: { 'import.meta.url': 'HERE' },
    minifyWhitespace: true,
    banner: { js: "const HERE = require('node:url').pathToFileURL(__filename).href;" },
    logLevel: 'warning',
  });
  const text = asciiOnly(outputFiles[0].text);
  const digest = createHash('sha256').update(text).digest('hex');
  writeFileSync(join(folder, 'program.cjs'), `/*${digest}*/${text}`);
  const [made] = Object.values(metafile.outputs);
  writeFileSync(join(folder, 'LICENSES.txt'), licences(Object.keys(made.inputs)));
}

/** A text of plain letters takes half the memory. The same within strings, templates, names and patterns. */
const asciiOnly = (text: string): string =>
  text.replace(/[^\0-\x7f]/g, (letter) => `\\u${letter.charCodeAt(0).toString(16).padStart(4, '0')}`);

/** Parts of other hands: their licences ask that the notice goes with every copy. */
function licences(files: readonly string[]): string {
  const names = new Set(files.flatMap((file) => /node_modules\/((?:@[^/]+\/)?[^/]+)\//.exec(file)?.[1] ?? []));
  const texts = [...names].sort().map((name) => {
    const home = join(ROOT, 'node_modules', name);
    const file = readdirSync(home).find((one) => /^licen[cs]e/i.test(one));
    if (!file) throw new Error(`${name}: no licence text`);
    return `${name}\n\n${readFileSync(join(home, file), 'utf8').trim()}\n`;
  });
  return `program.cjs holds parts of these packages.\n\n${texts.join(`\n${'-'.repeat(80)}\n\n`)}`;
}

/** Keeps what V8 made of the program in a run that does most of what it can, so that no later run does it again. */
export function keepCompiled(folder: string): void {
  const place = mkdtempSync(join(tmpdir(), 'legwork-build-'));
  const work = `
    import { compiledBy, keepCompiled } from ${JSON.stringify(pathToFileURL(join(folder, 'load.js')).href)};
    const { program, script } = compiledBy();
    await program.main(['demo', ${JSON.stringify(place)}, '--quiet']);
    keepCompiled(script);`;
  const { status, stderr } = spawnSync(process.execPath, ['--input-type=module', '-e', work], {
    cwd: place,
    encoding: 'utf8',
  });
  rmSync(place, { recursive: true, force: true });
  if (status !== 0) throw new Error(`the program as built does not run:\n${stderr}`);
}
