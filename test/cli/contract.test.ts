import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { gpxText, inventedBeat, windText } from './invented-beat.js';
import { buildProgram, drop, dropProgram, fill, folder, run } from './run.js';

/** What a result is looked at for here. */
interface Told {
  readonly race: { readonly start: string | null };
  readonly wind: {
    readonly sources: string[];
    readonly tws_kn: { readonly value: number; readonly basis: string } | null;
  };
  readonly boats: {
    readonly name: string;
    readonly legs: {
      readonly steady: { readonly tws_kn: { readonly basis: string } | null } | null;
      readonly optimum: unknown;
      readonly ceiling_vmg_kn: unknown;
      readonly efficiency: { readonly value: number } | null;
      readonly ledger: unknown;
      readonly notes: string[];
    }[];
  }[];
  readonly warnings: { readonly code: string; readonly message: string; readonly file?: string }[];
}

const NOON = Date.UTC(2026, 3, 18, 12);
let home: string;

const every10s = (cells: string): string[] =>
  Array.from({ length: 48 }, (_, i) => `${new Date(NOON + 10_000 * i).toISOString()},${cells}`);
/** The same fixes as a table, with its own headers and clock. */
const table = (headers: string, time: (ms: number) => string): string =>
  [headers, ...inventedBeat().map((fix) => `${time(fix.time)},${fix.lat},${fix.lon}`)].join('\n');
/** Twelve hours ahead of UTC, as Auckland is in the southern winter (IANA time zone data base). */
const auckland = (ms: number): string => new Date(ms + 12 * 3600_000).toISOString().slice(0, 19);

beforeAll(async () => {
  await buildProgram();
  home = folder({
    'ann.gpx': gpxText(inventedBeat()),
    'ben-late.gpx': gpxText(inventedBeat(60).map((fix) => ({ ...fix, time: fix.time + 3600_000 }))),
    'wind.csv': windText(),
    'next-day.csv': windText(NOON + 86_400_000),
    'quarter.csv': windText(NOON + 900_000),
    'vane.csv': `time,twd_deg\n${every10s('0').join('\n')}\n`,
    'cups.csv': `time,tws_kn\n${every10s('10').join('\n')}\n`,
    'still.csv': `time,twd_deg,tws_kn\n${every10s('0,0').concat(every10s('1,0')).sort().join('\n')}\n`,
    'motor.gpx': gpxText(
      Array.from({ length: 480 }, (_, i) => ({ time: NOON + 1000 * i, lat: 46.9 + 2.3e-5 * i, lon: 9.06 })),
    ),
    'local.csv': table('time,lat,lon', auckland),
    'odd.csv': table('zeit,a,b', (ms) => new Date(ms).toISOString()),
  });
});
afterAll(() => {
  drop(home);
  dropProgram();
});

/** The same command gives the same: once is enough. */
const known = new Map<string, Promise<Told>>();
function debriefed(...args: string[]): Promise<Told> {
  const key = args.join('\n');
  const told = known.get(key) ?? ran(args);
  known.set(key, told);
  return told;
}

async function ran(args: readonly string[]): Promise<Told> {
  const { code, out, err } = await run(['debrief', ...args, '--json', '-'], { cwd: home });
  expect({ code, err }).toEqual({ code: 0, err: '' });
  return JSON.parse(out) as Told;
}
const codes = ({ warnings }: Told): string[] => warnings.map(({ code }) => code);

describe('wind that is not there', () => {
  it('no wind log: nobody is judged, and the warning says so', async () => {
    const told = await debriefed('ann.gpx');
    expect(codes(told)).toContain('wind-unknown');
    const [leg] = told.boats[0].legs;
    expect(leg).toMatchObject({ optimum: null, ceiling_vmg_kn: null, efficiency: null, ledger: null });
    expect(leg.notes).toContain('wind speed unknown');
  });
  it('a vane without cups: the same', async () => {
    const told = await debriefed('ann.gpx', '--wind', 'vane.csv');
    expect(told.wind).toMatchObject({ sources: ['station'], tws_kn: { basis: 'inferred' } });
    expect(codes(told)).toContain('wind-unknown');
    expect(codes(told)).not.toContain('wind-height-unknown');
  });
  it('known wind: no such warning', async () => {
    const told = await debriefed('ann.gpx', '--wind', 'wind.csv');
    expect(codes(told)).not.toContain('wind-unknown');
    expect(codes(told)).not.toContain('wind-no-overlap');
    expect(told.boats[0].legs[0].efficiency).not.toBeNull();
  });
  it('one of two logs is of another day: it is named', async () => {
    const told = await debriefed('ann.gpx', '--wind', 'wind.csv', '--wind', 'next-day.csv');
    expect(told.warnings).toContainEqual(expect.objectContaining({ code: 'wind-no-overlap', file: 'next-day.csv' }));
  });
  it('one of two boats sailed at another time: it is named', async () => {
    const told = await debriefed('ann.gpx', 'ben-late.gpx', '--wind', 'wind.csv');
    expect(told.warnings).toContainEqual(expect.objectContaining({ code: 'wind-no-overlap', file: 'ben-late.gpx' }));
    expect(told.warnings).toContainEqual(expect.objectContaining({ code: 'zone-suspect', file: 'ben-late.gpx' }));
  });
  it('a log a quarter of an hour late: the shift that fits is told', async () => {
    const { code, err } = await run(['debrief', 'ann.gpx', '--wind', 'quarter.csv'], { cwd: home });
    expect(code).toBe(1);
    expect(err).toMatch(/quarter\.csv: It fits ann\.gpx only when its clock is moved by -0:15 h\./);
  });
  it('a track without a zone: the zone is asked for', async () => {
    const { code, err } = await run(['debrief', 'local.csv', '--wind', 'wind.csv'], { cwd: home });
    expect(code).toBe(1);
    expect(err).toMatch(/local\.csv: 480 time.* carry no zone/);
    expect(err).not.toContain('..');
  });
  it('a log of wind speed alone', async () => {
    const { code, err } = await run(['debrief', 'ann.gpx', '--wind', 'cups.csv'], { cwd: home });
    expect(code).toBe(2);
    expect(err).toContain('cups.csv: a wind speed but no wind direction');
  });
});

describe('a boat faster than its boat file', () => {
  it('by far: it says so', async () => {
    // Five knots at 45 degrees to six knots of wind: no boat of the built-in kind does that.
    expect(codes(await debriefed('ann.gpx', '--wind', '0@6'))).toContain('model-slow');
  });
  it('by less than the error of the wind: it does not', async () => {
    const told = await debriefed('ann.gpx', '--wind', 'wind.csv');
    expect(Math.abs(told.boats[0].legs[0].efficiency!.value - 1)).toBeLessThan(0.03);
    expect(codes(told)).not.toContain('model-slow');
  });
});

describe('what a log is not used for is said', () => {
  it('cups that read 0 while boats sail, even when the vane hardly moves', async () => {
    const told = await debriefed('ann.gpx', '--wind', 'still.csv');
    expect(told.warnings).toContainEqual(expect.objectContaining({ code: 'wind-dead', file: 'still.csv' }));
    expect(codes(told)).toContain('wind-unknown');
    expect(told.wind.tws_kn).toMatchObject({ basis: 'inferred' });
  });
  it('a short log of motoring straight into the wind, beside a boat that sailed', async () => {
    const told = await debriefed('ann.gpx', 'motor.gpx', '--wind', 'wind.csv');
    expect(told.warnings).toContainEqual(expect.objectContaining({ code: 'under-engine', file: 'motor.gpx' }));
    expect(told.boats.map(({ legs }) => legs.length)).toEqual([1, 0]);
  });
  it('the same alone: nothing to analyse', async () => {
    const { code, err } = await run(['debrief', 'motor.gpx', '--wind', 'wind.csv'], { cwd: home });
    expect(code).toBe(1);
    expect(err).toMatch(/^legwork: motor\.gpx: nothing here was sailed\. .*under engine/);
  });
});

describe('a key in the wrong place', () => {
  it.each([
    ['crew_mass: 78', '`crew_mass_kg` stands under `boats`'],
    ['height_m: 3', '`height_m` stands under `wind`'],
    ['curent: []', 'The nearest known one is `current`.'],
  ])('%s', async (line, hint) => {
    fill(home, { 'wrong.yaml': `wind: wind.csv\nboats: [{ track: ann.gpx }]\n${line}\n` });
    const { code, err } = await run(['debrief', 'wrong.yaml'], { cwd: home });
    expect(code).toBe(2);
    expect(err).toContain(hint);
  });
});

describe('help', () => {
  it('tells a default once, as it is written', async () => {
    const { out } = await run(['optimum', '--help'], { cwd: home });
    expect(out.match(/default: [^s)][^)]*/g)).toEqual(['default: 4:24:2']);
  });
});

describe('wind by hand', () => {
  it('is assumed wherever it stands', async () => {
    const told = await debriefed('ann.gpx', '--wind', '0@10');
    expect(told.wind.tws_kn).toMatchObject({ value: expect.closeTo(10, 6) as number, basis: 'assumed' });
    expect(told.boats[0].legs[0].steady!.tws_kn!.basis).toBe('assumed');
  });
  it('gives its speed to a vane without cups', async () => {
    const told = await debriefed('ann.gpx', '--wind', 'vane.csv', '--wind', '90@11');
    expect(told.wind).toMatchObject({ sources: ['station', 'by-hand'], twd_deg: { basis: 'measured' } });
    expect(told.wind.tws_kn).toMatchObject({ value: expect.closeTo(11, 6) as number, basis: 'assumed' });
    expect(told.boats[0].legs[0].efficiency).not.toBeNull();
  });
  it('gives way to a log, and says so', async () => {
    const told = await debriefed('ann.gpx', '--wind', 'wind.csv', '--wind', '20@18');
    expect(told.wind).toMatchObject({ sources: ['station'], tws_kn: { basis: 'measured' } });
    expect(codes(told)).toContain('wind-unused');
  });
  it('more than one: the first, and it says so', async () => {
    const told = await debriefed('ann.gpx', '--wind', '5@10', '--wind', '355@14');
    expect(told.wind.tws_kn!.value).toBeCloseTo(10, 6);
    expect(codes(told)).toContain('wind-unused');
  });
});

describe('a log that says for itself how it is read', () => {
  const raced = async (track: string, more = ''): Promise<Told> => {
    fill(home, {
      'own.yaml': `race: Own\nboat: single-hander\nzone: UTC\nwind: wind.csv\n${more}boats: [{ name: 007, track: ${track} }]\n`,
    });
    return ran(['own.yaml']);
  };
  it('by its zone: the day of a bare start is the right one', async () => {
    const told = await raced('{ file: local.csv, zone: Pacific/Auckland }', 'start: 12:01\n');
    expect(told.race.start).toBe('2026-04-18T12:01:00.000Z');
    expect(told.boats[0].name).toBe('007');
  });
  it('by its columns', async () => {
    const told = await raced('{ file: odd.csv, columns: { zeit: time, a: lat, b: lon } }', 'start: 12:01\n');
    expect(told.race.start).toBe('2026-04-18T12:01:00.000Z');
  });
});
