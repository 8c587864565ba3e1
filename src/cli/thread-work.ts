/** What a worker thread does: it reads the logs of a race, or works on races. */
import { parentPort, workerData } from 'node:worker_threads';
import { importLog } from '../index.js';
import { plainFailure } from './failures.js';
import { logSource } from './files.js';
import { jobOf } from './races.js';
import type { Answer, Order } from './race-workers.js';
import { claim, type LogOrder, type ReadAnswer, type ReadOrder } from './read-ahead.js';
import { workOn } from './task.js';
import type { Task, TaskFlags, TaskName } from './task.js';
import { Progress } from './terminal.js';

export async function workAsThread(): Promise<void> {
  const order = workerData as ReadOrder | null;
  if (order) await readLogs(order);
  else workOnRaces();
}

/** Reads what nobody reads yet, from the end; columns go over without being copied. */
async function readLogs({ logs, claims, self }: ReadOrder): Promise<void> {
  for (let at = logs.length - 1; at >= 0; at--) {
    if (!claim(claims, at, self)) continue;
    const answer: ReadAnswer = { at, came: await readOne(logs[at]) };
    parentPort!.postMessage(answer, 'log' in answer.came ? columnsOf(answer.came) : []);
  }
}

async function readOne({ name, path, options }: LogOrder): Promise<ReadAnswer['came']> {
  try {
    return { log: await importLog(logSource(name, path), options) };
  } catch (error) {
    return { failure: plainFailure(error) };
  }
}

function columnsOf({ log: { recording } }: Extract<ReadAnswer['came'], { log: unknown }>): ArrayBuffer[] {
  const columns = [recording.time, ...Object.values(recording.channels)];
  return [...new Set(columns.map((column) => column.buffer as ArrayBuffer))];
}

const TASKS: Readonly<Record<TaskName, (flags: TaskFlags) => Promise<Task>>> = {
  debrief: async (flags) => (await import('./debrief.js')).debriefTask(flags),
  compare: async (flags) => (await import('./compare.js')).compareTask(flags),
};

async function answerTo({ task, flags, job, places }: Order): Promise<Answer> {
  try {
    return { finished: await workOn(await TASKS[task](flags), jobOf(job, new Progress(false)), places) };
  } catch (error) {
    return { failure: plainFailure(error) };
  }
}

/** Races come in, what came of each goes out. */
function workOnRaces(): void {
  parentPort!.on('message', (order: Order) => {
    void answerTo(order).then((answer) => {
      const outputs = 'finished' in answer ? answer.finished.outputs : [];
      parentPort!.postMessage(answer, [...new Set(outputs.map(({ bytes }) => bytes.buffer as ArrayBuffer))]);
    });
  });
}
