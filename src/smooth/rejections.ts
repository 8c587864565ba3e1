import type { Issue } from '../recording/issues.js';
import type { Observations } from './kalman.js';

/** Fixes that were not used, of one kind. */
export interface FixRejection {
  readonly reason: string;
  readonly count: number;
  /** When the first of them was taken, UTC epoch seconds, and its row in the recording. */
  readonly firstTime: number;
  readonly firstRow: number;
}

export const STALE = 'stale: repeats a position the boat had left';
export const JUMP = 'position jump: the boat cannot have been there';
export const LONELY = 'alone between gaps: fewer than three fixes';
export const FAR = 'more than a week from the rest of the log';

/** A row at which the track goes on elsewhere, and how far away. [m] */
export interface Jump {
  readonly row: number;
  readonly metres: number;
}

/** Takes fixes out of the observations and keeps the books of it. */
export class Rejections {
  readonly #observations: Observations;
  readonly #byReason = new Map<string, { count: number; firstRow: number }>();

  constructor(observations: Observations) {
    this.#observations = observations;
  }

  /** Makes the fixes in `rows` absent and counts those that were there under a reason. */
  add(reason: string, rows: readonly number[]): void {
    const { x, y } = this.#observations;
    for (const row of rows) {
      if (x[row] !== x[row]) continue;
      x[row] = y[row] = NaN;
      const entry = this.#byReason.get(reason);
      if (entry) {
        entry.count++;
        entry.firstRow = Math.min(entry.firstRow, row);
      } else this.#byReason.set(reason, { count: 1, firstRow: row });
    }
  }

  list(): FixRejection[] {
    const { time } = this.#observations;
    return [...this.#byReason].map(([reason, { count, firstRow }]) => ({
      reason,
      count,
      firstRow,
      firstTime: time[firstRow],
    }));
  }

  /** What the reader of a report must know of it. */
  issues(jumps: readonly Jump[], file: string | undefined): Issue[] {
    const { time } = this.#observations;
    const list = this.list();
    const count = (reason: string) => list.find((one) => one.reason === reason);
    const sentences: string[] = [];
    const out = count(JUMP);
    if (out) sentences.push(`${fixes(out.count)} out of reach of the boat, first at ${utc(out.firstTime)}: left out.`);
    if (jumps.length > 0) {
      const largest = jumps.reduce((most, { metres }) => Math.max(most, metres), 0);
      const times = jumps.length === 1 ? 'once' : `${jumps.length} times`;
      sentences.push(
        `The position jumps ${times}, by up to ${largest.toFixed(0)} m, first at ${utc(time[jumps[0].row])}, ` +
          `and the track goes on from there: taken as a gap.`,
      );
    }
    const at = file === undefined ? {} : { file };
    const issues: Issue[] = [];
    if (sentences.length > 0) issues.push({ code: 'position-jump', message: sentences.join(' '), ...at });
    const stale = count(STALE);
    if (stale) {
      const message = `${fixes(stale.count)} repeating the last position while the boat moved on, first at ${utc(stale.firstTime)}: left out.`;
      issues.push({ code: 'position-stale', message, ...at });
    }
    return issues;
  }
}

function fixes(count: number): string {
  return count === 1 ? 'One fix is' : `${count} fixes are`;
}

function utc(time: number): string {
  return new Date(Math.floor(time) * 1000).toISOString().slice(0, 19) + 'Z';
}
