/** Sizes beyond 32 bits, and archives that grow: a log of more than 2 GB, most of it a hole in the file. */
import { closeSync, ftruncateSync, openSync, statSync, writeSync } from 'node:fs';
import { join } from 'node:path';
import { zipSync } from 'fflate';
import { expect, test } from 'vitest';
import { importLog } from '../../src/importers/index.js';
import { openFile } from '../bench/stages.js';
import { drop, folder } from '../cli/run.js';
import { codesOf, importBytes } from '../importers/check-import.js';

const LONG = process.env['LEGWORK_LONG'] === '1';
const SIZE = LONG ? 2 ** 31 + 2 ** 28 : 2 ** 26;

const point = (k: number): string =>
  `<trkpt lat="46.9${String(k).padStart(4, '0')}" lon="9.061"><time>2026-04-18T12:${String(Math.floor(k / 60)).padStart(2, '0')}:${String(k % 60).padStart(2, '0')}Z</time></trkpt>\n`;
const points = (from: number, to: number): string =>
  Array.from({ length: to - from }, (_, k) => point(from + k)).join('');

const memory = (): number => process.memoryUsage().rss / 1e6;

test(`a log of ${SIZE} bytes with a hole of zeros in the middle is read on both sides of it`, async () => {
  const home = folder();
  const path = join(home, 'holed.gpx');
  const file = openSync(path, 'w');
  writeSync(file, `<gpx><trk><trkseg>\n${points(0, 100)}`);
  ftruncateSync(file, SIZE);
  closeSync(file);
  const end = openSync(path, 'a');
  writeSync(end, `${points(100, 200)}</trkseg></trk></gpx>\n`);
  closeSync(end);
  expect(statSync(path).size).toBeGreaterThan(SIZE);
  const before = memory();
  const log = await importLog(openFile(path));
  drop(home);
  expect(log.fixes).toBe(200);
  expect(codesOf(log)).toContain('zero-bytes');
  expect(memory() - before).toBeLessThan(200);
}, 600_000);

test('a zip that grows a thousandfold is refused before it has grown', async () => {
  const grown = new Uint8Array(70e6).fill(32);
  grown.set(new TextEncoder().encode('<gpx><trk><trkseg>'));
  const bomb = zipSync({ 'a.gpx': [grown, { level: 9 }] });
  expect(bomb.length).toBeLessThan(1e6);
  const before = memory();
  await expect(importBytes(bomb)).rejects.toMatchObject({
    exitCode: 2,
    message: expect.stringMatching(/times its size/) as string,
  });
  expect(memory() - before).toBeLessThan(200);
});
