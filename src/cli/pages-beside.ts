import { createHash } from 'node:crypto';
import { readdir } from 'node:fs/promises';
import { dirname, join } from 'node:path';
import type { Result } from '../index.js';
import { kindOf } from './files.js';

/** A file of a logbook: date and race, and the digest of its name and start. */
const FILED = /^(.+)-([0-9a-f]{8})\.json$/;

/**
 * Which races of a logbook have their page beside the page of the season.
 *
 * @param page    Where the page of the season goes.
 * @param folder  The logbook.
 * @param results What is in it.
 * @returns The file name of a race's page, null where none lies there.
 */
export async function pagesBeside(
  page: string,
  folder: string,
  results: readonly Result[],
): Promise<(race: { readonly race: string; readonly time: number }) => string | null> {
  const filed = (await readdir(folder)).flatMap((name) => {
    const [, slug, digest] = FILED.exec(name) ?? [];
    return slug === undefined ? [] : [{ slug, digest }];
  });
  const pages = new Map<string, string>();
  for (const result of results) {
    const slug = filed.find((file) => file.digest === digestOf(result, file.slug))?.slug;
    if (slug === undefined || (await kindOf(join(dirname(page), `${slug}.html`))) !== 'file') continue;
    for (const time of timesOf(result)) pages.set(keyOf(result.race.name, time), `${slug}.html`);
  }
  return ({ race, time }) => pages.get(keyOf(race, time)) ?? null;
}

const keyOf = (race: string, time: number): string => `${time}\n${race}`;

/** As `logbookName` makes it: without a start the day, which the file's name begins with, stands for it. */
function digestOf({ race: { name, start } }: Result, slug: string): string {
  const day = /^\d{4}-\d\d-\d\d/.exec(slug)?.[0] ?? '';
  return createHash('sha256')
    .update(`${name}\n${start ?? day}`)
    .digest('hex')
    .slice(0, 8);
}

/** The seconds a season knows a race by: its gun, else the first beat of each boat. */
function timesOf({ race: { start }, boats }: Result): number[] {
  const begins =
    start === null ? boats.flatMap(({ legs }) => legs.find(({ kind }) => kind === 'upwind')?.start ?? []) : [start];
  return begins.map((time) => Date.parse(time) / 1000);
}
