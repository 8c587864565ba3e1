import { chmodSync, existsSync, readFileSync, statSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { gpxText, inventedBeat, windText } from './invented-beat.js';
import { buildProgram, drop, dropProgram, ended, filesBelow, fill, folder, ROOT, run, start } from './run.js';

const RACE =
  'race: Test\nzone: UTC\nboat: single-hander\nwind: [{ file: wind.csv, height_m: 3 }]\nboats: [{ name: Ann, track: ann.gpx }]\n';
let home: string;

beforeAll(async () => {
  await buildProgram();
  home = folder({
    'race.yaml': RACE,
    'ann.gpx': gpxText(inventedBeat()),
    'ben.gpx': gpxText(inventedBeat(60)),
    'wind.csv': windText(),
    'elsewhere.csv': windText(Date.UTC(2026, 3, 19, 12)),
    'empty.gpx': '',
    'watch.bin': Buffer.from(Array.from({ length: 2000 }, (_, i) => (i * 37 + (i >> 3)) % 256)),
  });
});
afterAll(() => {
  drop(home);
  dropProgram();
});

/** What a failing command may look like: a few lines, none of them a stack. */
function expectFewLines(err: string): void {
  expect(err.trim().split('\n').length).toBeLessThanOrEqual(6);
  expect(err).not.toMatch(/\n\s+at /);
  expect(err).not.toContain(ROOT);
}

describe('the version', () => {
  it('is that of the package, told by a file that loads nothing of ours and no package', async () => {
    const { version } = JSON.parse(readFileSync(join(ROOT, 'package.json'), 'utf8')) as { version: string };
    expect(await run(['--version'], { cwd: home })).toEqual({ code: 0, out: `${version}\n`, err: '' });
    const source = readFileSync(join(ROOT, 'src/cli/legwork.ts'), 'utf8');
    expect([...source.matchAll(/^import .* from '(.*)'/gm)].map((match) => match[1])).toEqual(['node:fs']);
  });
});

describe('help', () => {
  it.each(['debrief', 'compare', 'season', 'inspect', 'optimum', 'tune', 'demo'])(
    '%s has a worked example',
    async (command) => {
      const { code, out } = await run([command, '--help'], { cwd: home });
      expect(code).toBe(0);
      expect(out).toContain(`legwork ${command}`);
      expect(out).toMatch(/Examples?:/);
    },
  );
  it('is what the bare command gives', async () => {
    const { code, out } = await run([], { cwd: home });
    expect(code).toBe(0);
    expect(out).toContain('legwork demo');
  });
});

describe('what is unusable is 2, with a few lines that say what to do', () => {
  const race = (text: string) => {
    writeFileSync(join(home, 'other.yaml'), text);
    return 'other.yaml';
  };
  it.each<[string, () => string[], RegExp]>([
    ['an unknown command', () => ['debref'], /unknown command 'debref'[\s\S]*debrief/],
    ['an unknown option', () => ['debrief', '--jsn', 'x'], /--jsn[\s\S]*--json/],
    ['a wind that is none', () => ['debrief', 'ann.gpx', '--wind', '999@12'], /215@12/],
    ['a current that is none', () => ['debrief', 'ann.gpx', '--current', 'north'], /SET,DRIFT/],
    [
      'a zone that is none',
      () => ['debrief', 'ann.gpx', '--zone', 'Europe/Zurch'],
      /--zone Europe\/Zurch[\s\S]*Europe\/Zurich/,
    ],
    ['a time that is none', () => ['debrief', 'ann.gpx', '--start', 'noon'], /--start noon: not a time/],
    ['a day that is none', () => ['inspect', 'ann.gpx', '--date', '2026-02-30'], /--date 2026-02-30: not a day/],
    ['a range of winds that is none', () => ['optimum', '--tws', '9:4:1'], /FROM:TO:STEP/],
    ['a file that is not there', () => ['debrief', 'anne.gpx'], /anne\.gpx: is not there\.\n\s+Is it ann\.gpx\?/],
    ['a pattern without a match', () => ['debrief', '*.fit'], /\*\.fit: no file matches/],
    [
      'a track that is not there',
      () => ['debrief', race(RACE.replace('ann.gpx', 'amn.gpx'))],
      /other\.yaml[\s\S]*amn\.gpx[\s\S]*ann\.gpx/,
    ],
    ['an unknown key', () => ['debrief', race(`raec: 1\n${RACE}`)], /other\.yaml:1: unknown key `raec`[\s\S]*`race`/],
    ['an empty file', () => ['debrief', 'empty.gpx'], /empty\.gpx[\s\S]*empty/],
    ['a binary file', () => ['debrief', 'watch.bin'], /watch\.bin/],
    ['no INPUT and no race.yaml', () => ['debrief', '--quiet'], /no race\.yaml/],
    ['one boat against itself', () => ['compare', 'ann.gpx', '--wind', 'wind.csv'], /one boat alone/],
    [
      'a boat that is not there',
      () => ['compare', 'ann.gpx', 'ben.gpx', '--pair', 'ann', '--pair', 'cy'],
      /--pair cy[\s\S]*ann, ben/,
    ],
    ['a boat model that is not there', () => ['optimum', '--boat', 'galleon'], /galleon[\s\S]*single-hander/],
    ['a logbook that is not there', () => ['season', 'nowhere'], /nowhere[\s\S]*--logbook/],
    [
      'an output over an input',
      () => ['debrief', 'ann.gpx', '--wind', 'wind.csv', '--out', 'ann.gpx'],
      /ann\.gpx: would be written over an input/,
    ],
    [
      'a path through a file',
      () => ['debrief', 'race.yaml', '--out', 'wind.csv/report.html'],
      /wind\.csv\/report\.html/,
    ],
    ['a log beside a race file', () => ['debrief', 'race.yaml', 'ben.gpx'], /ben\.gpx: a log beside a race file/],
  ])('%s', async (what, args, message) => {
    const cwd = what.startsWith('no INPUT') ? join(home, 'sub') : home;
    fill(home, { 'sub/.keep': '' });
    const { code, out, err } = await run(args(), { cwd });
    expect(err).toMatch(message);
    expectFewLines(err);
    expect({ code, out }).toEqual({ code: 2, out: '' });
  });

  it('a full disk', async () => {
    if (!existsSync('/dev/full')) return expect(process.platform).not.toBe('linux');
    const { code, err } = await run(['optimum', '--json', '/dev/full', '--quiet'], { cwd: home });
    expect(err).toContain('/dev/full: could not be written: the disk is full.');
    expect(code).toBe(2);
  });

  it.skipIf(process.getuid?.() === 0 || process.platform === 'win32')('a read-only folder', async () => {
    fill(home, { 'locked/.keep': '' });
    chmodSync(join(home, 'locked'), 0o555);
    const { code, err } = await run(['optimum', '--json', 'locked/x.json', '--quiet'], { cwd: home });
    chmodSync(join(home, 'locked'), 0o755);
    expect(err).toContain('locked/x.json: may not be read or written.');
    expect(code).toBe(2);
  });
});

describe('what is understood but cannot be analysed is 1', () => {
  it('a wind log of another day', async () => {
    const { code, err } = await run(['debrief', 'ann.gpx', '--wind', 'elsewhere.csv'], { cwd: home });
    expect(err).toContain('elsewhere.csv');
    expect(err).toMatch(/overlap/);
    expectFewLines(err);
    expect(code).toBe(1);
    expect(existsSync(join(home, 'reports'))).toBe(false);
  });
});

describe('signals', () => {
  it.each([
    ['SIGINT', 130],
    ['SIGTERM', 143],
  ] as const)('%s ends with %i and leaves nothing behind', async (signal, expected) => {
    const before = filesBelow(home);
    const child = start(['debrief', '-', '--wind', 'wind.csv'], { cwd: home });
    const end = ended(child);
    // Half a log, then silence: the program waits for the rest.
    child.stdin!.write(gpxText(inventedBeat()).slice(0, 5000));
    await new Promise((resolve) => setTimeout(resolve, 1500));
    child.kill(signal);
    expect((await end).code).toBe(expected);
    expect(filesBelow(home)).toEqual(before);
  });
});

describe('pipes', () => {
  it('a reader that leaves is no fault', async () => {
    const child = start(['optimum', '--tws', '4:24:0.5', '--polar', '--json', '-'], { cwd: home });
    child.stdin!.end();
    child.stdout!.once('data', () => child.stdout!.destroy());
    let err = '';
    child.stderr!.setEncoding('utf8').on('data', (text: string) => (err += text));
    const code = await new Promise((resolve) => child.on('close', resolve));
    expect({ code, err }).toEqual({ code: 0, err: '' });
  });
  it('a reader that never came is no fault', async () => {
    const child = start(['optimum', '--json', '-'], { cwd: home });
    child.stdin!.end();
    child.stdout!.destroy();
    let err = '';
    child.stderr!.setEncoding('utf8').on('data', (text: string) => (err += text));
    const code = await new Promise((resolve) => child.on('close', resolve));
    expect({ code, err }).toEqual({ code: 0, err: '' });
  });
  it('a race may come in by standard input', async () => {
    const { code, out, err } = await run(['debrief', '-', '--json', '-'], { cwd: home, input: RACE });
    expect(err).toBe('');
    expect(code).toBe(0);
    expect((JSON.parse(out) as { race: unknown }).race).toMatchObject({ name: 'Test' });
  });
  it('so may a track', async () => {
    const track = readFileSync(join(home, 'ann.gpx'));
    const { code, out, err } = await run(['debrief', '-', '--wind', 'wind.csv', '--json', '-'], {
      cwd: home,
      input: track,
    });
    expect(err).toBe('');
    expect(code).toBe(0);
    expect((JSON.parse(out) as { boats: unknown[] }).boats).toHaveLength(1);
  });
});

describe('a fault of ours', () => {
  it('shows its stack only when asked', async () => {
    const quiet = await run(['debrief', 'empty.gpx'], { cwd: home });
    const loud = await run(['debrief', 'empty.gpx'], { cwd: home, env: { LEGWORK_DEBUG: '1' } });
    expect(quiet.err).not.toMatch(/\n\s+at /);
    expect(loud.err).toMatch(/\n\s+at /);
    expect(loud.code).toBe(2);
  });
});

describe('the files of a run', () => {
  it('are whole, and the summary says where they are', async () => {
    const cwd = folder({ 'race.yaml': RACE, 'ann.gpx': gpxText(inventedBeat()), 'wind.csv': windText() });
    const args = [
      '--json',
      'r.json',
      '--csv',
      't',
      '--geojson',
      'g.json',
      '--parquet',
      'p.parquet',
      '--logbook',
      'book',
    ];
    const { code, out, err } = await run(['debrief', ...args], { cwd });
    expect(err).toBe('');
    expect(code).toBe(0);
    expect(out.trim().split('\n').length).toBeLessThanOrEqual(30);
    expect(out).toContain('Report: reports/2026-04-18-test.html');
    const files = filesBelow(cwd).filter((file) => !file.startsWith('book/'));
    expect(files).toEqual(
      [
        'race.yaml',
        'ann.gpx',
        'wind.csv',
        'r.json',
        't/legs.csv',
        't/seconds.csv',
        'g.json',
        'p.parquet',
        'reports/2026-04-18-test.html',
      ].sort(),
    );
    expect(filesBelow(join(cwd, 'book'))).toEqual([expect.stringMatching(/^2026-04-18-test-[0-9a-f]{8}\.json$/)]);
    expect(statSync(join(cwd, 'p.parquet')).size).toBeGreaterThan(500);
    drop(cwd);
  });

  it('--json - puts the result on standard output and writes nothing', async () => {
    const before = filesBelow(home);
    const { code, out } = await run(['debrief', 'ann.gpx', 'ben.gpx', '--wind', 'wind.csv', '--json', '-'], {
      cwd: home,
    });
    expect(code).toBe(0);
    expect((JSON.parse(out) as { format: string }).format).toBe('legwork-result');
    expect(filesBelow(home)).toEqual(before);
  });

  it('are the same bytes again, and from another folder', async () => {
    const cwd = folder({ 'a b/Übung.yaml': RACE, 'a b/ann.gpx': gpxText(inventedBeat()), 'a b/wind.csv': windText() });
    fill(cwd, { 'elsewhere/.keep': '' });
    const at = (name: string) => readFileSync(join(cwd, name));
    expect((await run(['debrief', 'a b/Übung.yaml', '--json', '1.json', '--out', '1.html'], { cwd })).code).toBe(0);
    expect(
      (await run(['debrief', 'Übung.yaml', '--json', '../2.json', '--out', '../2.html'], { cwd: join(cwd, 'a b') }))
        .code,
    ).toBe(0);
    const away = ['debrief', join(cwd, 'a b', 'Übung.yaml'), '--json', '3.json', '--out', '3.html'];
    expect(
      (await run(away, { cwd: join(cwd, 'elsewhere'), env: { TZ: 'Pacific/Auckland', LANG: 'de_CH.UTF-8' } })).code,
    ).toBe(0);
    expect(at('2.json')).toEqual(at('1.json'));
    expect(at('elsewhere/3.json')).toEqual(at('1.json'));
    expect(at('2.html')).toEqual(at('1.html'));
    expect(at('elsewhere/3.html')).toEqual(at('1.html'));
    expect(at('1.json').toString()).not.toContain(cwd);
    drop(cwd);
  });
});

describe('a batch', () => {
  it('goes on where asked and ends with the worst code', async () => {
    const cwd = folder({
      'spring/1.yaml': RACE.replace('Test', 'One'),
      'spring/2.yaml': RACE.replace('Test', 'Two').replace('wind.csv', 'elsewhere.csv'),
      'spring/3.yaml': RACE.replace('Test', 'Three'),
      'spring/ann.gpx': gpxText(inventedBeat()),
      'spring/wind.csv': windText(),
      'spring/elsewhere.csv': windText(Date.UTC(2026, 3, 19, 12)),
    });
    const stopped = await run(['debrief', 'spring'], { cwd });
    expect(stopped.code).toBe(1);
    expect(filesBelow(join(cwd, 'reports'))).toEqual(['2026-04-18-one.html']);
    const all = await run(['debrief', 'spring/*.yaml', '--keep-going', '--json', 'results/'], { cwd });
    expect(all.code).toBe(1);
    expect(filesBelow(join(cwd, 'reports'))).toEqual(['2026-04-18-one.html', '2026-04-18-three.html']);
    expect(filesBelow(join(cwd, 'results'))).toEqual(['2026-04-18-one.json', '2026-04-18-three.json']);
    const lost = ['debrief', 'spring/0.yaml', 'spring/3.yaml', '--keep-going', '--json', 'lost/'];
    expect((await run(lost, { cwd })).code).toBe(2);
    expect(filesBelow(join(cwd, 'lost'))).toEqual(['2026-04-18-three.json']);
    const one = await run(['debrief', 'spring', '--json', 'one.json', '--keep-going'], { cwd });
    expect(one.code).toBe(2);
    expect(one.err).toContain('--json one.json: one file, but more than one race.');
    drop(cwd);
  });
});

describe('the demo', () => {
  it('never writes over a file that is not its own', async () => {
    const cwd = folder({ 'there/race.yaml': 'mine: true\n' });
    const { code, err } = await run(['demo', 'there'], { cwd });
    expect(code).toBe(2);
    expect(err).toContain("there/race.yaml: is there already and is not the demo's.");
    expect(filesBelow(cwd)).toEqual(['there/race.yaml']);
    drop(cwd);
  });
});
