import { readdirSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import fc from 'fast-check';
import { expect, test } from 'vitest';
import { readCsv } from '../../src/importers/csv.js';
import { readGpx } from '../../src/importers/gpx.js';
import { LogRows } from '../../src/importers/rows.js';
import { settle } from '../../src/importers/settle.js';
import { Tally } from '../../src/importers/tally.js';
import { describeRecordings, recording } from './recordings.js';

const LOGS = join(import.meta.dirname, '../../fixtures/logs');
const GPX = readdirSync(LOGS).filter((file) => file.endsWith('.gpx'));

async function* pieces(text: string, size: number): AsyncIterable<string> {
  for (let at = 0; at < text.length; at += size) yield await Promise.resolve(text.slice(at, at + size));
}

/** Everything that a reading of a document comes to. */
async function read(text: string, quick: boolean, size: number): Promise<unknown> {
  const rows = new LogRows();
  const tally = new Tally('log');
  const { name, columns } = await readGpx(pieces(text, size), rows, tally, null, quick);
  const { recording: found, ...counts } = settle(rows, tally, name);
  return {
    ...counts,
    read: tally.read,
    ignored: tally.ignoredTypes(),
    rejected: tally.rejections.list(),
    issues: tally.issues,
    columns,
    recording: found,
  };
}

async function expectAlike(text: string, size = 1 << 16): Promise<void> {
  expect(await read(text, true, size)).toEqual(await read(text, false, size));
}

const latin1 = (path: string): string => readFileSync(path, 'latin1');

/** The parser is the reference: what goes past it must come to the same. */
test.each(GPX)('%s: the quick way and the parser agree', async (file) => {
  const text = latin1(join(LOGS, file));
  for (const size of [1, 7, 100, 1 << 16]) await expectAlike(text, size);
});

const point = (k: number, inner: string): string =>
  `<trkpt lat="46.9${String(k).padStart(4, '0')}" lon="9.061">${inner.replace('T', `2026-04-18T12:05:${String(k).padStart(2, '0')}Z`)}</trkpt>`;

/** Turns that a reader by text alone could take wrongly. */
test.each([
  ['a comment that holds points', '<time>T</time>', `<!-- ${point(40, '<time>T</time>')} -->`],
  ['CDATA that holds points', '<time>T</time>', `<![CDATA[ ${point(40, '<time>T</time>')} ]]>`],
  ['a processing instruction', '<time>T</time>', '<?note </trkpt><trkseg> ?>'],
  ['points in a route', '<time>T</time>', `</trkseg></trk><rte>${point(40, '<time>T</time>')}</rte><trk><trkseg>`],
  ['values over lines', '<time>\n T \n</time><cmt>two\r\nlines\n</cmt>', ''],
  [
    'empty and repeated elements',
    '<time></time><time>T</time><time>1999-01-01T00:00:00Z</time><speed/><speed>1</speed><speed>2</speed>',
    '',
  ],
  ['nested uses', '<time>T</time><ext><speed><x>3</x></speed><time>1999-01-01T00:00:00Z</time></ext>', ''],
  ['entities', '<time>T</time><speed>&#50;</speed>', '&amp;'],
  ['attributes', '<time zone="Z">T</time><speed unit="m/s">2</speed>', ''],
  ['blanks in tags', '<time >T</time ><speed>2</speed\n>', ''],
  ['mismatched tags', '<a:time>T</b:time><speed>2</sped>', ''],
  ['a bad value', '<time>T</time><speed>fast</speed><course>400</course>', ''],
  ['text between', '<time>T</time> and <speed>2</speed>', 'loose text'],
  ['an end of CDATA in text', '<time>T</time><cmt>a]]>b</cmt>', ''],
])('%s', async (_, inner, between) => {
  const points = Array.from({ length: 6 }, (__, k) => point(k, inner) + (k === 3 ? between : '')).join('\n');
  const text = `<?xml version="1.0"?>\n<gpx xmlns:a="urn:a"><trk><name>Corrie</name><trkseg>\n${points}\n</trkseg></trk></gpx>`;
  for (const size of [1, 13, 1 << 16]) await expectAlike(text, size);
});

test('damaged documents: the quick way and the parser agree', async () => {
  const texts = GPX.map((file) => latin1(join(LOGS, file)));
  await fc.assert(
    fc.asyncProperty(
      fc.nat(texts.length - 1),
      fc.array(
        fc.record({
          at: fc.double({ min: 0, max: 1, noNaN: true }),
          cut: fc.nat(30),
          put: fc.constantFrom(
            '',
            '<',
            '>',
            '&',
            '"',
            '</trkpt>',
            '<trkpt lat="1" lon="2">',
            '\n',
            '<!--',
            '-->',
            ']]>',
            '</trkseg><trkseg>',
            '\r',
            'x',
          ),
        }),
        { minLength: 1, maxLength: 6 },
      ),
      fc.constantFrom(1, 17, 1 << 16),
      async (file, edits, size) => {
        let text = texts[file];
        for (const { at, cut, put } of edits) {
          const from = Math.floor(at * text.length);
          text = text.slice(0, from) + put + text.slice(from + cut);
        }
        await expectAlike(text, size);
      },
    ),
    { seed: 7, numRuns: Number(process.env['FUZZ_RUNS'] ?? 300) },
  );
});

describeRecordings('real GPX, the quick way and the parser', () => {
  const files = ['gpxpy', 'simple-gpx', 'togeojson'].flatMap((folder) => {
    try {
      return readdirSync(recording(`odd-gpx/${folder}`))
        .filter((file) => file.endsWith('.gpx'))
        .map((file) => `odd-gpx/${folder}/${file}`);
    } catch {
      return [];
    }
  });
  test('agree on every file', async () => {
    for (const file of files) await expectAlike(readFileSync(recording(file), 'utf8'), 4096);
  });
});

async function readTable(text: string, quick: boolean, zone?: string): Promise<unknown> {
  const tally = new Tally('log');
  const { settled, columns } = await readCsv(pieces(text, 5000), new LogRows(), tally, zone ? { zone } : {}, quick);
  return {
    ...settled,
    columns,
    read: tally.read,
    ignored: tally.ignoredTypes(),
    rejected: tally.rejections.list(),
    issues: tally.issues,
  };
}

/** Rows as they come, and as they should not. */
const rowOf: Record<string, (k: number) => string> = {
  plain: (k) => `2026-10-25T${stamp(k)}Z,46.9${k},9.061,5.2,,310`,
  local: (k) => `2026-10-25T${stamp(k)},46.9${k},9.061,5.2,40,310`,
  offset: (k) => `2026-10-25T${stamp(k)}+01:00,46.9${k},9.061,5.2,40,310`,
  unix: (k) => `${1793000000 + k}.5,46.9${k},9.061,5.2,-40,`,
  noPosition: (k) => `2026-10-25T${stamp(k)}Z,,,5.2,320,310`,
  halfPosition: (k) => `2026-10-25T${stamp(k)}Z,46.9,,5.2,40,310`,
  zeros: (k) => `2026-10-25T${stamp(k)}Z,0,0,5.2,40,310`,
  farOut: (k) => `2026-10-25T${stamp(k)}Z,146.9,180,5.2,40,310`,
  antimeridian: (k) => `2026-10-25T${stamp(k)}Z,46.9,180,5.2,40,310`,
  fill: (k) => `2026-10-25T${stamp(k)}Z,46.9,9.061,-9999,999.9,310`,
  words: (k) => `2026-10-25T${stamp(k)}Z,46.9,9.061,NaN,n/a,fast`,
  units: (k) => `2026-10-25T${stamp(k)}Z,46.9,9.061,5 m/s, 40 ,310`,
  odd: (k) => `2026-10-25T${stamp(k)}Z,46.9,9.061,-5,400,-181`,
  short: (k) => `2026-10-25T${stamp(k)}Z,46.9,9.061`,
  long: (k) => `2026-10-25T${stamp(k)}Z,46.9,9.061,5.2,40,310,7`,
  trailing: (k) => `2026-10-25T${stamp(k)}Z,46.9,9.061,5.2,40,310,`,
  empty: (k) => `2026-10-25T${stamp(k)}Z,,,,,`,
  quoted: (k) => `"2026-10-25T${stamp(k)}Z","46.9",9.061,5.2,40,310`,
  unclosed: (k) => `2026-10-25T${stamp(k)}Z,46.9,9.061,5.2,40,"310`,
  comment: () => '# 2026,1,2,3,4,5',
  header: () => 'time,lat,lon,sog_kn,awa,cog',
  blank: () => '',
  commas: () => ',,,,,',
  noTime: () => ',46.9,9.061,5.2,40,310',
  badTime: () => '2026-13-25T12:00:00Z,46.9,9.061,5.2,40,310',
};

const stamp = (k: number): string => new Date(k * 1000).toISOString().slice(11, 19);

test('tables with every kind of row: the quick way and the parser agree', async () => {
  const kinds = Object.keys(rowOf);
  await fc.assert(
    fc.asyncProperty(
      fc.array(fc.tuple(fc.oneof(fc.constant('plain'), fc.constantFrom(...kinds)), fc.nat(60)), {
        minLength: 5,
        maxLength: 60,
      }),
      fc.constantFrom(undefined, 'Europe/Zurich'),
      fc.constantFrom('\n', '\r\n'),
      async (runs, zone, newline) => {
        const lines = ['time,lat,lon,sog_kn,awa,cog'];
        for (const [kind, length] of runs) for (let n = 0; n <= length; n++) lines.push(rowOf[kind](lines.length));
        const text = lines.join(newline) + newline;
        expect(await readTable(text, true, zone)).toEqual(await readTable(text, false, zone));
      },
    ),
    { seed: 9, numRuns: Number(process.env['FUZZ_RUNS'] ?? 60) },
  );
});

describeRecordings('real tables, the quick way and the parser', () => {
  test.each(['port-tack-10hz/instruments.csv', 'station-1min/midc-wind-1min.csv', 'station-sonic/wind-1hz.csv'])(
    'agree on %s',
    async (file) => {
      const text = readFileSync(recording(file), 'utf8');
      expect(await readTable(text, true)).toEqual(await readTable(text, false));
    },
  );
});
