import { describe, expect, test } from 'vitest';
import { readHeader } from '../../src/importers/columns.js';
import { checkBooks, codesOf, importText } from './check-import.js';

const KNOT = 1852 / 3600;

/** Headers as people write them: common practice, no source. Meaning and unit as a reader of them would say. */
describe('headers', () => {
  test.each([
    ['time', 'time', null],
    ['time_utc', 'time', null],
    ['Time (UTC)', 'time', null],
    ['Timestamp', 'time', null],
    ['lat', 'lat', null],
    ['Latitude (°)', 'lat', 'deg'],
    ['Longitude [deg]', 'lon', 'deg'],
    ['lng', 'lon', null],
    ['Länge', 'lon', null],
    ['sog_kn', 'sog', 'kn'],
    ['SOG [kts]', 'sog', 'kn'],
    ['Speed (m/s)', 'sog', 'm/s'],
    ['Speed, km/h', 'sog', 'km/h'],
    ['speedOverGround', 'sog', null],
    ['GPS Speed mph', 'sog', 'mph'],
    ['Geschwindigkeit über Grund (kn)', 'sog', 'kn'],
    ['cog_deg', 'cog', 'deg'],
    ['COG (°T)', 'cog', 'deg'],
    ['Course over ground', 'cog', null],
    ['cog_magnetic', null, null],
    ['hdg_deg', 'headingMagnetic', 'deg'],
    ['Heading', 'headingMagnetic', null],
    ['hdg_mag_deg', 'headingMagnetic', 'deg'],
    ['hdg_true_deg', 'heading', 'deg'],
    ['True Heading', 'heading', null],
    ['Heading (°T)', 'heading', 'deg'],
    ['HDT', 'heading', null],
    ['stw_kn', 'stw', 'kn'],
    ['Boat Speed (kn)', 'stw', 'kn'],
    ['Speed through water', 'stw', null],
    ['heel_deg', 'heel', 'deg'],
    ['Roll', 'heel', null],
    ['variation_deg', 'variation', 'deg'],
    ['awa_deg', 'awa', 'deg'],
    ['AWA (rad)', 'awa', 'rad'],
    ['Apparent Wind Angle', 'awa', null],
    ['aws_kn', 'aws', 'kn'],
    ['Apparent wind speed [m/s]', 'aws', 'm/s'],
    ['twd_deg', 'twd', 'deg'],
    ['wind dir', 'twd', null],
    ['WindDirection', 'twd', null],
    ['wind_dir_true_deg', 'twd', 'deg'],
    ['wind_dir_sensor_deg', 'twd', 'deg'],
    ['TWD (°M)', 'twdMagnetic', 'deg'],
    ['Windrichtung', 'twd', null],
    ['tws_kn', 'tws', 'kn'],
    ['wind_speed_ms', 'tws', 'm/s'],
    ['Wind speed in m/s', 'tws', 'm/s'],
    ['windSpeedMs', 'tws', 'm/s'],
    ['Windgeschwindigkeit [m/s]', 'tws', 'm/s'],
    ['vitesse du vent', 'tws', null],
    ['twa_deg', 'twa', 'deg'],
    ['N/S', 'latSide', null],
    ['gust_ms', null, null],
    ['qc_speed', null, null],
    ['n', null, null],
    ['Battery', null, null],
    ['', null, null],
  ])('%s', (header, meaning, unit) => {
    const read = readHeader(header);
    expect([read.meaning, read.unit?.name ?? null]).toEqual([meaning, unit]);
  });
});

describe('times', () => {
  const rows = (...times: string[]): string =>
    ['time,twd_deg,tws_kn', ...times.map((time, k) => `${time},21${k},12`)].join('\n');

  test('local times of a zone, and UTC when the header says so', async () => {
    const local = await importText(rows('2026-04-18 14:05:00', '2026-04-18 14:06:00'), { zone: 'Europe/Zurich' });
    expect(local.recording.time[0]).toBe(Date.UTC(2026, 3, 18, 12, 5) / 1000);
    expect(local.issues).toEqual([]);
    const utc = await importText(rows('2026-04-18 14:05:00').replace('time', 'time_utc'), { zone: 'Europe/Zurich' });
    expect(utc.recording.time[0]).toBe(Date.UTC(2026, 3, 18, 14, 5) / 1000);
  });

  test('times of day need a day, and go over midnight', async () => {
    const text = rows('23:59:59', '00:00:01');
    await expect(importText(text)).rejects.toMatchObject({
      exitCode: 2,
      suggestion: expect.stringContaining('--date') as string,
    });
    const log = await importText(text, { date: '2026-04-18', zone: 'UTC' });
    expect(Array.from(log.recording.time)).toEqual([-1, 1].map((s) => Date.UTC(2026, 3, 19) / 1000 + s));
  });

  test('dates that may be day or month first are told; a day above twelve settles it', async () => {
    expect(codesOf(await importText(rows('04/05/2026 12:00:00', '04/05/2026 12:01:00')))).toContain(
      'date-order-assumed',
    );
    const settled = await importText(rows('04/05/2026 12:00:00', '04/18/2026 12:01:00'));
    expect(codesOf(settled)).not.toContain('date-order-assumed');
    expect(settled.recording.time[0]).toBe(Date.UTC(2026, 3, 5, 12) / 1000);
  });

  test('an elapsed-seconds column gives way to one with times', async () => {
    const log = await importText('t,timestamp,twd,tws\n0,2026-04-18T12:05:00Z,215,12\n1,2026-04-18T12:05:01Z,216,12\n');
    expect(log.recording.time[0]).toBe(Date.UTC(2026, 3, 18, 12, 5) / 1000);
  });
});

describe('columns', () => {
  const text = 'when,a,b\n2026-04-18T12:05:00Z,215,5\n2026-04-18T12:06:00Z,216,6\n';

  test('--columns says what headers mean, with a unit', async () => {
    const log = await importText(text, { columns: { A: 'twd_deg', b: 'tws:m/s' } });
    expect(log.recording.channels.twd?.[0]).toBe(215);
    expect(log.recording.channels.tws?.[1]).toBe(6);
    expect(log.columns).toEqual([
      { header: 'when', means: 'time', unit: null },
      { header: 'a', means: 'twd', unit: 'deg' },
      { header: 'b', means: 'tws', unit: 'm/s' },
    ]);
  });

  test('--columns overrules what a header says, and can put it aside', async () => {
    const log = await importText('time,Heading,Speed\n2026-04-18T12:05:00Z,215,5\n', {
      columns: { Heading: 'hdg_true_deg', Speed: '-' },
    });
    expect(Object.keys(log.recording.channels)).toEqual(['heading']);
  });

  test('without a header the columns are numbered', async () => {
    const log = await importText('2026-04-18T12:05:00Z;46,912;9,061;5,5\n', {
      columns: { '1': 'time', '2': 'lat', '3': 'lon', '4': 'sog_kn' },
    });
    expect(log.recording.channels.lat?.[0]).toBe(46.912);
    expect(log.recording.channels.sog?.[0]).toBeCloseTo(5.5 * KNOT, 12);
  });

  test('an unknown field or unit is refused, a header the log has not is told', async () => {
    await expect(importText(text, { columns: { a: 'tack' } })).rejects.toMatchObject({
      exitCode: 2,
      message: expect.stringContaining("'tack'") as string,
    });
    await expect(importText(text, { columns: { a: 'tws:furlongs' } })).rejects.toMatchObject({ exitCode: 2 });
    expect(codesOf(await importText(text, { columns: { a: 'twd', c: 'tws' } }))).toContain('column-not-found');
  });

  test('in a log of the wind alone, speed is the wind’s', async () => {
    const log = await importText('time,direction,speed (m/s)\n2026-04-18T12:05:00Z,215,5\n');
    expect(log.recording.channels.tws?.[0]).toBe(5);
    const boat = await importText('time,lat,lon,direction,speed (m/s)\n2026-04-18T12:05:00Z,46.9,9,215,5\n');
    expect(boat.recording.channels.sog?.[0]).toBe(5);
  });

  test('angles: 0 to 360 and signed are the same', async () => {
    const log = await importText('time,awa,cog\n2026-04-18T12:05:00Z,315,-90\n2026-04-18T12:05:01Z,-45,360\n');
    expect(Array.from(log.recording.channels.awa!)).toEqual([-45, -45]);
    expect(Array.from(log.recording.channels.cog!)).toEqual([270, 0]);
  });
});

describe('rows', () => {
  test('a cut last row is rejected, a whole one without a line end is not', async () => {
    const whole =
      'time,lat,lon,sog_kn\n2026-04-18T12:05:00Z,46.9120,9.0610,5.1\n2026-04-18T12:05:01Z,46.9121,9.0611,5.2';
    expect((await importText(whole)).kept).toBe(2);
    const cut = await importText(whole.slice(0, -8));
    checkBooks(cut);
    expect(cut).toMatchObject({ kept: 1, rejected: [{ reason: 'cut short', count: 1, first_line: 3 }] });
    expect(codesOf(cut)).toContain('file-truncated');
  });

  test('an unclosed quote costs its own row at most, also over a block’s border', async () => {
    const line = (k: number): string => `${new Date(1776513900e3 + k * 1000).toISOString()},${200 + (k % 100)},12`;
    const lines = Array.from({ length: 9000 }, (_, k) => line(k) + (k % 1000 === 500 ? ',"open' : ','));
    const log = await importText(['time,twd,tws_kn,note', ...lines].join('\n'));
    checkBooks(log);
    expect(log.rows).toBe(9000);
    expect(log.kept).toBe(9000);
    expect(log.issues.find(({ code }) => code === 'unclosed-quote')).toMatchObject({
      line: 502,
      message: expect.stringMatching(/^9 row/) as string,
    });
  });

  test('same stamp: values that repeat are rejected, that complete are merged, that differ are spread', async () => {
    const text = [
      'time,lat,lon,awa',
      '12:00:00Z,46.9,9.0,',
      '12:00:00Z,,,40',
      '12:00:01Z,46.9001,9.0,41',
      '12:00:01Z,46.9001,9.0,41',
      '12:00:02Z,46.9002,9.0,42',
      '12:00:02Z,46.9003,9.0,43',
      '12:00:03Z,46.9004,9.0,44',
    ]
      .join('\n')
      .replaceAll('12:00', '2026-04-18T12:00');
    const log = await importText(text);
    checkBooks(log);
    expect(Array.from(log.recording.time, (t) => t - Date.UTC(2026, 3, 18, 12) / 1000)).toEqual([0, 1, 2, 2.5, 3]);
    expect(Array.from(log.recording.channels.awa!)).toEqual([40, 41, 42, 43, 44]);
    expect(log.rejected).toEqual([{ reason: 'time and values repeat the record before', count: 1, first_line: 5 }]);
  });

  test('a stale position under one stamp is left out, what is measured beside it is not', async () => {
    const text = ['time,lat,lon,awa', '00Z,46.9,9.0,40', '00Z,46.9,9.0,41', '01Z,46.9001,9.0,42', '02Z,46.9002,9.0,42']
      .join('\n')
      .replaceAll(/^0/gm, '2026-04-18T12:00:0');
    const log = await importText(text);
    checkBooks(log);
    expect(log.fixes).toBe(3);
    expect(Array.from(log.recording.channels.awa!)).toEqual([40, 41, 42, 42]);
  });
});
