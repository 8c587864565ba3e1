import { readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import fc from 'fast-check';
import { afterAll, beforeAll, describe, expect, it, vi } from 'vitest';
import { writeWhole } from '../../src/cli/files.js';
import { expandGlob, isGlob } from '../../src/cli/globs.js';
import { expandInputs } from '../../src/cli/inputs.js';
import { fileInLogbook, logbookName, merged } from '../../src/cli/logbook.js';
import { addColumns, readWinds } from '../../src/cli/options.js';
import { raceSlug, slugOf } from '../../src/cli/slug.js';
import type { Result } from '../../src/result/result.js';
import { inventedResult } from '../export/invented.js';
import { resultsIn } from './results-in.js';
import { drop, filesBelow, folder } from './run.js';

let home: string;
beforeAll(() => {
  home = folder({
    'spring/1.yaml': 'boats: [{ track: a.gpx }]',
    'spring/boat.yaml': 'boat: mine\n',
    'spring/result.json': '{ "format": "legwork-result", "boats": [] }',
    'spring/a.gpx': '',
    'season/may/race.yaml': 'race: May\nboats: []\n',
    'season/june/race.json': '{ "boats": [] }',
    'logs/a.gpx': '',
    'logs/b.csv': '',
    'logs/.hidden.csv': '',
    'logs/deep/c.csv': '',
    'logs/[x].csv': '',
    'nothing/readme.md': '',
    'noext-race': 'race: x\nboats: []\n',
    'noext-track': '$GPRMC,120000\n',
  });
});
afterAll(() => drop(home));

const inHome = (name: string): string => join(home, name);

describe('names of reports', () => {
  it.each([
    ['Ferrow Lake spring series, race 2', 'ferrow-lake-spring-series-race-2'],
    ['Zürich — Übung №3', 'zurich-ubung-no3'],
    ['  ../../etc/passwd ', 'etc-passwd'],
    ['Łódź & Tromsø', 'lodz-tromso'],
    ['湖の練習', '湖の練習'],
    ['!!!', 'race'],
  ])('%s', (name, slug) => expect(slugOf(name)).toBe(slug));
  it('begin with the day, once', () => {
    expect(raceSlug('2026-04-18', 'Evening')).toBe('2026-04-18-evening');
    expect(raceSlug('2026-04-18', '2026-04-18 evening')).toBe('2026-04-18-evening');
    expect(raceSlug(null, 'Evening')).toBe('evening');
  });
  it('are lower case letters, digits and -, at most 60, whatever the name', () => {
    fc.assert(
      fc.property(fc.string({ unit: 'grapheme', maxLength: 200 }), (name) => {
        const slug = slugOf(name);
        expect(slug).toMatch(/^[\p{L}\p{M}\p{N}]([\p{L}\p{M}\p{N}-]*[\p{L}\p{M}\p{N}])?$/u);
        expect([...slug].length).toBeLessThanOrEqual(60);
        expect(slug).toBe(slug.toLowerCase());
      }),
    );
  });
});

describe('patterns', () => {
  const names = async (pattern: string) =>
    (await expandGlob(inHome(pattern))).map((path) => path.slice(home.length + 1));
  it.each([
    ['logs/*.csv', ['logs/[x].csv', 'logs/b.csv']],
    ['logs/?.{csv,gpx}', ['logs/a.gpx', 'logs/b.csv']],
    ['**/*.csv', ['logs/[x].csv', 'logs/b.csv', 'logs/deep/c.csv']],
    ['logs/[a-b].*', ['logs/a.gpx', 'logs/b.csv']],
    ['logs/[!a].*', ['logs/b.csv']],
    ['*/race.*', []],
    ['season/*/race.*', ['season/june/race.json', 'season/may/race.yaml']],
    ['logs/*.fit', []],
  ])('%s', async (pattern, expected) => expect(await names(pattern)).toEqual(expected));
  it('a name with brackets that is there is itself, not a pattern', async () => {
    expect(isGlob('[x].csv')).toBe(true);
    expect(await expandInputs([inHome('logs/[x].csv')])).toEqual([{ kind: 'logs', paths: [inHome('logs/[x].csv')] }]);
  });
});

describe('inputs', () => {
  const kinds = async (...words: string[]) =>
    (await expandInputs(words.map(inHome))).map((source) =>
      source.kind === 'logs'
        ? source.paths.map((path) => path.slice(home.length + 1))
        : source.path.slice(home.length + 1),
    );
  it('of a folder are its race files, not its boat files and results', async () => {
    expect(await kinds('spring')).toEqual(['spring/1.yaml']);
  });
  it('of a folder of folders are the race files in them', async () => {
    expect(await kinds('season')).toEqual(['season/june/race.json', 'season/may/race.yaml']);
  });
  it('of a folder of logs are one race', async () => {
    expect(await kinds('logs')).toEqual([['logs/[x].csv', 'logs/a.gpx', 'logs/b.csv']]);
  });
  it('without an extension are told by how they begin', async () => {
    expect(await kinds('noext-race')).toEqual(['noext-race']);
    expect(await kinds('noext-track')).toEqual([['noext-track']]);
  });
  it('may be several race files, not a race file and a log', async () => {
    expect(await kinds('spring/1.yaml', 'season/may/race.yaml')).toEqual(['spring/1.yaml', 'season/may/race.yaml']);
    await expect(kinds('spring/1.yaml', 'logs/a.gpx')).rejects.toThrow(/a log beside a race file/);
    await expect(kinds('nothing')).rejects.toThrow(/without a race file and without logs/);
  });
});

describe('options', () => {
  it('columns', () => {
    expect(addColumns('wind dir=twd_deg,Speed=sog_kn:m/s')).toEqual({ 'wind dir': 'twd_deg', Speed: 'sog_kn:m/s' });
    expect(addColumns('a=b', { c: 'd' })).toEqual({ c: 'd', a: 'b' });
    expect(addColumns('x=y=z')).toEqual({ 'x=y': 'z' });
    expect(() => addColumns('wind dir')).toThrow(/HEADER=FIELD/);
  });
  it('winds include both ends', () => {
    expect(readWinds('4:24:2')).toEqual([4, 6, 8, 10, 12, 14, 16, 18, 20, 22, 24]);
    expect(readWinds('1:2:0.1')).toHaveLength(11);
    expect(readWinds('12')).toEqual([12]);
    for (const text of ['', 'x', '0:5:1', '5:4:1', '4:24:0', '4:24:-1', '4:24:2:1', '4:99:1']) {
      expect(() => readWinds(text)).toThrow(/FROM:TO:STEP/);
    }
  });
});

describe('the logbook', () => {
  const race = (name: string, start: string | null, ...boats: string[]): Result => ({
    ...inventedResult(),
    race: { name, start, finish: null },
    boats: boats.map((boat) => inventedResult(boat).boats[0]),
  });
  const START = '2026-04-18T12:05:00.000Z';

  it('names a file by date, race and the digest of name and start', () => {
    // printf 'Two\n2026-04-18T12:05:00.000Z' | sha256sum
    expect(logbookName(race('Two', START), '2026-04-18')).toBe(`2026-04-18-two-ed2e0a3d.json`);
    expect(logbookName(race('Two', null), '2026-04-18')).not.toBe(logbookName(race('Two', START), '2026-04-18'));
  });
  it('replaces the same name and start and keeps the boats only the older one knows', async () => {
    const book = inHome('book');
    await fileInLogbook(book, race('Two', START, 'Ann', 'Ben'), '2026-04-18');
    const second = race('Two', START, 'Cy', 'Ben');
    second.boats.forEach((boat) => Object.assign(boat, { sailor: 'new' }));
    await fileInLogbook(book, second, '2026-04-18');
    await fileInLogbook(book, race('Two', '2026-04-25T12:05:00.000Z', 'Ann'), '2026-04-25');
    expect(filesBelow(book)).toHaveLength(2);
    const [first] = await resultsIn(book);
    expect(first.boats.map(({ name, sailor }) => `${name} ${sailor}`)).toEqual(['Ann Ann', 'Ben new', 'Cy new']);
  });
  it('filing the same again changes nothing', () => {
    const one = race('Two', START, 'Ann');
    expect(merged(one, one)).toEqual(one);
  });
  it('replaces a damaged file and does not touch one of a newer program', async () => {
    const book = inHome('book2');
    const result = race('Two', START, 'Ann');
    await fileInLogbook(book, result, '2026-04-18');
    const path = join(book, filesBelow(book)[0]);
    writeFileSync(path, '{ "format": "legwork-res');
    await fileInLogbook(book, result, '2026-04-18');
    expect(JSON.parse(readFileSync(path, 'utf8'))).toEqual(result);
    const newer = JSON.stringify({ ...result, version: 9 });
    writeFileSync(path, newer);
    await expect(fileInLogbook(book, result, '2026-04-18')).rejects.toThrow(/newer/);
    expect(readFileSync(path, 'utf8')).toBe(newer);
  });
});

describe('reading a logbook', () => {
  it('leaves out what cannot be read, and says so', async () => {
    const whole = (name: string): string =>
      JSON.stringify({ ...inventedResult(), race: { name, start: null, finish: null } });
    const book = folder({
      'b.json': whole('B'),
      'a.json': `\uFEFF${whole('A')}`,
      'c.json': whole('C').slice(0, -100),
      'd.json/a.gpx': '',
      'e.json': Buffer.from(`\uFEFF${whole('E')}`, 'utf16le'),
      'f.json': '[]',
      '.g.json': whole('G'),
      'sailors.yaml': 'hidden: []',
    });
    const said: string[] = [];
    const spy = vi.spyOn(process.stderr, 'write').mockImplementation((text) => said.push(String(text)) > 0);
    const names = (await resultsIn(book)).map(({ race }) => race.name);
    spy.mockRestore();
    expect(names).toEqual(['A', 'B', 'E']);
    expect(said.map((line) => /[a-z.]+\.json/.exec(line)?.[0])).toEqual(['c.json', 'd.json', 'f.json']);
    drop(book);
  });
});

describe('writing', () => {
  it('is whole or not at all', async () => {
    const path = inHome('deep/er/x.txt');
    await writeWhole(path, 'one');
    await writeWhole(path, new TextEncoder().encode('two'));
    expect(readFileSync(path, 'utf8')).toBe('two');
    await expect(writeWhole(inHome('deep'), 'x')).rejects.toThrow(/is a folder/);
    await expect(writeWhole(join(path, 'y.txt'), 'x')).rejects.toThrow(/as if it were a folder/);
    expect(filesBelow(inHome('deep'))).toEqual(['er/x.txt']);
  });
});
