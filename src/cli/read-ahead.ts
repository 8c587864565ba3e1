/**
 * The logs of one race read on several processors: threads read from the end of the list while this one reads from its
 * beginning, until they meet. What a log comes to does not depend on who reads it.
 */
import { statSync } from 'node:fs';
import { Worker } from 'node:worker_threads';
import type { ImportedLog, ImportOptions, Race } from '../index.js';
import { failureFrom, type PlainFailure } from './failures.js';

/** A log to be read, and how. */
export interface LogOrder {
  readonly name: string;
  readonly path: string;
  readonly options: ImportOptions;
}
/** What a thread is given: the logs, for each the number of the one who reads it (0: nobody yet), and its own number. */
export interface ReadOrder {
  readonly logs: readonly LogOrder[];
  readonly claims: Int32Array;
  readonly self: number;
}
export interface ReadAnswer {
  /** Place in the list. */
  readonly at: number;
  readonly came: { readonly log: ImportedLog } | { readonly failure: PlainFailure };
}

/** Whether it is for the one who asks to read a log: each is read once. */
export const claim = (claims: Int32Array, at: number, self: number): boolean =>
  Atomics.compareExchange(claims, at, 0, self) === 0;

/** The number of the thread that asks for the logs. */
const ASKING = -1;

/** Smaller logs are read before another thread has heard of them. [bytes] */
const BIG = 2e6;
/** So much besides the first log pays for starting a thread. [bytes] */
const PAYS = 8e6;

/** Told apart as the reading of a race tells them apart. */
const keyOf = (name: string, { zone, date, columns }: ImportOptions): string =>
  JSON.stringify([name, zone, date, columns]);

export class ReadAhead {
  readonly #logs: readonly LogOrder[];
  /** For each log the number of the one who reads it; 0: nobody yet. */
  readonly claims: Int32Array;
  readonly #threads: Worker[];
  readonly #waiting = new Map<number, { resolve: (log: ImportedLog) => void; reject: (error: unknown) => void }>();
  readonly #came = new Map<number, ReadAnswer['came']>();
  /** Threads that are no more, and why. */
  readonly #lost = new Map<number, unknown>();

  /** @param program What a thread runs. */
  constructor(logs: readonly LogOrder[], helpers: number, program: URL) {
    this.#logs = logs;
    this.claims = new Int32Array(new SharedArrayBuffer(4 * logs.length));
    const count = Math.max(0, Math.min(helpers, logs.length - 1));
    this.#threads = Array.from({ length: count }, (_, k) =>
      this.#hire({ logs, claims: this.claims, self: k + 1 }, program),
    );
  }

  /** The log, where a thread has it or is at it; null: the one who asks shall read it. */
  take(name: string, options: ImportOptions): Promise<ImportedLog> | null {
    const key = keyOf(name, options);
    const at = this.#logs.findIndex((log) => keyOf(log.name, log.options) === key);
    if (at < 0 || claim(this.claims, at, ASKING)) return null;
    return new Promise((resolve, reject) => {
      this.#waiting.set(at, { resolve, reject });
      this.#settle(at);
    });
  }

  async close(): Promise<void> {
    await Promise.all(this.#threads.map((thread) => thread.terminate()));
  }

  #hire(order: ReadOrder, program: URL): Worker {
    const thread = new Worker(program, { workerData: order });
    const lost = (error: unknown): void => {
      if (!this.#lost.has(order.self)) this.#lost.set(order.self, error);
      for (const at of this.#waiting.keys()) this.#settle(at);
    };
    thread.on('message', ({ at, came }: ReadAnswer) => {
      this.#came.set(at, came);
      this.#settle(at);
    });
    thread.on('error', lost);
    thread.on('exit', () => lost(new Error('a thread ended before it had read its log')));
    return thread;
  }

  /** Gives a log, once it is there, to the one who waits for it, once he does. */
  #settle(at: number): void {
    const waits = this.#waiting.get(at);
    const came = this.#came.get(at);
    const reader = this.claims[at];
    if (!waits || (!came && !this.#lost.has(reader))) return;
    this.#waiting.delete(at);
    this.#came.delete(at);
    if (!came) waits.reject(this.#lost.get(reader));
    else if ('log' in came) waits.resolve(came.log);
    else waits.reject(failureFrom(came.failure));
  }
}

/** The big logs of a race in the order in which they are asked for; none where reading them together does not pay. */
export function bigLogs(race: Race, pathOf: (name: string) => string): LogOrder[] {
  const found = new Map<string, LogOrder & { readonly size: number }>();
  const winds = race.wind.flatMap((wind) => (wind.kind === 'log' ? [wind] : []));
  for (const log of [...race.boats.flatMap((boat) => [...boat.track, ...boat.instruments]), ...winds]) {
    const { file, date, columns } = log;
    const zone = log.zone ?? race.zone ?? undefined;
    const options = {
      ...(zone === undefined ? {} : { zone }),
      ...(date === undefined ? {} : { date }),
      ...(columns === undefined ? {} : { columns }),
    };
    const path = pathOf(file);
    found.set(keyOf(file, options), { name: file, path, options, size: sizeOf(path) });
  }
  const big = [...found.values()].filter(({ size }) => size >= BIG);
  const more = big.slice(1).reduce((sum, { size }) => sum + size, 0);
  return more >= PAYS ? big.map(({ name, path, options }) => ({ name, path, options })) : [];
}

/** Standard input, and what is no file, is not for a thread. */
function sizeOf(path: string): number {
  const found = path === '-' ? undefined : statSync(path, { throwIfNoEntry: false });
  return found?.isFile() ? found.size : 0;
}
