import { DayCount, DAY } from './days.js';
import { readDecimal } from './decimals.js';
import type { Tally } from './tally.js';
import { carriesZone, daysFromCivil, fromUnix, readIso } from './times.js';
import type { ZoneClock } from './zone.js';

/** Which of two numbers of a date comes first, where the year comes last. */
export type DateOrder = 'day-first' | 'month-first';

/** How the times of a table are written. */
export interface TimeLayout {
  readonly time: number;
  /** Column of the day, -1 where the time column has it all. */
  readonly date: number;
  readonly utc: boolean;
  /** Seconds a unit, where the times are numbers of a stated unit; else NaN. */
  readonly factor: number;
  readonly order: DateOrder;
  /** Day for times of day without one, in days since 1970; NaN when none was given. */
  readonly day: number;
}

/** What became of reading a row's time. */
export type TimeState = 'time' | 'no time' | 'time not understood' | 'time without a date';

/** Reads the times of a table's rows. */
export interface TableClock {
  /** UTC epoch seconds of the row read last. */
  readonly seconds: number;
  /** Takes a time that is UTC and returns it. */
  utc(seconds: number): number;
  /** Takes a time without a zone, as seconds that count as if UTC, and returns it in UTC. */
  local(seconds: number, line: number): number;
  read(cells: readonly string[], line: number): TimeState;
}

/** A clock for a table. Times without a zone are of `zone`, or UTC with a notice. */
export function createTableClock(layout: TimeLayout, zone: ZoneClock | null, tally: Tally): TableClock {
  const days = new DayCount();
  const clock = { seconds: NaN, read, utc, local };
  let before = -Infinity;
  function utc(seconds: number): number {
    return (clock.seconds = before = seconds);
  }
  function local(seconds: number, line: number): number {
    if (!zone && !layout.utc) tally.notice('zone-assumed', line);
    return utc(layout.utc || !zone ? seconds : zone.toUtc(seconds, before));
  }
  const settle = (seconds: number, zoned: boolean, line: number): TimeState => {
    if (Number.isNaN(seconds)) return 'time not understood';
    if (zoned) utc(seconds);
    else local(seconds, line);
    return 'time';
  };
  function read(cells: readonly string[], line: number): TimeState {
    const text = (cells[layout.time] ?? '').trim();
    if (text === '') return 'no time';
    const iso = readIso(text);
    if (!Number.isNaN(iso)) return settle(iso, carriesZone(text), line);
    const unix = layout.date < 0 ? readUnix(readDecimal(text), layout.factor) : NaN;
    if (!Number.isNaN(unix)) return settle(unix, true, line);
    const stamp = readOddTime(text, layout.order);
    if (!Number.isNaN(stamp)) {
      const offset = offsetOf(text);
      return Number.isNaN(offset) ? settle(stamp, false, line) : settle(stamp - offset, true, line);
    }
    const ofDay = readTimeOfDay(text);
    if (Number.isNaN(ofDay)) return 'time not understood';
    if (layout.date >= 0) {
      const dayText = (cells[layout.date] ?? '').trim();
      if (dayText === '') return 'no time';
      return settle(readDate(dayText, layout.order) * DAY + ofDay, false, line);
    }
    if (Number.isNaN(layout.day)) return 'time without a date';
    return settle(layout.day * DAY + days.unwrap(ofDay), false, line);
  }
  return clock;
}

/** Unix time in units of `factor` seconds (NaN: told by size); NaN when the number is too small for one. */
export function readUnix(number: number, factor: number): number {
  return Number.isNaN(factor) || number * factor < 1e8 ? fromUnix(number) : number * factor;
}

/** No time is written longer: what is, is damage, and looking for a time in it grows with the square of its length. */
const LONGEST_TIME = 64;
const COMPACT = /^(\d{4})(\d\d)(\d\d)[T ]?(\d\d)(\d\d)(\d\d(?:\.\d+)?)?(?:Z|[+-]\d\d:?\d\d)?$/i;
const PARTED = /^(\d{1,4}[-/.]\d{1,2}[-/.]\d{1,4})[T ,]+(\d{1,2}:\d\d.*)$/i;

/** Date and time in another form than ISO's usual one: compact, or day or month first. Zone left out. */
export function readOddTime(text: string, order: DateOrder): number {
  if (text.length > LONGEST_TIME) return NaN;
  const compact = COMPACT.exec(text);
  if (compact) {
    const [, y, m, d, hh, mm, ss = '0'] = compact;
    return daysFromCivil(Number(y), Number(m), Number(d)) * DAY + Number(hh) * 3600 + Number(mm) * 60 + Number(ss);
  }
  const parted = PARTED.exec(text);
  return parted ? readDate(parted[1], order) * DAY + readTimeOfDay(parted[2]) : NaN;
}

/** Offset written behind a time [s]; NaN when there is none. */
function offsetOf(text: string): number {
  if (/Z$|\b(UTC|GMT)$/i.test(text)) return 0;
  const offset = /[:\d]\d\d(?:\.\d+)?\s*([+-])(\d\d):?(\d\d)$/.exec(text);
  if (!offset) return NaN;
  const seconds = Number(offset[2]) * 3600 + Number(offset[3]) * 60;
  return offset[1] === '-' ? -seconds : seconds;
}

/** Days since 1970 of a date in any usual form; NaN when not understood. */
export function readDate(text: string, order: DateOrder): number {
  const compact = /^(\d{4})(\d\d)(\d\d)$/.exec(text);
  if (compact) return daysFromCivil(Number(compact[1]), Number(compact[2]), Number(compact[3]));
  const parts = /^(\d{1,4})[-/.](\d{1,2})[-/.](\d{1,4})/.exec(text);
  if (!parts) return NaN;
  const [a, b, c] = [Number(parts[1]), Number(parts[2]), Number(parts[3])];
  if (parts[1].length > 2) return daysFromCivil(a, b, c);
  const year = c < 80 ? 2000 + c : c < 100 ? 1900 + c : c;
  return order === 'day-first' ? daysFromCivil(year, b, a) : daysFromCivil(year, a, b);
}

/** Seconds of the day of `h:mm`, `hh:mm:ss.f`, `hhmmss`, with AM or PM; NaN when not understood. */
export function readTimeOfDay(text: string): number {
  if (text.length > LONGEST_TIME) return NaN;
  const parts = /^(\d{1,2}):?(\d\d)(?::?(\d\d(?:[.,]\d+)?))?\s*([AP]M)?\s*(?:Z|UTC|GMT|[+-]\d\d:?\d\d)?$/i.exec(text);
  if (!parts) return NaN;
  let hour = Number(parts[1]);
  const minute = Number(parts[2]);
  const second = Number((parts[3] ?? '0').replace(',', '.'));
  if (parts[4]) {
    if (hour < 1 || hour > 12) return NaN;
    hour = (hour % 12) + (parts[4].toUpperCase() === 'PM' ? 12 : 0);
  }
  return hour < 24 && minute < 60 && second < 61 ? hour * 3600 + minute * 60 + second : NaN;
}

/** Which order the dates of a table are in; undefined when none of them shows it. */
export function orderOf(samples: readonly string[]): DateOrder | undefined {
  for (const text of samples) {
    const parts = /^(\d{1,2})([-/.])(\d{1,2})\2\d{2,4}/.exec(text.trim());
    if (!parts) continue;
    if (Number(parts[1]) > 12 || parts[2] === '.') return 'day-first';
    if (Number(parts[3]) > 12) return 'month-first';
  }
  return undefined;
}
