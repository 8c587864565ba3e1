import { resultFiles } from '../index.js';
import type { Result } from '../index.js';
import { exitCodeOf, tellFailure } from './failures.js';
import { forMessages, writeWhole } from './files.js';
import { inOrder } from './in-order.js';
import { expandInputs } from './inputs.js';
import type { Source } from './inputs.js';
import { fileInLogbook } from './logbook.js';
import { digestOf, Making } from './made.js';
import { checkFlags, raceOptions } from './options.js';
import { checkPlaces, placeLines, placesFor } from './outputs.js';
import type { Places } from './outputs.js';
import { RaceWorkers, workerCount } from './race-workers.js';
import { jobOf, loadRaces } from './races.js';
import type { PlainJob } from './races.js';
import { raceSlug } from './slug.js';
import { oneLine } from './summary.js';
import { workOn } from './task.js';
import type { Finished, Task, TaskFlags } from './task.js';
import { print, Progress } from './terminal.js';

/** Races of a batch that are told, a line each. */
const MOST_RACES = 29;

/** A race on its way through a batch; `from` is the digest of what it is made from, null where none is kept. */
interface Ready {
  readonly job: PlainJob;
  readonly places: Places;
  readonly several: boolean;
  readonly from: string | null;
}
/** What can be known of a race before it is worked on, and after. */
type Step = Ready | { readonly error: unknown };
type Outcome = (Ready & { readonly finished: Finished }) | (Ready & { readonly filed: Result }) | { error: unknown };

/** Runs a task over every race of the inputs; returns the worst exit code. */
export async function runBatch(inputs: readonly string[], flags: TaskFlags, task: Task): Promise<number> {
  await checkFlags(flags);
  const batch = new Batch(flags, task);
  try {
    return await batch.run(inputs);
  } finally {
    await batch.close();
  }
}

/**
 * The races of a batch: put together one after the other, worked on several at a time, written and told in their order
 * again by the main thread alone. So names, bytes and words are the same however many work.
 */
class Batch {
  readonly #flags: TaskFlags;
  readonly #task: Task;
  readonly #progress: Progress;
  readonly #count = workerCount();
  readonly #workers = new RaceWorkers(this.#count);
  readonly #slugs = new Set<string>();
  #record: Making | undefined;
  #races = 0;
  #done = 0;
  #told = 0;
  #worst = 0;

  constructor(flags: TaskFlags, task: Task) {
    this.#flags = flags;
    this.#task = task;
    this.#progress = new Progress(flags.progress && !flags.quiet);
  }

  async run(inputs: readonly string[]): Promise<number> {
    // Behind a slow race the others go on for a while.
    const most = this.#count === 1 ? 1 : 2 * this.#count;
    for await (const outcome of inOrder(this.#steps(inputs), (step) => this.#begin(step), most)) {
      await this.#finish(outcome).catch((error: unknown) => this.#fail(error));
      this.#done++;
      if (!('error' in outcome) && outcome.several) this.#progress.say(this.#bar());
    }
    this.#progress.clear();
    if (this.#told > MOST_RACES) await print(`… and ${this.#told - MOST_RACES} more\n`);
    return this.#worst;
  }

  close(): Promise<void> {
    this.#progress.clear();
    return this.#workers.close();
  }

  async *#steps(inputs: readonly string[]): AsyncGenerator<Step> {
    const sources: Source[] = [];
    for (const part of this.#flags.keepGoing ? partsOf(inputs) : [inputs]) {
      try {
        sources.push(...(await expandInputs(part)));
      } catch (error) {
        yield { error };
      }
    }
    this.#races = sources.length;
    for (const source of sources) {
      try {
        const jobs = await loadRaces(source, raceOptions(this.#flags));
        this.#races += jobs.length - 1;
        const several = sources.length > 1 || jobs.length > 1;
        for (const job of jobs) yield await this.#ready(job, several).catch((error: unknown) => ({ error }));
      } catch (error) {
        yield { error };
      }
    }
  }

  async #ready(prepare: () => Promise<PlainJob>, several: boolean): Promise<Ready> {
    const job = await prepare();
    const slug = freeSlug(raceSlug(job.day, job.race.name), this.#slugs);
    const places = await placesFor(this.#flags, slug, this.#task.suffix, several);
    checkPlaces(places, [...job.files.paths.values()]);
    const isKept = this.#flags.logbook !== undefined && several;
    return { job, places, several, from: isKept ? await digestOf(this.#task, job) : null };
  }

  /** Never fails: an outcome can tell of a failure. */
  async #begin(step: Step): Promise<Outcome> {
    if ('error' in step) return step;
    const { job, places, several, from } = step;
    if (several) this.#progress.say(this.#bar());
    try {
      const filed = from === null ? null : await (await this.#made()).unchanged(from, job, places);
      if (filed) return { ...step, filed };
      const { name } = this.#task;
      if (several && this.#count > 1 && ![...job.files.paths.values()].includes('-')) {
        const finished = await this.#workers.run({ task: name, flags: this.#flags, job, places });
        return { ...step, finished };
      }
      this.#progress.say(`${job.race.name}: working`);
      return { ...step, finished: await workOn(this.#task, jobOf(job, this.#progress, this.#count - 1), places) };
    } catch (error) {
      return { error };
    }
  }

  async #finish(outcome: Outcome): Promise<void> {
    if ('error' in outcome) return this.#fail(outcome.error);
    const { job, places, several } = outcome;
    const result = 'filed' in outcome ? outcome.filed : outcome.finished.result;
    const filed = 'filed' in outcome ? [] : await this.#write(outcome);
    if (places.json === '-') return print((await resultFiles()).jsonText(result));
    if (this.#flags.quiet) return;
    const where = forMessages(places.html ?? places.json ?? '');
    const lines = several
      ? [`${oneLine(result, job)}  ${where}${'filed' in outcome ? '  (unchanged)' : ''}`]
      : [...this.#task.summary(result, job), ...placeLines(places), ...filed];
    if (this.#told++ >= MOST_RACES) return;
    this.#progress.clear();
    await print(`${lines.join('\n')}\n`);
  }

  /** Writes what was made, files it, and says where. */
  async #write({ job, from, finished: { result, outputs } }: Ready & { finished: Finished }): Promise<string[]> {
    for (const { path, bytes } of outputs) await writeWhole(path, bytes);
    const { logbook } = this.#flags;
    if (logbook === undefined) return [];
    const filed = await fileInLogbook(logbook, result, job.day);
    // Only what holds for the file as it lies there is kept: no boats from elsewhere in it, no log changed meanwhile.
    const isOurs = filed.text === (await resultFiles()).jsonText(result);
    if (from !== null && isOurs && from === (await digestOf(this.#task, job))) {
      await (await this.#made()).add(from, filed, outputs);
    }
    return [`Filed: ${forMessages(filed.path)}`];
  }

  async #made(): Promise<Making> {
    return (this.#record ??= await Making.of(this.#flags.logbook!));
  }

  #fail(error: unknown): void {
    this.#progress.clear();
    if (!this.#flags.keepGoing) throw error;
    tellFailure(error);
    this.#worst = Math.max(this.#worst, exitCodeOf(error));
  }

  #bar(): string {
    const full = Math.round((20 * this.#done) / Math.max(1, this.#races));
    return `[${'#'.repeat(full)}${'.'.repeat(20 - full)}] ${this.#done} of ${this.#races} races`;
  }
}

/** Race files and folders each for themselves, so that one that is not there does not stop the others. */
function partsOf(inputs: readonly string[]): (readonly string[])[] {
  const isRace = (word: string): boolean => /\.(ya?ml|json)$/i.test(word);
  return inputs.length > 1 && inputs.every(isRace) ? inputs.map((word) => [word]) : [inputs];
}

function freeSlug(slug: string, taken: Set<string>): string {
  for (let n = 1; ; n++) {
    const candidate = n === 1 ? slug : `${slug.slice(0, 57)}-${n}`;
    if (taken.has(candidate)) continue;
    taken.add(candidate);
    return candidate;
  }
}
