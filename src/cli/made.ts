import { createHash } from 'node:crypto';
import { createReadStream, readdirSync, readFileSync } from 'node:fs';
import { appendFile, readFile } from 'node:fs/promises';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import type { Result } from '../index.js';
import { writeWhole } from './files.js';
import type { Filed } from './logbook.js';
import { logbookName } from './logbook.js';
import { outputFiles } from './outputs.js';
import type { Output, OutputRole, Places } from './outputs.js';
import type { PlainJob } from './races.js';
import type { Task } from './task.js';

/**
 * What the files of a logbook were made from, so that a race nothing has changed about need not be worked on again:
 * lines of JSON, the last of a file holds. It is safe to delete; then all is made anew.
 */
const RECORD = '.made';

interface Made {
  /** Name of the file in the logbook. */
  readonly file: string;
  /** Digest of all it was made from. */
  readonly from: string;
  /** Digest of the file, and of what else was written. */
  readonly sha256: string;
  readonly outputs: Readonly<Partial<Record<OutputRole, string>>>;
}

/**
 * Digest of all a race's result and report rest on: the program's own code, the task, the race with every option, and
 * every file it names. Null where that cannot be told.
 */
export async function digestOf(task: Task, job: PlainJob): Promise<string | null> {
  const { race, issues, day, files } = job;
  try {
    const logs: [string, string][] = [];
    for (const [name, path] of files.paths) {
      if (path === '-') return null;
      logs.push([name, await digestOfFile(path)]);
    }
    return digest(JSON.stringify([programDigest(), task.name, await task.basis(), race, issues, day, logs]));
  } catch {
    return null;
  }
}

/** Files of a logbook and what is known of their making, for one batch. */
export class Making {
  readonly #logbook: string;
  readonly #made: Map<string, Made>;

  private constructor(logbook: string, made: Map<string, Made>) {
    this.#logbook = logbook;
    this.#made = made;
  }

  static async of(logbook: string): Promise<Making> {
    const path = join(logbook, RECORD);
    const lines = (await readFile(path, 'utf8').catch(() => '')).split('\n').filter((line) => line !== '');
    const made = new Map(lines.flatMap(entryOf).map((entry) => [entry.file, entry]));
    if (lines.length > 100 + 2 * made.size) await writeWhole(path, [...made.values()].map(lineOf).join(''));
    return new Making(logbook, made);
  }

  /** The result as filed, where it and all that is asked for are there as they were made from just this. */
  async unchanged(from: string, job: PlainJob, places: Places): Promise<Result | null> {
    const start = job.race.start === null ? null : new Date(job.race.start * 1000).toISOString();
    const made = this.#made.get(logbookName({ race: { name: job.race.name, start, finish: null } }, job.day));
    if (made?.from !== from) return null;
    for (const [role, path] of Object.entries(outputFiles(places)) as [OutputRole, string][]) {
      if (made.outputs[role] === undefined || (await digestOfFile(path).catch(() => null)) !== made.outputs[role]) {
        return null;
      }
    }
    const text = await readFile(join(this.#logbook, made.file), 'utf8').catch(() => '');
    return digest(text) === made.sha256 ? (JSON.parse(text) as Result) : null;
  }

  async add(from: string, filed: Filed, outputs: readonly Output[]): Promise<void> {
    const entry: Made = {
      file: filed.file,
      from,
      sha256: digest(filed.text),
      outputs: Object.fromEntries(outputs.map(({ role, bytes }) => [role, digest(bytes)])),
    };
    await appendFile(join(this.#logbook, RECORD), lineOf(entry));
  }
}

const lineOf = (entry: Made): string => `${JSON.stringify(entry)}\n`;

/** A line cut off by a crash says nothing. */
function entryOf(line: string): Made[] {
  try {
    const entry = JSON.parse(line) as Made;
    return typeof entry.file === 'string' && typeof entry.outputs === 'object' ? [entry] : [];
  } catch {
    return [];
  }
}

const digest = (content: string | Uint8Array): string => createHash('sha256').update(content).digest('hex');

async function digestOfFile(path: string): Promise<string> {
  const hash = createHash('sha256');
  for await (const chunk of createReadStream(path, { highWaterMark: 1 << 18 })) hash.update(chunk as Buffer);
  return hash.digest('hex');
}

let program: string | undefined;
/** Of every file of the program's code: a version number alone does not tell one build from another. */
function programDigest(): string {
  if (program !== undefined) return program;
  const root = fileURLToPath(new URL('..', import.meta.url));
  const hash = createHash('sha256');
  const names = readdirSync(root, { recursive: true }) as string[];
  for (const name of names.filter((file) => /(?<!\.d)\.(c?js|ts)$/.test(file)).sort()) {
    hash.update(`${name}\n`).update(readFileSync(join(root, name)));
  }
  return (program = hash.digest('hex'));
}
