/**
 * Disks that are full or read-only, as a small memory disk shows them: what cannot be written is told in words with
 * exit code 2, what stood there stays, and nothing half-written is left. Skipped where a disk cannot be mounted.
 */
import { execFileSync } from 'node:child_process';
import { mkdirSync, readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { gpxText, inventedBeat, windText } from '../cli/invented-beat.js';
import { buildProgram, drop, dropProgram, filesBelow, folder, run } from '../cli/run.js';

/** A memory disk of so many kilobytes at a new folder; null where this user may not mount one. */
function mountDisk(at: string, kilobytes: number): string | null {
  mkdirSync(at);
  try {
    execFileSync('mount', ['-t', 'tmpfs', '-o', `size=${kilobytes}k`, 'tmpfs', at], { stdio: 'ignore' });
    return at;
  } catch {
    return null;
  }
}

const home = folder({ 'ann.gpx': gpxText(inventedBeat()), 'wind.csv': windText() });
/** A page takes more than this, a result file less. */
const small = mountDisk(join(home, 'small'), 64);
const fixed = mountDisk(join(home, 'fixed'), 1024);
const debrief = (...args: string[]) =>
  run(['debrief', 'ann.gpx', '--wind', 'wind.csv', '--quiet', ...args], { cwd: home });

beforeAll(() => buildProgram());
afterAll(() => {
  for (const disk of [small, fixed]) if (disk) execFileSync('umount', [disk]);
  drop(home);
  dropProgram();
});

describe.skipIf(!small || !fixed)('disks', () => {
  it('that is full: the page is not begun, the one that stood there stays', async () => {
    writeFileSync(join(small!, 'page.html'), 'the page before');
    const { code, err } = await debrief('--out', 'small/page.html');
    expect({ code, err }).toMatchObject({ code: 2, err: expect.stringMatching(/disk is full/) as string });
    expect(err).not.toMatch(/\n\s+at /);
    expect(filesBelow(small!)).toEqual(['page.html']);
    expect(readFileSync(join(small!, 'page.html'), 'utf8')).toBe('the page before');
  });

  it('that is full: the race filed before is still in the logbook', async () => {
    const book = join(small!, 'book');
    expect((await debrief('--json', 'small/r.json', '--logbook', 'small/book')).code).toBe(0);
    const before = filesBelow(book).map((file) => [file, readFileSync(join(book, file), 'utf8')]);
    writeFileSync(join(small!, 'filler'), 'x'.repeat(4000));
    for (let k = 0; ; k++) {
      try {
        writeFileSync(join(small!, `filler-${k}`), 'x'.repeat(4096));
      } catch {
        break;
      }
    }
    const { code, err } = await debrief('--json', 'r.json', '--logbook', 'small/book', '--finish', '12:07');
    expect({ code, err }).toMatchObject({ code: 2, err: expect.stringMatching(/disk is full/) as string });
    const races = (file: string): boolean => !file.startsWith('.');
    const after = filesBelow(book).map((file) => [file, readFileSync(join(book, file), 'utf8')]);
    expect(after.filter(([file]) => races(file))).toEqual(before.filter(([file]) => races(file)));
  });

  it('that is read-only', async () => {
    execFileSync('mount', ['-o', 'remount,ro', fixed!]);
    for (const args of [
      ['--out', 'fixed/page.html'],
      ['--csv', 'fixed/tables'],
      ['--logbook', 'fixed/book'],
    ]) {
      const { code, err } = await debrief('--out', 'page.html', ...args);
      expect({ args, code }).toEqual({ args, code: 2 });
      expect(err).toMatch(/fixed/);
      expect(err).not.toMatch(/\n\s+at /);
    }
    expect(filesBelow(fixed!)).toEqual([]);
  });
});
