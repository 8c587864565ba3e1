/** Several races in one run: worked on at once, told in order; what has not changed is not worked on again. */
import { spawn } from 'node:child_process';
import { existsSync, readFileSync, rmSync } from 'node:fs';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { failureFrom, plainFailure } from '../../src/cli/failures.js';
import { inOrder } from '../../src/cli/in-order.js';
import { UserError } from '../../src/recording/issues.js';
import { gpxText, inventedBeat, windText } from './invented-beat.js';
import { buildProgram, drop, dropProgram, ended, filesBelow, fill, folder, helperPath, run, start } from './run.js';

const LONG = process.env.LEGWORK_LONG === '1';

beforeAll(() => buildProgram());
afterAll(dropProgram);

const RACE = `race: One
zone: UTC
boat: single-hander
wind: [{ file: wind.csv, height_m: 3 }]
boats: [{ name: Ann, track: ann.gpx }, { name: Ben, track: ben.gpx }]
`;
const LOGS = {
  'spring/ann.gpx': gpxText(inventedBeat()),
  'spring/ben.gpx': gpxText(inventedBeat(60)),
  'spring/wind.csv': windText(),
  'spring/elsewhere.csv': windText(Date.UTC(2026, 3, 19, 12)),
};
const written = (cwd: string): Record<string, string> =>
  Object.fromEntries(
    filesBelow(cwd)
      .filter((file) => !file.startsWith('spring/') && !file.endsWith('.made'))
      .map((file) => [file, readFileSync(join(cwd, file), 'latin1')]),
  );

describe('several races', () => {
  const races = {
    ...LOGS,
    'spring/1.yaml': RACE,
    'spring/2.yaml': RACE.replace('One', 'Two').replace('wind.csv', 'elsewhere.csv'),
    // Two of one name, and several in one file.
    'spring/3.yaml': RACE,
    'spring/4.yaml': RACE.replace('race: One', 'races: [{ race: Four, start: 12:00 }, { race: Five, start: 12:02 }]'),
    'spring/5.yaml': 'race: x\nboats: [{ track: nobody.gpx }]\n',
  };
  const outputs = [
    '--json',
    'json/',
    '--csv',
    'csv',
    '--geojson',
    'geo/',
    '--parquet',
    'parquet/',
    '--logbook',
    'book',
  ];

  it.each([
    ['debrief', ['--keep-going'], 2],
    ['debrief', [], 1],
    ...(LONG ? ([['compare', ['--keep-going'], 2]] as const) : []),
  ] as const)('%s %j: the same bytes and words, however many work', async (command, options, code) => {
    const runs = [];
    for (const workers of LONG ? ['1', '2', '3', '7'] : ['1', '2']) {
      const cwd = folder(races);
      const ran = await run([command, 'spring', ...outputs, ...options], { cwd, env: { LEGWORK_WORKERS: workers } });
      runs.push({ ...ran, files: written(cwd) });
      drop(cwd);
    }
    const [alone, ...together] = runs;
    expect(alone.code).toBe(code);
    const names = Object.keys(alone.files).filter((file) => file.startsWith('json/'));
    expect(names).toHaveLength(code === 2 ? 4 : 1);
    expect(alone.out.trim().split('\n')).toHaveLength(names.length);
    expect(alone.err).toMatch(/elsewhere\.csv/);
    for (const other of together) expect(other).toEqual(alone);
  });

  const SCRIPT = '/usr/bin/script';
  it.skipIf(!existsSync(SCRIPT) || process.platform !== 'linux')('on a terminal, how far they are', async () => {
    const cwd = folder({ ...LOGS, 'spring/1.yaml': RACE, 'spring/2.yaml': RACE.replace('One', 'Two') });
    const command = [process.execPath, helperPath('legwork'), 'debrief', 'spring'].join(' ');
    const env = { ...process.env, TERM: 'xterm' };
    delete (env as NodeJS.ProcessEnv).CI;
    const child = spawn(SCRIPT, ['-qec', command, '/dev/null'], { cwd, env, stdio: 'pipe' });
    child.stdin.end();
    const { code, out } = await ended(child);
    expect(code).toBe(0);
    for (const n of [0, 1, 2]) expect(out).toMatch(new RegExp(`\\[[#.]{20}\\] ${n} of 2 races`));
    expect(out.trimEnd().split('\r').at(-1)!.endsWith('2K')).toBe(true);
    drop(cwd);
  });

  it('a number of workers that is none is refused', async () => {
    const cwd = folder({ 'race.yaml': RACE });
    const { code, err } = await run(['debrief'], { cwd, env: { LEGWORK_WORKERS: 'all' } });
    expect({ code, said: err.includes('LEGWORK_WORKERS=all') }).toEqual({ code: 2, said: true });
    drop(cwd);
  });

  it('interrupted, leave nothing half done', async () => {
    const many = Object.fromEntries(
      Array.from({ length: 12 }, (_, k) => [`spring/${k}.yaml`, RACE.replace('One', `No ${k}`)]),
    );
    const cwd = folder({ ...LOGS, ...many });
    const child = start(['debrief', 'spring', '--logbook', 'book', '--json', 'json/'], {
      cwd,
      env: { LEGWORK_WORKERS: '2' },
    });
    const end = ended(child);
    // A race is done: others are on their way.
    child.stdout!.once('data', () => child.kill('SIGINT'));
    expect((await end).code).toBe(130);
    const files = Object.entries(written(cwd));
    expect(files.map(([file]) => file).filter((file) => /(^|\/)\./.test(file))).toEqual([]);
    for (const [file, text] of files) {
      if (file.endsWith('.json')) expect(JSON.parse(text)).toMatchObject({ format: 'legwork-result' });
      else expect(text.trimEnd().endsWith('</html>')).toBe(true);
    }
    drop(cwd);
  });
});

describe('an unchanged race', () => {
  let cwd: string;
  beforeAll(() => {
    cwd = folder({ ...LOGS, 'spring/1.yaml': RACE, 'spring/2.yaml': RACE.replace('One', 'Two') });
  });
  afterAll(() => drop(cwd));

  /** Races worked on again, of One and Two. */
  async function worked(...options: string[]): Promise<string[]> {
    const { code, out, err } = await run(['debrief', 'spring', '--logbook', 'book', ...options], { cwd });
    expect({ code, err }).toEqual({ code: 0, err: '' });
    const lines = out.trim().split('\n');
    expect(lines.map((line) => line.slice(0, 3))).toEqual(['One', 'Two']);
    return lines.filter((line) => !line.endsWith('(unchanged)')).map((line) => line.slice(0, 3));
  }

  it('is not worked on again, and its files and its line stay as they are', async () => {
    expect(await worked()).toEqual(['One', 'Two']);
    const before = written(cwd);
    expect(await worked()).toEqual([]);
    expect(written(cwd)).toEqual(before);
    // Without one of its files it is, and has the same bytes again.
    rmSync(join(cwd, 'reports/2026-04-18-one.html'));
    expect(await worked()).toEqual(['One']);
    expect(written(cwd)).toEqual(before);
  });

  it('is worked on again where another run added a boat to its file, and all are where asked for something else', async () => {
    const cy = RACE.replace(/boats:.*/, 'boats: [{ name: Cy, track: ../spring/ann.gpx }]');
    fill(cwd, { 'cy/race.yaml': cy, 'cy/wind.csv': windText() });
    expect((await run(['debrief', 'cy/race.yaml', '--logbook', 'book', '--out', 'cy.html'], { cwd })).code).toBe(0);
    expect(await worked()).toEqual(['One']);
    const file = filesBelow(join(cwd, 'book')).find((name) => name.includes('-one-'))!;
    expect(readFileSync(join(cwd, 'book', file), 'utf8')).toContain('"name": "Cy"');
    expect(await worked('--reference', 'model')).toEqual(['One', 'Two']);
  });
});

describe('outcomes', () => {
  it('come in order, no more on their way than allowed', async () => {
    let [running, highest] = [0, 0];
    async function* steps() {
      for (let k = 0; k < 20; k++) yield await Promise.resolve(k);
    }
    const begin = async (k: number): Promise<number> => {
      highest = Math.max(highest, ++running);
      await new Promise((resolve) => setTimeout(resolve, (k * 7) % 5));
      running--;
      return k;
    };
    const out: number[] = [];
    for await (const k of inOrder(steps(), begin, 4)) out.push(k);
    expect(out).toEqual(Array.from({ length: 20 }, (_, k) => k));
    expect(highest).toBe(4);
  });

  it('that are failures keep their words, code and place on the way from another thread', () => {
    const error = new UserError('no beat', { exitCode: 1, suggestion: 'Sail on.' });
    const back = failureFrom(structuredClone(plainFailure(error)));
    expect(back).toBeInstanceOf(UserError);
    expect(back).toMatchObject({ message: 'no beat', exitCode: 1, suggestion: 'Sail on.', stack: error.stack });
    const fault = failureFrom(structuredClone(plainFailure(new RangeError('out'))));
    expect(fault).not.toBeInstanceOf(UserError);
    expect(fault.stack).toMatch(/^RangeError: out\n/);
  });
});
