/**
 * What cannot be used or analysed, beyond what test/cli tries: exit code, message, and no file left behind. And that
 * what is written is valid.
 */
import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { parse } from 'yaml';
import { z } from 'zod';
import { jsonSchemas } from '../../src/schemas.js';
import { gpxText, inventedBeat, windText } from '../cli/invented-beat.js';
import { buildProgram, drop, dropProgram, filesBelow, fill, folder, run } from '../cli/run.js';

const RACE =
  'race: Test\nzone: UTC\nboat: single-hander\nwind: [{ file: wind.csv, height_m: 3 }]\nboats: [{ name: Ann, track: ann.gpx }]\n';
const LONG = process.env['LEGWORK_LONG'] === '1';
const beat = inventedBeat();
const whole = gpxText(beat);
/** A course across the wind from the north: nothing here is a beat. */
const reach = gpxText(beat.map((fix, i) => ({ ...fix, lat: 46.9, lon: 9.06 + 3.4e-5 * i })));
/** Ten entities, each ten times the one before: 10^9 letters if anybody were to write them out. */
const BOMB = `<?xml version="1.0"?>\n<!DOCTYPE gpx [<!ENTITY a0 "aaaaaaaaaa">${Array.from(
  { length: 9 },
  (_, i) => `<!ENTITY a${i + 1} "${`&a${i};`.repeat(10)}">`,
).join('')}]>\n<gpx version="1.1" xmlns="http://www.topografix.com/GPX/1/1"><trk><name>&a9;</name><trkseg>`;
const FILES = {
  'race.yaml': RACE,
  'ann.gpx': whole,
  'ben.gpx': gpxText(inventedBeat(60)),
  'wind.csv': windText(),
  'columns.csv': 'a,b,c\n1,2,3\n4,5,6\n',
  'no-times.gpx': whole.replace(/<time>[^<]*<\/time>/g, ''),
  'no-points.gpx': whole.replace(/<trkpt[\s\S]*<\/trkpt>/, ''),
  'reach.gpx': reach,
  'still.gpx': gpxText(beat.map((fix) => ({ ...fix, lat: 46.9, lon: 9.06 }))),
  'bomb.gpx': whole.replace(/^[\s\S]*?<trkseg>/, BOMB),
  'outside.gpx': whole.replace(
    /^[\s\S]*?<trkseg>/,
    '<?xml version="1.0"?>\n<!DOCTYPE gpx [<!ENTITY secret SYSTEM "wind.csv">]>\n<gpx version="1.1" xmlns="http://www.topografix.com/GPX/1/1"><trk><name>&secret;</name><trkseg>',
  ),
  'cut.gpx': whole.slice(0, whole.lastIndexOf('<trkpt') + 30),
  'broken.yaml': 'race: [unclosed\nboats: 3\n',
} as const;
let home: string;

beforeAll(async () => {
  await buildProgram();
  home = folder(FILES);
});
afterAll(() => {
  drop(home);
  dropProgram();
});

const track = (file: string): string[] => [file, '--wind', 'wind.csv'];

describe('bad input', () => {
  it.each<[string, 1 | 2, () => string[], RegExp]>([
    ['a table of other things', 2, () => track('columns.csv'), /columns\.csv/],
    ['a wind log of other things', 2, () => ['ann.gpx', '--wind', 'columns.csv'], /columns\.csv/],
    ['a track without times', 2, () => track('no-times.gpx'), /no-times\.gpx/],
    ['a track without points', 2, () => track('no-points.gpx'), /no-points\.gpx/],
    ['a race file that is no YAML', 2, () => ['broken.yaml'], /broken\.yaml:\d/],
    ['no upwind leg', 1, () => track('reach.gpx'), /no upwind leg/],
    ['a boat that never moves', 1, () => track('still.gpx'), /no upwind leg/],
    ['no wind and no tacks', 1, () => ['reach.gpx'], /no wind log, and too few tacks/],
    ['a gun after the log', 1, () => [...track('ann.gpx'), '--start', '2026-04-18T18:00:00Z'], /no upwind leg/],
  ])('%s is %i', async (_, expected, args, message) => {
    const words = args();
    const before = filesBelow(home);
    const { code, out, err } = await run(
      [
        'debrief',
        ...words,
        '--json',
        'r.json',
        '--csv',
        'tables',
        '--geojson',
        'g.json',
        '--parquet',
        'p.parquet',
        '--logbook',
        'book',
      ],
      { cwd: home },
    );
    expect(err).toMatch(message);
    expect({ code, out }).toEqual({ code: expected, out: '' });
    expect(err.trim().split('\n').length).toBeLessThanOrEqual(6);
    expect(err).not.toMatch(/\n\s+at /);
    expect(filesBelow(home)).toEqual(before);
  });
});

interface Told {
  readonly boats: readonly { readonly name: string; readonly legs: readonly unknown[] }[];
  readonly inputs: readonly { readonly file: string; readonly rows: number; readonly kept: number }[];
  readonly warnings: readonly { readonly code: string; readonly file?: string }[];
}

async function told(args: readonly string[]): Promise<Told> {
  const { code, out, err } = await run(['debrief', ...args, '--json', '-'], { cwd: home });
  expect({ code, err }).toEqual({ code: 0, err: '' });
  return JSON.parse(out) as Told;
}

describe('damaged but usable', () => {
  it('a truncated track is read up to the break, and that is said', async () => {
    const { inputs, warnings, boats } = await told(track('cut.gpx'));
    expect(inputs.find(({ file }) => file === 'cut.gpx')!.kept).toBe(beat.length - 1);
    expect(warnings).toContainEqual(expect.objectContaining({ code: 'file-truncated', file: 'cut.gpx' }));
    expect(boats[0].legs.length).toBeGreaterThan(0);
  });

  it('entities that would grow are not written out', async () => {
    const { boats } = await told(track('bomb.gpx'));
    expect(JSON.stringify(boats[0].name).length).toBeLessThan(200);
  });

  it('an entity from outside is not fetched', async () => {
    const result = await told(track('outside.gpx'));
    expect(result.boats[0].name).not.toMatch(/twd_deg|tws_kn/);
    expect(JSON.stringify(result)).not.toContain('time,twd_deg');
  });
});

async function check(name: string, data: unknown): Promise<void> {
  const schemas = await jsonSchemas();
  const schema = schemas.get(`${name}.schema.json`) as Parameters<typeof z.fromJSONSchema>[0];
  const { error } = z.fromJSONSchema(schema).safeParse(data);
  expect(error?.issues ?? [], name).toEqual([]);
  expect(z.fromJSONSchema(schema).safeParse({ nothing: true }).success, name).toBe(false);
}

describe('what is written', () => {
  it('is valid by the JSON Schema that is shipped', async () => {
    const json = (name: string): unknown => JSON.parse(readFileSync(join(home, name), 'utf8'));
    const steps = [
      ['debrief', 'two.yaml', '--quiet', '--json', 'd/result.json', '--logbook', 'd/book', '--out', 'd/report.html'],
      ['season', 'd/book', '--quiet', '--json', 'd/season.json', '--out', 'd/season.html'],
      ['inspect', 'ann.gpx', 'wind.csv', '--json', 'd/inspect.json'],
      ['optimum', '--tws', '10', '--polar', '--json', 'd/optimum.json'],
    ];
    fill(home, { 'two.yaml': `${RACE.trim().slice(0, -1)}, { name: Ben, track: ben.gpx }]\n`, 'd/.keep': '' });
    for (const args of steps) expect(await run(args, { cwd: home })).toMatchObject({ code: 0, err: '' });
    await check('result', json('d/result.json'));
    await check('season', json('d/season.json'));
    await check('inspect', json('d/inspect.json'));
    await check('optimum', json('d/optimum.json'));
    await check('race', parse(readFileSync(join(home, 'two.yaml'), 'utf8')));
    for (const file of filesBelow(join(home, 'd/book'))) await check('result', json(`d/book/${file}`));
  });

  it.runIf(LONG)('a tuned boat too', async () => {
    expect(await run(['demo', 'demo', '--quiet'], { cwd: home })).toMatchObject({ code: 0 });
    const tune = ['tune', 'demo/race.yaml', '--quiet', '--boat-out', 'demo/tuned.yaml', '--out', 'demo/tune.html'];
    expect(await run(tune, { cwd: home })).toMatchObject({ code: 0, err: '' });
    await check('boat', parse(readFileSync(join(home, 'demo/tuned.yaml'), 'utf8')));
    await check('race', parse(readFileSync(join(home, 'demo/race.yaml'), 'utf8')));
  });
});
