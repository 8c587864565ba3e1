import { createHash } from 'node:crypto';
import { existsSync, readdirSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import fc from 'fast-check';
import { expect, test } from 'vitest';
import { readCsv } from '../../src/importers/csv.js';
import { detectEncoding } from '../../src/importers/encoding.js';
import { readGpx } from '../../src/importers/gpx.js';
import { readNmea } from '../../src/importers/nmea.js';
import { LogRows } from '../../src/importers/rows.js';
import { settle } from '../../src/importers/settle.js';
import { Tally } from '../../src/importers/tally.js';
import { UserError } from '../../src/recording/issues.js';
import { damaged, drawFrom, pick } from '../fuzz/damage.js';
import { describeRecordings, recording } from './recordings.js';

const LOGS = join(import.meta.dirname, '../../fixtures/logs');
const GPX = readdirSync(LOGS).filter((file) => file.endsWith('.gpx'));

async function* pieces(text: string, size: number): AsyncIterable<string> {
  for (let at = 0; at < text.length; at += size) yield await Promise.resolve(text.slice(at, at + size));
}

async function* bytePieces(bytes: Uint8Array, size: number): AsyncIterable<Uint8Array> {
  for (let at = 0; at < bytes.length; at += size) yield await Promise.resolve(bytes.subarray(at, at + size));
}

/** Everything that a reading of a document comes to. */
async function read(bytes: Uint8Array, quick: boolean, size: number, encoding: string): Promise<unknown> {
  const rows = new LogRows();
  const tally = new Tally('log');
  const { name, columns } = await readGpx(bytePieces(bytes, size), encoding, rows, tally, null, quick);
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

async function expectAlike(document: string | Uint8Array, size = 1 << 16): Promise<void> {
  const bytes = typeof document === 'string' ? Buffer.from(document) : document;
  const encoding = detectEncoding(bytes.subarray(0, 1 << 16));
  expect(await read(bytes, true, size, encoding)).toEqual(await read(bytes, false, size, encoding));
}

const latin1 = (path: string): string => readFileSync(path, 'latin1');

/** The parser is the reference: what goes past it must come to the same. */
test.each(GPX)('%s: the quick way and the parser agree', async (file) => {
  const bytes = readFileSync(join(LOGS, file));
  for (const size of [1, 7, 100, 1 << 16]) await expectAlike(bytes, size);
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
    for (const file of files) await expectAlike(readFileSync(recording(file)), 4096);
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

/** To the last bit, for what has a hundred thousand values. */
const digest = (column: Float64Array): string =>
  createHash('sha256')
    .update(new Uint8Array(column.buffer, column.byteOffset, column.byteLength))
    .digest('hex');

/** Everything that a reading of sentences comes to; of a log that is refused, what is said. */
async function readSentences(bytes: Uint8Array, quick: boolean, size: number, options: object): Promise<unknown> {
  const tally = new Tally('log');
  const encoding = detectEncoding(bytes.subarray(0, 1 << 16));
  try {
    const { settled, columns } = await readNmea(
      bytePieces(bytes, size),
      encoding,
      new LogRows(),
      tally,
      options,
      quick,
    );
    const books = { read: tally.read, ignored: tally.ignoredTypes(), rejected: tally.rejections.list() };
    const { time, channels, ...found } = settled.recording;
    const values = Object.entries(channels).map(([channel, column]) => [channel, digest(column)]);
    const recording = { ...found, time: digest(time), values };
    return { ...settled, recording, columns, ...books, aside: tally.keptAside, issues: tally.issues };
  } catch (error) {
    if (error instanceof UserError) return error.message;
    throw error;
  }
}

async function expectSentencesAlike(bytes: Uint8Array, size = 1 << 16, options = {}): Promise<void> {
  expect(await readSentences(bytes, true, size, options)).toEqual(await readSentences(bytes, false, size, options));
}

const NMEA = readdirSync(LOGS).filter((file) => file.endsWith('.nmea'));
const DAY = { date: '2026-04-18' };

test.each(NMEA)('%s: plain sentences and the tolerant reader agree', async (file) => {
  const bytes = readFileSync(join(LOGS, file));
  for (const size of [1, 7, 100, 1 << 16]) await expectSentencesAlike(bytes, size, DAY);
});

test('damaged sentences: the quick way and the tolerant reader agree', async () => {
  const logs = NMEA.map((file) => new Uint8Array(readFileSync(join(LOGS, file))));
  const options = [{}, DAY, { zone: 'Europe/Zurich' }];
  for (let seed = 1; seed <= Number(process.env['FUZZ_RUNS'] ?? (process.env['LEGWORK_LONG'] ? 20_000 : 200)); seed++) {
    const draw = drawFrom(seed);
    await expectSentencesAlike(damaged(logs, draw), pick(draw, [997, 4096, 1 << 16]), pick(draw, options));
  }
}, 3600_000);

const sentence = (body: string): string =>
  `$${body}*${[...body]
    .reduce((sum, letter) => sum ^ letter.charCodeAt(0), 0)
    .toString(16)
    .toUpperCase()
    .padStart(2, '0')}`;

const field = fc.oneof(
  fc.constantFrom('', ' ', 'A', 'a', ' A', 'V', 'N', 'n', 'R', 'L', 'T', 'M', 'K', 'E', 'W', 'S', '0', '8', 'é', 'AA'),
  fc.constantFrom('120501', '120501.25', '1205', '235960', '245959', '+20501', '180426', '180400', '311299', '1e5 '),
  fc.constantFrom(
    '4654.72',
    '00903.66',
    '4660.0',
    '0000.0000',
    '18000.000',
    '9000.00',
    '-4654.7',
    '46x4.7',
    '.5',
    '5.',
  ),
  fc.constantFrom('7.5', '-7.5', '359.99', '360', '361', '999', '1000', '1e2', '0x10', '12345678901234567', '1.2.3'),
);

test('sentences of any fields: the quick way and the tolerant reader agree', async () => {
  const formatters = ['RMC', 'GGA', 'GLL', 'VTG', 'ZDA', 'HDT', 'HDG', 'HDM', 'VHW', 'MWV', 'MWD', 'VWR', 'VWT', 'GSV'];
  const usual = ['GPRMC,120500,A,4654.72,N,00903.66,E,5.0,310.0,180426,3.1,W,A', 'WIMWV,45.0,R,14.0,N,A'];
  const body = fc
    .tuple(
      fc.constantFrom('GP', 'II', 'PG', 'gp', 'G1'),
      fc.constantFrom(...formatters),
      fc.array(field, { maxLength: 14 }),
    )
    .map(([talker, formatter, fields]) => [talker + formatter, ...fields].join(','));
  const line = fc.oneof(
    fc.constantFrom(...usual).map(sentence),
    body.map(sentence),
    body.map((text) => sentence(text).toLowerCase()),
    body.map((text) => `${sentence(text)} \r`),
    body.map((text) => `14:05:00 ${sentence(text)}`),
    body.map((text) => `$${text}`),
    body.map((text) => `$${text}*00`),
    fc.tuple(body, body).map(([a, b]) => sentence(a) + sentence(b)),
  );
  await fc.assert(
    fc.asyncProperty(
      fc.array(line, { minLength: 1, maxLength: 30 }),
      fc.constantFrom('\n', '\r\n', '\r', '\n\n'),
      fc.constantFrom(1, 11, 1 << 16),
      async (lines, newline, size) => {
        const bytes = Buffer.from(lines.join(newline) + newline, 'latin1');
        await expectSentencesAlike(bytes, size, DAY);
      },
    ),
    { seed: 15, numRuns: Number(process.env['FUZZ_RUNS'] ?? 300) },
  );
});

describeRecordings('real sentences, the quick way and the tolerant reader', () => {
  const files = ['odd-nmea', 'two-laps', 'race-start', 'motoring', 'port-tack-dead-cups'].flatMap((folder) =>
    (existsSync(recording(folder)) ? readdirSync(recording(folder)) : [])
      .filter((file) => file.endsWith('.nmea'))
      .map((file) => `${folder}/${file}`),
  );
  test.each(files)('agree on %s', async (file) => {
    await expectSentencesAlike(readFileSync(recording(file)), 4096, DAY);
  });
});
