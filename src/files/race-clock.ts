import { UserError } from '../recording/issues.js';
import type { Issue } from '../recording/issues.js';
import { fieldName } from './check.js';
import type { RaceDraft } from './race.js';
import type { Span } from './race-types.js';
import { firstAfter, onDay, parseTime } from './times.js';

/** Makes UTC seconds of the times of one race. */
export interface RaceClock {
  readonly start: number | null;
  readonly finish: number | null;
  at(text: string, path: readonly PropertyKey[]): number;
  span(from: string, to: string, path: readonly PropertyKey[]): Span;
  /** What had to be assumed. */
  issues(): Issue[];
}

/** A time of day is looked for from this long before the first fix (a logger started after the gun) ... [s] */
const BEFORE_LOG = 2 * 3600;
/** ... and, where the gun is known, within half a day of it. [s] */
const HALF_DAY = 12 * 3600;

/**
 * The clock of a race. A bare time of day is on the race's `date` where given; else within half a day of the gun; else
 * in the 24 hours that begin 2 hours before the first fix of the first track.
 */
export function raceClock(draft: RaceDraft, firstTime: number | null): RaceClock {
  const { content } = draft;
  const zone = content.zone ?? 'UTC';
  let assumed: string | null = null;
  const read = (
    text: string,
    path: readonly PropertyKey[],
    anchor: (ofDay: number, zone: string) => number,
  ): number => {
    const time = parseTime(text);
    if (!time) throw notTime(draft, text, path);
    if (time.kind === 'instant') return time.seconds;
    const named = time.kind === 'clock' ? time.zone : undefined;
    if (!named && !content.zone) assumed ??= text;
    return time.kind === 'local' ? onDay(time.date, time.ofDay, zone) : anchor(time.ofDay, named ?? zone);
  };
  const byDayOrLog = (text: string, path: readonly PropertyKey[]) => (ofDay: number, own: string) => {
    if (content.date) return onDay(content.date, ofDay, own);
    if (firstTime === null) throw noDay(draft, text, path);
    return firstAfter(firstTime - BEFORE_LOG, ofDay, own);
  };
  const start = content.start ? read(content.start, ['start'], byDayOrLog(content.start, ['start'])) : null;
  const at = (text: string, path: readonly PropertyKey[]): number =>
    read(text, path, (ofDay, own) =>
      start === null ? byDayOrLog(text, path)(ofDay, own) : firstAfter(start - HALF_DAY, ofDay, own),
    );
  const after = (from: number, text: string, path: readonly PropertyKey[]): number => {
    const to = read(text, path, (ofDay, own) => firstAfter(from, ofDay, own));
    if (to > from) return to;
    throw new UserError(`${draft.where(path)}: ${fieldName(path)}: ${text} is not later than where it begins.`, {
      exitCode: 2,
      suggestion: 'Look at the day and the zone of both times.',
    });
  };
  const finishOf = (text: string): number => (start === null ? at(text, ['finish']) : after(start, text, ['finish']));
  const finish = content.finish ? finishOf(content.finish) : null;
  return {
    start,
    finish,
    at,
    span: (from, to, path) => {
      const begin = at(from, path);
      return { from: begin, to: after(begin, to, path) };
    },
    issues: () => (assumed === null ? [] : [zoneAssumed(draft, assumed)]),
  };
}

function zoneAssumed(draft: RaceDraft, text: string): Issue {
  return {
    code: 'zone-assumed',
    message: `The time ${text} carries no zone and the race names none: it was read as UTC. Give \`zone\`, such as Europe/Zurich.`,
    ...(draft.file === null ? {} : { file: draft.file }),
  };
}

function notTime(draft: RaceDraft, text: string, path: readonly PropertyKey[]): UserError {
  return new UserError(`${draft.where(path)}: ${fieldName(path)}: "${text}" is not a time.`, {
    exitCode: 2,
    suggestion: 'Write 14:05 or 2026-04-18T14:05:00+02:00.',
  });
}

function noDay(draft: RaceDraft, text: string, path: readonly PropertyKey[]): UserError {
  return new UserError(`${draft.where(path)}: ${fieldName(path)} says ${text}, and no log tells on which day.`, {
    exitCode: 2,
    suggestion: 'Write the date too, or give `date: YYYY-MM-DD` (on the command line --date).',
  });
}
