import { createHash } from 'node:crypto';
import { readdir } from 'node:fs/promises';
import { join } from 'node:path';
import { resultFiles } from '../index.js';
import type { BoatResult, InputEntry, Result, Warning } from '../index.js';
import { forMessages, kindOf, readText, unusable, writeWhole } from './files.js';
import { raceSlug } from './slug.js';
import { complain } from './terminal.js';

/**
 * Files a result in a logbook: one file a race, named by date, race and the digest of name and start. The same race
 * filed again is replaced; its boats are merged by name. Written beside its place, flushed, renamed, the folder flushed.
 */
export async function fileInLogbook(folder: string, result: Result, day: string | null): Promise<string> {
  if ((await kindOf(folder)) === 'file') throw unusable(`${forMessages(folder)}: a file, not a logbook folder.`);
  const { jsonText, readResult } = await resultFiles();
  const path = join(folder, logbookName(result, day));
  const before = (await kindOf(path)) === 'file' ? await readResult(await readText(path)).catch(nothing(path)) : null;
  await writeWhole(path, jsonText(before === null ? result : merged(before, result)), { syncFolder: true });
  return `Filed: ${forMessages(path)}`;
}

/** A damaged file of ours is replaced, a newer one is not touched. */
const nothing =
  (path: string) =>
  (error: Error): null => {
    if (error.message.includes('newer')) throw unusable(`${forMessages(path)}: ${error.message}`);
    complain(`${forMessages(path)}: ${error.message} It was replaced.`);
    return null;
  };

/** `<date>-<race>-<8 characters of the digest of name and start>.json`; without a start the day stands for it. */
export function logbookName(result: Result, day: string | null): string {
  const { name, start } = result.race;
  const digest = createHash('sha256')
    .update(`${name}\n${start ?? day ?? ''}`)
    .digest('hex');
  return `${raceSlug(day, name)}-${digest.slice(0, 8)}.json`;
}

/** The newer result, with the boats only the older one knows. */
export function merged(before: Result, now: Result): Result {
  const boats = byKey<BoatResult>(before.boats, now.boats, (boat) => boat.name);
  const kept = boats.length > now.boats.length;
  return {
    ...now,
    inputs: kept
      ? byKey<InputEntry>(before.inputs, now.inputs, (input) => `${input.file} ${input.sha256}`)
      : now.inputs,
    boats,
    ...((now.pairs ?? before.pairs) ? { pairs: now.pairs ?? before.pairs ?? [] } : {}),
    warnings: kept ? byKey<Warning>(before.warnings, now.warnings, (warning) => JSON.stringify(warning)) : now.warnings,
  };
}

/** Old entries in their order with new ones in their place, then what is new. */
function byKey<T>(before: readonly T[], now: readonly T[], key: (entry: T) => string): T[] {
  const entries = new Map(before.map((entry) => [key(entry), entry]));
  for (const entry of now) entries.set(key(entry), entry);
  return [...entries.values()];
}

/** Results of a logbook, by date and name. What is no result is told of and left out. */
export async function readLogbook(folder: string): Promise<Result[]> {
  const kind = await kindOf(folder);
  if (kind !== 'folder') {
    throw unusable(
      kind === null ? `${folder}: there is no such folder.` : `${folder}: a file, not a logbook folder.`,
      'Fill a logbook with `legwork debrief race.yaml --logbook logbook`.',
    );
  }
  const { readResult } = await resultFiles();
  const results: Result[] = [];
  for (const name of (await readdir(folder)).sort()) {
    if (!name.endsWith('.json') || name.startsWith('.')) continue;
    try {
      results.push(await readResult(await readText(join(folder, name))));
    } catch (error) {
      if ((error as Error).name !== 'NotAResult') throw error;
      complain(`${forMessages(join(folder, name))}: ${(error as Error).message} It was left out.`);
    }
  }
  if (results.length > 0) return results;
  throw unusable(
    `${forMessages(folder)}: no result files in it.`,
    'Fill a logbook with `legwork debrief race.yaml --logbook logbook`.',
  );
}
