/**
 * Times as logs write them. A log has millions: what is usual is read digit by digit, without a date library.
 * ISO 8601-1:2019; the count of days is H. Hinnant's days_from_civil (chrono-Compatible Low-Level Date Algorithms, 2013).
 */

const DAY = 86400;
const MONTH_DAYS = [31, 29, 31, 30, 31, 30, 31, 31, 30, 31, 30, 31];

/** Days from 1970-01-01 to a day of the Gregorian calendar; NaN when there is no such day. */
export function daysFromCivil(year: number, month: number, day: number): number {
  if (!(month >= 1 && month <= 12 && day >= 1 && day <= MONTH_DAYS[month - 1])) return NaN;
  if (month === 2 && day === 29 && !(year % 4 === 0 && (year % 100 !== 0 || year % 400 === 0))) return NaN;
  const y = month <= 2 ? year - 1 : year;
  const era = Math.floor(y / 400);
  const yearOfEra = y - era * 400;
  const dayOfYear = Math.floor((153 * (month > 2 ? month - 3 : month + 9) + 2) / 5) + day - 1;
  const dayOfEra = yearOfEra * 365 + Math.floor(yearOfEra / 4) - Math.floor(yearOfEra / 100) + dayOfYear;
  return era * 146097 + dayOfEra - 719468;
}

/** The number made of the digits in [from, to); NaN when one of them is not a digit. */
function digits(text: string, from: number, to: number): number {
  let value = 0;
  for (let at = from; at < to; at++) {
    const digit = text.charCodeAt(at) - 48;
    if (!(digit >= 0 && digit <= 9)) return NaN;
    value = value * 10 + digit;
  }
  return value;
}

function isDigit(code: number): boolean {
  return code >= 48 && code <= 57;
}

/** Where the digits that begin at `from` end. */
function endOfDigits(text: string, from: number): number {
  let at = from;
  while (isDigit(text.charCodeAt(at))) at++;
  return at;
}

/** Whether an ISO 8601 date and time says its zone: a `Z` or an offset behind the clock. */
export function carriesZone(text: string): boolean {
  const last = text.charCodeAt(text.length - 1);
  if (last === 90 || last === 122) return true;
  for (let at = Math.max(16, text.length - 6); at < text.length; at++) {
    const code = text.charCodeAt(at);
    if (code === 43 || code === 45) return true;
  }
  return false;
}

/**
 * ISO 8601 date and time: `2026-04-18T14:05:00.25+02:00`; a blank for the `T`, a comma for the point, no seconds and
 * the forms `+0200` and `+02` are understood. A leap second (`:60`) is the first instant of the next minute, as in
 * Unix time. 24:00 is the end of the day.
 *
 * @returns UTC epoch seconds; a time without a zone counts as if it were UTC (see carriesZone); NaN when not
 *   understood.
 */
export function readIso(text: string, start = 0, stop = text.length): number {
  const days = daysFromCivil(
    digits(text, start, start + 4),
    digits(text, start + 5, start + 7),
    digits(text, start + 8, start + 10),
  );
  const separator = text.charCodeAt(start + 10);
  const dashes = text.charCodeAt(start + 4) === 45 && text.charCodeAt(start + 7) === 45;
  if (Number.isNaN(days) || !dashes || (separator !== 84 && separator !== 32 && separator !== 116)) return NaN;
  const clock = readClock(text, start + 11);
  const zone = endOfClock(text, start + 11);
  if (Number.isNaN(clock) || zone > stop) return NaN;
  const seconds = days * DAY + clock;
  return zone === stop ? seconds : seconds - readOffset(text, zone, stop);
}

/**
 * `hh:mm`, `hh:mm:ss` or `hh:mm:ss.fff` at `from`.
 *
 * @returns Seconds of the day; NaN when not understood.
 */
export function readClock(text: string, from: number): number {
  const hour = digits(text, from, from + 2);
  const minute = digits(text, from + 3, from + 5);
  if (text.charCodeAt(from + 2) !== 58 || !(hour <= 24 && minute <= 59)) return NaN;
  if (text.charCodeAt(from + 5) !== 58) return hour === 24 && minute > 0 ? NaN : hour * 3600 + minute * 60;
  const second = digits(text, from + 6, from + 8);
  if (!(second <= 60)) return NaN;
  const whole = hour * 3600 + minute * 60 + second;
  const point = text.charCodeAt(from + 8);
  const end = point === 46 || point === 44 ? endOfDigits(text, from + 9) : 0;
  const fraction = end > from + 9 ? digits(text, from + 9, Math.min(end, from + 24)) : 0;
  const value = fraction === 0 ? whole : whole + fraction / 10 ** (Math.min(end, from + 24) - from - 9);
  return hour === 24 && value > DAY ? NaN : value;
}

/** Where the clock that begins at `from` ends. */
function endOfClock(text: string, from: number): number {
  if (text.charCodeAt(from + 5) !== 58) return from + 5;
  const point = text.charCodeAt(from + 8);
  return point === 46 || point === 44 ? endOfDigits(text, from + 9) : from + 8;
}

/** Seconds east of UTC written at the end of a time: `Z`, `+hh:mm`, `+hhmm`, `+hh`. NaN when it is none of these. */
function readOffset(text: string, from: number, stop: number): number {
  let at = from;
  while (text.charCodeAt(at) === 32) at++;
  const first = text.charCodeAt(at);
  if ((first === 90 || first === 122) && stop === at + 1) return 0;
  if (first !== 43 && first !== 45) return NaN;
  const colon = text.charCodeAt(at + 3) === 58 ? 1 : 0;
  const hours = digits(text, at + 1, at + 3);
  const minutes = stop === at + 3 ? 0 : digits(text, at + 3 + colon, at + 5 + colon);
  const whole = stop === at + 3 || stop === at + 5 + colon;
  if (!whole || !(hours <= 18 && minutes <= 59)) return NaN;
  const offset = hours * 3600 + minutes * 60;
  return first === 45 ? -offset : offset;
}

/**
 * Unix time in seconds, or milli-, micro- or nanoseconds, told apart by size: 1e8 s is 1973, 1e11 ms the same year.
 *
 * @returns UTC epoch seconds; NaN for a number that is none of these.
 */
export function fromUnix(number: number): number {
  if (!(number >= 1e8)) return NaN;
  if (number < 1e11) return number;
  if (number < 1e14) return number / 1e3;
  return number < 1e17 ? number / 1e6 : number / 1e9;
}
