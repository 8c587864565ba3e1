import fc from 'fast-check';
import { DateTime } from 'luxon';
import { describe, expect, test } from 'vitest';
import { readAngle, readDecimal } from '../../src/importers/decimals.js';
import { orderOf, readDate, readOddTime, readTimeOfDay } from '../../src/importers/table-clock.js';
import { carriesZone, daysFromCivil, fromUnix, readIso } from '../../src/importers/times.js';
import { createZoneClock } from '../../src/importers/zone.js';

const days = fc.date({
  min: new Date('1970-01-01T00:00:00Z'),
  max: new Date('2099-12-31T23:59:59Z'),
  noInvalidDate: true,
});

describe('ISO 8601', () => {
  test('agrees with the host on UTC times to the millisecond', () => {
    fc.assert(
      fc.property(days, (date) => {
        expect(readIso(date.toISOString())).toBeCloseTo(date.getTime() / 1000, 6);
      }),
      { seed: 1, numRuns: 500 },
    );
  });

  test.each([
    '2024-02-29T23:59:59.5Z',
    '2026-04-18T14:05:00+02:00',
    '2026-04-18T14:05:00-0930',
    '2026-04-18 14:05:00Z',
    '2026-04-18T14:05Z',
  ])('agrees with an independent library: %s', (text) => {
    expect(readIso(text)).toBe(DateTime.fromISO(text.replace(' ', 'T'), { setZone: true }).toMillis() / 1000);
  });

  test('keeps fractions below a millisecond', () => {
    expect(readIso(`2026-04-18T12:05:00${' '.repeat(60_000)}Z`)).toBe(Date.UTC(2026, 3, 18, 12, 5) / 1000);
    expect(readIso('2026-04-18T12:05:00.123456Z')).toBeCloseTo(Date.UTC(2026, 3, 18, 12, 5) / 1000 + 0.123456, 6);
  });

  test('a leap second is the first instant of the next minute, as Unix time has it', () => {
    // The leap second of 2016-12-31, IERS Bulletin C 52.
    expect(readIso('2016-12-31T23:59:60Z')).toBe(Date.UTC(2017, 0, 1) / 1000);
  });

  test.each([
    '2026-02-29T00:00:00Z',
    '2026-13-01T00:00:00Z',
    '2026-04-31T00:00:00Z',
    '2026-04-18T24:01:00Z',
    '2026-04-18T12:60:00Z',
    '2026-04-18T12:05:61Z',
    '2026-04-18T12:05:00+2:00',
    '2026-04-18T12:05:00 PM',
    '2026-4-18T12:05:00Z',
    '',
    'noon',
    '2026-04-18',
  ])('does not guess: %s', (text) => {
    expect(readIso(text)).toBeNaN();
  });

  test('knows whether a zone is written', () => {
    expect(['2026-04-18T14:05:00Z', '2026-04-18T14:05+02', '2026-04-18T14:05:00.5-02:30'].map(carriesZone)).toEqual([
      true,
      true,
      true,
    ]);
    expect(['2026-04-18T14:05:00', '2026-04-18T14:05', '2026-04-18 14:05:00.25'].map(carriesZone)).toEqual([
      false,
      false,
      false,
    ]);
  });
});

test('days from civil: the published check values of the algorithm, and the host', () => {
  // chrono-Compatible Low-Level Date Algorithms: 1970-01-01 is 0; 2000-03-01 is 11017 (719468 + 11017 = 730485).
  expect(daysFromCivil(1970, 1, 1)).toBe(0);
  expect(daysFromCivil(2000, 3, 1)).toBe(11017);
  expect(daysFromCivil(1900, 2, 29)).toBeNaN();
  for (let day = 0; day < 60000; day += 37) {
    const date = new Date(day * 86400e3);
    expect(daysFromCivil(date.getUTCFullYear(), date.getUTCMonth() + 1, date.getUTCDate())).toBe(day);
  }
});

test('Unix time in seconds, milli-, micro- and nanoseconds', () => {
  const seconds = Date.UTC(2026, 3, 18, 12, 5) / 1000;
  expect([1, 1e3, 1e6, 1e9].map((factor) => fromUnix(seconds * factor))).toEqual([seconds, seconds, seconds, seconds]);
  expect(fromUnix(42)).toBeNaN();
  expect(fromUnix(NaN)).toBeNaN();
});

describe('dates and times of tables', () => {
  test.each([
    ['18.04.2026', 'day-first', '2026-04-18'],
    ['04/18/2026', 'month-first', '2026-04-18'],
    ['18/4/26', 'day-first', '2026-04-18'],
    ['2026/4/18', 'day-first', '2026-04-18'],
    ['20260418', 'day-first', '2026-04-18'],
  ] as const)('%s (%s)', (text, order, iso) => {
    expect(readDate(text, order) * 86400e3).toBe(Date.parse(iso));
  });

  test('a date that does not exist is none', () => {
    expect(readDate('31/04/2026', 'day-first')).toBeNaN();
    expect(readDate('18/04/2026', 'month-first')).toBeNaN();
  });

  test.each([
    ['2:05:03 PM', 14 * 3600 + 303],
    ['12:00 AM', 0],
    ['12:00:00.5 pm', 43200.5],
    ['140503', 14 * 3600 + 303],
    ['9:07', 9 * 3600 + 420],
  ])('%s', (text, seconds) => {
    expect(readTimeOfDay(text)).toBe(seconds);
  });

  test('13 PM, 25:00 and 12:61 are no times of day', () => {
    expect(['13:00 PM', '25:00', '12:61'].map(readTimeOfDay)).toEqual([NaN, NaN, NaN]);
    // Longer than any time: not looked into.
    expect(readTimeOfDay(`12:05${' '.repeat(100)}PM`)).toBeNaN();
  });

  test('compact and parted forms', () => {
    expect(readOddTime('20260418T140503Z', 'day-first')).toBe(Date.UTC(2026, 3, 18, 14, 5, 3) / 1000);
    expect(readOddTime('18/04/2026 2:05:03 PM', 'day-first')).toBe(Date.UTC(2026, 3, 18, 14, 5, 3) / 1000);
  });

  test('the order of day and month is seen from a day above twelve', () => {
    expect(orderOf(['04/05/2026', '04/18/2026'])).toBe('month-first');
    expect(orderOf(['04/05/2026', '18/04/2026'])).toBe('day-first');
    expect(orderOf(['04.05.2026'])).toBe('day-first');
    expect(orderOf(['04/05/2026'])).toBeUndefined();
  });
});

describe('local time', () => {
  const zones = ['Europe/Zurich', 'America/St_Johns', 'Australia/Lord_Howe', 'Asia/Kathmandu', 'Pacific/Apia', 'UTC'];

  test.each(zones)('%s agrees with an independent library wherever the local time is not ambiguous', (zone) => {
    const clock = createZoneClock(zone);
    fc.assert(
      fc.property(days, (date) => {
        const utc = Math.floor(date.getTime() / 1000);
        const here = DateTime.fromSeconds(utc, { zone });
        fc.pre(here.getPossibleOffsets().length === 1);
        expect(clock.toUtc(utc + here.offset * 60)).toBe(utc);
      }),
      { seed: 2, numRuns: 200 },
    );
  });

  test('the hour that is repeated in autumn goes on, not back', () => {
    // Zurich 2026-10-25: 03:00 summer time becomes 02:00. Directive 2000/84/EC: last Sunday of October, 01:00 UTC.
    const clock = createZoneClock('Europe/Zurich');
    const local = Date.UTC(2026, 9, 25, 2, 30) / 1000;
    expect(clock.toUtc(local)).toBe(Date.UTC(2026, 9, 25, 0, 30) / 1000);
    expect(clock.toUtc(local, Date.UTC(2026, 9, 25, 0, 59) / 1000)).toBe(Date.UTC(2026, 9, 25, 1, 30) / 1000);
  });

  test('an hour that is skipped in spring is moved on', () => {
    // Zurich 2026-03-29: 02:00 becomes 03:00 at 01:00 UTC.
    const local = Date.UTC(2026, 2, 29, 2, 30) / 1000;
    expect(createZoneClock('Europe/Zurich').toUtc(local)).toBe(Date.UTC(2026, 2, 29, 1, 30) / 1000);
  });

  test('a zone that does not exist is refused with a suggestion', () => {
    expect(() => createZoneClock('Mars/Olympus')).toThrow("There is no time zone 'Mars/Olympus'.");
  });
});

describe('numbers', () => {
  test('agrees with the host to the last bit', () => {
    fc.assert(
      fc.property(fc.integer({ min: -(10 ** 9), max: 10 ** 9 }), fc.integer({ min: 0, max: 9 }), (digits, places) => {
        const text = (digits / 10 ** places).toFixed(places);
        expect(readDecimal(text)).toBe(Number(text));
      }),
      { seed: 3, numRuns: 1000 },
    );
  });

  test.each([
    ['1e3', 1000],
    ['12,5', 12.5],
    [' 5.25 ', 5.25],
    ['+.5', 0.5],
    ['3.', 3],
    ['-0', -0],
    ['1.2345678901234567890', 1.2345678901234567],
  ])('%s', (text, value) => {
    expect(readDecimal(text)).toBe(value);
  });

  test.each(['', ' ', '.', '-', '0x10', 'Infinity', '1e999', '1,234,5', '1.2.3', 'NaN', '5 kn'])(
    'not a number: "%s"',
    (text) => {
      expect(readDecimal(text)).toBeNaN();
    },
  );

  test.each([
    ['46 54.72 N', 46.912],
    ["9°03.66'E", 9.061],
    ['46°54\'43.2"N', 46.912],
    ['S 33 51.5', -33.858333333333334],
    ['46.912°', 46.912],
    ['-46.912', -46.912],
    ['33.5W', -33.5],
  ])('position %s', (text, value) => {
    // Minutes and seconds are sixtieths: worked by hand, 54.72 / 60 = 0.912.
    expect(readAngle(text)).toBeCloseTo(value, 12);
  });

  test('minutes of sixty are no position', () => {
    expect(readAngle('46 60.0 N')).toBeNaN();
  });
});
