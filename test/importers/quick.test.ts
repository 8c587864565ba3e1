import { readdirSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import fc from 'fast-check';
import { expect, test } from 'vitest';
import { readGpx } from '../../src/importers/gpx.js';
import { LogRows } from '../../src/importers/rows.js';
import { settle } from '../../src/importers/settle.js';
import { Tally } from '../../src/importers/tally.js';
import { describeRecordings, recording } from './recordings.js';

const LOGS = join(import.meta.dirname, '../../fixtures/logs');
const GPX = readdirSync(LOGS).filter((file) => file.endsWith('.gpx'));

/** Everything that a reading of a document comes to. */
async function read(text: string, quick: boolean, size: number): Promise<unknown> {
  async function* texts(): AsyncIterable<string> {
    for (let at = 0; at < text.length; at += size) yield await Promise.resolve(text.slice(at, at + size));
  }
  const rows = new LogRows();
  const tally = new Tally('log');
  const { name, columns } = await readGpx(texts(), rows, tally, null, quick);
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
