import { parentPort } from 'node:worker_threads';
import { plainFailure } from './failures.js';
import { jobOf } from './races.js';
import type { Answer, Order } from './race-workers.js';
import { workOn } from './task.js';
import type { Task, TaskFlags, TaskName } from './task.js';
import { Progress } from './terminal.js';

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

/** What a worker thread does: races come in, what came of each goes out. */
export function workAsThread(): void {
  parentPort!.on('message', (order: Order) => {
    void answerTo(order).then((answer) => {
      const outputs = 'finished' in answer ? answer.finished.outputs : [];
      parentPort!.postMessage(answer, [...new Set(outputs.map(({ bytes }) => bytes.buffer as ArrayBuffer))]);
    });
  });
}
