import { execFileSync } from 'node:child_process';
import { mkdtempSync, readdirSync, readFileSync, rmSync, statSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { describe, expect, test } from 'vitest';

const ROOT = fileURLToPath(new URL('..', import.meta.url));
const LONG = process.env['LEGWORK_LONG'] !== undefined;

interface Lock {
  readonly packages: Readonly<
    Record<string, { readonly dev?: boolean; readonly devOptional?: boolean; readonly license?: string }>
  >;
}

/** What `npm install legwork` brings: places below node_modules, and their licences. */
function installed(): [string, string][] {
  const lock = JSON.parse(readFileSync(join(ROOT, 'package-lock.json'), 'utf8')) as Lock;
  return Object.entries(lock.packages)
    .filter(([place, { dev, devOptional }]) => place !== '' && !dev && !devOptional)
    .map(([place, { license }]) => [place, license ?? '']);
}

function sizeOf(folder: string): number {
  let size = 0;
  for (const entry of readdirSync(folder, { withFileTypes: true })) {
    // A dependency's own dependencies are counted where they stand in the lock.
    if (entry.name === 'node_modules') continue;
    const path = join(folder, entry.name);
    size += entry.isDirectory() ? sizeOf(path) : statSync(path).size;
  }
  return size;
}

const packed = (): { path: string }[] =>
  (
    JSON.parse(
      execFileSync('npm', ['pack', '--dry-run', '--ignore-scripts', '--json'], { cwd: ROOT, encoding: 'utf8' }),
    ) as [{ files: { path: string }[] }]
  )[0].files;

/** Packages whose entry names no licence, one of two, or one misspelt: by the licence text that they carry. */
const BY_TEXT = new Map([
  ['node_modules/@turf/jsts', 'EDL-1.0 is BSD-3-Clause'],
  ['node_modules/jsts', 'EDL-1.0 is BSD-3-Clause'],
  ['node_modules/arc', 'BSD-2-Clause'],
  ['node_modules/splaytree-ts', 'BSD-3-Clause'],
]);

describe('what an install brings', () => {
  test('no more packages and bytes than we answer for', () => {
    const packages = installed();
    const megabytes = packages.reduce((sum, [place]) => sum + sizeOf(join(ROOT, place)), 0) / 1e6;
    expect(packages.length).toBeLessThanOrEqual(175);
    expect(megabytes).toBeLessThanOrEqual(45);
  });

  test('licences that ask for no more than their text', () => {
    const free = /^\(?(MIT|ISC|0BSD|BSD-[23]-Clause|Apache-2\.0|Unlicense)/;
    expect(installed().filter(([place, license]) => !free.test(license) && !BY_TEXT.has(place))).toEqual([]);
  });
});

describe('the package', () => {
  test('holds the program, its schemas and what a reader needs, and nothing else', () => {
    const known =
      /^(package\.json|README\.md|LICENSE|CHANGELOG\.md|dist\/schema\/[a-z]+\.schema\.json|dist\/cli\/(program\.(cjs|v8)|LICENSES\.txt)|dist\/[\w/-]+(\.js|\.d\.ts))$/;
    expect(packed().filter(({ path }) => !known.test(path))).toEqual([]);
  });

  test.skipIf(!LONG)('runs from the tarball in an empty folder', () => {
    const home = mkdtempSync(join(tmpdir(), 'legwork-package-'));
    // Below node_modules the packages it needs are found without asking a registry again.
    const place = mkdtempSync(join(ROOT, 'node_modules/.cache/legwork-package-'));
    try {
      execFileSync('npm', ['pack', '--pack-destination', place], { cwd: ROOT, encoding: 'utf8', stdio: 'pipe' });
      const [tarball] = readdirSync(place);
      execFileSync('tar', ['-xzf', tarball], { cwd: place });
      const program = join(place, 'package/dist/cli/legwork.js');
      const said = execFileSync(process.execPath, [program, 'demo'], { cwd: home, encoding: 'utf8' });
      const report = /^Report: (.*\.html)$/m.exec(said)?.[1];
      expect(statSync(join(home, report ?? 'no report')).size).toBeGreaterThan(50_000);
    } finally {
      rmSync(home, { recursive: true });
      rmSync(place, { recursive: true });
    }
  });
});
