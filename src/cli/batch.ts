import { UserError } from '../index.js';
import type { RaceSeries, Result } from '../index.js';
import { exitCodeOf, tellFailure } from './failures.js';
import { forMessages } from './files.js';
import { expandInputs } from './inputs.js';
import type { Source } from './inputs.js';
import { fileInLogbook } from './logbook.js';
import type { OutputFlags, RaceFlags } from './options.js';
import { checkFlags, raceOptions } from './options.js';
import { checkPlaces, placeLines, placesFor, writeOutputs } from './outputs.js';
import { loadRaces } from './races.js';
import type { Job } from './races.js';
import { raceSlug } from './slug.js';
import { oneLine } from './summary.js';
import { print, Progress } from './terminal.js';

/** What is done with each race of a batch. */
export interface Task {
  /** Put behind the race's name in file names. */
  readonly suffix: string;
  readonly work: (job: Job) => Promise<{ result: Result; series: RaceSeries }>;
  readonly page: (result: Result, series: RaceSeries) => Promise<string>;
  /** At most 27 lines. */
  readonly summary: (result: Result, job: Job) => string[];
}

/** Races of a batch that are told, a line each. */
const MOST_RACES = 29;

type Flags = RaceFlags & OutputFlags;

/** Runs a task over every race of the inputs; returns the worst exit code. */
export async function runBatch(inputs: readonly string[], flags: Flags, task: Task): Promise<number> {
  await checkFlags(flags);
  const progress = new Progress(flags.progress && !flags.quiet);
  const slugs = new Set<string>();
  let worst = 0;
  let told = 0;
  const attempt = async (what: () => Promise<void>): Promise<void> => {
    try {
      await what();
    } catch (error) {
      progress.clear();
      if (!flags.keepGoing) throw error;
      tellFailure(error);
      worst = Math.max(worst, exitCodeOf(error));
    }
  };
  const sources: Source[] = [];
  for (const part of flags.keepGoing ? partsOf(inputs) : [inputs]) {
    await attempt(async () => void sources.push(...(await expandInputs(part))));
  }
  const one = async (job: Job, several: boolean): Promise<void> => {
    const lines = await runJob(job, flags, task, several, slugs, progress);
    if (lines.length === 0 || told++ >= MOST_RACES) return;
    await print(`${lines.join('\n')}\n`);
  };
  const each = async (source: Source): Promise<void> => {
    const jobs = await loadRaces(source, raceOptions(flags), progress);
    const several = sources.length > 1 || jobs.length > 1;
    for (const job of jobs) await attempt(async () => one(await job(), several));
  };
  for (const source of sources) await attempt(() => each(source));
  progress.clear();
  if (told > MOST_RACES) await print(`… and ${told - MOST_RACES} more\n`);
  return worst;
}

/** Race files and folders each for themselves, so that one that is not there does not stop the others. */
function partsOf(inputs: readonly string[]): (readonly string[])[] {
  const isRace = (word: string): boolean => /\.(ya?ml|json)$/i.test(word);
  return inputs.length > 1 && inputs.every(isRace) ? inputs.map((word) => [word]) : [inputs];
}

async function runJob(
  job: Job,
  flags: Flags,
  task: Task,
  several: boolean,
  slugs: Set<string>,
  progress: Progress,
): Promise<string[]> {
  const slug = freeSlug(raceSlug(job.day, job.race.name), slugs);
  const places = await placesFor(flags, slug, task.suffix, several);
  checkPlaces(places, job.paths);
  progress.say(`${job.race.name}: working`);
  const worked = await task.work(job).catch(withZoneHint(job));
  const result = withIssues(worked.result, job);
  await writeOutputs(places, result, worked.series, () => task.page(result, worked.series));
  const filed =
    flags.logbook === undefined
      ? []
      : [`Filed: ${forMessages((await fileInLogbook(flags.logbook, result, job.day)).path)}`];
  progress.clear();
  if (flags.quiet || places.json === '-') return [];
  if (several) return [`${oneLine(result, job)}  ${forMessages(places.html ?? places.json ?? '')}`];
  return [...task.summary(result, job), ...placeLines(places), ...filed];
}

/** Nothing to be analysed where a time was read as UTC for want of a zone: most likely that is why. */
const withZoneHint =
  (job: Job) =>
  (error: unknown): never => {
    const assumed = job.issues.find(({ code }) => code === 'zone-assumed');
    if (!(error instanceof UserError) || error.exitCode !== 1 || !assumed) throw error;
    throw new UserError(`${error.message}\n${assumed.message}`, { exitCode: 1 });
  };

/** What was said while the race was put together stands first. */
function withIssues(result: Result, job: Job): Result {
  if (job.issues.length === 0) return result;
  const said = job.issues.map(({ code, message, file }) => ({
    code,
    message,
    ...(file === undefined ? {} : { file }),
  }));
  return { ...result, warnings: [...said, ...result.warnings] };
}

function freeSlug(slug: string, taken: Set<string>): string {
  for (let n = 1; ; n++) {
    const candidate = n === 1 ? slug : `${slug.slice(0, 57)}-${n}`;
    if (taken.has(candidate)) continue;
    taken.add(candidate);
    return candidate;
  }
}
