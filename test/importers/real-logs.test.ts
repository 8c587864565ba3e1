import { readFileSync } from 'node:fs';
import { expect, test } from 'vitest';
import type { ImportedLog, ImportOptions } from '../../src/importers/types.js';
import type { Channel } from '../../src/recording/recording.js';
import { UserError } from '../../src/recording/issues.js';
import { checkBooks, codesOf, importBytes, rejectedOf } from './check-import.js';
import { describeRecordings, recording } from './recordings.js';

const KNOT = 1852 / 3600;

const load = (file: string, options: ImportOptions = {}): Promise<ImportedLog> =>
  importBytes(new Uint8Array(readFileSync(recording(file))), options);

const column = (log: ImportedLog, channel: Channel): number[] =>
  Array.from(log.recording.channels[channel] ?? []).filter((value) => !Number.isNaN(value));

const iso = (seconds: number | undefined): string => new Date(seconds! * 1000).toISOString();

const median = (values: number[]): number => values.toSorted((a, b) => a - b)[values.length >> 1];

/** Counts of GPX elements with Python's xml.etree (expat): file, points, routes' and waypoints, kept, segments kept. */
const GPX: [string, number, number, number, number][] = [
  ['gpxpy/cerknicko-jezero-no-creator.gpx', 296, 7, 296, 7],
  ['gpxpy/cerknicko-jezero-with-elevations-zero.gpx', 296, 7, 296, 7],
  ['gpxpy/cerknicko-jezero-without-elevations.gpx', 296, 7, 295, 7],
  ['gpxpy/cerknicko-jezero.gpx', 296, 7, 296, 7],
  ['gpxpy/cerknicko-without-times.gpx', 296, 7, 5, 1],
  // Ten points, the last an hour before the one before it: `grep -o '<time>[^<]*'` shows it.
  ['gpxpy/first_and_last_elevation.gpx', 10, 0, 9, 1],
  ['gpxpy/gpx-with-node-with-comments.gpx', 1, 0, 1, 1],
  ['gpxpy/gpx1.0_with_all_fields.gpx', 1, 7, 1, 1],
  ['gpxpy/gpx1.1_with_all_fields.gpx', 1, 7, 1, 1],
  ['gpxpy/track-with-empty-segment.gpx', 9, 0, 9, 1],
  ['gpxpy/track-with-less-sec-time.gpx', 2, 0, 2, 1],
  ['gpxpy/track_with_speed.gpx', 3, 0, 3, 1],
  ['simple-gpx/track.gpx', 6933, 0, 6933, 2],
  // Two points alike in time and place.
  ['togeojson/empty_ele.gpx', 2, 0, 1, 1],
  ['togeojson/missing_hr.gpx', 16, 0, 16, 3],
  ['togeojson/multitrackgpx.gpx', 117, 0, 117, 3],
  ['togeojson/unique_trkpt.gpx', 1, 0, 1, 1],
];

/** None of these has a point with a position and a time, by the same count. */
const GPX_WITHOUT_TIMES = [
  'gpxpy/custom_schema_locations.gpx',
  'gpxpy/default_schema_locations.gpx',
  'gpxpy/gpx1.1_with_extensions.gpx',
  'gpxpy/gpx1.1_with_extensions_without_namespaces.gpx',
  'gpxpy/route.gpx',
  'gpxpy/track-with-extremes.gpx',
  'gpxpy/track-with-small-floats.gpx',
  'gpxpy/track_with_dilution_errors.gpx',
  'gpxpy/unicode.gpx',
  'gpxpy/unicode2.gpx',
  'gpxpy/unicode_with_bom.gpx',
  'gpxpy/unicode_with_bom_noencoding.gpx',
  'togeojson/bad.gpx',
  'togeojson/empty_trk.gpx',
  'togeojson/trek.gpx',
  'togeojson/trek_no_rtept.gpx',
  'togeojson/wpt.gpx',
];

describeRecordings('odd GPX', () => {
  test.each(GPX)('%s', async (file, points, others, kept, segments) => {
    const log = await load(`odd-gpx/${file}`);
    checkBooks(log);
    expect(log).toMatchObject({ kind: 'gpx', rows: points + others, ignored: others, kept, fixes: kept });
    expect(log.recording.breaks.length + 1).toBe(segments);
  });

  test.each(GPX_WITHOUT_TIMES)('%s is refused: no point with a time', async (file) => {
    await expect(load(`odd-gpx/${file}`)).rejects.toMatchObject({ name: 'UserError', exitCode: 2 });
  });

  test('speeds in metres a second, fractions and offsets of times', async () => {
    expect(column(await load('odd-gpx/gpxpy/track_with_speed.gpx'), 'sog')).toEqual([1.2, 2.2, 3.2]);
    expect(column(await load('odd-gpx/togeojson/unique_trkpt.gpx'), 'sog')).toEqual([0.5]);
    const { time } = (await load('odd-gpx/gpxpy/track-with-less-sec-time.gpx')).recording;
    expect(Array.from(time, (t) => t)).toEqual([1449844993, expect.closeTo(1449844993.994, 6)]);
  });
});

/**
 * Independent counts with a Python script that takes each line matching ^[$!]([^*]*)\*hh$ and compares the exclusive
 * or: lines that are not blank (grep -c '[^[:space:]]'), lines with a good checksum, fixes under different stamps.
 */
const NMEA: [string, number, number, number][] = [
  ['ac12_binary.nmea', 40, 35, 5],
  ['com-1289.nmea', 84, 83, 14],
  ['et-332.nmea', 141, 106, 19],
  ['firefly-II.nmea', 69, 46, 23],
  ['gpsdf.nmea', 663, 663, 51],
  ['handheld-1.nmea', 151, 151, 12],
  ['handheld-2.nmea', 179, 178, 18],
  ['handheld-3.nmea', 71, 70, 14],
  ['mtk-3301.nmea', 44, 44, 4],
];

describeRecordings('odd NMEA 0183', () => {
  test.each(NMEA)('%s', async (file, lines, good, fixes) => {
    const log = await load(`odd-nmea/${file}`);
    checkBooks(log);
    expect(log).toMatchObject({ kind: 'nmea', rows: lines, fixes });
    const damaged = log.rejected.filter(({ reason }) => /checksum|not a sentence/.test(reason));
    expect(damaged.reduce((sum, { count }) => sum + count, 0)).toBe(lines - good);
  });

  test('a cold start with lines run into each other: 133 lines, two of which hold two sentences', async () => {
    const log = await load('odd-nmea/gp-320fw-2019-04-07-coldboot.nmea');
    checkBooks(log);
    expect(log.rows).toBe(135);
    expect(iso(log.recording.time[log.recording.channels.lat!.findIndex((φ) => !Number.isNaN(φ))])).toBe(
      '2019-04-07T00:03:43.030Z',
    );
  });

  test('wind without any time is refused', async () => {
    await expect(load('odd-nmea/blank-lines-lower-case-checksums.nmea')).rejects.toThrow(UserError);
  });

  test('a clock sentence one second ahead of its fix costs no fix', async () => {
    const log = await load('odd-nmea/ac12_binary.nmea');
    expect(Array.from(log.recording.time, iso)).toEqual([30, 31, 32, 33, 34].map((s) => `2007-12-23T18:35:${s}.000Z`));
  });

  test('a simulating receiver is read, and told', async () => {
    expect(codesOf(await load('odd-nmea/handheld-1.nmea'))).toContain('simulated-fixes');
  });
});

/** Sentences counted with grep -cE '^\$..(RMC|GGA|GLL|VTG|ZDA|HDT|HDG|HDM|VHW|MWV|MWD|VWR|VWT),'. */
describeRecordings('boats’ NMEA 0183', () => {
  test('two laps: 66,891 sentences of ours, 18,314 RMC, 16,192 MWV R (grep -c)', async () => {
    const log = await load('two-laps/two-laps.nmea');
    checkBooks(log);
    expect(log).toMatchObject({ rows: 83077, kept: 66891, ignored: 16186, fixes: 18314, samples: 16192 });
    expect(log.ignoredTypes).toEqual({ DPT: 16186 });
    // First RMC: 6009.2031,N,02453.6519,E at 070534 on 150510; last 121106.
    expect(column(log, 'lat')[0]).toBeCloseTo(60 + 9.2031 / 60, 9);
    expect(column(log, 'lon')[0]).toBeCloseTo(24 + 53.6519 / 60, 9);
    expect(iso(log.recording.time.at(-1))).toBe('2010-05-15T12:11:06.000Z');
    expect(new Set(column(log, 'variation'))).toEqual(new Set([6]));
  });

  test('race start: every sentence kept, the stepping clock spread so that positions agree with logged speed', async () => {
    const log = await load('race-start/race-start.nmea');
    checkBooks(log);
    // 1,105 RMC and one more GGA at the end; VWR 2,211 (grep -c).
    expect(log).toMatchObject({ rows: 26538, kept: 12163, fixes: 1106, samples: 2211 });
    expect(codesOf(log)).toContain('clock-steps');
    const { time, channels } = log.recording;
    const fixes = [...time.keys()].filter((row) => !Number.isNaN(channels.lat![row]));
    const off: number[] = [];
    for (let k = 1; k < fixes.length; k++) {
      const [a, b] = [fixes[k - 1], fixes[k]];
      // A minute of latitude is 1852 m within 0.3 % there.
      const north = (channels.lat![b] - channels.lat![a]) * 60 * 1852;
      const east = (channels.lon![b] - channels.lon![a]) * 60 * 1852 * Math.cos((channels.lat![a] * Math.PI) / 180);
      off.push(Math.hypot(north, east) / (time[b] - time[a]) - channels.sog![a]);
    }
    // Stamps are whole tens of seconds; positions are read to 0.001', 1.9 m, so 0.9 m/s over two seconds.
    expect(median(off.map(Math.abs))).toBeLessThan(0.5);
    expect(Math.abs(median(off))).toBeLessThan(0.15);
    expect(Math.max(...off) * 2).toBeGreaterThan(200);
  });

  test('dead cups: apparent wind speed zero throughout, the last line cut', async () => {
    const log = await load('port-tack-dead-cups/port-tack.nmea');
    checkBooks(log);
    expect(log).toMatchObject({ rows: 33941, kept: 19498, fixes: 1032, samples: 2064 });
    expect(new Set(column(log, 'aws'))).toEqual(new Set([0]));
    expect(column(log, 'twa').length).toBe(1032);
    expect(rejectedOf(log)).toBe(1);
    expect(codesOf(log)).toEqual(['file-truncated']);
  });

  test('motoring: no date inside; with one given, 2,364 fixes', async () => {
    await expect(load('motoring/motoring.nmea')).rejects.toMatchObject({
      exitCode: 2,
      message: expect.stringContaining('no date') as string,
    });
    const log = await load('motoring/motoring.nmea', { date: '2014-07-24' });
    checkBooks(log);
    // 23,641 sentences of ours, of which 7,092 headings are empty and one is cut (grep -c).
    expect(log).toMatchObject({ rows: 37825, kept: 23641 - 7092 - 1, fixes: 2364 });
    expect(iso(log.recording.time[log.recording.channels.lat!.findIndex((φ) => !Number.isNaN(φ))])).toBe(
      '2014-07-24T09:55:59.000Z',
    );
    expect(log.recording.channels.headingMagnetic).toBeUndefined();
  });
});

/** Rows counted with `tail -n +2 | grep -c .`. */
describeRecordings('tables', () => {
  test('port tack at 10 Hz: 5,833 rows, magnetic heading, jittered stamps', async () => {
    const log = await load('port-tack-10hz/instruments.csv');
    checkBooks(log);
    expect(log).toMatchObject({ kind: 'csv', rows: 5833, kept: 5833, fixes: 5833 });
    const { channels } = log.recording;
    // The first two rows: nothing but position, sog, cog and apparent wind; then heading 355.3, tws 5.132 kn.
    expect([channels.headingMagnetic![0], channels.headingMagnetic![1]]).toEqual([NaN, 355.3]);
    expect(channels.tws![1]).toBeCloseTo(5.132 * KNOT, 12);
    expect(channels.awa![0]).toBeCloseTo(-41.99, 10);
    expect(channels.heading).toBeUndefined();
  });

  test('starboard tack at 1 Hz: 597 rows, true heading', async () => {
    const log = await load('starboard-tack-1hz/instruments.csv');
    checkBooks(log);
    expect(log).toMatchObject({ rows: 597, kept: 597, fixes: 597, samples: 597 });
    expect(column(log, 'heading')[0]).toBe(199.1);
    expect(column(log, 'stw')[0]).toBeCloseTo(6.492 * KNOT, 12);
  });

  test('stations: units, zones, relative directions', async () => {
    const midc = await load('station-1min/midc-wind-1min.csv', { zone: 'America/Denver' });
    checkBooks(midc);
    expect(midc).toMatchObject({ rows: 1440, kept: 1440, samples: 1440, fixes: 0 });
    expect(column(midc, 'tws')[0]).toBe(2.947);
    // Denver is at UTC-6 in October: daylight saving time ends in November there.
    expect(iso(midc.recording.time[0])).toBe('2018-10-18T06:00:00.000Z');
    const surfrad = await load('station-1min/surfrad-wind-1min.csv');
    expect(surfrad).toMatchObject({ rows: 1440, kept: 1440, issues: [] });
    const sonic = await load('station-sonic/wind-1hz.csv');
    checkBooks(sonic);
    expect(sonic).toMatchObject({ rows: 1801, kept: 1801 });
    expect(codesOf(sonic)).toEqual(['direction-relative', 'zone-assumed']);
    const dock = await load('two-laps/dock-wind-1hz.csv');
    expect(dock).toMatchObject({ rows: 1166, kept: 1166, samples: 1166, issues: [] });
  });

  test('a table of something else is refused with the headers seen', async () => {
    await expect(load('yacht-hydrodynamics/yacht_hydrodynamics.csv')).rejects.toMatchObject({
      exitCode: 2,
      message: expect.stringContaining('Headers seen') as string,
    });
  });
});
