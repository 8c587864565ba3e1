import { scaleLinear } from 'd3-scale';
import { toKnots } from '../../math/units.js';
import type { BoatSeries } from '../../result/series.js';
import { INK, PORT, RULE, SOFT, STARBOARD } from '../palette.js';
import { el, footAxis, leftAxis, line, pathOf, picture, text } from './svg.js';

export interface TackOverlayOptions {
  readonly width: number;
  readonly height: number;
  /** Seconds shown before and after head to wind. */
  readonly before: number;
  readonly after: number;
  /** Place of the boat in the result, for picking a curve. */
  readonly boat: number;
  /** Only tacks on these legs. */
  readonly legs?: ReadonlySet<number>;
}

export const OVERLAY_DEFAULTS: TackOverlayOptions = { width: 460, height: 230, before: 12, after: 40, boat: 0 };

/** Places in `boat.manoeuvres` of the tacks; within the legs named where there are any. */
export function tacksOf(boat: BoatSeries, legs?: ReadonlySet<number>): number[] {
  const beats = boat.legs.filter((l) => legs?.has(l.index));
  return boat.manoeuvres.flatMap((m, k) => {
    const within = !legs || beats.some((l) => m.at >= l.from && m.at < l.to);
    return m.kind === 'tack' && within ? [k] : [];
  });
}

/** VMG of every tack of a boat on one clock that stands at zero when she is head to wind. */
export function tackOverlay(boat: BoatSeries, options: Partial<TackOverlayOptions> = {}): string {
  const o = { ...OVERLAY_DEFAULTS, ...options };
  const tacks = tacksOf(boat, o.legs);
  const curves = tacks.map((k) => curveOf(boat, boat.manoeuvres[k].at, o));
  const values = curves.flatMap((c) => c.map((p) => p[1])).filter(Number.isFinite);
  const x = scaleLinear([-o.before, o.after], [44, o.width - 12]);
  const y = scaleLinear(reachOf(values), [o.height - 28, 22]).nice(4);
  const body = [
    leftAxis(y, 44, o.width - 12, { count: 4 }),
    footAxis(x, o.height - 28, { count: 6 }),
    line(x(0), 20, x(0), o.height - 28, SOFT, { 'stroke-width': 1 }),
    ...curves.map((c, i) => curve(boat, tacks[i], c, x, y)),
    el('path', {
      class: 'middle',
      d: pathOf(middle(curves).map(([t, v]) => [x(t), y(v)])),
      fill: 'none',
      stroke: INK,
      'stroke-width': 2.4,
    }),
    text(44, 12, 'VMG, kn, against seconds from head to wind', { size: 12, italic: true }),
    line(44, o.height - 28, o.width - 12, o.height - 28, RULE),
  ];
  return picture(o.width, o.height, labelOf(boat, tacks.length, curves), body.join(''), {
    class: 'tack-overlay',
    'data-boat': o.boat,
  });
}

/** A rounding among the tacks must not flatten the rest: two knots astern is as far as the sheet goes. */
function reachOf(values: readonly number[]): [number, number] {
  return [Math.max(-2, Math.min(0, ...values)), Math.max(1, ...values)];
}

type Point = readonly [seconds: number, knots: number];

function curveOf(boat: BoatSeries, at: number, o: TackOverlayOptions): Point[] {
  const out: Point[] = [];
  for (let s = -o.before; s <= o.after; s++) {
    const row = at + s;
    out.push([s, row >= 0 && row < boat.n ? toKnots(boat.vmg[row]) : NaN]);
  }
  return out;
}

function curve(
  boat: BoatSeries,
  k: number,
  points: readonly Point[],
  x: (v: number) => number,
  y: (v: number) => number,
): string {
  const onto = boat.manoeuvres[k].to;
  return el('path', {
    class: 'tack-curve',
    'data-turn': k,
    d: pathOf(points.map(([t, v]) => [x(t), y(v < -2 ? NaN : v)])),
    fill: 'none',
    stroke: onto === 'port' ? PORT : STARBOARD,
    'stroke-dasharray': onto === 'port' ? '5 2.5' : undefined,
    'stroke-width': 1.2,
    opacity: 0.75,
  });
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

function labelOf(boat: BoatSeries, n: number, curves: readonly (readonly Point[])[]): string {
  const mid = middle(curves).map((p) => p[1]).filter(Number.isFinite); // prettier-ignore
  if (mid.length === 0) return `${boat.name} has no tack to show.`;
  return `${n} tacks of ${boat.name} laid over one another at head to wind. The middle one falls to ${Math.min(...mid).toFixed(1)} knots of VMG.`;
}
