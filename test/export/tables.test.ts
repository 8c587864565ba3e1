import Papa from 'papaparse';
import { parquetMetadata, parquetReadObjects } from 'hyparquet';
import type { LineString, MultiLineString, Point } from 'geojson';
import { describe, expect, it } from 'vitest';
import { legColumns } from '../../src/export/columns.js';
import { legsCsv, secondsCsv } from '../../src/export/csv.js';
import { cutAtDateLine, geoJsonText, raceGeoJson } from '../../src/export/geojson.js';
import { parquetBytes } from '../../src/export/parquet.js';
import { inventedResult, inventedSeries } from './invented.js';

/** Papa Parse is the independent reader of RFC 4180. */
const read = (text: string): Record<string, string>[] =>
  Papa.parse<Record<string, string>>(text, { header: true, skipEmptyLines: true }).data;

describe('the table of legs', () => {
  it('holds what the result holds, under its names', () => {
    const [row] = read(legsCsv(inventedResult()));
    expect(row).toMatchObject({
      boat: 'Ann',
      leg: '1',
      kind: 'upwind',
      seconds: '9',
      vmg_kn: '3.5',
      vmg_kn_se: '0.5',
      efficiency: '0.95',
      efficiency_se: '',
      steady_tacking_angle_deg: '84',
      port_gamma_deg: '42',
      starboard_gamma_deg: '',
      optimum_vmg_kn: '',
      lost_m: '10',
      manoeuvres_m: '12',
      shifts_m: '-2',
      high_m: '',
      notes: 'one | two, with "quotes"',
    });
  });
  it('ends every line with CRLF and has as many cells in each', () => {
    const text = legsCsv(inventedResult());
    const lines = Papa.parse<string[]>(text).data;
    expect(text.endsWith('\r\n')).toBe(true);
    expect(text.replaceAll('\r\n', '')).not.toMatch(/[\r\n]/);
    expect(new Set(lines.slice(0, -1).map((line) => line.length)).size).toBe(1);
  });
  it.each(['=1+1', '+1', '-1', '@SUM(A1)', '\t=1', ' =1', '\r=1'])('a boat called %j is no formula', (name) => {
    const [row] = read(legsCsv(inventedResult(name)));
    expect(row.boat.startsWith("'")).toBe(true);
    expect(row.boat.slice(1)).toBe(name);
  });
  it('negative numbers stay numbers', () => {
    expect(read(legsCsv(inventedResult()))[0].shifts_m).toBe('-2');
  });
  it('a table without legs is its header', () => {
    const text = legsCsv({ ...inventedResult(), boats: [] });
    expect(text.split('\r\n')).toHaveLength(2);
    expect(legColumns({ ...inventedResult(), boats: [] })[0].values).toEqual([]);
  });
});

describe('the table of seconds', () => {
  it('has a row where there is a position, an empty cell where there is no value', () => {
    const rows = read(secondsCsv(inventedSeries()));
    expect(rows).toHaveLength(8);
    // 2 m/s is 3.888 kn at 1852 m a nautical mile; 10 m west of the origin is 0.0001 degrees at 100 km a degree.
    expect(rows[0]).toMatchObject({
      time: '2026-04-18T12:00:00.000Z',
      lon: '8.9999',
      lat: '0',
      sog_kn: '3.888',
      cog_deg: '90',
      gamma_deg: '-45',
      tws_kn: '',
      heading_deg: '',
      leg: '1',
      settled: '1',
      manoeuvre: '',
    });
    expect(rows.map((row) => row.manoeuvre)).toEqual(['', '', '', '', 'tack', 'tack', 'tack', '']);
  });
});

describe('GeoJSON', () => {
  it('has tracks, legs, manoeuvres and marks, longitude first, 7 decimals', async () => {
    const { features } = await raceGeoJson(inventedResult(), inventedSeries());
    expect(features.map((f) => [(f.properties as { what: string }).what, f.geometry.type])).toEqual([
      ['mark', 'Point'],
      ['mark', 'LineString'],
      ['track', 'MultiLineString'],
      ['leg', 'MultiLineString'],
      ['manoeuvre', 'Point'],
    ]);
    expect((features[0].geometry as Point).coordinates).toEqual([9, 0.001]);
    // The gap of two seconds is no line.
    expect((features[2].geometry as MultiLineString).coordinates.map((line) => line.length)).toEqual([4, 4]);
    expect(features[4].properties).toMatchObject({ kind: 'tack', time: '2026-04-18T12:00:07.000Z', loss_m: null });
    const numbers = JSON.stringify(features).match(/-?\d+\.\d+/g) ?? [];
    expect(Math.max(...numbers.map((number) => number.split('.')[1].length))).toBeLessThanOrEqual(7);
  });
  it('is JSON, one feature a line', async () => {
    const text = await geoJsonText(inventedResult(), inventedSeries());
    expect((JSON.parse(text) as { features: unknown[] }).features).toHaveLength(5);
    expect(text.trim().split('\n')).toHaveLength(7);
  });
  it('is cut at the 180th meridian (RFC 7946, 3.1.9)', async () => {
    const { features } = await raceGeoJson(inventedResult(), inventedSeries('Ann', 179.99997));
    const { coordinates } = features[2].geometry as MultiLineString;
    for (const line of coordinates) {
      for (let i = 1; i < line.length; i++) expect(Math.abs(line[i][0] - line[i - 1][0])).toBeLessThan(1);
    }
    expect(coordinates).toHaveLength(3);
    expect(coordinates[1].at(-1)![0]).toBe(180);
    expect(coordinates[2][0][0]).toBe(-180);
  });
  it('cuts both ways, and the ends meet half-way', () => {
    // From 179 to -179 (2 degrees) the meridian is half-way: latitude 0 to 1 gives 0.5.
    expect(
      cutAtDateLine([
        [179, 0],
        [-179, 1],
      ]),
    ).toEqual([
      [
        [179, 0],
        [180, 0.5],
      ],
      [
        [-180, 0.5],
        [-179, 1],
      ],
    ]);
    expect(
      cutAtDateLine([
        [-179, 0],
        [179, 1],
      ]),
    ).toEqual([
      [
        [-179, 0],
        [-180, 0.5],
      ],
      [
        [180, 0.5],
        [179, 1],
      ],
    ]);
    expect(
      cutAtDateLine([
        [10, 0],
        [11, 1],
      ]),
    ).toEqual([
      [
        [10, 0],
        [11, 1],
      ],
    ]);
  });
  it('a track of one position is left out, not broken', async () => {
    const series = inventedSeries();
    const boat = series.boats[0];
    const lonely = { ...boat, x: boat.x.map((x, i) => (i === 0 ? x : NaN)) };
    const { features } = await raceGeoJson(inventedResult(), { ...series, boats: [lonely] });
    expect(features.some((f) => (f.geometry as LineString).coordinates.length < 2 && f.geometry.type !== 'Point')).toBe(
      false,
    );
  });
});

describe('Parquet', () => {
  it('reads back as legs, then spells', async () => {
    const bytes = await parquetBytes(inventedResult('=Ann'), inventedSeries('=Ann'));
    const file = bytes.buffer.slice(bytes.byteOffset, bytes.byteOffset + bytes.byteLength) as ArrayBuffer;
    expect(new TextDecoder().decode(bytes.subarray(0, 4))).toBe('PAR1');
    expect(Number(parquetMetadata(file).num_rows)).toBe(2);
    const rows = await parquetReadObjects({ file });
    expect(rows[0]).toMatchObject({
      level: 'leg',
      boat: '=Ann',
      leg: 1,
      vmg_kn: 3.5,
      tack: null,
      optimum_vmg_kn: null,
    });
    expect(rows[1]).toMatchObject({
      level: 'spell',
      boat: '=Ann',
      tack: 'port',
      seconds: 3,
      steady_gamma_deg: 45,
      vmg_kn: null,
    });
    expect(new Date(rows[0].start as Date).toISOString()).toBe('2026-04-18T12:00:00.000Z');
  });
  it('is the same bytes again', async () => {
    const once = await parquetBytes(inventedResult(), inventedSeries());
    expect(await parquetBytes(inventedResult(), inventedSeries())).toEqual(once);
  });
  it('a race without legs or spells is a table without rows', async () => {
    const series = inventedSeries();
    const bytes = await parquetBytes({ ...inventedResult(), boats: [] }, { ...series, boats: [] });
    expect(Number(parquetMetadata(bytes.buffer as ArrayBuffer).num_rows)).toBe(0);
  });
});
