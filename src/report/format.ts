import type { Q, Quantity } from '../result/result.js';
import { html, type Safe } from './html.js';

/** Numbers and times as the page shows them. Only here are figures rounded; the reader's browser localises them. */

export type Unit = 'kn' | 'deg' | 'm' | 'percent' | 's' | 'count';

export const DIGITS: Readonly<Record<Unit, number>> = { kn: 2, deg: 1, m: 0, percent: 0, s: 0, count: 0 };
const SUFFIX: Readonly<Record<Unit, string>> = {
  kn: '\u00a0kn',
  deg: '°',
  m: '\u00a0m',
  percent: '\u00a0%',
  s: '\u00a0s',
  count: '',
};

/**
 * Fixed-point text with a true minus sign, never a negative zero.
 *
 * @param value Number to show; not finite gives a dash.
 * @param digits Digits after the point.
 */
export function plain(value: number, digits: number): string {
  if (!Number.isFinite(value)) return '–';
  const text = Math.abs(value).toFixed(digits);
  const zero = Number(text) === 0;
  return value < 0 && !zero ? `−${text}` : text;
}

/** The same with a plus sign before what is above zero. */
export function signed(value: number, digits: number): string {
  const text = plain(value, digits);
  return value > 0 && Number(text) !== 0 ? `+${text}` : text;
}

export function withUnit(value: number, unit: Unit, digits = DIGITS[unit]): string {
  return `${plain(value, digits)}${SUFFIX[unit]}`;
}

export function suffix(unit: Unit): string {
  return SUFFIX[unit];
}

/** A bare number the client localises in place, reading it as it stands. */
export function number(value: number, digits: number, sign = false): Safe {
  if (!Number.isFinite(value)) return html`<span class="none">–</span>`;
  return html`<span class="n">${sign ? signed(value, digits) : plain(value, digits)}</span>`;
}

/**
 * How a quantity is known, in short, for its title: "±0.03 kn, ±0.08 kn by calibration; derived". The client tells it
 * at length.
 */
export function errorNote(q: Quantity, unit: Unit): string {
  const digits = digitsFor(q, unit === 'm' ? 1 : DIGITS[unit]);
  const sys = Math.abs(q.sys ?? 0);
  const errors = [
    q.se === null ? 'error not stated' : `±${withUnit(q.se, unit, digits)}`,
    ...(Number(sys.toFixed(digits)) > 0 ? [`±${withUnit(sys, unit, digits)} by calibration`] : []),
  ];
  return `${errors.join(', ')}; ${q.basis}`;
}

/** One more figure where the error would else read as none. */
function digitsFor(q: Quantity, digits: number): number {
  return q.se !== null && q.se > 0 && Number(q.se.toFixed(digits)) === 0 ? digits + 1 : digits;
}

export interface QuantityOptions {
  /** Multiply before showing (100 for shares). */
  readonly times?: number;
  readonly sign?: boolean;
  readonly digits?: number;
  /** Leave the visible error out (it stays in the note). */
  readonly bare?: boolean;
  /** Leave the unit to the head of the row. */
  readonly unitless?: boolean;
}

/**
 * A quantity with its error beside it and its full account on hover, focus or tap.
 *
 * @param q Quantity, or null where it could not be had.
 * @param unit Unit as shown.
 */
export function quantity(q: Q, unit: Unit, options: QuantityOptions = {}): Safe {
  if (!q) return html`<span class="none" title="not known">–</span>`;
  const { times = 1, sign = false, bare = false, unitless = false } = options;
  const shown = scaled(q, times);
  const digits = digitsFor(shown, options.digits ?? DIGITS[unit]);
  const pm = shown.se !== null && !bare ? html` <small class="pm">±${number(shown.se, digits)}</small>` : '';
  const mark = !unitless && html`<span class="u">${SUFFIX[unit]}</span>`;
  const note = errorNote(shown, unit);
  return html`<button class="q b-${q.basis}" title="${note}">${number(shown.value, digits, sign)}${mark}${pm}</button>`;
}

export function scaled(q: Quantity, times: number): Quantity {
  return {
    value: q.value * times,
    se: q.se === null ? null : q.se * times,
    basis: q.basis,
    ...(q.sys === undefined ? {} : { sys: q.sys * times }),
  };
}

/** A quantity within a sentence: no control, only text the client localises. */
export function inline(q: Quantity, unit: Unit, options: QuantityOptions = {}): Safe {
  const { times = 1, sign = false } = options;
  const shown = scaled(q, times);
  const digits = digitsFor(shown, options.digits ?? DIGITS[unit]);
  const pm = shown.se === null ? '' : html` ± ${number(shown.se, digits)}`;
  return html`<span class="nb">${number(shown.value, digits, sign)}${pm}${SUFFIX[unit]}</span>`;
}

export type TimeStyle = 'day' | 'date' | 'ymd' | 'month' | 'hm' | 'hms';

/** A time, in UTC until the reader's browser puts it in the race's zone. */
export function time(seconds: number, style: TimeStyle): Safe {
  const iso = isoOf(seconds);
  const stamp = iso.replace('.000', '');
  // To the second is the usual way and goes without saying.
  if (style === 'hms') return html`<time datetime="${stamp}">${timeText(iso, style)}</time>`;
  return html`<time datetime="${stamp}" data-t="${style}">${timeText(iso, style)}</time>`;
}

/** The same as text for pictures. */
export function timeText(iso: string, style: TimeStyle): string {
  if (style === 'day' || style === 'date' || style === 'ymd') return iso.slice(0, 10);
  if (style === 'month') return iso.slice(0, 7);
  return style === 'hm' ? iso.slice(11, 16) : iso.slice(11, 19);
}

export function isoOf(seconds: number): string {
  return new Date(Math.round(seconds * 1000)).toISOString();
}

/** ISO 8601 with a zone, as the result file writes it, to UTC seconds. */
export function secondsOf(iso: string): number {
  return Date.parse(iso) / 1000;
}

/** Minutes and seconds. */
export function duration(seconds: number): string {
  const whole = Math.round(seconds);
  return `${Math.floor(whole / 60)}:${String(whole % 60).padStart(2, '0')}`;
}

export function plural(n: number, one: string, many = `${one}s`): string {
  return `${n} ${n === 1 ? one : many}`;
}
