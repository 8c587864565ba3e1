import type { Recording } from '../recording/recording.js';
import type { Tally } from './tally.js';

/** GPS counts weeks in ten bits: a receiver that has missed a turn of the count is 1024 weeks early. [s] */
export const ROLLOVER = 1024 * 7 * 86400;

/**
 * 2008-07-01. Receivers that have missed the turn of 2019 write dates before it until February 2028, and true logs from
 * before it are rare. To be moved on by then.
 */
const SUSPECT = 1214870400;

/** A date 1024 weeks early is told with the date it would be; nothing is changed, for it may be right. */
export function tellWeekRollover(recording: Recording, tally: Tally): void {
  const first = recording.time[0];
  if (first === undefined || first >= SUSPECT) return;
  const day = (seconds: number): string => new Date(seconds * 1000).toISOString().slice(0, 10);
  tally.issue(
    'week-rollover',
    `The log is dated ${day(first)}. Old receivers are 1024 weeks early; if it was sailed on ${day(first + ROLLOVER)}, ` +
      `give that day with --date, or add ${ROLLOVER} s to its clock.`,
  );
}
