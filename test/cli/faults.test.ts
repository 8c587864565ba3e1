/** What can go wrong around the program: disks, pipes, signals, archives, files made to do harm, odd times and places. */
import { existsSync, openSync, closeSync, readFileSync } from 'node:fs';
import { spawn } from 'node:child_process';
import { join } from 'node:path';
import { gzipSync } from 'node:zlib';
import { zipSync } from 'fflate';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { gpxText, inventedBeat, windText } from './invented-beat.js';
import { buildProgram, drop, dropProgram, ended, filesBelow, fill, folder, run, start } from './run.js';

const LONG = process.env['LEGWORK_LONG'] === '1';
const TRACK = gpxText(inventedBeat());
const raceFile = (more = ''): string =>
  `race: Test\nzone: UTC\nboat: single-hander\nwind: [{ file: wind.csv, height_m: 3 }]\nboats: [{ name: Ann, track: ann.gpx }]\n${more}`;
let home: string;

beforeAll(async () => {
  await buildProgram();
  home = folder({ 'race.yaml': raceFile(), 'ann.gpx': TRACK, 'wind.csv': windText() });
});
afterAll(() => {
  drop(home);
  dropProgram();
});

const bytes = (text: string): Uint8Array => new TextEncoder().encode(text);

describe('standard output', () => {
  it.skipIf(!existsSync('/dev/full')).each([[['optimum']], [['debrief', 'race.yaml', '--json', '-']], [['--version']]])(
    'on a full disk, %j',
    async (args) => {
      const full = openSync('/dev/full', 'w');
      const plain = start(args, { cwd: home });
      // Only the arguments are taken from it: what it was started with cannot be told to write elsewhere.
      const [node, ...rest] = plain.spawnargs;
      plain.kill('SIGKILL');
      const child = spawn(node, rest, { cwd: home, stdio: ['ignore', full, 'pipe'] });
      let err = '';
      child.stderr!.setEncoding('utf8').on('data', (text: string) => (err += text));
      const code = await new Promise((resolve) => child.on('close', resolve));
      closeSync(full);
      expect(code).toBe(2);
      expect(err).toContain('standard output');
      expect(err).not.toMatch(/\n\s+at /);
    },
  );
});

describe('signals while the program works', () => {
  /** How long a run takes here and now: signals come at shares of it. [ms] */
  let whole: number;
  beforeAll(async () => {
    const began = performance.now();
    expect((await run(['debrief', '--json', '-'], { cwd: home })).code).toBe(0);
    whole = performance.now() - began;
  });
  const shares = (...usual: readonly number[]): readonly number[] => (LONG ? [0.1, 0.25, 0.4, 0.5, 0.6, 0.7, 0.8, 0.9, 1] : usual); // prettier-ignore

  it.each([
    ['SIGINT', 130],
    ['SIGTERM', 143],
    ['SIGHUP', 129],
  ] as const)('%s leaves all or nothing of every file, whenever it comes', async (signal, expected) => {
    for (const share of shares(0.4, 0.85)) {
      const cwd = folder({ 'race.yaml': raceFile(), 'ann.gpx': TRACK, 'wind.csv': windText() });
      const child = start(['debrief', '--json', 'r.json', '--csv', 't'], { cwd });
      const end = ended(child);
      await new Promise((resolve) => setTimeout(resolve, share * whole));
      child.kill(signal);
      const { code } = await end;
      // Null: it came before the program could hear; 0: after it was done.
      expect([expected, null, 0]).toContain(code);
      const left = filesBelow(cwd).filter((file) => !['race.yaml', 'ann.gpx', 'wind.csv'].includes(file));
      expect(left.filter((file) => file.includes('.tmp'))).toEqual([]);
      for (const file of left) expectWhole(file, readFileSync(join(cwd, file), 'utf8'));
      drop(cwd);
    }
  });
  it('killed outright it leaves every file it names whole', async () => {
    for (const share of shares(0.6, 0.75, 0.9)) {
      const cwd = folder({ 'race.yaml': raceFile(), 'ann.gpx': TRACK, 'wind.csv': windText() });
      const child = start(['debrief', '--json', 'r.json'], { cwd });
      const end = ended(child);
      await new Promise((resolve) => setTimeout(resolve, share * whole));
      child.kill('SIGKILL');
      await end;
      const left = filesBelow(cwd).filter((file) => file === 'r.json' || /\/[^.][^/]*\.html$/.test(file));
      for (const file of left) expectWhole(file, readFileSync(join(cwd, file), 'utf8'));
      drop(cwd);
    }
  });
});

function expectWhole(file: string, text: string): void {
  if (file.endsWith('.json')) expect(() => JSON.parse(text) as unknown).not.toThrow();
  else if (file.endsWith('.html')) expect(text.trimEnd().endsWith('</html>')).toBe(true);
  else expect(text.endsWith('\n')).toBe(true);
}

describe('archives', () => {
  const zipped = (name: string): Uint8Array => zipSync({ [name]: bytes(TRACK) });
  it.each([
    ['up.zip', '../../../evil.gpx'],
    ['root.zip', '/tmp/legwork-evil.gpx'],
    ['drive.zip', 'C:\\evil.gpx'],
  ])('%s: paths inside lead nowhere', async (file, inner) => {
    const cwd = folder({ [file]: Buffer.from(zipped(inner)), 'wind.csv': windText() });
    const { code } = await run(['debrief', file, '--wind', 'wind.csv', '--out', 'out.html', '--quiet'], { cwd });
    expect(code).toBe(0);
    expect(filesBelow(cwd)).toEqual([file, 'out.html', 'wind.csv'].sort());
    expect(existsSync('/tmp/legwork-evil.gpx')).toBe(false);
    drop(cwd);
  });

  /** As many blanks as a log has bytes after a year: 1000 times the size of its file. */
  const bomb = (): Uint8Array => gzipSync(bytes(`<gpx><trk><trkseg>${' '.repeat(150e6)}`), { level: 9 });
  it.each([
    ['an archive within an archive', 'a.zip', () => zipSync({ 'b.zip': zipped('c.gpx') }), /archive within an archive/],
    ['wrapped twice', 'a.gpx.gz', () => gzipSync(gzipSync(bytes(TRACK))), /archive within an archive/],
    ['an archive without files', 'a.zip', () => zipSync({}), /holds no file/],
    ['a bomb', 'a.gpx.gz', bomb, /times its size, which no log does/],
  ])('%s is refused in words', async (_, file, make, message) => {
    const cwd = folder({ [file]: Buffer.from(make()) });
    const { code, err } = await run(['debrief', file, '--wind', '215@12', '--quiet'], { cwd });
    expect(err).toMatch(message);
    expect(code).toBe(2);
    drop(cwd);
  });
});

/** Nine letters, nine times nine times ... the known harm of entities that name entities, in YAML's aliases. */
const LAUGHS = `a: &a [lol, lol, lol]\n${[...'bcdefghij']
  .map((name, k) => `${name}: &${name} [${Array(9).fill(`*${'abcdefghi'[k]}`).join(', ')}]\n`)
  .join('')}`;

describe('race files made to do harm', () => {
  it.each([
    ['aliases that multiply', LAUGHS, /aliases/],
    ['an alias within what it stands for', raceFile('exclude: &x [*x]\n'), /nested too deeply/],
    ['brackets without end', `race: ${'['.repeat(100_000)}`, /nested too deeply/],
    ['code', raceFile().replace('Test', '!!js/function "function () {}"'), /race\.yaml:1: Unresolved tag/],
    ['a prototype', '{"race":"x","__proto__":{"a":1},"boats":[]}', /unknown key `__proto__`/],
    ['a race file as a log', raceFile().replace('ann.gpx', 'race.yaml'), /race\.yaml/],
  ])('%s', async (_, text, message) => {
    const cwd = folder({ 'race.yaml': text, 'ann.gpx': TRACK, 'wind.csv': windText() });
    const { code, err } = await run(['debrief', '--quiet'], { cwd });
    expect(err).toMatch(message);
    expect(err).not.toMatch(/\n\s+at /);
    expect(code).toBe(2);
    drop(cwd);
  });

  it('names that are formulas, markup or paths stay names', async () => {
    const text = raceFile().replace('Test', '"../../<script>alert(1)</script>"').replace('Ann', '"=HYPERLINK(1)"');
    const cwd = folder({ 'race.yaml': text, 'ann.gpx': TRACK, 'wind.csv': windText() });
    const { code } = await run(['debrief', '--csv', 't', '--logbook', 'book', '--quiet'], { cwd });
    expect(code).toBe(0);
    const files = filesBelow(cwd);
    expect(files.filter((file) => file.includes('..') || file.includes('<'))).toEqual([]);
    const report = readFileSync(
      join(
        cwd,
        files.find((file) => file.endsWith('.html'))!,
      ),
      'utf8',
    );
    expect(report).not.toContain('<script>alert');
    expect(readFileSync(join(cwd, 't/legs.csv'), 'utf8').split('\n')[1].startsWith('=')).toBe(false);
    drop(cwd);
  });

  it('a race file in UTF-16 is read, in a folder with blanks and letters of any script', async () => {
    const cwd = folder();
    const text = `\uFEFF${raceFile().replace('ann.gpx', 'спор 競走 é.gpx')}`;
    fill(cwd, {
      'my races/Übung 1/race.yaml': Buffer.from(text, 'utf16le'),
      'my races/Übung 1/спор 競走 é.gpx': TRACK,
      'my races/Übung 1/wind.csv': windText(),
    });
    const { code, err } = await run(['debrief', 'my races/Übung 1/race.yaml', '--json', 'r é.json', '--quiet'], {
      cwd,
    });
    expect({ code, err }).toEqual({ code: 0, err: '' });
    expect(existsSync(join(cwd, 'r é.json'))).toBe(true);
    drop(cwd);
  });
});

interface Steady {
  readonly boats: readonly { readonly legs: readonly { readonly kind: string; readonly steady: Means | null }[] }[];
  readonly warnings: readonly { readonly code: string }[];
}
interface Means {
  readonly gamma_deg: { readonly value: number };
  readonly speed_kn: { readonly value: number };
}

async function sailed(files: Readonly<Record<string, string>>): Promise<{ means: Means; codes: string[] }> {
  const cwd = folder({ 'race.yaml': raceFile(), ...files });
  const { code, out, err } = await run(['debrief', '--json', '-'], { cwd });
  drop(cwd);
  expect({ code, err }).toEqual({ code: 0, err: '' });
  const { boats, warnings } = JSON.parse(out) as Steady;
  const means = boats[0].legs.find((leg) => leg.kind === 'upwind')?.steady;
  return { means: means!, codes: warnings.map((warning) => warning.code) };
}

type Fix = ReturnType<typeof inventedBeat>[number];
const moved = (change: (fix: Fix) => Partial<Fix>): string =>
  gpxText(inventedBeat().map((fix) => ({ ...fix, ...change(fix) })));

/** The beat is sailed 45 degrees off a wind from the north at five knots, by construction, wherever and whenever. */
function expectTheBeat({ gamma_deg, speed_kn }: Means): void {
  expect(Math.abs(gamma_deg.value - 45)).toBeLessThan(1);
  expect(Math.abs(speed_kn.value - 5)).toBeLessThan(0.05);
}

describe('places', () => {
  const perDegree = (lat: number): number => Math.cos((46.9 * Math.PI) / 180) / Math.cos((lat * Math.PI) / 180);
  it.each([
    ['across the date line, south', -17, 180],
    ['at latitude 80', 80, 20],
    ['across 0, 0', 0, 0],
  ])('%s', async (_, lat, lon) => {
    const track = moved((fix) => ({
      lat: lat + (fix.lat - 46.903),
      lon: ((lon + (fix.lon - 9.061) * perDegree(lat) + 540) % 360) - 180,
    }));
    const { means } = await sailed({ 'ann.gpx': track, 'wind.csv': windText() });
    expectTheBeat(means);
  });
});

describe('times', () => {
  const at = (iso: string): { track: string; wind: string; shift: number } => {
    const shift = Date.parse(iso) - Date.UTC(2026, 3, 18, 12);
    return { shift, track: moved((fix) => ({ time: fix.time + shift })), wind: windText(Date.parse(iso)) };
  };

  it('a leap second within the race', async () => {
    // 2016-12-31T23:59:60Z, IERS Bulletin C 52.
    const { track, wind } = at('2016-12-31T23:57:00Z');
    const stamped = track.replace('2017-01-01T00:00:00.000Z', '2016-12-31T23:59:60.000Z');
    expect(stamped).not.toBe(track);
    expectTheBeat((await sailed({ 'ann.gpx': stamped, 'wind.csv': wind })).means);
  });

  it.each([
    // Central European time changes at 01:00 UTC on the last Sundays of March and October (Directive 2000/84/EC).
    ['spring', '2026-03-29T00:57:00Z', 1],
    ['autumn', '2026-10-25T00:57:00Z', 2],
  ])('clocks that change within the race, in %s', async (_, iso, before) => {
    const { track, wind } = at(iso);
    const change = Date.parse(iso) + 180_000;
    const local = wind.replace(/^(\S+?)Z,/gm, (__, stamp: string) => {
      const time = Date.parse(`${stamp}Z`);
      const hours = time < change ? before : 3 - before;
      return `${new Date(time + hours * 3600_000).toISOString().slice(0, 19)},`;
    });
    const files = { 'race.yaml': raceFile().replace('zone: UTC', 'zone: Europe/Zurich'), 'ann.gpx': track };
    expectTheBeat((await sailed({ ...files, 'wind.csv': local })).means);
  });

  it('midnight within a log of sentences that carry no date', async () => {
    const { shift, wind } = at('2026-04-18T23:57:00Z');
    const sentence = (body: string): string => {
      const sum = [...body].reduce((x, letter) => x ^ letter.charCodeAt(0), 0);
      return `$${body}*${sum.toString(16).toUpperCase().padStart(2, '0')}\r\n`;
    };
    const minutes = (angle: number, width: number): string =>
      String(Math.floor(angle)).padStart(width, '0') + ((angle % 1) * 60).toFixed(6).padStart(9, '0');
    const log = inventedBeat().map(({ time, lat, lon }) => {
      const clock = new Date(time + shift).toISOString().slice(11, 19).replaceAll(':', '');
      return sentence(`GPGGA,${clock},${minutes(lat, 2)},N,${minutes(lon, 3)},E,1,08,1.0,400.0,M,,M,,`);
    });
    const race = raceFile().replace('ann.gpx', '{ file: ann.nmea, date: 2026-04-18 }');
    expectTheBeat((await sailed({ 'race.yaml': race, 'ann.nmea': log.join(''), 'wind.csv': wind })).means);
  });

  it('a receiver 1024 weeks early is told, with what to add', async () => {
    const { track, wind } = at('2006-09-02T12:00:00Z');
    expect((await sailed({ 'ann.gpx': track, 'wind.csv': wind })).codes).toContain('week-rollover');
    const apart = folder({ 'race.yaml': raceFile(), 'ann.gpx': track, 'wind.csv': windText() });
    const { code, err } = await run(['debrief', '--quiet'], { cwd: apart });
    expect(code).toBe(1);
    expect(err).toContain('619315200');
    drop(apart);
  });

  it('a wind log two hours off is told, with the shift that fits', async () => {
    const cwd = folder({ 'race.yaml': raceFile(), 'ann.gpx': TRACK, 'wind.csv': windText(Date.UTC(2026, 3, 18, 10)) });
    const { code, err } = await run(['debrief', '--quiet'], { cwd });
    expect(code).toBe(1);
    expect(err).toMatch(/moved by \+2:00 h|add 7200 s/);
    drop(cwd);
  });

  it('a clock that is set within the race is told', async () => {
    const late = moved((fix) => ({ time: fix.time + (fix.time >= Date.UTC(2026, 3, 18, 12, 5) ? 40_000 : 0) }));
    const { codes } = await sailed({ 'ann.gpx': late, 'wind.csv': windText(Date.UTC(2026, 3, 18, 12), 540) });
    expect(codes).toContain('clock-steps');
  });
});
