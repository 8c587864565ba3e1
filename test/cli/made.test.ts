/** By what a race counts as unchanged: all its result rests on, and all that was written. */
import { appendFileSync, mkdirSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { compareTask } from '../../src/cli/compare.js';
import { debriefTask } from '../../src/cli/debrief.js';
import { fileInLogbook } from '../../src/cli/logbook.js';
import { digestOf, Making } from '../../src/cli/made.js';
import { raceOptions } from '../../src/cli/options.js';
import { outputFiles } from '../../src/cli/outputs.js';
import type { Output, OutputRole, Places } from '../../src/cli/outputs.js';
import { loadRaces } from '../../src/cli/races.js';
import type { PlainJob } from '../../src/cli/races.js';
import type { TaskFlags } from '../../src/cli/task.js';
import type { Result } from '../../src/result/result.js';
import { inventedResult } from '../export/invented.js';
import { gpxText, inventedBeat, windText } from './invented-beat.js';
import { drop, folder } from './run.js';

const RACE = `race: One
zone: UTC
start: 12:00
boat: mine.yaml
wind: [{ file: wind.csv, height_m: 3 }]
boats: [{ name: Ann, track: ann.gpx }, { name: Ben, track: ben.gpx }]
`;
let home: string;
beforeEach(() => {
  home = folder({
    'race.yaml': RACE,
    'mine.yaml': 'boat: Mine\nlike: two-person\n',
    'best.yaml': 'boat: Best\nlike: two-person\n',
    'ann.gpx': gpxText(inventedBeat()),
    'ben.gpx': gpxText(inventedBeat(60)),
    'wind.csv': windText(),
  });
});
afterEach(() => drop(home));

const at = (name: string): string => join(home, name);
const jobWith = async (flags: Partial<TaskFlags>): Promise<PlainJob> => {
  const options = raceOptions({ progress: false, ...flags });
  const [first] = await loadRaces({ kind: 'race-file', path: at('race.yaml'), shown: 'race.yaml' }, options);
  return first();
};
function change(file: string, from: string, to: string): void {
  const text = readFileSync(at(file), 'utf8');
  expect(text).toContain(from);
  writeFileSync(at(file), text.replace(from, to));
}

describe('what a result rests on', () => {
  const digest = async (flags: Partial<TaskFlags> = {}, task = debriefTask): Promise<string | null> =>
    digestOf(task({ progress: false, ...flags }), await jobWith(flags));

  it.each<[string, () => void]>([
    ['a track', () => change('ben.gpx', 'lat="46.9', 'lat="46.90')],
    ['a wind log', () => change('wind.csv', ',10\n', ',10.1\n')],
    ['a boat file', () => change('mine.yaml', 'two-person', 'single-hander')],
    ['a mark in the race file', () => change('race.yaml', 'boat:', 'marks: { windward: [46.91, 9.06] }\nboat:')],
    ['a time left out', () => change('race.yaml', 'boat:', 'exclude: [{ from: 12:03, to: 12:04, why: x }]\nboat:')],
    ['a height', () => change('race.yaml', 'height_m: 3', 'height_m: 4')],
    ['a name', () => change('race.yaml', 'name: Ben', 'name: Bea')],
    ['a reading of its columns', () => change('race.yaml', 'height_m: 3', 'height_m: 3, clock_s: 1')],
  ])('%s', async (_, touch) => {
    const before = await digest();
    expect(await digest()).toBe(before);
    expect(before).toMatch(/^[0-9a-f]{64}$/);
    touch();
    expect(await digest()).not.toBe(before);
  });

  it('every option that a result depends on, and none that it does not', async () => {
    const changing: Partial<TaskFlags>[] = [
      {},
      { wind: [{ twd_deg: 10, tws_kn: 12 }] },
      { boat: 'single-hander' },
      { start: '12:01' },
      { finish: '12:07' },
      { zone: 'Europe/Zurich' },
      { current: { set_deg: 90, drift_kn: 0.2 } },
      { columns: { tws_kn: 'tws_kn:m/s' } },
      { reference: 'model' },
      { reference: 'best' },
      { reference: at('best.yaml') },
    ];
    const digests = [];
    for (const flags of changing) digests.push(await digest(flags));
    digests.push(await digest({}, compareTask), await digest({ pair: ['Ann', 'Ben'] }, compareTask));
    expect(new Set(digests).size).toBe(changing.length + 2);
    for (const flags of [{ out: 'x.html' }, { csv: 'tables' }, { quiet: true }, { keepGoing: true }]) {
      expect(await digest(flags)).toBe(digests[0]);
    }
    change('best.yaml', 'two-person', 'single-hander');
    expect(digests).not.toContain(await digest({ reference: at('best.yaml') }));
  });

  it('cannot be told of a log that is gone or comes by standard input', async () => {
    const job = await jobWith({});
    rmSync(at('ben.gpx'));
    expect(await digestOf(debriefTask({ progress: false }), job)).toBe(null);
    const files = { ...job.files, paths: new Map([['standard-input', '-']]) };
    expect(await digestOf(debriefTask({ progress: false }), { ...job, files })).toBe(null);
  });
});

describe('what was written', () => {
  const FROM = 'f'.repeat(64);
  const places = (): Places => ({ html: at('one.html'), csv: at('tables'), json: null, geojson: null, parquet: null });
  let job: PlainJob;
  let result: Result;

  beforeEach(async () => {
    job = await jobWith({});
    const start = new Date(job.race.start! * 1000).toISOString();
    result = { ...inventedResult(), race: { name: 'One', start, finish: null } };
    await add(FROM);
  });
  async function add(from: string): Promise<void> {
    const outputs = Object.entries(outputFiles(places())).map(([role, path]): Output => ({
      role: role as OutputRole,
      path,
      bytes: new TextEncoder().encode(role),
    }));
    drop(at('tables'));
    mkdirSync(at('tables'));
    for (const { path, bytes } of outputs) writeFileSync(path, bytes);
    await (await Making.of(at('book'))).add(from, await fileInLogbook(at('book'), result, job.day), outputs);
  }
  const unchanged = async (from = FROM, where = places()): Promise<Result | null> =>
    (await Making.of(at('book'))).unchanged(from, job, where);

  it('as it was: the result as filed', async () => {
    expect(await unchanged()).toEqual(result);
    expect(await unchanged(FROM, { ...places(), csv: null })).toEqual(result);
  });
  it.each<[string, (book: string) => void]>([
    ['a report that is gone', () => rmSync(at('one.html'))],
    ['a report changed by hand', () => change('one.html', 'html', 'HTML')],
    ['a table that is gone', () => rmSync(at('tables/seconds.csv'))],
    ['its file in the logbook gone', (book) => rmSync(book)],
    ['its file in the logbook changed', (book) => appendFileSync(book, ' ')],
    ['the record gone', () => rmSync(at('book/.made'))],
    ['the record cut off', () => writeFileSync(at('book/.made'), readFileSync(at('book/.made')).subarray(0, 99))],
  ])('is not as it was: %s', async (_, touch) => {
    touch((await fileInLogbook(at('book'), result, job.day)).path);
    expect(await unchanged()).toBe(null);
  });
  it('is not as asked for: made from something else, or not all of it made', async () => {
    expect(await unchanged('0'.repeat(64))).toBe(null);
    expect(await unchanged(FROM, { ...places(), geojson: at('one.geojson') })).toBe(null);
  });
  it('the last making counts, and old ones do not pile up', async () => {
    for (let k = 0; k < 110; k++) await add(String(k).padStart(64, '0'));
    expect(await unchanged()).toBe(null);
    expect(await unchanged(String(109).padStart(64, '0'))).toEqual(result);
    expect(readFileSync(at('book/.made'), 'utf8').trim().split('\n').length).toBeLessThan(110);
  });
});
