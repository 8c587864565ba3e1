import { scaleLinear } from 'd3-scale';
import { RAD } from '../../math/angles.js';
import { toKnots } from '../../math/units.js';
import type { Q, Result } from '../../result/result.js';
import type { RaceSeries } from '../../result/series.js';
import { dayBest, settledMean, timeMean, upwindLegs } from '../figures.js';
import { boatPaint, INK, PAPER, RULE, SOFT } from '../palette.js';
import { el, line, numberText, pathOf, picture, text } from './svg.js';

export interface PolarOptions {
  readonly width: number;
  readonly height: number;
}

export const POLAR_DEFAULTS: PolarOptions = { width: 460, height: 330 };

interface Fan {
  readonly cx: number;
  readonly cy: number;
  readonly r: (knots: number) => number;
  readonly limit: number;
}

/** Settled blocks by course angle and speed; port to the left, starboard to the right, wind from the top. */
export function polar(result: Result, series: RaceSeries, options: Partial<PolarOptions> = {}): string {
  const o = { ...POLAR_DEFAULTS, ...options };
  const speeds = series.boats.flatMap((b) => b.blocks.map((k) => toKnots(k.speed)));
  const known = result.boats.map((b) => optimumOf(b, 'speed_kn')?.value ?? 0);
  const limit = Math.max(3, 0.3 + Math.max(0, ...speeds, ...known));
  const cy = o.height - 26;
  const scale = scaleLinear([0, limit], [0, Math.min(cy - 16, o.width / 2 / Math.sin(64 * RAD) - 18)]);
  const fan: Fan = { cx: o.width / 2, cy, r: scale, limit };
  const body = [
    rings(fan),
    vmgLines(result, fan, o.width),
    ...series.boats.flatMap((b, i) => blockDots(b.blocks, i, fan)),
    ...result.boats.flatMap((_, i) => meanMark(result, i, fan)),
    ...optimumMarks(result, fan),
    text(12, o.height - 6, '◂ port tack', { size: 12, italic: true, fill: SOFT }),
    text(o.width - 12, o.height - 6, 'starboard tack ▸', { anchor: 'end', size: 12, italic: true, fill: SOFT }),
  ];
  return picture(o.width, o.height, polarLabel(result), body.join(''), { class: 'polar' });
}

function polarLabel(result: Result): string {
  const parts = result.boats.map((b) => {
    const gamma = settledMean(b, 'gamma_deg');
    const speed = settledMean(b, 'speed_kn');
    return gamma && speed
      ? `${b.name} ${gamma.value.toFixed(1)} degrees at ${speed.value.toFixed(2)} knots`
      : `${b.name} not known`;
  });
  return `Polar diagram of settled sailing: ${parts.join('; ')}.`;
}

function optimumOf(boat: Result['boats'][number], key: 'gamma_deg' | 'speed_kn' | 'vmg_kn'): Q {
  return timeMean(
    upwindLegs(boat).map(({ leg }) => ({ q: leg.optimum?.[key] ?? null, seconds: leg.steady?.seconds ?? 1 })),
  );
}

/** Place of a course angle (negative: port) and speed. */
function at(fan: Fan, gamma: number, knots: number): [number, number] {
  return [fan.cx + fan.r(knots) * Math.sin(gamma * RAD), fan.cy - fan.r(knots) * Math.cos(gamma * RAD)];
}

function arc(fan: Fan, knots: number): string {
  const points: [number, number][] = [];
  for (let g = -64; g <= 64; g += 2) points.push(at(fan, g, knots));
  return pathOf(points);
}

function rings(fan: Fan): string {
  const out: string[] = [];
  const step = fan.limit > 8 ? 2 : 1;
  for (let v = step; v <= fan.limit; v += step) {
    out.push(el('path', { d: arc(fan, v), fill: 'none', stroke: RULE, 'stroke-width': 0.8 }));
    out.push(numberText(fan.cx + 3, fan.cy - fan.r(v) + 11, v, 0, { size: 10.5, fill: SOFT }));
  }
  for (const g of [30, 40, 50, 60]) {
    for (const side of [-1, 1]) {
      const [x, y] = at(fan, side * g, fan.limit);
      out.push(line(fan.cx, fan.cy, x, y, RULE, { 'stroke-width': 0.6 }));
      out.push(text(x + side * 4, y - 3, `${g}°`, { size: 10.5, fill: SOFT, anchor: side < 0 ? 'end' : 'start' }));
    }
  }
  out.push(line(fan.cx, fan.cy, fan.cx, fan.cy - fan.r(fan.limit), SOFT, { 'stroke-width': 0.8 }));
  out.push(text(fan.cx - 4, fan.cy - 8, 'knots', { size: 10.5, italic: true, fill: SOFT, anchor: 'end' }));
  return out.join('');
}

/** A paper-coloured edge keeps words legible over lines. */
const EDGE = { 'paint-order': 'stroke', stroke: PAPER, 'stroke-width': 3.5 };

/** Equal VMG is a level line: the best of the day, and the bound set by the angle to the apparent wind. */
function vmgLines(result: Result, fan: Fan, width: number): string {
  const best = dayBest(result);
  const ceiling = best?.leg.ceiling_vmg_kn?.value ?? NaN;
  const rule = (knots: number, words: string, dash: string): string => {
    if (!Number.isFinite(knots) || knots > fan.limit) return '';
    const y = fan.cy - fan.r(knots);
    return (
      line(20, y, width - 20, y, INK, { 'stroke-width': 0.9, 'stroke-dasharray': dash }) +
      text(width / 2, y - 4, words, { size: 11, italic: true, anchor: 'middle', extra: EDGE })
    );
  };
  return (
    rule(best?.vmg.value ?? NaN, 'best settled VMG', '6 3') +
    rule(ceiling, 'upper bound at that leg’s apparent angle', '1.5 3')
  );
}

type Block = RaceSeries['boats'][number]['blocks'][number];

function blockDots(blocks: readonly Block[], index: number, fan: Fan): string[] {
  const { colour } = boatPaint(index);
  return blocks.map((b) => {
    const [x, y] = at(fan, b.tack === 'port' ? -b.gamma : b.gamma, toKnots(b.speed));
    return dot(index, x, y, 3.4, colour, 0.5);
  });
}

/** Boats differ in shape as well as in colour. */
export function dot(index: number, x: number, y: number, r: number, colour: string, opacity: number): string {
  const paint = { fill: colour, 'fill-opacity': opacity, stroke: colour, 'stroke-width': 0.8 };
  if (index % 4 === 0) return el('circle', { cx: x, cy: y, r, ...paint });
  if (index % 4 === 1) return el('rect', { x: x - r * 0.9, y: y - r * 0.9, width: r * 1.8, height: r * 1.8, ...paint });
  const d =
    index % 4 === 2
      ? `M${x} ${y - r * 1.2}L${x + r * 1.1} ${y + r}L${x - r * 1.1} ${y + r}Z`
      : `M${x} ${y - r * 1.3}L${x + r * 1.3} ${y}L${x} ${y + r * 1.3}L${x - r * 1.3} ${y}Z`;
  return el('path', { d, ...paint });
}

function meanMark(result: Result, index: number, fan: Fan): string[] {
  const boat = result.boats[index];
  const { colour } = boatPaint(index);
  return ([-1, 1] as const).flatMap((side) => {
    const legs = upwindLegs(boat).map(({ leg }) => (side < 0 ? leg.steady?.port : leg.steady?.starboard));
    const of = (key: 'gamma_deg' | 'speed_kn'): Q =>
      timeMean(legs.map((s) => ({ q: s?.[key] ?? null, seconds: s?.seconds ?? 0 })));
    const gamma = of('gamma_deg');
    const speed = of('speed_kn');
    if (!gamma || !speed) return [];
    const [x, y] = at(fan, side * gamma.value, speed.value);
    const a = (gamma.se ?? 0) + 1e-6;
    const bar = pathOf([
      at(fan, side * (gamma.value - a), speed.value),
      at(fan, side * (gamma.value + a), speed.value),
    ]);
    return [el('path', { d: bar, stroke: INK, 'stroke-width': 2.2, fill: 'none' }), dot(index, x, y, 6, colour, 1)];
  });
}

function optimumMarks(result: Result, fan: Fan): string[] {
  const boat = result.boats.find((b) => optimumOf(b, 'gamma_deg'));
  const gamma = boat && optimumOf(boat, 'gamma_deg');
  const speed = boat && optimumOf(boat, 'speed_kn');
  if (!gamma || !speed) return [];
  return [-1, 1].map((side) => {
    const [x, y] = at(fan, side * gamma.value, speed.value);
    return (
      el('path', { d: `M${x - 6} ${y}H${x + 6}M${x} ${y - 6}V${y + 6}`, stroke: INK, 'stroke-width': 1.6 }) +
      el('circle', { cx: x, cy: y, r: 4, fill: PAPER, stroke: INK, 'stroke-width': 1.4 })
    );
  });
}
