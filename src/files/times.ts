import { DateTime, IANAZone } from 'luxon';

/**
 * A time as people write it in a race file or on the command line, before the day or the zone it leans on is known.
 * ISO 8601 as far as people use it: `2026-04-18T14:05:00+02:00`, `2026-04-18 14:05`, `14:05`, `14:05:30`, `12:05Z`.
 */
export type WrittenTime =
  | { readonly kind: 'instant'; readonly seconds: number }
  /** Date and time without a zone. */
  | { readonly kind: 'local'; readonly date: string; readonly ofDay: number }
  /** Time of day; `zone` where it carries an offset of its own. */
  | { readonly kind: 'clock'; readonly ofDay: number; readonly zone?: string };

const PATTERN =
  /^(?:(\d{4}-\d{2}-\d{2})(?:[T ]\s*|\s+))?(\d{1,2}):(\d{2})(?::(\d{2})(?:[.,](\d{1,9}))?)?\s*(Z|[+-]\d{2}(?::?\d{2})?)?$/i;

/** Reads a written time; null when it is none. */
export function parseTime(text: string): WrittenTime | null {
  const match = PATTERN.exec(text.trim());
  if (!match) return null;
  const [, date, hh, mm, ss = '0', fraction = '', suffix] = match;
  const [hour, minute, second] = [Number(hh), Number(mm), Number(ss)];
  if (hour > 23 || minute > 59 || second > 59) return null;
  if (date !== undefined && !isDay(date)) return null;
  const offset = suffix === undefined ? undefined : offsetMinutes(suffix);
  if (offset !== undefined && Math.abs(offset) > 14 * 60) return null;
  const ofDay = hour * 3600 + minute * 60 + second + (fraction ? Number(`0.${fraction}`) : 0);
  if (date === undefined) {
    return offset === undefined ? { kind: 'clock', ofDay } : { kind: 'clock', ofDay, zone: zoneOf(offset) };
  }
  if (offset === undefined) return { kind: 'local', date, ofDay };
  return { kind: 'instant', seconds: Date.parse(`${date}T00:00:00Z`) / 1000 + ofDay - offset * 60 };
}

/** True for a calendar day YYYY-MM-DD that exists. */
export function isDay(text: string): boolean {
  return /^\d{4}-\d{2}-\d{2}$/.test(text) && DateTime.fromISO(text, { zone: 'utc' }).isValid;
}

/** True for a time zone of the IANA data base that this runtime knows. */
export function isZone(text: string): boolean {
  return IANAZone.isValidZone(text);
}

/**
 * UTC seconds of a time of day on a given day, in a zone. A time that a clock change skips is taken as if the clock had
 * not yet been changed.
 */
export function onDay(date: string, ofDay: number, zone: string): number {
  const whole = Math.floor(ofDay);
  const local = DateTime.fromISO(date, { zone }).set({
    hour: Math.floor(whole / 3600),
    minute: Math.floor(whole / 60) % 60,
    second: whole % 60,
  });
  return local.toSeconds() + (ofDay - whole);
}

/** Calendar day of an instant in a zone, YYYY-MM-DD. */
export function dayOf(seconds: number, zone: string): string {
  // The host's locale, which a zone asks for, takes 0.1 s to find.
  if (zone === 'UTC') return new Date(seconds * 1000).toISOString().slice(0, 10);
  return DateTime.fromSeconds(seconds, { zone }).toISODate()!;
}

/** The instant with this time of day that falls in [from, from + 24 h). */
export function firstAfter(from: number, ofDay: number, zone: string): number {
  const day = DateTime.fromSeconds(from, { zone });
  for (const shift of [-1, 0, 1]) {
    const at = onDay(day.plus({ days: shift }).toISODate()!, ofDay, zone);
    if (at >= from) return at;
  }
  return onDay(day.plus({ days: 2 }).toISODate()!, ofDay, zone);
}

function offsetMinutes(suffix: string): number {
  if (/^z$/i.test(suffix)) return 0;
  const digits = suffix.slice(1).replace(':', '');
  const minutes = Number(digits.slice(0, 2)) * 60 + Number(digits.slice(2) || '0');
  return suffix.startsWith('-') ? -minutes : minutes;
}

function zoneOf(minutes: number): string {
  const size = Math.abs(minutes);
  const hh = String(Math.floor(size / 60)).padStart(2, '0');
  const mm = String(size % 60).padStart(2, '0');
  return `UTC${minutes < 0 ? '-' : '+'}${hh}:${mm}`;
}
