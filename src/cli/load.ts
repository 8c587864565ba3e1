/** Loads the program as it was built: one file, and beside it what V8 had made of that file. Nothing else of ours. */
import { readFileSync, writeFileSync } from 'node:fs';
import { createRequire } from 'node:module';
import { fileURLToPath } from 'node:url';
import { Script } from 'node:vm';

type Program = typeof import('./whole.js');

const FILE = fileURLToPath(new URL('./program.cjs', import.meta.url));
const COMPILED = fileURLToPath(new URL('./program.v8', import.meta.url));
/** Both begin with the digest of the program, as a comment; what is kept is of use only for what it was made from. */
const DIGEST = '/**/'.length + 64;

export const load = (): Program => compiledBy().program;

export function compiledBy(): { readonly program: Program; readonly script: Script } {
  const source = readFileSync(FILE);
  const cachedData = keptFor(source);
  const wrapped = `(function (exports, require, module, __filename) {${source.toString('latin1')}\n})`;
  // V8 refuses what another version of itself has made; then it does the work anew.
  const script = new Script(wrapped, { filename: FILE, ...(cachedData ? { cachedData } : {}) });
  const module = { exports: {} };
  type Body = (exports: object, require: NodeJS.Require, own: { exports: object }, filename: string) => void;
  (script.runInThisContext() as Body)(module.exports, createRequire(FILE), module, FILE);
  return { program: module.exports as Program, script };
}

function keptFor(source: Buffer): Buffer | null {
  try {
    const kept = readFileSync(COMPILED);
    const isOfIt = kept.subarray(0, DIGEST).equals(source.subarray(0, DIGEST));
    return isOfIt ? kept.subarray(DIGEST) : null;
  } catch {
    return null;
  }
}

/** For the build: what V8 has made of the program by now. */
export function keepCompiled(script: Script): void {
  writeFileSync(COMPILED, Buffer.concat([readFileSync(FILE).subarray(0, DIGEST), script.createCachedData()]));
}
