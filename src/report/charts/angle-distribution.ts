import { max } from 'd3-array';
import { scaleLinear } from 'd3-scale';
import { area, curveMonotoneX } from 'd3-shape';
import type { BoatSeries } from '../../result/series.js';
import { boatPaint, INK, SOFT } from '../palette.js';
import { el, footAxis, line, picture, text } from './svg.js';

export interface DistributionOptions {
  readonly width: number;
  readonly height: number;
  /** Width of a class. [deg] */
  readonly bin: number;
  /** Best course angle to mark: the reference's, NaN when there is none. [deg] */
  readonly best: number;
  readonly bestWords: string;
}

export const DISTRIBUTION_DEFAULTS: DistributionOptions = {
  width: 460,
  height: 200,
  bin: 1,
  best: NaN,
  bestWords: 'best',
};

export interface Histogram {
  readonly from: number;
  readonly bin: number;
  /** Share of settled seconds in each class. */
  readonly share: readonly number[];
}

/** Shares of settled seconds by course angle, in classes of `bin` degrees from `from`. */
export function histogram(boat: BoatSeries, from: number, to: number, bin: number): Histogram {
  const counts = new Array<number>(Math.ceil((to - from) / bin)).fill(0);
  let n = 0;
  for (let i = 0; i < boat.n; i++) {
    const gamma = Math.abs(boat.gamma[i]);
    if (!boat.settled[i] || !Number.isFinite(gamma)) continue;
    n++;
    const k = Math.floor((gamma - from) / bin);
    if (k >= 0 && k < counts.length) counts[k]++;
  }
  return { from, bin, share: counts.map((c) => (n ? c / n : 0)) };
}

/** How often each course angle was sailed while settled, the best one marked. */
export function angleDistribution(boats: readonly BoatSeries[], options: Partial<DistributionOptions> = {}): string {
  const o = { ...DISTRIBUTION_DEFAULTS, ...options };
  const [from, to] = [25, 65];
  const all = boats.map((b) => histogram(b, from, to, o.bin));
  const x = scaleLinear([from, to], [24, o.width - 16]);
  const y = scaleLinear([0, (max(all.flatMap((h) => h.share)) ?? 0) || 1], [o.height - 26, 26]);
  const body = [
    ...all.map((h, i) => shape(h, i, x, y)),
    line(24, o.height - 26, o.width - 16, o.height - 26, SOFT),
    footAxis(x, o.height - 26, { count: 8 }),
    ...bestLine(o, x),
    text(o.width - 16, o.height - 30, '°', { anchor: 'end', size: 11, fill: SOFT }),
  ];
  return picture(o.width, o.height, labelOf(boats, all, o), body.join(''), { class: 'distribution' });
}

function labelOf(boats: readonly BoatSeries[], all: readonly Histogram[], o: DistributionOptions): string {
  const parts = boats.map((b, i) => {
    const h = all[i];
    const most = h.share.indexOf(Math.max(...h.share));
    return `${b.name} most often at ${h.from + most * h.bin} to ${h.from + (most + 1) * h.bin} degrees`;
  });
  const best = Number.isFinite(o.best) ? ` The best angle is ${o.best.toFixed(1)} degrees.` : '';
  return `How often each course angle to the true wind was sailed while settled: ${parts.join('; ')}.${best}`;
}

function shape(h: Histogram, index: number, x: (v: number) => number, y: (v: number) => number): string {
  const { colour, dash } = boatPaint(index);
  const points = h.share.map((s, k) => [x(h.from + (k + 0.5) * h.bin), y(s)] as [number, number]);
  const draw = area<[number, number]>().x((p) => p[0]).y0(y(0)).y1((p) => p[1]).curve(curveMonotoneX); // prettier-ignore
  const d = (draw.digits(1)(points) ?? '').toString();
  return el('path', {
    d,
    fill: colour,
    'fill-opacity': 0.16,
    stroke: colour,
    'stroke-width': 1.6,
    'stroke-dasharray': dash || undefined,
  });
}

function bestLine(o: DistributionOptions, x: (v: number) => number): string[] {
  if (!Number.isFinite(o.best)) return [];
  return [
    line(x(o.best), 16, x(o.best), o.height - 26, INK, { 'stroke-width': 1.3, 'stroke-dasharray': '5 3' }),
    text(x(o.best) + 5, 20, `${o.bestWords} ${o.best.toFixed(1)}°`, { size: 11.5, italic: true }),
  ];
}
