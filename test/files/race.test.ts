import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { readRaces, overridden, needsDay, unnamedTracks, logFiles } from '../../src/files/race.js';
import { resolveRace } from '../../src/files/race-resolve.js';
import type { LogFacts } from '../../src/files/race-resolve.js';
import { UserError } from '../../src/recording/issues.js';

const NOTHING: LogFacts = { firstTime: null, innerNames: new Map() };
const FULL = `
$schema: ./race.schema.json
notes: sunny, gusty after two
x-club: { any: thing }
race: Ferrow Lake spring series, race 2
start: 2026-04-18T14:05:00+02:00
finish: 14:52
zone: Europe/Zurich
boat: single-hander
wind:
  - file: committee.csv
    at: [46.912, 9.061]
    height_m: 3
    accuracy: { dir_deg: 3, speed_percent: 4 }
    offset_deg: -5
    clock_s: 2.5
    zone: UTC
    x-tripod: short
  - { twd_deg: 215, tws_kn: 12, se_deg: 10, se_kn: 2 }
  - readings: [[14:00, 215, 12], [14:20, 222, 13]]
current: { set_deg: 90, drift_kn: 0.3 }
marks:
  windward: [46.921, 9.055]
  leeward: [[46.912, 9.061], "46 54.72 N 9 03.72 E"]
runs: [[18:05, 18:09]]
exclude: [{ from: 14:20, to: 14:25, why: rope round the rudder }]
boats:
  - name: Corrie
    sailor: Ada
    track: corrie.gpx
    instruments: corrie-mast.csv
    crew_mass_kg: 78
  - name: 007
    boat: boats/mine.yaml
    track:
      - { file: a.csv, to: 14:30 }
      - { file: b.csv, from: 14:30, zone: Europe/London, clock_s: -1, columns: { Speed: "sog_kn:m/s" } }
`;

/** UTC seconds by the platform's own ISO 8601 reader. */
const utc = (iso: string): number => Date.parse(iso) / 1000;

async function race(text: string, facts: Partial<LogFacts> = {}) {
  const [draft] = await readRaces(text, 'race.yaml');
  return resolveRace(draft, { ...NOTHING, ...facts });
}

async function complaint(text: string, facts: Partial<LogFacts> = {}): Promise<string> {
  try {
    await race(text, facts);
  } catch (error) {
    expect(error).toBeInstanceOf(UserError);
    expect((error as UserError).exitCode).toBe(2);
    return `${(error as UserError).message}\n${(error as UserError).suggestion ?? ''}`.trim();
  }
  throw new Error('no complaint');
}

describe('a race file with every key', () => {
  it('is understood: times in the zone of the race, units as inside', async () => {
    const { race: r, issues } = await race(FULL);
    expect(issues).toEqual([]);
    expect(r.name).toBe('Ferrow Lake spring series, race 2');
    expect(r.start).toBe(utc('2026-04-18T12:05:00Z'));
    expect(r.finish).toBe(utc('2026-04-18T12:52:00Z'));
    expect(r.zone).toBe('Europe/Zurich');
    expect(r.notes).toBe('sunny, gusty after two');
    expect(r.boatAssumed).toBe(false);
    expect(r.runs).toEqual([{ from: utc('2026-04-18T16:05:00Z'), to: utc('2026-04-18T16:09:00Z') }]);
    expect(r.exclude).toEqual([
      { from: utc('2026-04-18T12:20:00Z'), to: utc('2026-04-18T12:25:00Z'), why: 'rope round the rudder' },
    ]);
  });

  it('reads the three kinds of wind', async () => {
    const [station, steady, readings] = (await race(FULL)).race.wind;
    expect(station).toEqual({
      kind: 'log',
      file: 'committee.csv',
      zone: 'UTC',
      clockS: 2.5,
      at: { lat: 46.912, lon: 9.061 },
      heightM: 3,
      accuracyDir: 3,
      accuracySpeed: 0.04,
      offset: -5,
    });
    // A knot is 1852 m in an hour (SI brochure, 8th edition, table 8).
    expect(steady).toMatchObject({ kind: 'by-hand', seDir: 10, readings: [{ time: null, twd: 215 }] });
    expect(steady.kind === 'by-hand' && steady.seSpeed).toBeCloseTo((2 * 1852) / 3600, 12);
    expect(readings).toMatchObject({
      readings: [
        { time: utc('2026-04-18T12:00:00Z'), twd: 215 },
        { time: utc('2026-04-18T12:20:00Z'), twd: 222 },
      ],
    });
  });

  it('reads marks, current and boats', async () => {
    const { race: r } = await race(FULL);
    expect(r.marks.windward).toEqual([{ lat: 46.921, lon: 9.055 }]);
    expect(r.marks.leeward).toHaveLength(2);
    // 46 degrees 54.72 minutes is 46.912 degrees; 3.72 minutes are 0.062 degrees.
    expect(r.marks.leeward![1].lat).toBeCloseTo(46.912, 10);
    expect(r.marks.leeward![1].lon).toBeCloseTo(9.062, 10);
    expect(r.current).toHaveLength(1);
    expect(r.current![0].drift).toBeCloseTo((0.3 * 1852) / 3600, 12);
    const [corrie, seven] = r.boats;
    expect(corrie).toEqual({
      name: 'Corrie',
      sailor: 'Ada',
      track: [{ file: 'corrie.gpx', zone: 'Europe/Zurich', clockS: 0 }],
      instruments: [{ file: 'corrie-mast.csv', zone: 'Europe/Zurich', clockS: 0 }],
      boat: 'single-hander',
      crewMassKg: 78,
    });
    expect(seven.name).toBe('007');
    expect(seven.sailor).toBe('007');
    expect(seven.boat).toBe('boats/mine.yaml');
    expect(seven.track).toEqual([
      { file: 'a.csv', zone: 'Europe/Zurich', to: utc('2026-04-18T12:30:00Z'), clockS: 0 },
      {
        file: 'b.csv',
        zone: 'Europe/London',
        columns: { Speed: 'sog_kn:m/s' },
        from: utc('2026-04-18T12:30:00Z'),
        clockS: -1,
      },
    ]);
  });

  it('names its logs, wind last', async () => {
    const [draft] = await readRaces(FULL, 'race.yaml');
    expect(logFiles(draft)).toEqual(['corrie.gpx', 'corrie-mast.csv', 'a.csv', 'b.csv', 'committee.csv']);
  });

  it('is the same race written as JSON', async () => {
    const { parse } = await import('yaml');
    const data = parse(FULL) as { boats: { name: unknown }[] };
    data.boats[1].name = '007';
    expect(await race(JSON.stringify(data, null, '\t'))).toEqual(await race(FULL));
  });
});

const LEAST = 'boats: [{ name: A, track: a.gpx }]\n';

describe('times', () => {
  const at = async (start: string, first: string, zone = 'Europe/Zurich') =>
    (await race(`zone: ${zone}\nstart: ${start}\n${LEAST}`, { firstTime: utc(first) })).race.start;

  it('a bare time of day is on the day of the log, in the zone of the race', async () => {
    expect(await at('14:05', '2026-04-18T11:40:00Z')).toBe(utc('2026-04-18T12:05:00Z'));
    expect(await at('14:05:30.5', '2026-01-18T11:40:00Z')).toBe(utc('2026-01-18T13:05:30.500Z'));
  });
  it('holds for a logger started after the gun, and over midnight', async () => {
    expect(await at('14:05', '2026-04-18T12:20:00Z')).toBe(utc('2026-04-18T12:05:00Z'));
    expect(await at('00:30', '2026-04-18T21:30:00Z')).toBe(utc('2026-04-18T22:30:00Z'));
    expect(await at('23:55', '2026-04-17T22:05:00Z')).toBe(utc('2026-04-17T21:55:00Z'));
  });
  it('a finish is after the start', async () => {
    const text = `zone: UTC\nstart: 2026-04-18 23:30\nfinish: 00:10\n${LEAST}`;
    expect((await race(text)).race.finish).toBe(utc('2026-04-19T00:10:00Z'));
  });
  it('a date in the file beats the log', async () => {
    const text = `zone: UTC\ndate: 2026-05-01\nstart: 10:00\n${LEAST}`;
    expect((await race(text, { firstTime: 0 })).race.start).toBe(utc('2026-05-01T10:00:00Z'));
  });
  it('a practice run in the morning of an afternoon race is in that morning', async () => {
    const text = `start: 2026-04-18T14:05:00Z\nruns: [[9:05, 9:10]]\nzone: UTC\n${LEAST}`;
    expect((await race(text)).race.runs[0].from).toBe(utc('2026-04-18T09:05:00Z'));
  });
  it('says when a zone was assumed, and not when none was needed', async () => {
    expect((await race(`start: 2026-04-18 14:05\n${LEAST}`)).issues.map((i) => i.code)).toEqual(['zone-assumed']);
    expect((await race(`start: 2026-04-18T14:05Z\n${LEAST}`)).issues).toEqual([]);
  });
  it('says when no log tells the day', async () => {
    expect(await complaint(`zone: UTC\nstart: 14:05\n${LEAST}`)).toBe(
      'race.yaml:2: `start` says 14:05, and no log tells on which day.\n' +
        'Write the date too, or give `date: YYYY-MM-DD` (on the command line --date).',
    );
  });
  it('knows whether it leans on the day of a log', async () => {
    const leans = async (text: string) => needsDay((await readRaces(text + LEAST, 'r'))[0]);
    expect(await leans('start: 14:05\n')).toBe(true);
    expect(await leans('start: 14:05\ndate: 2026-04-18\n')).toBe(false);
    expect(await leans('start: 2026-04-18T14:05Z\nfinish: 14:52\n')).toBe(false);
    expect(await leans('runs: [[14:05, 14:09]]\n')).toBe(true);
    expect(await leans('')).toBe(false);
  });
});

describe('several races in one recording', () => {
  it('gives one each, and leaves the later ones out of the earlier', async () => {
    const text = `zone: UTC\nraces:\n - { race: 1, start: 2026-04-18 14:05 }\n - { race: two, start: 2026-04-18 15:05, finish: 15:40 }\n${LEAST}`;
    const drafts = await readRaces(text, 'race.yaml');
    const races = drafts.map((draft) => resolveRace(draft, NOTHING).race);
    expect(races.map((r) => r.name)).toEqual(['1', 'two']);
    expect(races[0].exclude[0].from).toBe(races[1].start);
    expect(races[1].exclude).toEqual([]);
    expect(races[1].finish).toBe(utc('2026-04-18T15:40:00Z'));
  });
  it('do not go with `start` beside them', async () => {
    expect(await complaint(`races: [{ race: 1 }]\nstart: 2026-04-18T14:05Z\n${LEAST}`)).toContain(
      'race.yaml:2: `start` stands beside `races`.',
    );
  });
});

describe('mistakes are told with file, line and field', () => {
  it.each([
    ['an unknown key', `raec: x\n${LEAST}`, 'race.yaml:1: unknown key `raec` here. The nearest known one is `race`.'],
    [
      'an unknown key of a wind log',
      `wind:\n  - file: w.csv\n    hight_m: 3\n${LEAST}`,
      'race.yaml:3: unknown key `hight_m` in `wind[1]`. The nearest known one is `height_m`.',
    ],
    [
      'an unknown key of a wind by hand',
      `wind: { twd: 215, tws_kn: 12 }\n${LEAST}`,
      'unknown key `twd` in `wind`. The nearest known one is `twd_deg`.',
    ],
    [
      'an unknown key of a boat',
      'boats:\n - name: A\n   track: a.gpx\n   crew_mass: 78\n',
      'race.yaml:4: unknown key `crew_mass` in `boats[1]`. The nearest known one is `crew_mass_kg`.',
    ],
    [
      'an unknown mark',
      `marks: { windwrad: [1, 2] }\n${LEAST}`,
      'unknown key `windwrad` in `marks`. The nearest known one is `windward`.',
    ],
    ['an unknown key of a log', 'boats: [{ track: [{ file: a, form: 14:00 }] }]', '`form`'],
    ['a time that is none', `start: yesterday\n${LEAST}`, 'race.yaml:1: `start` is not a time'],
    ['a zone that is none', `zone: Europe/Zurch\n${LEAST}`, 'race.yaml:1: `zone` is not a time zone'],
    ['a position out of range', `marks: { windward: [96.9, 9.0] }\n${LEAST}`, '`marks.windward[1]` is 96.9'],
    ['a position that is none', `marks: { windward: over there }\n${LEAST}`, '`marks.windward` is not a position'],
    [
      'a number that is text',
      `wind: [{ file: w.csv, height_m: three }]\n${LEAST}`,
      '`wind[1].height_m` is not a number',
    ],
    ['a boat without a track', 'boats: [{ name: A }]\n', 'race.yaml:1: `boats[1].track` is missing.'],
    ['no boats', 'race: x\n', '`boats` is missing'],
    ['two boats of one name', 'boats:\n - { name: A, track: a }\n - { name: A, track: b }\n', 'race.yaml:3: two boats'],
    ['a key given twice', `race: a\nrace: b\n${LEAST}`, 'race.yaml:2: Map keys must be unique'],
    ['bad indentation', 'boats:\n  - name: A\n track: a\n', 'race.yaml:3:'],
    ['an unknown tag', `race: !!js/function x\n${LEAST}`, 'race.yaml:1: Unresolved tag'],
    [
      'a finish before the start',
      `start: 2026-04-18T14:05Z\nfinish: 2026-04-18T13:05Z\n${LEAST}`,
      'race.yaml:2: `finish`',
    ],
    ['nothing at all', '', 'race.yaml: empty.'],
    ['a list', '[1, 2]', 'race.yaml: not a race file.'],
    ['one of our results', '{"format": "legwork-result", "version": 1}', 'a legwork-result file'],
  ])('%s', async (_, text, expected) => {
    expect(await complaint(text)).toContain(expected);
  });
  it('an alias bomb is refused', async () => {
    const text = ['a0: &a0 [x, x, x, x, x, x, x, x, x, x]'];
    for (let i = 1; i < 9; i++)
      text.push(
        `a${i}: &a${i} [${Array(10)
          .fill(`*a${i - 1}`)
          .join(', ')}]`,
      );
    expect(await complaint(text.join('\n'))).toContain('aliases');
  });
  it('endless nesting is refused', async () => {
    expect(await complaint('['.repeat(100_000))).toContain('race.yaml');
  });
});

describe('names', () => {
  const names = async (boats: string, inner: [string, string][]) => {
    const { race: r, issues } = await race(`boats: ${boats}`, { innerNames: new Map(inner) });
    return [r.boats.map((b) => b.name), issues.map((i) => `${i.code} ${i.file}`)];
  };
  it('come from the file, else from inside the track, else from the file name', async () => {
    expect(
      await names('[{ name: 1e3, track: a.gpx }, { track: b.gpx }, { track: c.gpx.gz }]', [['b.gpx', 'Linnet']]),
    ).toEqual([['1e3', 'Linnet', 'c'], []]);
  });
  it('equal or generic inner names give way to file names, with a warning', async () => {
    expect(
      await names('[{ track: a.gpx }, { track: b.gpx }, { track: c.gpx }, { track: d.gpx }]', [
        ['a.gpx', 'Session'],
        ['b.gpx', 'Linnet'],
        ['c.gpx', 'Linnet'],
        ['d.gpx', '2026-04-18 14:05'],
      ]),
    ).toEqual([
      ['a', 'b', 'c', 'd'],
      ['name-clash a.gpx', 'name-clash b.gpx', 'name-clash c.gpx', 'name-clash d.gpx'],
    ]);
  });
  it('equal file names are told apart by their folders', async () => {
    expect((await names('[{ track: ann/track.gpx }, { track: ben/track.gpx }]', []))[0]).toEqual([
      'ann track',
      'ben track',
    ]);
  });
  it('where to look for one', async () => {
    const [draft] = await readRaces('boats: [{ name: A, track: a }, { track: [b, c] }]', 'r');
    expect(unnamedTracks(draft)).toEqual(['b']);
  });
});

describe('the command line over the file', () => {
  it('replaces what the file says and adds wind', async () => {
    const [draft] = await readRaces(FULL, 'race.yaml');
    const { race: r } = resolveRace(
      overridden(draft, {
        boat: 'day-keelboat',
        start: '2026-04-18T15:00:00+02:00',
        finish: '15:30',
        current: { set_deg: 180, drift_kn: 1 },
        wind: ['extra.csv', { twd_deg: 200, tws_kn: 9 }],
        columns: { Speed: 'sog_kn' },
      }),
      NOTHING,
    );
    expect(r.boats.map((b) => b.boat)).toEqual(['day-keelboat', 'day-keelboat']);
    expect([r.start, r.finish]).toEqual([utc('2026-04-18T13:00Z'), utc('2026-04-18T13:30Z')]);
    expect(r.wind.map((w) => (w.kind === 'log' ? w.file : w.readings.length))).toEqual([
      'committee.csv',
      1,
      2,
      'extra.csv',
      1,
    ]);
    expect(r.boats[0].track[0].columns).toEqual({ Speed: 'sog_kn' });
    // What a log says for itself comes first.
    expect(r.boats[1].track[1].columns).toEqual({ Speed: 'sog_kn:m/s' });
    expect(r.current![0].set).toBe(180);
  });
});

describe('whatever is written', () => {
  it('is either a race or a mistake told with its file, never a fault', async () => {
    const piece = fc.oneof(
      fc.constantFrom(
        '- ',
        ': ',
        '[',
        ']',
        '{',
        '}',
        '\n',
        '  ',
        '&a ',
        '*a ',
        '!!x ',
        '"',
        "'",
        '|',
        '~',
        '\t',
        '\u0000',
        '\u2028',
      ),
      fc.constantFrom('races:', 'start: 14:05', 'wind:', 'null', '1e999', '.nan', '-0', '24:00', 'x-y: 1', '<<: *a'),
      fc.string({ maxLength: 8 }),
    );
    const change = fc.tuple(fc.nat(FULL.length), fc.nat(30), piece);
    await fc.assert(
      fc.asyncProperty(fc.array(change, { minLength: 1, maxLength: 4 }), async (changes) => {
        let text = FULL;
        for (const [at, length, put] of changes) text = text.slice(0, at) + put + text.slice(at + length);
        try {
          const { race: r } = await race(text, { firstTime: 1_776_500_000 });
          expect(JSON.stringify(r)).not.toContain('NaN');
          for (const time of [r.start, r.finish]) if (time !== null) expect(Number.isFinite(time)).toBe(true);
        } catch (error) {
          if (!(error instanceof UserError)) throw error;
          expect(error.message).toContain('race.yaml');
        }
      }),
      { numRuns: 300 },
    );
  });
});
