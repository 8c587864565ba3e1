import { escapeText } from '../html.js';
import { plain } from '../format.js';
import { INK, RULE, SOFT } from '../palette.js';
import { simplify } from './simplify.js';

/** Pieces of SVG as strings: elements, axes, patterns. No element carries a style attribute: the page forbids them. */

export type Attributes = Readonly<Record<string, string | number | undefined>>;

/** Numbers in drawings: hundredths, no negative zero. */
export function coordinate(value: number): string {
  if (!Number.isFinite(value)) return '0';
  const rounded = Math.round(value * 100) / 100;
  return String(rounded === 0 ? 0 : rounded);
}

function attribute([name, value]: [string, string | number | undefined]): string {
  if (value === undefined) return '';
  return ` ${name}="${typeof value === 'number' ? coordinate(value) : escapeText(value)}"`;
}

/** An element; children are markup. */
export function el(name: string, attributes: Attributes = {}, ...children: readonly string[]): string {
  const open = `<${name}${Object.entries(attributes).map(attribute).join('')}`;
  return children.length > 0 ? `${open}>${children.join('')}</${name}>` : `${open}/>`;
}

export interface TextOptions {
  readonly anchor?: 'start' | 'middle' | 'end';
  readonly size?: number;
  readonly fill?: string;
  readonly weight?: number;
  readonly italic?: boolean;
  readonly extra?: Attributes;
}

/** A line of text; the words are escaped here. */
export function text(x: number, y: number, words: string, options: TextOptions = {}): string {
  const { anchor, size = 12, fill, weight, italic, extra = {} } = options;
  return el(
    'text',
    {
      x,
      y,
      'text-anchor': anchor === 'start' ? undefined : anchor,
      'font-size': size,
      // Ink is the picture's own.
      fill: fill === INK ? undefined : fill,
      'font-weight': weight,
      'font-style': italic ? 'italic' : undefined,
      ...extra,
    },
    escapeText(words),
  );
}

/** A number the client localises in place. */
export function numberText(x: number, y: number, value: number, digits: number, options: TextOptions = {}): string {
  const extra = { ...options.extra, class: 'n' };
  return text(x, y, plain(value, digits), { ...options, extra });
}

export function line(x1: number, y1: number, x2: number, y2: number, stroke = RULE, extra: Attributes = {}): string {
  return el('line', { x1, y1, x2, y2, stroke, ...extra });
}

export interface Scale {
  (value: number): number;
  ticks(count?: number): number[];
  domain(): number[];
}

/** How many decimals a set of ticks needs. */
export function tickDigits(ticks: readonly number[]): number {
  const step = ticks.length > 1 ? Math.abs(ticks[1] - ticks[0]) : 1;
  return Math.max(0, -Math.floor(Math.log10(step) + 1e-9));
}

export interface AxisOptions {
  readonly count?: number;
  readonly label?: string;
  /** Offset added before a tick is written (directions modulo 360). */
  readonly write?: (value: number) => number;
}

/** Horizontal rules with their values at the left. */
export function leftAxis(scale: Scale, x0: number, x1: number, options: AxisOptions = {}): string {
  const ticks = scale.ticks(options.count ?? 4);
  const digits = tickDigits(ticks);
  const write = options.write ?? ((v: number) => v);
  const rules = ticks.map((v) => line(x0, scale(v), x1, scale(v), RULE, { 'stroke-width': 0.7 }));
  const words = ticks.map((v) =>
    numberText(x0 - 6, scale(v) + 4, write(v), digits, { anchor: 'end', fill: SOFT, size: 11 }),
  );
  return [...rules, ...words].join('');
}

/** Ticks and values along the foot. */
export function footAxis(scale: Scale, y: number, options: AxisOptions = {}): string {
  const ticks = scale.ticks(options.count ?? 6);
  const digits = tickDigits(ticks);
  const write = options.write ?? ((v: number) => v);
  const marks = ticks.map((v) => line(scale(v), y, scale(v), y + 5, SOFT, { 'stroke-width': 0.8 }));
  const words = ticks.map((v) =>
    numberText(scale(v), y + 18, write(v), digits, { anchor: 'middle', fill: SOFT, size: 11 }),
  );
  return [...marks, ...words].join('');
}

/** The outer element with its name for those who do not see it. */
export function picture(width: number, height: number, label: string, body: string, extra: Attributes = {}): string {
  return el(
    'svg',
    {
      xmlns: 'http://www.w3.org/2000/svg',
      viewBox: `0 0 ${width} ${height}`,
      role: 'img',
      'aria-label': label,
      'font-family': 'inherit',
      fill: INK,
      ...extra,
    },
    body,
  );
}

/**
 * A polyline that lifts the pen wherever a point is not finite: tenths of a pixel, each move from where the last one
 * ended as rounded, so that nothing drifts.
 */
export function pathOf(points: Iterable<readonly [number, number]>): string {
  let d = '';
  let at: readonly [number, number] | null = null;
  for (const [x, y] of points) {
    if (!Number.isFinite(x) || !Number.isFinite(y)) {
      at = null;
      continue;
    }
    const to = [Math.round(x * 10), Math.round(y * 10)] as const;
    const [dx, dy] = at ? [to[0] - at[0], to[1] - at[1]] : to;
    if (!at || dx !== 0 || dy !== 0) d += `${at ? 'l' : 'M'}${short(dx)}${dy < 0 ? '' : ' '}${short(dy)}`;
    at = to;
  }
  return d;
}

/** Tenths as text without a zero that says nothing. */
function short(tenths: number): string {
  return String(tenths / 10).replace(/^(-?)0\./, '$1.');
}

/** A curve drawn with no more points than keep it within half a pixel of them all. */
export function curveOf(points: readonly (readonly [number, number])[]): string {
  const xs = Float64Array.from(points, ([x]) => x);
  const ys = Float64Array.from(points, ([, y]) => y);
  return simplify(xs, ys, 0, xs.length, 0.5)
    .map((rows) => pathOf(rows.map((i) => [xs[i], ys[i]])))
    .join('');
}
