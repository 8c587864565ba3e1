import fc from 'fast-check';
import { IANAZone } from 'luxon';
import { describe, expect, it } from 'vitest';
import { isGenericName } from '../../src/files/boat-names.js';
import { editDistance, nearestKey } from '../../src/files/nearest-key.js';
import { parsePosition } from '../../src/files/position.js';
import { raceFromLogs } from '../../src/files/race-from-logs.js';
import type { LogGlance } from '../../src/files/race-from-logs.js';
import { dayOf, firstAfter, onDay, parseTime } from '../../src/files/times.js';

describe('positions', () => {
  it.each([
    ['46.912, 9.061', 46.912, 9.061],
    ['-33.85 151.25', -33.85, 151.25],
    ['46 54.72 N 9 03.66 E', 46.912, 9.061],
    ['46°54.72′N, 9°03.66′E', 46.912, 9.061],
    ['46°54\'43.2"N 9°03\'39.6"E', 46.912, 9.061],
    ['N46 54.72 E9 03.66', 46.912, 9.061],
    ['9 03.66 E 46 54.72 N', 46.912, 9.061],
    ['33 51 S 151 15 W', -33.85, -151.25],
    ['0 30 S 180 E', -0.5, -180],
  ])('%s', (text, lat, lon) => {
    const position = parsePosition(text);
    expect(position!.lat).toBeCloseTo(lat, 10);
    expect(position!.lon).toBeCloseTo(lon, 10);
  });

  it.each(['', 'here', '46 61 N 9 0 E', '46.5 30 N 9 E', '91 N 9 E', '46 N 9 N', '46 N 181 E', '-46 N 9 E', '1 2 3'])(
    'not a position: "%s"',
    (text) => expect(parsePosition(text)).toBeNull(),
  );

  it('degrees and minutes give back what was written', () => {
    const angle = (most: number) => fc.double({ min: -most, max: most, noNaN: true });
    fc.assert(
      fc.property(angle(90), angle(179.999), (lat, lon) => {
        const part = (value: number, plus: string, minus: string): string => {
          const size = Math.abs(value);
          const minutes = (size - Math.floor(size)) * 60;
          return `${Math.floor(size)} ${minutes.toFixed(9)} ${value < 0 ? minus : plus}`;
        };
        const text = `${part(lat, 'N', 'S')} ${part(lon, 'E', 'W')}`;
        fc.pre(!text.includes('60.0'));
        const read = parsePosition(text);
        expect(read!.lat).toBeCloseTo(lat, 9);
        expect(read!.lon).toBeCloseTo(lon, 9);
      }),
    );
  });

  it('never throws', () => {
    fc.assert(fc.property(fc.string(), (text) => void parsePosition(text)));
  });
});

describe('times', () => {
  it('agree with the platform on every ISO 8601 instant', () => {
    fc.assert(
      fc.property(
        fc.date({ min: new Date('1990-01-01'), max: new Date('2099-12-31'), noInvalidDate: true }),
        fc.integer({ min: -12 * 4, max: 14 * 4 }),
        (date, quarters) => {
          const minutes = quarters * 15;
          const shifted = new Date(date.getTime() + minutes * 60_000).toISOString().slice(0, -1);
          const size = Math.abs(minutes);
          const pad = (n: number) => String(n).padStart(2, '0');
          const offset = `${minutes < 0 ? '-' : '+'}${pad(Math.floor(size / 60))}:${pad(size % 60)}`;
          const read = parseTime(shifted + offset);
          expect(read!.kind).toBe('instant');
          expect(read!.kind === 'instant' && read!.seconds).toBeCloseTo(date.getTime() / 1000, 6);
        },
      ),
    );
  });

  it('a day and a time of day are told as the calendar of the zone shows them', () => {
    // Intl.DateTimeFormat is the independent reader of the zone here.
    const zones = ['Europe/Zurich', 'America/New_York', 'Asia/Kathmandu', 'Pacific/Auckland', 'UTC'];
    fc.assert(
      fc.property(
        fc.constantFrom(...zones),
        fc.integer({ min: 0, max: 366 }),
        fc.integer({ min: 4 * 3600, max: 86_399 }),
        (zone, day, ofDay) => {
          const date = new Date(Date.UTC(2026, 0, 1 + day)).toISOString().slice(0, 10);
          const shown = new Intl.DateTimeFormat('sv-SE', {
            timeZone: zone,
            dateStyle: 'short',
            timeStyle: 'medium',
          }).format(onDay(date, ofDay, zone) * 1000);
          const clock = new Date(ofDay * 1000).toISOString().slice(11, 19);
          expect(shown).toBe(`${date} ${clock}`);
        },
      ),
    );
  });

  it('the first such time after an instant is within a day (23 to 25 hours where the clocks change)', () => {
    fc.assert(
      fc.property(fc.integer({ min: 0, max: 2e9 }), fc.integer({ min: 0, max: 86_399 }), (from, ofDay) => {
        const at = firstAfter(from, ofDay, 'Europe/Zurich');
        expect(at).toBeGreaterThanOrEqual(from);
        expect(at - from).toBeLessThanOrEqual(25 * 3600);
      }),
    );
  });

  it.each(['24:00', '14:60', '14', 'noon', '2026-02-30 14:05', '2026-04-18', '14:05+25:00', ''])(
    'not a time: "%s"',
    (text) => expect(parseTime(text)).toBeNull(),
  );

  it('a day is that of the zone', () => {
    expect(dayOf(Date.parse('2026-04-18T23:30:00Z') / 1000, 'Europe/Zurich')).toBe('2026-04-19');
    expect(IANAZone.isValidZone('Europe/Zurich')).toBe(true);
  });
});

describe('the nearest key', () => {
  it('counts single changes and swaps of neighbours', () => {
    // Worked by hand: one swap, one insertion, "kitten" to "sitting" is 3 (Levenshtein's classroom example, from memory).
    expect(editDistance('raec', 'race')).toBe(1);
    expect(editDistance('hight', 'height')).toBe(1);
    expect(editDistance('kitten', 'sitting')).toBe(3);
    expect(nearestKey('Height-M', ['file', 'height_m'])).toBe('height_m');
  });
});

describe('generic names', () => {
  it.each([
    'Track',
    'track 1',
    'ACTIVE LOG',
    'Current Track',
    'Morning Sail',
    '2026-04-18 14:05:00',
    '20260418',
    'Untitled',
  ])('%s names no boat', (name) => expect(isGenericName(name)).toBe(true));
  it.each(['Linnet', '42', '007', 'Sailfish', 'Daybreak', '1e3', 'Log Cabin'])('%s names one', (name) =>
    expect(isGenericName(name)).toBe(false),
  );
});

describe('a race from bare logs', () => {
  const glance = (file: string, more: Partial<LogGlance> = {}): LogGlance => ({
    file,
    inner: '',
    hasPosition: true,
    hasTrueWind: false,
    hasApparentWind: false,
    firstTime: 0,
    ...more,
  });
  it('takes tracks as boats and a log of wind without positions as a station, and says so', () => {
    const draft = raceFromLogs([
      glance('corrie.gpx'),
      glance('w.csv', { hasPosition: false, hasTrueWind: true }),
      glance('linnet.csv', { inner: 'Linnet II' }),
    ]);
    expect(draft.content).toEqual({
      boats: [
        { name: 'corrie', track: 'corrie.gpx' },
        { name: 'Linnet II', track: 'linnet.csv' },
      ],
      wind: ['w.csv'],
    });
    expect(draft.name).toBe('corrie and Linnet II');
    expect(draft.issues.map((issue) => [issue.code, issue.file])).toEqual([['log-kind-assumed', 'w.csv']]);
  });
  it("takes apparent wind as the only boat's, never as a station's", () => {
    const mast = glance('mast.csv', { hasPosition: false, hasApparentWind: true });
    expect(raceFromLogs([glance('a.gpx'), mast]).content.boats[0].instruments).toBe('mast.csv');
    expect(() => raceFromLogs([glance('a.gpx'), glance('b.gpx'), mast])).toThrow(/more than one boat/);
  });
  it('needs a position somewhere', () => {
    expect(() => raceFromLogs([glance('w.csv', { hasPosition: false, hasTrueWind: true })])).toThrow(/no position/);
  });
});
