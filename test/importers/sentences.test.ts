import { describe, expect, test } from 'vitest';
import { TextFields } from '../../src/importers/fields.js';
import { sentencesOf, stampOf } from '../../src/importers/framing.js';
import { addressOf, clockOf, type Reading } from '../../src/importers/sentences.js';
import { checkBooks, codesOf, importText } from './check-import.js';

/** A knot is 1852 m in an hour. */
const knots = (value: number): unknown => expect.closeTo((value * 1852) / 3600, 12);

const ascii = (text: string): Uint8Array => new TextEncoder().encode(text);

function read(line: string): Reading {
  const [sentence] = sentencesOf(ascii(line));
  expect(sentence?.check).toBe('good');
  return addressOf(sentence!.address).decode!(sentence!.fields());
}

const decode = (formatter: string, fields: readonly string[]): Reading | undefined =>
  addressOf(`GP${formatter}`).decode?.(new TextFields(fields));

const valuesOf = (line: string): unknown => {
  const reading = read(line);
  return reading.is === 'values' ? reading.values : reading;
};

/**
 * Published sentences: from the sentence tables and test logs of gpsd (www/NMEA.adoc and test/daemon), and the example
 * that every introduction to NMEA 0183 prints. The last seven were made by hand with a checksum of their own.
 */
const PUBLISHED = `
$GPRMC,123519,A,4807.038,N,01131.000,E,022.4,084.4,230394,003.1,W*6A
$GNRMC,001031.00,A,4404.13993,N,12118.86023,W,0.146,,100117,,,A*7B
$GNRMC,000653.00,A,4404.12994,N,12118.84613,W,0.052,,090624,,,A,V*08
$GPGGA,123519,4807.038,N,01131.000,E,1,08,0.9,545.4,M,46.9,M,,*47
$GNGGA,001043.00,4404.14036,N,12118.85961,W,1,12,0.98,1113.0,M,-21.3,M*47
$GPVTG,220.86,T,,M,2.550,N,4.724,K,A*34
$GPHDT,274.07,T*03
$APHDM,218.634,M*39
$HCHDG,98.3,0.0,E,12.6,W*57
$SDHDG,229.8,,,1.3,E*36
$SDVHW,231.3,T,229.9,M,6.6,N,12.3,K*71
$WIMWV,214.8,R,0.1,K,A*28
$WIMWV,320,R,15.0,M,A*0B
$WIMWV,57.5,R,13.0,N,A*26
$WIMWV,96.6,T,11.2,N,A*2E
$WIMWD,302.4,T,289.6,M,10.5,N,5.4,M*6F
$GPZDA,160012.71,11,03,2004,-1,00*7D
$WIVWR,045.0,L,12.6,N,6.5,M,23.3,K*4C
$WIVWR,028.5,R,10.2,N,5.2,M,18.9,K*5C
$WIMWV,331.5,R,5.2,M,A*23
$WIMWV,331.5,R,5.2,M,V*34
$IIHDM,123.4,M*26
$GPRMC,,V,,,,,,,,,,N*53`
  .trim()
  .split('\n');

describe('checksums', () => {
  test.each(PUBLISHED)('good: %s', (line) => {
    expect(sentencesOf(ascii(line)).map((sentence) => sentence?.check)).toEqual(['good']);
    const lower = line.replace(/\*..$/, (sum) => sum.toLowerCase());
    expect(sentencesOf(ascii(lower))[0]?.check).toBe('good');
  });

  test('a published sentence with blanks put in has a bad one', () => {
    // gpsd's document prints it; the exclusive or of its bytes is 41, not 64.
    const [sentence] = sentencesOf(ascii('$GPRMC,170047.00,A,4121.23302,N,00201.31654,W,2.703, ,200417, , ,A*64'));
    expect(sentence?.check).toBe('bad');
  });

  test('every change of one letter is seen', () => {
    const line = PUBLISHED[0];
    for (let at = 1; at < line.length - 3; at++) {
      const changed = line.slice(0, at) + String.fromCharCode(line.charCodeAt(at) ^ 1) + line.slice(at + 1);
      if (changed.includes('$', 1) || changed.includes('*', 1) !== line.includes('*', 1)) continue;
      expect(sentencesOf(ascii(changed))[0]?.check ?? 'bad', changed).not.toBe('good');
    }
  });

  test('absent is told apart from bad', () => {
    expect(sentencesOf(ascii('$GPHDT,274.07,T'))[0]?.check).toBe('missing');
    expect(sentencesOf(ascii('$GPHDT,274.07,T*'))[0]?.check).toBe('missing');
    expect(sentencesOf(ascii('$GPHDT,274.07,T*0'))[0]?.check).toBe('bad');
    expect(sentencesOf(ascii('$GPHDT,274.07,T*04'))[0]?.check).toBe('bad');
  });

  test('two sentences that lost the line end between them are two; a cut one before a whole one costs itself', () => {
    expect(sentencesOf(ascii(PUBLISHED[0] + PUBLISHED[6])).map((one) => one?.address)).toEqual(['GPRMC', 'GPHDT']);
    expect(sentencesOf(ascii('$GPRMC,1235' + PUBLISHED[6])).map((one) => [one?.address, one?.check])).toEqual([
      ['GPHDT', 'good'],
    ]);
    expect(sentencesOf(ascii('no sentence'))).toEqual([undefined]);
  });
});

describe('fields', () => {
  test('RMC: 48 deg 07.038 min, 22.4 knots, 23 March 1994, variation 3.1 west', () => {
    const reading = read(PUBLISHED[0]);
    expect(reading).toMatchObject({
      is: 'fix',
      clock: 12 * 3600 + 35 * 60 + 19,
      day: Date.UTC(1994, 2, 23) / 86400e3,
      simulated: false,
    });
    if (reading.is !== 'fix') return;
    expect(reading.position.lat).toBeCloseTo(48 + 7.038 / 60, 12);
    expect(reading.position.lon).toBeCloseTo(11 + 31 / 60, 12);
    expect(reading.values.sog).toEqual(knots(22.4));
    expect(reading.values).toMatchObject({ cog: 84.4, variation: -3.1 });
  });

  test('RMC without a course, and of version 4.1', () => {
    expect(read(PUBLISHED[1])).toMatchObject({ is: 'fix', values: { cog: NaN, variation: NaN } });
    expect(read(PUBLISHED[2])).toMatchObject({ is: 'fix', day: Date.UTC(2024, 5, 9) / 86400e3 });
  });

  test('GGA, whole and short', () => {
    expect(read(PUBLISHED[3])).toMatchObject({ is: 'fix', clock: 45319 });
    expect(read(PUBLISHED[4])).toMatchObject({ is: 'fix', clock: 10 * 60 + 43 });
  });

  test('VTG, lettered and in the old form of four fields', () => {
    expect(valuesOf(PUBLISHED[5])).toEqual({ cog: 220.86, sog: knots(2.55) });
    // The old form: degrees true, degrees magnetic, knots, km/h.
    expect(decode('VTG', ['220.86', '217.0', '2.550', '4.724'])).toEqual({
      is: 'values',
      values: { cog: 220.86, sog: knots(2.55) },
    });
  });

  test('headings: true, magnetic, with deviation and variation', () => {
    expect(valuesOf(PUBLISHED[6])).toEqual({ heading: 274.07 });
    expect(valuesOf(PUBLISHED[7])).toEqual({ headingMagnetic: 218.634 });
    expect(valuesOf(PUBLISHED[8])).toEqual({ headingMagnetic: 98.3, variation: -12.6 });
    expect(valuesOf(PUBLISHED[9])).toEqual({ headingMagnetic: 229.8, variation: 1.3 });
    // Heading true = sensor + deviation (E +) + variation (E +): the deviation is applied, the variation kept beside.
    expect(decode('HDG', ['359.0', '2.5', 'E', '1.0', 'W'])).toEqual({
      is: 'values',
      values: { headingMagnetic: 1.5, variation: -1 },
    });
  });

  test('VHW', () => {
    expect(valuesOf(PUBLISHED[10])).toEqual({ heading: 231.3, headingMagnetic: 229.9, stw: knots(6.6) });
  });

  test('MWV: relative wind is signed, in each unit; the device’s own true wind is an angle only', () => {
    expect(valuesOf(PUBLISHED[11])).toEqual({
      awa: expect.closeTo(-145.2, 9) as number,
      aws: expect.closeTo(0.1 / 3.6, 12) as number,
    });
    expect(valuesOf(PUBLISHED[12])).toEqual({ awa: -40, aws: 15 });
    expect(valuesOf(PUBLISHED[13])).toEqual({ awa: 57.5, aws: knots(13) });
    expect(valuesOf(PUBLISHED[14])).toEqual({ twa: expect.closeTo(96.6, 9) as number });
    expect(read(PUBLISHED[20])).toMatchObject({ is: 'fault' });
  });

  test('MWD and VWR: port is negative', () => {
    expect(valuesOf(PUBLISHED[15])).toEqual({ twd: 302.4, twdMagnetic: 289.6, tws: knots(10.5) });
    expect(valuesOf(PUBLISHED[17])).toEqual({ awa: -45, aws: knots(12.6) });
    expect(valuesOf(PUBLISHED[18])).toEqual({ awa: 28.5, aws: knots(10.2) });
  });

  test('ZDA', () => {
    expect(read(PUBLISHED[16])).toEqual({
      is: 'clock',
      clock: 16 * 3600 + 12.71,
      day: Date.UTC(2004, 2, 11) / 86400e3,
    });
  });

  test('no fix, empty fields, foreign sentences', () => {
    expect(read(PUBLISHED[22])).toMatchObject({ is: 'fault', reason: 'no fix' });
    expect(decode('HDT', ['', 'T'])).toEqual({ is: 'nothing' });
    expect(decode('GSV', ['1', '1'])).toBeUndefined();
    expect(addressOf('PXRMC')).toEqual({ talker: 'PX', formatter: 'PXRMC', decode: undefined });
    expect(decode('GGA', ['120000', '4860.000', 'N', '01131.000', 'E', '1'])).toMatchObject({ is: 'fault' });
    expect(decode('GGA', ['120000', '4807.038', 'X', '01131.000', 'E', '1'])).toMatchObject({ is: 'fault' });
  });

  test('times of day', () => {
    const fields = new TextFields(['235960', '123519.25', '1235', '240000', '126000']);
    expect([0, 1, 2, 3, 4].map((k) => clockOf(fields, k))).toEqual([86400, 45319.25, NaN, NaN, NaN]);
  });
});

describe('what stands before a sentence', () => {
  test.each([
    ['1776513900.25 ', 1776513900.25],
    ['1776513900250;D;', 1776513900.25],
    ['2026-04-18T12:05:00.25Z ', 1776513900.25],
    ['2026-04-18T14:05:00.25+02:00\t', 1776513900.25],
    ['[2026/04/18 12:05:00.25] ', 1776513900.25],
    ['2026-04-18T12:05:00.25Z,', 1776513900.25],
    ['\\s:log,c:1776513900*00\\', NaN],
    ['garbage', NaN],
  ])('%s', (prefix, seconds) => {
    expect(stampOf(prefix).seconds).toBe(seconds);
  });

  test('a tag block with its checksum', () => {
    // The checksum is that of a sentence: the exclusive or of what stands between.
    const body = 's:log,c:1776513900';
    const sum = [...body].reduce((x, letter) => x ^ letter.charCodeAt(0), 0).toString(16);
    expect(stampOf(`\\${body}*${sum.padStart(2, '0')}\\`).seconds).toBe(1776513900);
  });

  test('what is longer than any stamp is none', () => {
    expect(stampOf(`1776513900.25${' '.repeat(500)}`).seconds).toBe(1776513900.25);
    expect(stampOf(`1776513900.25${';'.repeat(500)}`).seconds).toBeNaN();
  });

  test('a time of day alone has no day', () => {
    expect(stampOf('14:05:00.5 ')).toEqual({ seconds: 50700.5, zoned: false, dayless: true });
  });
});

describe('dates', () => {
  const sum = (body: string): string =>
    `$${body}*${[...body]
      .reduce((x, letter) => x ^ letter.charCodeAt(0), 0)
      .toString(16)
      .padStart(2, '0')}`;
  const gga = (clock: string, minutes: string): string =>
    sum(`GPGGA,${clock},46${minutes},N,00903.66,E,1,09,0.9,412,M,47,M,,`);
  const rmc = (clock: string, minutes: string, day: string): string =>
    sum(`GPRMC,${clock},A,46${minutes},N,00903.66,E,5.0,310.0,${day},,,A`);

  test('a date that comes late holds for what came before it, and over midnight', async () => {
    const log = await importText(
      [
        gga('235958', '54.72'),
        gga('235959', '54.73'),
        gga('000000', '54.74'),
        rmc('000001', '54.75', '190426'),
        gga('000002', '54.76'),
      ].join('\n'),
    );
    checkBooks(log);
    expect(Array.from(log.recording.time)).toEqual([-2, -1, 0, 1, 2].map((s) => Date.UTC(2026, 3, 19) / 1000 + s));
  });

  test('the day given holds where the log has none, and not where it has', async () => {
    const none = await importText([gga('120500', '54.72'), gga('120501', '54.73')].join('\n'), { date: '2026-04-18' });
    expect(none.recording.time[0]).toBe(Date.UTC(2026, 3, 18, 12, 5) / 1000);
    const own = await importText([rmc('120500', '54.72', '180426'), rmc('120501', '54.73', '180426')].join('\n'), {
      date: '2020-01-01',
    });
    expect(own.recording.time[0]).toBe(Date.UTC(2026, 3, 18, 12, 5) / 1000);
  });

  test('a log without a date is refused, with what to do', async () => {
    await expect(importText(gga('120500', '54.72'))).rejects.toMatchObject({
      name: 'UserError',
      exitCode: 2,
      suggestion: expect.stringContaining('--date') as string,
    });
  });

  test('dates 1024 weeks early are told with the day they would be, and moved when the user gives it', async () => {
    // 1024 weeks = 7168 days: 2006-09-02 + 7168 days = 2026-04-18 (counted with the host's calendar).
    const text = [rmc('120500', '54.72', '020906'), rmc('120501', '54.73', '020906')].join('\n');
    const early = [rmc('120500', '54.72', '020601'), rmc('120501', '54.73', '020601')].join('\n');
    const told = await importText(early);
    expect(codesOf(told)).toContain('week-rollover');
    expect(told.issues.find(({ code }) => code === 'week-rollover')?.message).toContain('2021-01-16');
    const moved = await importText(text, { date: '2026-04-18' });
    expect(moved.recording.time[0]).toBe(Date.UTC(2026, 3, 18, 12, 5) / 1000);
    expect(codesOf(moved)).toContain('week-rollover');
  });
});
