import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { isReversed, longestOrdered } from '../../src/importers/order.js';
import { importText, checkBooks } from './check-import.js';

/** The longest non-decreasing subsequence by trying every subset: slow, and surely right. */
function longestByTrying(values: number[]): number {
  let best = 0;
  for (let mask = 0; mask < 1 << values.length; mask++) {
    const some = values.filter((_, k) => mask & (1 << k));
    if (some.length > best && some.every((value, k) => k === 0 || value >= some[k - 1])) best = some.length;
  }
  return best;
}

describe('order', () => {
  test('as many records are kept as can be', () => {
    fc.assert(
      fc.property(fc.array(fc.integer({ min: 0, max: 8 }), { maxLength: 10 }), (values) => {
        const kept = Array.from(longestOrdered(Float64Array.from(values)), (k) => values[k]);
        expect(kept.every((value, k) => k === 0 || value >= kept[k - 1])).toBe(true);
        expect(kept.length).toBe(longestByTrying(values));
      }),
      { seed: 5, numRuns: 200 },
    );
  });

  test('a log is newest first only when nearly all of it goes back', () => {
    expect(isReversed(Float64Array.from([5, 4, 3, 2, 1]))).toBe(true);
    expect(isReversed(Float64Array.from([5, 4]))).toBe(false);
    expect(isReversed(Float64Array.from([1, 2, 3, 2, 1]))).toBe(false);
  });
});

const sum = (body: string): string =>
  `$${body}*${[...body]
    .reduce((x, letter) => x ^ letter.charCodeAt(0), 0)
    .toString(16)
    .padStart(2, '0')}`;
const rmc = (seconds: number): string => {
  const clock = new Date(seconds * 1000).toISOString().slice(11, 19).replaceAll(':', '');
  return sum(`GPRMC,${clock},A,46${(54 + seconds / 1e4).toFixed(4)},N,00903.66,E,5.0,310.0,180426,,,A`);
};
const hdm = (degrees: number): string => sum(`IIHDM,${degrees},M`);
const day = Date.UTC(2026, 3, 18) / 1000;

/** Times of the headings, in seconds of the day. Where a record should stand is worked out by hand. */
async function headings(lines: string[]): Promise<number[]> {
  const log = await importText(lines.join('\n'));
  checkBooks(log);
  const { time, channels } = log.recording;
  return [...time.keys()]
    .filter((row) => !Number.isNaN(channels.headingMagnetic![row]))
    .map((row) => Number((time[row] - day).toFixed(6)));
}

describe('records without a time', () => {
  test('are spread evenly between the stamps around them', async () => {
    expect(await headings([rmc(100), hdm(1), hdm(2), hdm(3), rmc(101), hdm(4), rmc(103)])).toEqual([
      100.25, 100.5, 100.75, 102,
    ]);
  });

  test('before the first and after the last stamp go on at the log’s own rate', async () => {
    expect(await headings([hdm(1), rmc(100), hdm(2), rmc(101), hdm(3), rmc(102), hdm(4), hdm(5)])).toEqual([
      99.5, 100.5, 101.5, 102.5, 103,
    ]);
  });

  test('are not spread over a pause of the logger', async () => {
    const cycle = (from: number): string[] => [0, 1, 2].flatMap((s) => [rmc(from + s), hdm(s)]);
    expect(await headings([...cycle(100), ...cycle(4000)])).toEqual([100.5, 101.5, 102.5, 4000.5, 4001.5, 4002.5]);
  });

  test('far before the first stamp have no place', async () => {
    const log = await importText(
      [...Array.from({ length: 200 }, (_, k) => hdm(k)), rmc(100), hdm(1), rmc(101), hdm(2), rmc(102)].join('\n'),
    );
    checkBooks(log);
    // Half a second each: 120 fit into a minute.
    expect(log.rejected).toEqual([{ reason: 'no time, and no time stamp near it', count: 80, first_line: 1 }]);
  });

  test('have no place between stamps that are a hair apart', async () => {
    // At 1.8e9 s neighbouring doubles are 2.4e-7 s apart (IEEE 754, 53 bits).
    const gga = (clock: string): string =>
      sum(`GPGGA,${clock},4654.72,N,00903.6${clock.slice(-1)},E,1,09,0.9,412,M,47,M,,`);
    const log = await importText(
      [
        rmc(100),
        gga('000141.0000001'),
        ...Array.from({ length: 9 }, (_, k) => hdm(k)),
        gga('000141.0000006'),
        rmc(103),
      ].join('\n'),
    );
    checkBooks(log);
    expect(log.rejected.map(({ reason }) => reason)).toContain('no room between the time stamps around it');
  });
});
