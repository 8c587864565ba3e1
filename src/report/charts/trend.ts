import { scaleLinear } from 'd3-scale';
import { isoOf, timeText } from '../format.js';
import { escapeText } from '../html.js';
import { boatPaint, INK, SOFT } from '../palette.js';
import { el, leftAxis, line, picture, text } from './svg.js';

/** One race of a trend. */
export interface TrendPoint {
  /** UTC seconds. */
  readonly time: number;
  readonly value: number;
  /** One standard error; NaN where none is stated. */
  readonly se: number;
  /** Race and figures in words, for hover and focus. */
  readonly words: string;
  /** The race's own page, where it lies beside this one. */
  readonly href?: string;
}

export interface TrendOptions {
  readonly width: number;
  readonly height: number;
  readonly title: string;
  /** What stands above the scale; the title when left out. */
  readonly unit?: string;
  /** Value of the fitted line at a time; null where there is none. */
  readonly fit: ((time: number) => number) | null;
  /** Whether the line is evidence: drawn whole, else broken. */
  readonly shown: boolean;
  /** Races behind the points, where a point stands for several. */
  readonly races?: number;
}

export const TREND_DEFAULTS: TrendOptions = { width: 460, height: 200, title: '', fit: null, shown: false };

/** A quantity from race to race, one standard error each, and the line through them. */
export function trendChart(points: readonly TrendPoint[], options: Partial<TrendOptions> = {}): string {
  const o = { ...TREND_DEFAULTS, ...options };
  const [from, to] = [Math.min(...points.map((p) => p.time)), Math.max(...points.map((p) => p.time))];
  const room = Math.max(86400, (to - from) * 0.04);
  const errors = points.map((p) => (Number.isFinite(p.se) ? p.se : 0));
  const low = Math.min(...points.map((p, i) => p.value - errors[i]));
  const high = Math.max(...points.map((p, i) => p.value + errors[i]));
  const slack = Math.max(1e-6, 0.06 * (high - low));
  const x = scaleLinear([from - room, to + room], [46, o.width - 12]);
  const y = scaleLinear([low - slack, high + slack], [o.height - 28, 24]);
  const body = [
    leftAxis(y, 46, o.width - 12, { count: 4 }),
    ...dayTicks(from, to).map((t) => dayTick(x(t), o.height - 28, t, to - from > YEAR)),
    fitted(o, from, to, x, y),
    ...points.map((p, i) => racePoint(p, x(p.time), y(p.value), y(p.value - errors[i]), y(p.value + errors[i]))),
    text(46, 12, o.unit ?? o.title, { size: 12, italic: true }),
  ];
  const label = `${o.title}: ${o.races ?? points.length} races, from ${points[0].value.toFixed(1)} to ${points[points.length - 1].value.toFixed(1)}.`;
  // Its points can be reached one by one, so it is no single image.
  return picture(o.width, o.height, label, body.join(''), { class: 'trend', role: 'group' });
}

const YEAR = 330 * 86400;

/** At most five days, evenly spread. */
function dayTicks(from: number, to: number): number[] {
  if (to - from < 86400) return [from];
  const count = Math.min(4, Math.floor((to - from) / 86400));
  return Array.from({ length: count + 1 }, (_, k) => from + ((to - from) * k) / count);
}

/** A day; where the days go beyond a year, its month and year. */
function dayTick(x: number, y: number, seconds: number, years: boolean): string {
  const words = years ? timeText(isoOf(seconds), 'month') : timeText(isoOf(seconds), 'day').slice(5);
  const extra = { 'data-ms': String(seconds * 1000), 'data-t': years ? 'month' : 'date' };
  return line(x, y, x, y + 4, SOFT) + text(x, y + 17, words, { anchor: 'middle', size: 11, fill: SOFT, extra });
}

type Scale = (value: number) => number;

function fitted(o: TrendOptions, from: number, to: number, x: Scale, y: Scale): string {
  if (!o.fit || !Number.isFinite(o.fit(from))) return '';
  const dash = o.shown ? undefined : '5 4';
  return line(x(from), y(o.fit(from)), x(to), y(o.fit(to)), INK, { 'stroke-width': 1.8, 'stroke-dasharray': dash });
}

/** A race with its error, in a frame wide enough for a finger; a ring about it where its page lies beside. */
function racePoint({ words, href }: TrendPoint, x: number, y: number, low: number, high: number): string {
  const { colour } = boatPaint(0);
  const parts = [
    el('title', {}, escapeText(words)),
    line(x, low, x, high, SOFT, { 'stroke-width': 1.1 }),
    el('rect', { x: x - 9, y: y - 9, width: 18, height: 18, fill: 'transparent' }),
    href === undefined ? '' : el('circle', { cx: x, cy: y, r: 6.5, fill: 'none', stroke: colour, 'stroke-width': 1 }),
    el('circle', { class: 'race-dot', cx: x, cy: y, r: 4, fill: colour }),
  ];
  return href === undefined
    ? el('g', { class: 'race', role: 'img', tabindex: 0, 'aria-label': words }, ...parts)
    : el('a', { class: 'race', href, 'aria-label': `${words}. Opens its page.` }, ...parts);
}
