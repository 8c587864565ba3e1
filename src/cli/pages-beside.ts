import { readdir } from 'node:fs/promises';
import { dirname } from 'node:path';
import type { Filed } from './logbook.js';

/** What a season's page needs of a race to find the race's own page. */
export interface RacePage {
  readonly race: string;
  /** The seconds a season knows the race by: its gun, else the first beat of each boat. */
  readonly times: readonly number[];
  /** File name of its page as a debrief writes it. */
  readonly page: string;
}

/** A file of a logbook: date and race, as reports are called too, and a digest. */
const FILED = /^(.+)-[0-9a-f]{8}\.json$/;

/** Nothing of a file that somebody named otherwise. */
export function racePage({ file, result: { race, boats } }: Pick<Filed, 'file' | 'result'>): RacePage[] {
  const slug = FILED.exec(file)?.[1];
  const begins =
    race.start === null
      ? boats.flatMap(({ legs }) => legs.find(({ kind }) => kind === 'upwind')?.start ?? [])
      : [race.start];
  const times = begins.map((time) => Date.parse(time) / 1000);
  return slug === undefined ? [] : [{ race: race.name, times, page: `${slug}.html` }];
}

/**
 * Which races have their page beside the page of the season.
 *
 * @param page  Where the page of the season goes.
 * @param races What is in the logbook.
 * @returns The file name of a race's page, null where none lies there.
 */
export async function pagesBeside(
  page: string,
  races: readonly RacePage[],
): Promise<(race: { readonly race: string; readonly time: number }) => string | null> {
  const beside = new Set(await readdir(dirname(page)).catch(() => []));
  const pages = new Map(
    races
      .filter((race) => beside.has(race.page))
      .flatMap((race) => race.times.map((time): [string, string] => [keyOf(race.race, time), race.page])),
  );
  return ({ race, time }) => pages.get(keyOf(race, time)) ?? null;
}

const keyOf = (race: string, time: number): string => `${time}\n${race}`;
