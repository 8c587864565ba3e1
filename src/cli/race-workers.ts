import { existsSync } from 'node:fs';
import { availableParallelism, totalmem } from 'node:os';
import { Worker } from 'node:worker_threads';
import { failureFrom, type PlainFailure } from './failures.js';
import { unusable } from './files.js';
import type { Places } from './outputs.js';
import type { PlainJob } from './races.js';
import type { Finished, TaskFlags, TaskName } from './task.js';

/** A race as it goes to a worker thread: plain data. */
export interface Order {
  readonly task: TaskName;
  readonly flags: TaskFlags;
  readonly job: PlainJob;
  readonly places: Places;
}
export type Answer = { readonly finished: Finished } | { readonly failure: PlainFailure };

/** Memory a race may need, so that many processors do not ask for more than there is. [bytes] */
const MEMORY = 1e9;

/** The program of a thread; as built, for from its source alone Node cannot start one. */
export const THREAD = new URL('./thread.js', import.meta.url);

/** How many races, or logs of one race, are worked on at a time: one a processor, or as LEGWORK_WORKERS says. Results do not depend on it. */
export function workerCount(): number {
  if (!existsSync(THREAD)) return 1;
  const { LEGWORK_WORKERS: said } = process.env;
  if (!said) return Math.max(1, Math.min(availableParallelism(), Math.floor(totalmem() / MEMORY)));
  if (/^[1-9]\d{0,2}$/.test(said)) return Number(said);
  throw unusable(`LEGWORK_WORKERS=${said}: not a number of races to work on at a time.`, 'Write 1, 2, 3 ...');
}

interface Errand {
  readonly order: Order;
  readonly resolve: (finished: Finished) => void;
  readonly reject: (error: unknown) => void;
}

/** Threads that work on races, started as they are needed. */
export class RaceWorkers {
  readonly #most: number;
  /** What each thread is at; null: nothing. */
  readonly #threads = new Map<Worker, Errand | null>();
  readonly #waiting: Errand[] = [];

  constructor(most: number) {
    this.#most = most;
  }

  run(order: Order): Promise<Finished> {
    return new Promise((resolve, reject) => {
      this.#waiting.push({ order, resolve, reject });
      this.#handOut();
    });
  }

  async close(): Promise<void> {
    this.#waiting.length = 0;
    const threads = [...this.#threads.keys()];
    this.#threads.clear();
    await Promise.all(threads.map((thread) => thread.terminate()));
  }

  #handOut(): void {
    while (this.#waiting.length > 0) {
      const idle = [...this.#threads].find(([, errand]) => errand === null)?.[0];
      if (!idle && this.#threads.size >= this.#most) return;
      const thread = idle ?? this.#hire();
      const errand = this.#waiting.shift()!;
      this.#threads.set(thread, errand);
      thread.postMessage(errand.order);
    }
  }

  #hire(): Worker {
    const thread = new Worker(THREAD);
    const lost = (error: unknown): void => {
      const errand = this.#threads.get(thread);
      if (!this.#threads.delete(thread)) return;
      errand?.reject(error);
      this.#handOut();
    };
    thread.on('message', (answer: Answer) => {
      const errand = this.#threads.get(thread);
      this.#threads.set(thread, null);
      if ('finished' in answer) errand?.resolve(answer.finished);
      else errand?.reject(failureFrom(answer.failure));
      this.#handOut();
    });
    thread.on('error', lost);
    thread.on('exit', () => lost(new Error('a worker thread ended before its race was done')));
    return thread;
  }
}
