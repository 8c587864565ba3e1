import { readFileSync } from 'node:fs';
import { isAbsolute, join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { InspectResult } from '../../src/inspect.js';
import type { OptimumTable } from '../../src/physics/optimum.js';
import type { Result } from '../../src/result/result.js';
import { inspectSchema, optimumSchema, resultSchema } from '../../src/result/schema.js';
import { gpxText, inventedBeat, windText } from './invented-beat.js';
import { buildProgram, drop, dropProgram, filesBelow, fill, folder, run } from './run.js';

/**
 * The demo race, with everything it can write; then what came of it is looked at. What any race shows is shown by a beat
 * of one boat, which takes a fraction of the time.
 */
let home: string;
let demo: string;
let summary: string;
let twice: readonly (readonly Buffer[])[];

const SMALL = `race: Small
zone: UTC
boat: single-hander
wind: [{ file: wind.csv, height_m: 3 }]
boats: [{ name: Ann, track: ann.gpx }]
`;

beforeAll(async () => {
  await buildProgram();
  home = folder({
    'small/race.yaml': SMALL,
    'small/ann.gpx': gpxText(inventedBeat()),
    'small/wind.csv': windText(),
  });
  demo = join(home, 'legwork-demo');
  const made = async (): Promise<Buffer[]> => {
    expect(await run(['demo'], { cwd: home })).toMatchObject({ code: 0, err: '' });
    return filesBelow(demo).map((file) => readFileSync(join(demo, file)));
  };
  twice = [await made(), await made()];
  const ran = await run(['debrief', '--json', 'r.json', '--logbook', 'book'], { cwd: demo });
  expect(ran).toMatchObject({ code: 0, err: '' });
  summary = ran.out;
});
afterAll(() => {
  drop(home);
  dropProgram();
});

const json = (name: string): unknown => JSON.parse(readFileSync(join(demo, name), 'utf8'));

/** Every text in a value. */
function texts(value: unknown): string[] {
  if (typeof value === 'string') return [value];
  return value !== null && typeof value === 'object' ? Object.values(value).flatMap(texts) : [];
}

it('the demo may be made twice', () => {
  expect(twice[0].length).toBeGreaterThan(5);
  expect(twice[1]).toEqual(twice[0]);
});

describe('a result', () => {
  it('is what the strict schema says, nothing more', () => {
    const outcome = resultSchema.safeParse(json('r.json'));
    expect(outcome.error?.issues ?? []).toEqual([]);
  });
  it('accounts for every record of every input', () => {
    const { inputs } = json('r.json') as Result;
    expect(inputs.map(({ file }) => file).sort()).toEqual([
      'committee.csv',
      'corrie-mast.csv',
      'corrie.gpx',
      'linnet.csv',
    ]);
    for (const input of inputs) {
      const rejected = input.rejected.reduce((sum, { count }) => sum + count, 0);
      expect(input.kept + input.ignored + rejected).toBe(input.rows);
    }
    const gpx = readFileSync(join(demo, 'corrie.gpx'), 'utf8');
    expect(inputs.find(({ file }) => file === 'corrie.gpx')!.rows).toBe(gpx.match(/<trkpt/g)!.length);
  });
  it('names no absolute path', () => {
    expect(texts(json('r.json')).filter((text) => isAbsolute(text) || text.includes(home))).toEqual([]);
  });
  it('names none either where the race file does', async () => {
    const small = join(home, 'small');
    const absolute = SMALL.replace('single-hander', join(small, 'mine.yaml')).replace(
      'ann.gpx',
      join(small, 'ann.gpx'),
    );
    fill(small, { 'absolute.yaml': absolute, 'mine.yaml': 'boat: Mine\nlike: two-person\n' });
    const { code, out } = await run(['debrief', 'absolute.yaml', '--json', '-'], { cwd: small });
    expect(code).toBe(0);
    expect(texts(JSON.parse(out)).filter((text) => text.includes(home))).toEqual([]);
    expect((JSON.parse(out) as Result).boats[0].model.boat).toBe('mine.yaml');
  });
  it('has ledgers whose entries sum to what was lost', () => {
    const { boats } = json('r.json') as Result;
    const ledgers = boats.flatMap((boat) => boat.legs.flatMap((leg) => leg.ledger ?? []));
    expect(ledgers.length).toBeGreaterThan(0);
    for (const { entries, lost_m, available_m, made_m } of ledgers) {
      const sum = entries.reduce((total, { metres }) => total + (metres?.value ?? 0), 0);
      expect(Math.abs(sum - lost_m!.value)).toBeLessThan(1e-3);
      expect(Math.abs(available_m!.value - made_m!.value - lost_m!.value)).toBeLessThan(1e-3);
    }
  });
  it('has times at the gun and the finish of the race file', () => {
    const { race } = json('r.json') as Result;
    expect(race.start).toBe('2026-04-18T12:05:00.000Z');
    expect(new Date(race.finish!).toISOString()).toBe(race.finish);
  });
  it('is filed in the logbook as it is', async () => {
    const { code, out } = await run(['season', 'book', '--json', '-'], { cwd: demo });
    expect(code).toBe(0);
    expect((JSON.parse(out) as { sailors: { name: string; races: number }[] }).sailors).toMatchObject([
      { name: 'Corrie', races: 1 },
      { name: 'Linnet', races: 1 },
    ]);
  });
});

describe('a season', () => {
  it('is a page and a summary; a file of a newer program is left out, and said so', async () => {
    const file = filesBelow(join(demo, 'book'))[0];
    const newer = { ...(json(`book/${file}`) as Result), version: 2 };
    fill(demo, {
      [`book2/${file}`]: readFileSync(join(demo, 'book', file)),
      'book2/newer.json': JSON.stringify(newer),
    });
    const { code, out, err } = await run(['season', 'book2'], { cwd: demo });
    expect(code).toBe(0);
    expect(out).toContain('Report: reports/season.html');
    expect(out.trim().split('\n').length).toBeLessThanOrEqual(30);
    expect(err).toMatch(/newer\.json: is of version 2, and this program reads up to version 1/);
    expect(readFileSync(join(demo, 'reports/season.html'), 'utf8')).toMatch(/^<!doctype html>/);
  });
  it('joins spellings by sailors.yaml, and says where that is wrong', async () => {
    const file = filesBelow(join(demo, 'book'))[0];
    fill(demo, {
      [`book3/${file}`]: readFileSync(join(demo, 'book', file)),
      'book3/sailors.yaml': 'hidden: [Linnet]\n',
    });
    const { out } = await run(['season', 'book3', '--json', '-'], { cwd: demo });
    expect((JSON.parse(out) as { sailors: { name: string }[] }).sailors.map(({ name }) => name)).toEqual(['Corrie']);
    fill(demo, { 'book3/sailors.yaml': 'hide: [Linnet]\n' });
    const wrong = await run(['season', 'book3'], { cwd: demo });
    expect(wrong.code).toBe(2);
    expect(wrong.err).toMatch(/sailors\.yaml: unknown key `hide`/);
  });
});

describe('the summary', () => {
  it('is at most 30 lines, names both boats and the report', () => {
    expect(summary.trim().split('\n').length).toBeLessThanOrEqual(30);
    for (const word of ['Ferrow Lake', 'Corrie', 'Linnet', 'Report: reports/']) expect(summary).toContain(word);
    expect(summary).not.toContain('\u001b');
  });
  it('has colours only where they are asked for', async () => {
    const ask = (env: Record<string, string>) => run(['optimum', '--tws', '12'], { cwd: demo, env });
    expect((await ask({ NO_COLOR: '', FORCE_COLOR: '1' })).out).toContain('\u001b[');
    expect((await ask({ NO_COLOR: '1', FORCE_COLOR: '1' })).out).not.toContain('\u001b');
  });
  it('is not there with --quiet', async () => {
    const small = join(home, 'small');
    expect((await run(['debrief', '--json', 'loud.json'], { cwd: small })).out).toContain('Small');
    const ran = await run(['debrief', '--quiet', '--json', 'quiet.json'], { cwd: small });
    expect(ran).toEqual({ code: 0, out: '', err: '' });
    expect(readFileSync(join(small, 'quiet.json'))).toEqual(readFileSync(join(small, 'loud.json')));
  });
});

describe('compare', () => {
  it('adds pairs, boats in the order of the race file', async () => {
    const { code, out, err } = await run(['compare', '--json', '-'], { cwd: demo });
    expect({ code, err }).toEqual({ code: 0, err: '' });
    const result = JSON.parse(out) as Result;
    expect(resultSchema.safeParse(result).error?.issues ?? []).toEqual([]);
    expect(result.pairs!.map(({ boats }) => boats)).toEqual([['Corrie', 'Linnet']]);
  });
});

describe('inspect', () => {
  it('says what a log holds, by name and unit', async () => {
    const { code, out } = await run(['inspect', 'corrie-mast.csv', 'corrie.gpx', '--json', '-'], { cwd: demo });
    expect(code).toBe(0);
    const { files } = JSON.parse(out) as InspectResult;
    expect(inspectSchema.safeParse(JSON.parse(out)).error?.issues ?? []).toEqual([]);
    const [mast, track] = files;
    expect(mast).toMatchObject({ file: 'corrie-mast.csv', kind: 'csv', fixes: 0 });
    // The header line, split by hand.
    const header = readFileSync(join(demo, 'corrie-mast.csv'), 'utf8').split(/\r?\n/)[0].split(',');
    expect(mast.columns.map((column) => column.header)).toEqual(header);
    expect(track.stretches.filter(({ what }) => what.startsWith('beat'))).toHaveLength(2);
  });
  it('prints the same for people', async () => {
    const { out } = await run(['inspect', 'committee.csv'], { cwd: demo });
    expect(out).toContain('committee.csv');
    expect(out).toMatch(/twd/);
  });
  it('reads standard input, a folder elsewhere, and refuses what is no log', async () => {
    const input = readFileSync(join(demo, 'corrie.gpx'));
    const { code, out } = await run(['inspect', '-', '--json', '-'], { cwd: demo, input });
    expect(code).toBe(0);
    expect(out).toContain('"kind": "gpx"');
    const away = await run(['inspect', join(demo, 'corrie.gpx'), '--json', '-'], { cwd: home });
    expect((JSON.parse(away.out) as InspectResult).files[0].file).toBe('legwork-demo/corrie.gpx');
    const { code: refused, err } = await run(['inspect', 'race.yaml'], { cwd: demo });
    expect(refused).toBe(2);
    expect(err).toContain('race.yaml');
  });
});

describe('tune', () => {
  it('writes a boat file that can be sailed with, once', async () => {
    const { code, out, err } = await run(['tune'], { cwd: demo });
    expect({ code, err }).toEqual({ code: 0, err: '' });
    expect(out).toContain('Boat file: single-hander-tuned.yaml');
    expect(filesBelow(join(demo, 'reports'))).toContain('single-hander-tune.html');
    const first = readFileSync(join(demo, 'single-hander-tuned.yaml'));
    // By another race, under the name it would have; and at once where the name is given.
    const race = join('..', 'small', 'race.yaml');
    const named = ['--boat-out', 'single-hander-tuned.yaml'];
    for (const more of [[], named]) {
      const again = await run(['tune', race, ...more], { cwd: demo });
      expect(again.code).toBe(2);
      expect(again.err).toMatch(/single-hander-tuned\.yaml: is there already[\s\S]*--force/);
    }
    expect(readFileSync(join(demo, 'single-hander-tuned.yaml'))).toEqual(first);
    const forced = await run(['tune', race, '--force', ...named, '--quiet'], { cwd: demo });
    expect(forced).toEqual({ code: 0, out: '', err: '' });
    expect(readFileSync(join(demo, 'single-hander-tuned.yaml'))).not.toEqual(first);
    const tuned = await run(['debrief', race, '--boat', 'single-hander-tuned.yaml', '--json', '-'], { cwd: demo });
    const { boats } = JSON.parse(tuned.out) as Result;
    expect(boats.map(({ model }) => model.tuned)).toEqual([true]);
    expect(boats[0].model.boat).toBe('single-hander-tuned.yaml');
  });
});

describe('optimum', () => {
  it('is a table of plain numbers, upwind; the polar runs to dead downwind', async () => {
    const { out } = await run(['optimum', '--tws', '8:16:4', '--polar', '--json', '-'], { cwd: home });
    const table = JSON.parse(out) as OptimumTable;
    expect(optimumSchema.safeParse(table).error?.issues ?? []).toEqual([]);
    expect(table.rows.map(({ tws_kn }) => tws_kn)).toEqual([8, 12, 16]);
    for (const row of table.rows) {
      // VMG is speed times the cosine of the course angle, whatever the model.
      expect(row.vmg_kn).toBeCloseTo(row.speed_kn * Math.cos((row.gamma_deg * Math.PI) / 180), 6);
      expect(row.aero_drag_angle_deg + row.hydro_drag_angle_deg).toBeCloseTo(row.beta_deg, 6);
    }
    const courses = table.polar!.filter(({ tws_kn }) => tws_kn === 12).map(({ gamma_deg }) => gamma_deg);
    expect(Math.max(...courses)).toBe(180);
    expect(Math.min(...courses)).toBeLessThan(45);
  });
  it('takes a boat file, and says where one is wrong', async () => {
    const mine = folder({
      'mine.yaml': 'boat: Mine\nlike: two-person\ncrew: { mass_kg: 180 }\n',
      'bad.yaml': 'boat: X\nlike: two-person\ncrew: { mas_kg: 1 }\n',
    });
    const { code, out } = await run(['optimum', '--boat', 'mine.yaml', '--tws', '12'], { cwd: mine });
    expect(code).toBe(0);
    expect(out).toContain('Mine');
    const bad = await run(['optimum', '--boat', 'bad.yaml'], { cwd: mine });
    expect(bad.code).toBe(2);
    expect(bad.err).toMatch(/bad\.yaml:3: unknown key `mas_kg`[\s\S]*mass_kg/);
    drop(mine);
  });
});
