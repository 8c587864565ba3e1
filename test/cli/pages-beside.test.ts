import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, expect, test } from 'vitest';
import { fileInLogbook } from '../../src/cli/logbook.js';
import { pagesBeside, racePage } from '../../src/cli/pages-beside.js';
import { inventedSeason } from '../season/invented-season.js';

const home = mkdtempSync(join(tmpdir(), 'legwork-beside-'));
afterAll(() => rmSync(home, { recursive: true, force: true }));

test('a race is given its page where that lies beside the page of the season', async () => {
  const [first, second, third] = inventedSeason({ seed: 2, races: 3, every: 7, sailors: [{ name: 'Corrie' }] });
  const unstarted = { ...third, race: { ...third.race, start: null } };
  const book = join(home, 'logbook');
  const filed = [];
  for (const [result, day] of [
    [first, '2026-04-04'],
    [second, '2026-04-11'],
    [unstarted, '2026-04-18'],
  ] as const) filed.push(await fileInLogbook(book, result, day)); // prettier-ignore
  for (const page of ['2026-04-04-race-1.html', '2026-04-18-race-3.html']) writeFileSync(join(home, page), '');
  const pageOf = await pagesBeside(join(home, 'season.html'), filed.flatMap(racePage));
  const at = (iso: string): number => Date.parse(iso) / 1000;
  expect(pageOf({ race: 'Race 1', time: at(first.race.start!) })).toBe('2026-04-04-race-1.html');
  expect(pageOf({ race: 'Race 2', time: at(second.race.start!) })).toBeNull();
  expect(pageOf({ race: 'Race 3', time: at(unstarted.boats[0].legs[0].start) })).toBe('2026-04-18-race-3.html');
  expect(pageOf({ race: 'Race 1', time: at(second.race.start!) })).toBeNull(); // another day's
});
