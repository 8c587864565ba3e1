/** Several runs that file at the same time lose nothing. */
import { spawn } from 'node:child_process';
import { hostname } from 'node:os';
import { readdirSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { fileInLogbook } from '../../src/cli/logbook.js';
import type { Result } from '../../src/result/result.js';
import { inventedResult } from '../export/invented.js';
import { resultsIn } from './results-in.js';
import { buildProgram, drop, dropProgram, ended, filesBelow, folder, helperPath } from './run.js';

const LONG = process.env.LEGWORK_LONG === '1';
const ROUNDS = LONG ? 25 : 2;
const DAY = '2026-04-18';
const BOATS = ['Ann', 'Ben', 'Cy', 'Dee', 'Eve', 'Fay', 'Gus', 'Hal'];

beforeAll(() => buildProgram('file-one'));
afterAll(dropProgram);

const race = (...boats: string[]): Result => ({
  ...inventedResult(),
  race: { name: 'One', start: '2026-04-18T12:00:00.000Z', finish: null },
  boats: boats.map((boat) => inventedResult(boat).boats[0]),
});
const boatsIn = async (book: string): Promise<string[]> =>
  (await resultsIn(book)).flatMap(({ boats }) => boats.map(({ name }) => name)).sort();

describe('one race, filed at once', () => {
  it.each(Array.from({ length: ROUNDS }, (_, k) => k + 1))('by eight processes, a boat each; time %i', async () => {
    const results = Object.fromEntries(BOATS.map((boat) => [`${boat}.json`, JSON.stringify(race(boat))]));
    const home = folder(results);
    const book = join(home, 'book');
    const at = String(Date.now() + 1500);
    const ends = BOATS.map((boat) =>
      ended(
        spawn(process.execPath, [helperPath('file-one'), book, join(home, `${boat}.json`), DAY, at], {
          stdio: ['ignore', 'pipe', 'pipe'],
        }),
      ),
    );
    expect(await Promise.all(ends)).toEqual(BOATS.map(() => ({ code: 0, out: '', err: '' })));
    expect(await boatsIn(book)).toEqual(BOATS);
    expect(filesBelow(book)).toHaveLength(1);
    drop(home);
  });

  it('by one process', async () => {
    const book = folder();
    await Promise.all(BOATS.map((boat) => fileInLogbook(book, race(boat), DAY)));
    expect(await boatsIn(book)).toEqual(BOATS);
    expect(filesBelow(book)).toHaveLength(1);
    drop(book);
  });
});

describe('a lock left behind', () => {
  const host = hostname().replace(/[^\w.-]/g, '_');
  it.each([
    // No process has this number: Linux and macOS end far below.
    ['by a killed process of this machine', `.lock-999999999-0123456789ab@${host}`],
    ['by a process of this number, long ago', `.lock-${process.pid}-0123456789ab@${host}`],
    // Waited for some seconds: it cannot be asked.
    ...(LONG ? [['by another machine', '.lock-1-0123456789ab@elsewhere']] : []),
  ])('%s does not stop the next run', async (_, name) => {
    const book = folder();
    writeFileSync(join(book, name), '');
    await fileInLogbook(book, race('Ann'), DAY);
    expect(await boatsIn(book)).toEqual(['Ann']);
    expect(readdirSync(book).filter((file) => file.startsWith('.'))).toEqual([]);
    drop(book);
  });
});
