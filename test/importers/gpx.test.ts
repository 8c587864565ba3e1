import { createHash } from 'node:crypto';
import { gzipSync, zipSync } from 'fflate';
import { describe, expect, test } from 'vitest';
import { importLog } from '../../src/importers/index.js';
import { UserError } from '../../src/recording/issues.js';
import { checkBooks, codesOf, importBytes, importText, rejectedOf } from './check-import.js';

const point = (k: number, inner = ''): string =>
  `<trkpt lat="46.9${String(k).padStart(4, '0')}" lon="9.061"><time>${new Date(1776513900e3 + k * 1000).toISOString()}</time>${inner}</trkpt>`;

const points = (n: number): string => Array.from({ length: n }, (_, k) => point(k)).join('\n');

const gpx = (inner: string, head = '<?xml version="1.0"?>'): string =>
  `${head}\n<gpx version="1.1" creator="invented"><trk><name>Corrie</name><trkseg>\n${inner}\n</trkseg></trk></gpx>`;

describe('a cut file', () => {
  test('keeps exactly the points that are complete before the cut, wherever it is', async () => {
    const text = gpx(points(30));
    for (let cut = text.indexOf('<trkpt') + 120; cut < text.length - 6; cut += 13) {
      const part = text.slice(0, cut);
      const whole = part.split('</trkpt>').length - 1;
      const log = await importText(part);
      checkBooks(log);
      expect(log.kept, `cut at ${cut}`).toBe(whole);
      expect(log.rows - log.kept).toBeLessThanOrEqual(1);
      const told = log.issues.find(({ code }) => code === 'file-truncated');
      expect(told?.line, `cut at ${cut}`).toBe(part.split('\n').length);
    }
  });
});

/** Attacks and damages that are known to break or fool readers of XML (OWASP XML External Entity Prevention). */
describe('hostile and damaged files', () => {
  test('entities are never expanded, not even many times over, and nothing outside is read', async () => {
    const lol = Array.from({ length: 9 }, (_, k) => `<!ENTITY l${k + 1} "${`&l${k};`.repeat(10)}">`).join('');
    const doctype = `<?xml version="1.0"?><!DOCTYPE gpx [<!ENTITY l0 "ha">${lol}<!ENTITY file SYSTEM "file:///etc/hostname">]>`;
    const log = await importText(gpx(points(3), doctype).replace('Corrie', '&l9;&file;'));
    checkBooks(log);
    expect(log.kept).toBe(3);
    expect(log.recording.name).toBe('&l9;&file;');
    expect(codesOf(log)).toContain('doctype');
  });

  test('elements nested without end and text without end cost neither memory nor points', async () => {
    const deep = await importText(gpx(points(3) + '<a>'.repeat(100_000) + '</a>'.repeat(100_000) + point(7)));
    expect(deep.kept).toBe(4);
    expect(codesOf(deep)).toContain('xml-depth');
    const long = await importText(gpx(points(3) + 'x'.repeat(5_000_000) + point(7)));
    expect(long.kept).toBe(4);
    expect(codesOf(long)).toContain('xml-text');
  });

  test.each([
    ['a bare ampersand in a name', gpx(points(5)).replace('Corrie', 'Tom & Jerry'), 5, 'Tom & Jerry'],
    ['entities as they should be', gpx(points(2)).replace('Corrie', '&lt;&#66;&#x43;&amp;&quot;'), 2, '<BC&"'],
    ['a tail of zero bytes', gpx(points(5)) + '\0'.repeat(4096), 5, 'Corrie'],
    ['an undeclared prefix', gpx(point(0, '<foo:bar>1</foo:bar>')), 1, 'Corrie'],
    ['a name in CDATA', gpx(points(2)).replace('Corrie', '<![CDATA[A<B]]>'), 2, 'A<B'],
    ['a comment with points', gpx(points(2) + `<!-- ${points(3)} -->`), 2, 'Corrie'],
    ['two documents in one', gpx(points(2)) + gpx(points(4)).replace('Corrie', 'Linnet'), 4, 'Corrie'],
    ['a control character', gpx(points(3)).replace('Corrie', 'Cor\x01rie'), 3, 'Cor\x01rie'],
    ['attributes in single quotes', gpx(points(3)).replaceAll('"', "'"), 3, 'Corrie'],
    ['no name at all', gpx(points(3)).replace('<name>Corrie</name>', ''), 3, ''],
    ['a fragment', points(3), 3, ''],
  ])('%s', async (_, text, kept, name) => {
    const log = await importText(text);
    checkBooks(log);
    expect(log.kept).toBe(kept);
    expect(log.recording.name).toBe(name);
  });

  test('a damaged end of a point does not swallow the points after it', async () => {
    for (const damage of ['</trkpx>', '</trkpt', '<trkpt>', '']) {
      const log = await importText(gpx(points(10)).replace('</trkpt>\n', damage + '\n'));
      checkBooks(log);
      expect(log.kept, damage).toBeGreaterThanOrEqual(9);
    }
  });
});

describe('times', () => {
  const text = gpx(`<trkpt lat="46.9" lon="9"><time>2026-04-18T14:05:00</time></trkpt>`);

  test('without a zone are UTC and told; of the zone when it is given', async () => {
    const utc = await importText(text);
    expect(codesOf(utc)).toEqual(['zone-assumed']);
    expect(utc.recording.time[0]).toBe(Date.UTC(2026, 3, 18, 14, 5) / 1000);
    const zurich = await importText(text, { zone: 'Europe/Zurich' });
    expect(zurich.issues).toEqual([]);
    expect(zurich.recording.time[0]).toBe(Date.UTC(2026, 3, 18, 12, 5) / 1000);
  });
});

describe('segments', () => {
  test('a new segment or track is a break, an empty one is none', async () => {
    const log = await importText(
      gpx(
        points(2) +
          '</trkseg><trkseg></trkseg><trkseg>' +
          point(5) +
          '</trkseg></trk><trk><trkseg>' +
          point(9) +
          point(10),
      ),
    );
    expect(log.recording.breaks).toEqual([2, 3]);
  });

  test('two tracks over the same time are told', async () => {
    const log = await importText(
      gpx(points(5) + '</trkseg></trk><trk><trkseg>' + point(3).replace('9.061', '9.062') + point(8)),
    );
    expect(codesOf(log)).toContain('tracks-overlap');
    checkBooks(log);
  });
});

/** First bytes of what people give by mistake: magic numbers from the formats' own definitions. */
describe('what is no log', () => {
  const bytes = (...parts: (string | number[])[]): Uint8Array =>
    Uint8Array.from(
      parts.flatMap((part) => (typeof part === 'string' ? [...part].map((letter) => letter.charCodeAt(0)) : part)),
    );

  test.each([
    ['nothing', new Uint8Array(0), 'empty'],
    ['blanks', bytes(' \n\n'), 'nothing but'],
    [
      'a binary watch recording',
      bytes([14, 16, 217, 7, 80, 1, 0, 0], '.FIT', [0x40, 1, 2, 3]),
      'binary watch recording',
    ],
    ['a picture', bytes([0x89], 'PNG\r\n', [0x1a, 10, 0, 0, 0, 13], 'IHDR', [0, 0, 1, 0, 0, 0, 1, 0, 8, 2]), 'binary'],
    ['another XML', bytes('<?xml version="1.0"?><kml><Document/></kml>'), "'kml'"],
    ['JSON', bytes('{"type":"FeatureCollection","features":[]}'), 'JSON'],
    ['a letter', bytes('Dear reader,\nthis is no table.\n'), 'Headers seen'],
    ['routes only', bytes('<gpx><rte><rtept lat="46" lon="9"/></rte></gpx>'), '1 rtept'],
  ])('%s', async (_, content, words) => {
    const failure = await importBytes(content, {}, 'corrie.gpx').catch((error: unknown) => error);
    expect(failure).toBeInstanceOf(UserError);
    expect(failure).toMatchObject({ exitCode: 2 });
    expect((failure as Error).message).toMatch(/^corrie\.gpx: /);
    expect((failure as Error).message).toContain(words);
  });

  test('the watch recording is told how to become a GPX', async () => {
    await expect(importBytes(bytes([12, 16, 0, 0, 80, 1, 0, 0], '.FIT'))).rejects.toMatchObject({
      suggestion: expect.stringContaining('GPX') as string,
    });
  });
});

test('records are counted even when nearly all are rejected', async () => {
  const log = await importText(gpx(points(2) + '<trkpt lat="x" lon="9"><time>now</time></trkpt>'.repeat(50)));
  checkBooks(log);
  expect([log.rows, log.kept, rejectedOf(log)]).toEqual([52, 2, 50]);
});

describe('wrapping', () => {
  const bytes = new TextEncoder().encode(gpx(points(2000)));

  test('the digest is that of the bytes as they came, by whichever hash', async () => {
    const packed = gzipSync(bytes);
    const expected = createHash('sha256').update(packed).digest('hex');
    expect((await importBytes(packed)).sha256).toBe(expected);
    const host = createHash('sha256');
    const log = await importLog({
      name: 'log.gpx.gz',
      chunks: [packed],
      createHash: () => ({ update: (piece) => void host.update(piece), digest: () => host.digest('hex') }),
    });
    expect(log.sha256).toBe(expected);
  });

  test.each([
    ['gzip', gzipSync(bytes)],
    ['zip', zipSync({ 'corrie.gpx': bytes })],
  ])('a cut %s is read as far as it goes, and told', async (_, packed) => {
    const log = await importBytes(packed.subarray(0, Math.floor(packed.length / 2)));
    checkBooks(log);
    expect(log.kept).toBeGreaterThan(100);
    expect(codesOf(log)).toContain('file-truncated');
  });

  test('of an archive with more than one file the first is read, the rest told', async () => {
    const log = await importBytes(
      zipSync({ '__MACOSX/._a': bytes.subarray(0, 9), 'a/': new Uint8Array(0), 'a/b.gpx': bytes, 'a/c.gpx': bytes }),
    );
    expect(log.kept).toBe(2000);
    expect(codesOf(log)).toEqual(['archive-rest']);
  });

  test('bytes in one piece are read like bytes in many', async () => {
    expect((await importLog({ name: 'log', chunks: [bytes] })).kept).toBe(2000);
  });
});
