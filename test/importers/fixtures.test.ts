import { readdirSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, test } from 'vitest';
import { checkImport } from './check-import.js';

const FIXTURES = join(import.meta.dirname, '../../fixtures');
const LOGS = join(FIXTURES, 'logs');

/** What a file needs to be read at all. */
const OPTIONS: Record<string, { date?: string; zone?: string }> = {
  'nmea-midnight-no-date.nmea': { date: '2026-04-18' },
  'csv-autumn-clock-change.csv': { zone: 'Europe/Zurich' },
  'csv-date-and-time-sides.csv': { zone: 'Europe/Zurich' },
};

test('every fixture has its entry in the README', () => {
  const readme = readFileSync(join(FIXTURES, 'README.md'), 'utf8');
  const files = readdirSync(FIXTURES, { recursive: true, withFileTypes: true })
    .filter((entry) => entry.isFile() && entry.name !== 'README.md')
    .map((entry) =>
      join(entry.parentPath, entry.name)
        .slice(FIXTURES.length + 1)
        .replaceAll('\\', '/'),
    );
  expect(files.length).toBeGreaterThan(0);
  expect(files.filter((file) => !readme.includes(`\`${file}\``))).toEqual([]);
});

describe('a fixture is read alike however it comes', () => {
  test.each(readdirSync(LOGS))('%s', async (file) => {
    await checkImport(join(LOGS, file), OPTIONS[file]);
  });
});
