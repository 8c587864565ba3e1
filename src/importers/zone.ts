import { Info } from 'luxon';
import { UserError } from '../recording/issues.js';

const HOUR = 3600;

/** Local time to UTC, for one zone. */
export interface ZoneClock {
  /**
   * @param local Local time, as seconds that count as if it were UTC.
   * @param after The instant before it in the log, where there is one: of the two readings of the hour that is
   *   repeated in autumn the first that does not go back is taken.
   * @returns UTC epoch seconds. A local time that is skipped in spring is moved on by what was skipped.
   */
  toUtc(local: number, after?: number): number;
}

/**
 * The clock of a zone. A zone's offset is asked for once per hour of UTC and kept, because asking is what costs; hours
 * within which it changes are never kept.
 *
 * @throws UserError when there is no such zone.
 */
export function createZoneClock(zone: string): ZoneClock {
  const known = Info.normalizeZone(zone);
  if (!known.isValid) {
    throw new UserError(`There is no time zone '${zone}'.`, {
      exitCode: 2,
      suggestion: 'Name it as in the IANA time zone database, such as Europe/Zurich, or UTC.',
    });
  }
  const kept = new Map<number, number>();
  const offset = (utc: number): number => {
    const hour = Math.floor(utc / HOUR);
    const held = kept.get(hour);
    if (held !== undefined) return held;
    const value = known.offset(utc * 1000) * 60;
    const steady = [0, HOUR / 2, HOUR].every((s) => known.offset((hour * HOUR + s) * 1000) * 60 === value);
    if (steady) kept.set(hour, value);
    return value;
  };
  return {
    toUtc(local, after = -Infinity) {
      const early = local - offset(local - 24 * HOUR);
      const late = local - offset(local + 24 * HOUR);
      const fits = [Math.min(early, late), Math.max(early, late)].filter((utc) => utc + offset(utc) === local);
      if (fits.length === 0) return early;
      return fits.find((utc) => utc >= after) ?? fits[0];
    },
  };
}
