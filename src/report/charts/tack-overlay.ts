import { scaleLinear } from 'd3-scale';
import { toKnots } from '../../math/units.js';
import type { Quantity } from '../../result/result.js';
import type { BoatSeries, ManoeuvreSpan } from '../../result/series.js';
import { plain } from '../format.js';
import { GAIN, INK, LOSS, PAPER, RULE, SOFT } from '../palette.js';
import { curveOf, el, footAxis, leftAxis, line, picture, text, type Scale } from './svg.js';

export interface TackOverlayOptions {
  readonly width: number;
  /** Seconds shown before and after head to wind. */
  readonly before: number;
  readonly after: number;
  /** Place of the boat in the result, for picking a curve. */
  readonly boat: number;
  /** Only tacks on these legs. */
  readonly legs?: ReadonlySet<number>;
  /** Metres each tack cost, by its place in `manoeuvres`. */
  readonly costs?: ReadonlyMap<number, Quantity>;
}

export const OVERLAY_DEFAULTS: TackOverlayOptions = { width: 460, before: 12, after: 40, boat: 0 };

/** Places in `boat.manoeuvres` of the tacks; within the legs named where there are any. */
export function tacksOf(boat: BoatSeries, legs?: ReadonlySet<number>): number[] {
  const beats = boat.legs.filter((l) => legs?.has(l.index));
  return boat.manoeuvres.flatMap((m, k) => {
    const within = !legs || beats.some((l) => m.at >= l.from && m.at < l.to);
    return m.kind === 'tack' && within ? [k] : [];
  });
}

export type Kind = 'cheap' | 'dear' | 'other';

export interface Sorted {
  /** Of each tack in the order given. */
  readonly kinds: readonly Kind[];
  /** Cost of the middle tack; the dearest of the cheap ones. [m] */
  readonly middle: number;
  readonly cheapTo: number;
}

/**
 * Good and bad tacks: cheap is the cheapest third; dear is what cost more than the middle one by more than two of its
 * standard errors, for within them the order is chance.
 */
export function sortTacks(costs: readonly (Quantity | undefined)[]): Sorted {
  const known = costs.flatMap((cost) => (cost ? [cost.value] : [])).sort((a, b) => a - b);
  const middle = known.length > 0 ? (known[(known.length - 1) >> 1] + known[known.length >> 1]) / 2 : NaN;
  const cheapTo = known.length >= 3 ? known[Math.floor(known.length / 3) - 1] : NaN;
  const kinds = costs.map((cost): Kind => {
    if (!cost) return 'other';
    if (cost.se !== null && cost.value - middle > 2 * cost.se) return 'dear';
    return cost.value <= cheapTo ? 'cheap' : 'other';
  });
  return { kinds, middle, cheapTo };
}

interface Panel {
  readonly title: string;
  readonly height: number;
  readonly value: (boat: BoatSeries, row: number, turn: ManoeuvreSpan) => number;
  /** Beyond these a curve leaves the sheet: a rounding among the tacks must not flatten the rest. */
  readonly low: number;
  readonly high: number;
}

const PANELS: readonly Panel[] = [
  { title: 'VMG, kn', height: 118, value: (b, i) => toKnots(b.vmg[i]), low: -2, high: Infinity },
  { title: 'Speed, kn', height: 104, value: (b, i) => toKnots(b.speed[i]), low: 0, high: Infinity },
  {
    title: 'Course angle, °: old tack below, new tack above',
    height: 118,
    value: (b, i, turn) => (turn.to === 'starboard' ? 1 : -1) * b.gamma[i],
    low: -75,
    high: 75,
  },
];

const LEFT = 44;
const HEAD = 20;
const FOOT = 24;
const LEGEND = 40;

/** VMG, speed and course angle of every tack of a boat on one clock that stands at zero when she is head to wind. */
export function tackOverlay(boat: BoatSeries, options: Partial<TackOverlayOptions> = {}): string {
  const o = { ...OVERLAY_DEFAULTS, ...options };
  const tacks = tacksOf(boat, o.legs);
  const sorted = sortTacks(tacks.map((k) => o.costs?.get(k)));
  const x = scaleLinear([-o.before, o.after], [LEFT, o.width - 12]);
  let top = LEGEND;
  const body = [legend(sorted, o.width)];
  for (const panel of PANELS) {
    body.push(panelOf(panel, boat, tacks, sorted, x, top, o));
    top += HEAD + panel.height;
  }
  body.push(footAxis(x, top, { count: 6 }));
  body.push(
    text(o.width - 12, top + 32, 'seconds from head to wind', { size: 11, italic: true, fill: SOFT, anchor: 'end' }),
  );
  return picture(o.width, top + FOOT + 14, labelOf(boat, tacks, sorted), body.join(''), {
    class: 'tack-overlay',
    'data-boat': o.boat,
  });
}

const STROKES: Readonly<Record<Kind, Readonly<Record<string, string | number>>>> = {
  other: { stroke: SOFT, 'stroke-width': 0.9, opacity: 0.7 },
  cheap: { stroke: GAIN, 'stroke-width': 1.7 },
  dear: { stroke: LOSS, 'stroke-width': 2, 'stroke-dasharray': '7 2.5' },
};

function legend({ kinds, middle, cheapTo }: Sorted, width: number): string {
  const count = (kind: Kind): number => kinds.filter((one) => one === kind).length;
  const entry = (x: number, y: number, stroke: Readonly<Record<string, string | number>>, words: string): string =>
    el('path', { d: `M${x} ${y - 4}h26`, fill: 'none', ...stroke }) + text(x + 32, y, words, { size: 11.5 });
  const half = LEFT + (width - LEFT) / 2;
  const middleWords = Number.isFinite(middle) ? `the middle one (cost ${plain(middle, 1)} m)` : 'the middle one';
  return [
    entry(LEFT, 12, { stroke: INK, 'stroke-width': 2.6 }, middleWords),
    count('cheap') > 0 ? entry(half, 12, STROKES.cheap, `cheapest third (to ${plain(cheapTo, 1)} m)`) : '',
    count('dear') > 0 ? entry(LEFT, 29, STROKES.dear, `dear beyond the error (${count('dear')})`) : '',
    count('other') > 0 ? entry(count('dear') > 0 ? half : LEFT, 29, STROKES.other, 'the others') : '',
  ].join('');
}

type Point = readonly [seconds: number, value: number];

function panelOf(
  panel: Panel,
  boat: BoatSeries,
  tacks: readonly number[],
  { kinds }: Sorted,
  x: Scale,
  top: number,
  o: TackOverlayOptions,
): string {
  const curves = tacks.map((k) => pointsOf(panel, boat, boat.manoeuvres[k], o));
  const values = curves.flatMap((c) => c.map((p) => p[1])).filter(Number.isFinite);
  const foot = top + HEAD + panel.height;
  const low = Math.max(panel.low, Math.min(0, ...values));
  const y = scaleLinear([low, 1.05 * Math.max(1, ...values)], [foot - 2, top + HEAD + 4]);
  const order: readonly Kind[] = ['other', 'cheap', 'dear'];
  const drawn = order.map((kind) => {
    const of = tacks.flatMap((k, i) => (kinds[i] === kind ? [curve(k, curves[i], kind, x, y)] : []));
    return of.length > 0 ? el('g', { fill: 'none', ...STROKES[kind] }, ...of) : '';
  });
  return [
    leftAxis(y, LEFT, o.width - 12, { count: 4 }),
    line(x(0), top + HEAD, x(0), foot, SOFT, { 'stroke-width': 1 }),
    ...drawn,
    el('path', {
      class: 'middle',
      d: curveOf(middle(curves).map(([t, v]) => [x(t), y(v)])),
      fill: 'none',
      stroke: INK,
      'stroke-width': 2.6,
    }),
    text(LEFT, top + HEAD - 6, panel.title, { size: 12, italic: true, extra: { 'paint-order': 'stroke', stroke: PAPER, 'stroke-width': 3 } }),
    line(LEFT, foot, o.width - 12, foot, RULE),
  ].join(''); // prettier-ignore
}

/** Within the leg of the tack: what comes after the mark is no part of it. */
function pointsOf(panel: Panel, boat: BoatSeries, turn: ManoeuvreSpan, o: TackOverlayOptions): Point[] {
  const out: Point[] = [];
  const leg = boat.legs.find(({ from, to }) => turn.at >= from && turn.at < to) ?? { from: 0, to: boat.n };
  for (let s = -o.before; s <= o.after; s++) {
    const row = turn.at + s;
    const value = row >= leg.from && row < leg.to ? panel.value(boat, row, turn) : NaN;
    out.push([s, value >= panel.low && value <= panel.high ? value : NaN]);
  }
  return out;
}

function curve(k: number, points: readonly Point[], kind: Kind, x: Scale, y: Scale): string {
  const d = curveOf(points.map(([t, v]) => [x(t), y(v)]));
  return el('path', { class: `tack-curve ${kind}`, 'data-turn': k, d });
}

/** Median of all tacks second by second. */
export function middle(curves: readonly (readonly Point[])[]): Point[] {
  return (curves[0] ?? []).map(([t], i) => {
    const at = curves.map((c) => c[i][1]).filter(Number.isFinite).sort((a, b) => a - b); // prettier-ignore
    const half = at.length / 2;
    const value = at.length === 0 ? NaN : at.length % 2 ? at[Math.floor(half)] : (at[half - 1] + at[half]) / 2;
    return [t, value];
  });
}

function labelOf(boat: BoatSeries, tacks: readonly number[], { kinds, middle: cost }: Sorted): string {
  if (tacks.length === 0) return `${boat.name} has no tack to show.`;
  const dear = kinds.filter((kind) => kind === 'dear').length;
  const costs = Number.isFinite(cost)
    ? ` The middle one cost ${plain(cost, 1)} metres; ${dear} cost more beyond the error.`
    : '';
  return `VMG, speed and course angle of ${tacks.length} tacks of ${boat.name} laid over one another at head to wind.${costs}`;
}
