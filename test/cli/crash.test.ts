/** Killed at any moment a run leaves the logbook whole: every file in it the old result or the new one. */
import { spawn } from 'node:child_process';
import type { ChildProcess } from 'node:child_process';
import { readdirSync, readFileSync, utimesSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { pathToFileURL } from 'node:url';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { logbookName } from '../../src/cli/logbook.js';
import type { Result } from '../../src/result/result.js';
import { generator } from '../between/two-boats.js';
import { inventedResult } from '../export/invented.js';
import { gpxText, inventedBeat, windText } from './invented-beat.js';
import { resultsIn } from './results-in.js';
import { buildProgram, drop, dropProgram, ended, filesBelow, folder, helperPath, start } from './run.js';

const LONG = process.env.LEGWORK_LONG === '1';
const DAY = '2026-04-18';

beforeAll(() => buildProgram('file-one', 'kill-at'));
afterAll(dropProgram);

const race = (name: string, ...boats: string[]): Result => ({
  ...inventedResult(),
  race: { name, start: '2026-04-18T12:00:00.000Z', finish: null },
  boats: boats.map((boat) => inventedResult(boat).boats[0]),
});
const text = (result: Result): string => `${JSON.stringify(result, null, 2)}\n`;

/** How a process ended; files one result, watched by `kill-at`. */
async function file(book: string, result: Result, env: Readonly<Record<string, string>>): Promise<string | null> {
  const home = folder({ 'result.json': text(result) });
  const child = spawn(
    process.execPath,
    [
      '--import',
      pathToFileURL(helperPath('kill-at')).href,
      helperPath('file-one'),
      book,
      join(home, 'result.json'),
      DAY,
    ],
    { env: { ...process.env, FAULT_FOLDER: book, ...env }, stdio: ['ignore', 'pipe', 'pipe'] },
  );
  const end = new Promise<string | null>((resolve) => child.on('close', (_, signal) => resolve(signal)));
  const { err } = await ended(child);
  expect(err).toBe('');
  drop(home);
  return end;
}

/** What a season reads: names that neither begin with a dot nor end otherwise. */
const visible = (book: string): string[] => readdirSync(book).filter((name) => !name.startsWith('.'));

/** A day later: what lies about half written is old. */
function nextDay(book: string): void {
  const then = Date.now() / 1000 - 86_400;
  for (const name of readdirSync(book)) utimesSync(join(book, name), then, then);
}

describe('filing, killed', () => {
  const before = race('One', 'Ann', 'Ben');
  const now = race('One', 'Ben', 'Cy');
  const other = race('Another', 'Dee');
  const name = logbookName(now, DAY);
  const cases = ['open', 'write', 'flush', 'rename', 'folder sync'].flatMap((stage, k) => {
    const random = generator(40 + k);
    // Before and after in turn.
    return Array.from(
      { length: LONG ? 10 : 2 },
      (_, i) => [stage, Number(((i % 2) / 2 + random() * 0.49).toFixed(2))] as const,
    );
  });
  it.each(cases)('at %s, %f of the way', async (stage, far) => {
    const book = folder({ [name]: text(before), [logbookName(other, DAY)]: text(other) });
    expect(await file(book, now, { FAULT_KILL: `${stage} ${far}` })).toBe('SIGKILL');
    const isDone = stage === 'folder sync' || (stage === 'rename' && far >= 0.5);
    const boats = isDone ? ['Ann', 'Ben', 'Cy'] : ['Ann', 'Ben'];
    const read = await resultsIn(book);
    expect(read.map((result) => result.boats.map((boat) => boat.name))).toEqual([['Dee'], boats]);
    expect(visible(book)).toHaveLength(2);
    if (!isDone) expect(readFileSync(join(book, name), 'utf8')).toBe(text(before));

    // The next run is not held up and tidies.
    nextDay(book);
    expect(await file(book, now, {})).toBe(null);
    expect((await resultsIn(book))[1].boats.map((boat) => boat.name)).toEqual(['Ann', 'Ben', 'Cy']);
    expect(filesBelow(book)).toEqual(visible(book).sort());
    drop(book);
  });
});

describe('the program, killed from outside', () => {
  const RACE =
    'race: Test\nzone: UTC\nboat: single-hander\nwind: [{ file: wind.csv, height_m: 3 }]\nboats: [{ name: Ann, track: ann.gpx }]\n';
  const STAGES = ['not started', 'starting', 'reading logs', 'report written', 'lock'];
  STAGES.push('open', 'write', 'flush', 'rename', 'folder sync', 'filed', 'done');

  /** Steps of filing are stretched by this, so that kills fall on each. [ms] */
  const SLOW = 200;
  /** Stages from the lock to the flush of the folder. */
  const FILING = STAGES.indexOf('filed') - STAGES.indexOf('lock');

  const stageIn = (note: string): string => readFileSync(note, 'utf8').trim();

  async function filing(child: ChildProcess, note: string): Promise<void> {
    while (child.exitCode === null && stageIn(note) !== 'lock') await new Promise((resolve) => setTimeout(resolve, 5));
  }

  it('at whatever moment', async () => {
    const cwd = folder({ 'race.yaml': RACE, 'ann.gpx': gpxText(inventedBeat()), 'wind.csv': windText() });
    const book = join(cwd, 'book');
    const env = {
      NODE_OPTIONS: `--import ${pathToFileURL(helperPath('kill-at')).href}`,
      FAULT_FOLDER: book,
      FAULT_NOTE: join(cwd, 'note'),
      FAULT_SLOW: String(SLOW),
    };
    const debrief = () => start(['debrief', '--logbook', 'book', '--quiet'], { cwd, env });
    const began = performance.now();
    expect((await ended(debrief())).code).toBe(0);
    const whole = performance.now() - began;
    const [name] = visible(book);
    const alone = readFileSync(join(book, name), 'utf8');
    // Filed before: the same race with one boat more, so that the old file and the new one differ.
    const old = text({ ...(JSON.parse(alone) as Result), boats: race('Test', 'Zed').boats, inputs: [] });
    writeFileSync(join(book, name), old);
    expect((await ended(debrief())).code).toBe(0);
    const renewed = readFileSync(join(book, name), 'utf8');
    expect([alone, old]).not.toContain(renewed);

    const random = generator(7);
    const fell = new Map(STAGES.map((stage) => [stage, 0]));
    for (let k = 0; k < (LONG ? 50 : 3); k++) {
      writeFileSync(join(book, name), old);
      writeFileSync(env.FAULT_NOTE, 'not started');
      const child = debrief();
      const end = ended(child);
      // Every other one while it files.
      if (k % 2 === 1) await filing(child, env.FAULT_NOTE);
      const bell = setTimeout(() => child.kill('SIGKILL'), random() * (k % 2 === 1 ? 1.5 * FILING * SLOW : whole));
      const { code } = await end;
      clearTimeout(bell);
      const stage = code === 0 ? 'done' : stageIn(env.FAULT_NOTE);
      fell.set(stage, fell.get(stage)! + 1);
      expect([old, renewed]).toContain(readFileSync(join(book, name), 'utf8'));
      expect(visible(book)).toEqual([name]);
      expect((await resultsIn(book)).map((result) => result.race.name)).toEqual(['Test']);
    }
    console.log(
      `Kills fell at\n${[...fell].map(([stage, n]) => `${stage.padEnd(15)} ${'#'.repeat(n)} ${n}`).join('\n')}`,
    );

    nextDay(book);
    expect((await ended(debrief())).code).toBe(0);
    expect(filesBelow(book)).toEqual([name]);
    drop(cwd);
  }, 900_000);
});
