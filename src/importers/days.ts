import { UserError } from '../recording/issues.js';
import type { LogRows } from './rows.js';
import type { Tally } from './tally.js';
import { daysFromCivil } from './times.js';
import { ROLLOVER } from './week-rollover.js';

export const DAY = 86400;

/** Where days come from, the most trusted first. */
const SOURCES = ['fix', 'clock', 'logger', 'no fix'] as const;
export type DaySource = (typeof SOURCES)[number];

/** From this row on, the log's day 0 begins at `base`. */
interface Base {
  readonly row: number;
  readonly base: number;
}

/**
 * Makes days of a log whose sentences carry times of day, and only some of them a date: the clock is followed over
 * midnight, and each date seen says where day 0 of the clock lies.
 */
export class DayCount {
  #last = NaN;
  readonly #bases = new Map<DaySource, Base[]>();

  /** Seconds since the log's day 0: the nearest to the time before it. */
  unwrap(clock: number): number {
    const day = Number.isNaN(this.#last) ? 0 : Math.round((this.#last - clock) / DAY);
    return (this.#last = clock + day * DAY);
  }

  /** The clock now, in seconds since the log's day 0. */
  get now(): number {
    return Number.isNaN(this.#last) ? 0 : this.#last;
  }

  /** A date was read that holds from `row` on: `day` days since 1970 at `seconds` of the log's clock. */
  dated(source: DaySource, row: number, day: number, seconds: number): void {
    if (Number.isNaN(day)) return;
    const base = (day - Math.floor(seconds / DAY)) * DAY;
    const bases = this.#bases.get(source) ?? [];
    if (bases.at(-1)?.base !== base) bases.push({ row, base });
    this.#bases.set(source, bases);
  }

  /**
   * Turns the clock times of the rows into UTC.
   *
   * @param date Day given by the user (days since 1970), NaN when none: for a log without a date, or 1024 weeks early.
   * @returns False when the log has no date and none was given.
   */
  apply(rows: LogRows, date: number, tally: Tally): boolean {
    const source = SOURCES.find((one) => this.#bases.has(one));
    const bases = source ? this.#bases.get(source)! : Number.isNaN(date) ? [] : [{ row: 0, base: date * DAY }];
    if (bases.length === 0) return false;
    const shift = source ? rolledOver(bases[0].base, date, tally) : 0;
    let k = 0;
    for (let row = 0; row < rows.length; row++) {
      while (k + 1 < bases.length && bases[k + 1].row <= row) k++;
      const time = rows.time(row);
      if (!Number.isNaN(time)) rows.setTime(row, time + bases[k].base + shift);
    }
    return true;
  }
}

/** What must be added when the user's day is the log's day and 1024 weeks, give or take the day itself. */
function rolledOver(base: number, date: number, tally: Tally): number {
  if (Number.isNaN(date) || Math.abs(date * DAY - base - ROLLOVER) > DAY) return 0;
  tally.issue('week-rollover', 'The log’s dates are 1024 weeks early, as the day given shows; they are moved on.');
  return ROLLOVER;
}

/** Days since 1970 of YYYY-MM-DD; NaN when none is given. */
export function readDay(date: string | undefined): number {
  if (date === undefined) return NaN;
  const parts = /^(\d{4})-(\d\d)-(\d\d)$/.exec(date.trim());
  const day = parts ? daysFromCivil(Number(parts[1]), Number(parts[2]), Number(parts[3])) : NaN;
  if (Number.isNaN(day)) {
    throw new UserError(`'${date}' is not a day.`, { exitCode: 2, suggestion: 'Write it as YYYY-MM-DD.' });
  }
  return day;
}
