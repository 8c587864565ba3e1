import type { RaceSeries, Result } from '../index.js';
import { UserError } from '../index.js';
import type { OutputFlags, RaceFlags } from './options.js';
import { makeOutputs } from './outputs.js';
import type { Output, Places } from './outputs.js';
import type { Job, PlainJob } from './races.js';

export type TaskName = 'debrief' | 'compare';

export interface TaskFlags extends RaceFlags, OutputFlags {
  readonly reference?: string;
  readonly pair?: readonly string[];
}

/** What is done with each race of a batch. */
export interface Task {
  readonly name: TaskName;
  /** Put behind the race's name in file names. */
  readonly suffix: string;
  readonly work: (job: Job) => Promise<Worked>;
  /** At most 27 lines. */
  readonly summary: (result: Result, job: PlainJob) => string[];
  /** What of the command line the result rests on besides the race. */
  readonly basis: () => Promise<unknown>;
}

export interface Worked {
  readonly result: Result;
  readonly series: RaceSeries;
  readonly page: (result: Result) => Promise<string>;
}

/** A race done, nothing written yet. */
export interface Finished {
  readonly result: Result;
  readonly outputs: readonly Output[];
}

/** Works on one race and makes all that is to be written; the job is closed then. */
export async function workOn(task: Task, job: Job, places: Places): Promise<Finished> {
  const {
    result: bare,
    series,
    page,
  } = await task
    .work(job)
    .catch(withZoneHint(job))
    .finally(() => job.close());
  const result = withIssues(bare, job);
  return { result, outputs: await makeOutputs(places, result, series, () => page(result)) };
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
