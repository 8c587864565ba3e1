import { createHash } from 'node:crypto';
import { readdir, rm, stat } from 'node:fs/promises';
import { join } from 'node:path';
import { setImmediate } from 'node:timers/promises';
import { resultFiles } from '../index.js';
import type { BoatResult, InputEntry, Result, Warning } from '../index.js';
import { forMessages, kindOf, makeFolder, readText, readTextNow, TEMPORARY, unusable, writeWhole } from './files.js';
import { withLock } from './lock.js';
import { resultReader } from './many-files.js';
import { raceSlug } from './slug.js';
import { complain } from './terminal.js';

/** What came of filing. */
export interface Filed {
  readonly path: string;
  /** Name of the file in the logbook. */
  readonly file: string;
  /** What it holds now. */
  readonly result: Result;
  readonly text: string;
}

/** Half-written files older than this were left by a run that was killed. [ms] */
const LEFT_BEHIND = 5 * 60_000;

/**
 * Files a result in a logbook: one file a race, named by date, race and the digest of name and start. The same race
 * filed again is replaced; its boats are merged by name. Written beside its place, flushed, renamed, the folder
 * flushed; one run at a time, so that two who file boats of one race lose none.
 */
export async function fileInLogbook(folder: string, result: Result, day: string | null): Promise<Filed> {
  if ((await kindOf(folder)) === 'file') throw unusable(`${forMessages(folder)}: a file, not a logbook folder.`);
  const { jsonText, readResult } = await resultFiles();
  const file = logbookName(result, day);
  const path = join(folder, file);
  await makeFolder(folder);
  return withLock(folder, async (held) => {
    await sweep(folder);
    const before = (await kindOf(path)) === 'file' ? await readResult(await readText(path)).catch(nothing(path)) : null;
    const now = before === null ? result : merged(before, result);
    const text = jsonText(now);
    if (!held()) throw unusable(`${forMessages(folder)}: this run stood still and lost its turn.`, 'Run it again.');
    await writeWhole(path, text, { syncFolder: true });
    return { path, file, result: now, text };
  });
}

/** Takes away what killed runs left half written. */
async function sweep(folder: string): Promise<void> {
  for (const name of await readdir(folder)) {
    if (!TEMPORARY.test(name)) continue;
    const path = join(folder, name);
    const age = await stat(path).then(
      ({ mtimeMs }) => Date.now() - mtimeMs,
      () => 0,
    );
    if (age > LEFT_BEHIND) await rm(path, { force: true });
  }
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
export function logbookName({ race: { name, start } }: Pick<Result, 'race'>, day: string | null): string {
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

/**
 * Results of a logbook one by one, by date and name, with the names of their files. What is no result is told of and
 * left out.
 */
export async function* readLogbook(folder: string): AsyncGenerator<{ file: string; result: Result }> {
  const how = 'Fill a logbook with `legwork debrief race.yaml --logbook logbook`.';
  const kind = await kindOf(folder);
  if (kind === null) throw unusable(`${folder}: there is no such folder.`, how);
  if (kind === 'file') throw unusable(`${folder}: a file, not a logbook folder.`, how);
  let found = 0;
  const read = resultReader();
  for (const [k, file] of (await readdir(folder)).sort().entries()) {
    // So that an interruption is heard.
    if (k % 50 === 49) await setImmediate();
    const result = file.endsWith('.json') && !file.startsWith('.') ? await resultIn(join(folder, file), read) : null;
    if (result === null) continue;
    found++;
    yield { file, result };
  }
  if (found === 0) throw unusable(`${forMessages(folder)}: no result files in it.`, how);
}

async function resultIn(path: string, read: (path: string) => unknown): Promise<Result | null> {
  const { readResult, seasonResult } = await resultFiles();
  try {
    return (await seasonResult(read(path))) ?? (await readResult(readTextNow(path)));
  } catch (error) {
    const { name, message } = error as Error;
    if (name !== 'NotAResult' && name !== 'UserError') throw error;
    const shown = forMessages(path);
    complain(`${message.startsWith(shown) ? message : `${shown}: ${message}`} It was left out.`);
    return null;
  }
}
