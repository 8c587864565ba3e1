import { readFileSync, rmSync, writeFileSync } from 'node:fs';
import { spawnSync } from 'node:child_process';
import { pathToFileURL } from 'node:url';
import { afterAll, beforeAll, expect, it } from 'vitest';
import { buildProgram, drop, dropProgram, folder, programPath, run } from './run.js';

let home: string;
let kept: Buffer;
beforeAll(async () => {
  await buildProgram();
  home = folder();
  kept = readFileSync(programPath('program.v8'));
});
afterAll(() => {
  drop(home);
  dropProgram();
});

/** What V8 says to what was kept: true when it would have none of it. */
function isRefused(): boolean {
  const code = `
    import { compiledBy } from ${JSON.stringify(pathToFileURL(programPath('load.js')).href)};
    process.stdout.write(String(compiledBy().script.cachedDataRejected));`;
  return spawnSync(process.execPath, ['--input-type=module', '-e', code], { encoding: 'utf8' }).stdout !== 'false';
}

it('what V8 made of the program at the build is of use', () => {
  expect(isRefused()).toBe(false);
});

const withByte = (at: number): Buffer => {
  const changed = Buffer.from(kept);
  changed[at] ^= 1;
  return changed;
};

it.each<[string, () => Buffer | null]>([
  ['is not there', () => null],
  ['is empty', () => Buffer.alloc(0)],
  ['was made of another program', () => withByte(10)],
  ['was made by another V8', () => withByte(72)],
  ['was cut', () => kept.subarray(0, kept.length >> 1)],
])('the program runs as well where it %s', async (_, made) => {
  const file = programPath('program.v8');
  const content = made();
  if (content) writeFileSync(file, content);
  else rmSync(file);
  expect(isRefused()).toBe(true);
  const { code, out, err } = await run(['optimum', '--tws', '10:10:1'], { cwd: home });
  expect({ code, err }).toEqual({ code: 0, err: '' });
  expect(out).toMatch(/10/);
});
