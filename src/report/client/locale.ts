/** Numbers as the reader's browser writes them, times in the race's zone. */

const numberFormats = new Map<number, Intl.NumberFormat>();

/** A number with so many decimals, a true minus sign, no negative zero. */
export function localNumber(value: number, digits: number): string {
  if (!Number.isFinite(value)) return '–';
  let format = numberFormats.get(digits);
  if (!format) {
    format = new Intl.NumberFormat(undefined, { minimumFractionDigits: digits, maximumFractionDigits: digits });
    numberFormats.set(digits, format);
  }
  const text = format.format(Math.abs(value));
  const zero = Number(Math.abs(value).toFixed(digits)) === 0;
  return value < 0 && !zero ? `−${text}` : text;
}

/** A number as the page was made with it, with a point and a true minus, as this reader writes it. */
export function localText(text: string): string {
  const value = Number(text.replace('−', '-'));
  const written = localNumber(value, text.split('.')[1]?.length ?? 0);
  return text.startsWith('+') ? `+${written}` : written;
}

export type TimeStyle = 'day' | 'date' | 'ymd' | 'month' | 'hm' | 'hms';

const OPTIONS: Readonly<Record<TimeStyle, Intl.DateTimeFormatOptions>> = {
  day: { weekday: 'long', day: 'numeric', month: 'long', year: 'numeric' },
  date: { day: 'numeric', month: 'short' },
  ymd: { day: 'numeric', month: 'short', year: 'numeric' },
  month: { month: 'short', year: 'numeric' },
  hm: { hour: '2-digit', minute: '2-digit', hourCycle: 'h23' },
  hms: { hour: '2-digit', minute: '2-digit', second: '2-digit', hourCycle: 'h23' },
};

export interface Clock {
  readonly zone: string;
  readonly write: (seconds: number, style: TimeStyle) => string;
}

/** A clock in a zone; one the browser does not know falls back to UTC. */
export function createClock(wanted: string): Clock {
  const zone = zoneKnown(wanted) ? wanted : 'UTC';
  const formats = Object.fromEntries(
    Object.entries(OPTIONS).map(([style, options]) => [
      style,
      new Intl.DateTimeFormat(undefined, { ...options, timeZone: zone }),
    ]),
  );
  return { zone, write: (seconds, style) => formats[style].format(seconds * 1000) };
}

function zoneKnown(zone: string): boolean {
  try {
    new Intl.DateTimeFormat(undefined, { timeZone: zone });
    return true;
  } catch {
    return false;
  }
}

/** Most readers write most numbers as the page has them: those are left alone. */
export function write(element: Element, text: string): void {
  if (element.textContent !== text) element.textContent = text;
}

/** Rewrites every number and time on the page in place. */
export function localise(root: ParentNode, clock: Clock): void {
  for (const element of root.querySelectorAll('.n')) write(element, localText(element.textContent));
  for (const element of root.querySelectorAll('time, [data-ms]')) {
    const given = element.getAttribute('data-ms');
    const seconds = (given === null ? Date.parse(element.getAttribute('datetime') ?? '') : Number(given)) / 1000;
    if (Number.isFinite(seconds))
      write(element, clock.write(seconds, (element.getAttribute('data-t') ?? 'hms') as TimeStyle));
  }
  const words = document.getElementById('zone-words');
  if (words)
    words.textContent = clock.zone === 'UTC' ? 'UTC' : `${clock.zone.split('/').pop()!.replace(/_/g, ' ')} time`;
}
