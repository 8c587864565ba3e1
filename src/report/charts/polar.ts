import { scaleLinear } from 'd3-scale';
import { RAD } from '../../math/angles.js';
import { toKnots } from '../../math/units.js';
import type { Q, Result } from '../../result/result.js';
import type { PolarCurve, PolarPoint, RaceSeries } from '../../result/series.js';
import { dayBest, settledMean, timeMean, upwindLegs } from '../figures.js';
import { boatPaint, INK, PAPER, RULE, SOFT } from '../palette.js';
import { bestSign, dot, dots } from './sign.js';
import { curveOf, el, line, numberText, pathOf, picture, text, tickDigits } from './svg.js';

export interface PolarOptions {
  readonly width: number;
  /** Height at most. */
  readonly most: number;
}

export const POLAR_DEFAULTS: PolarOptions = { width: 460, most: 420 };

/**
 * The close-hauled part of the polar diagram, each tack on a sheet of its own: up the sheet is speed toward the wind,
 * to the side speed across it, on one scale, so that a ray is a course angle and an arc a speed.
 */
interface Sheet {
  readonly side: -1 | 1;
  /** Place of a course angle and a speed in knots. */
  readonly at: (gamma: number, knots: number) => [number, number];
  readonly box: { readonly left: number; readonly right: number; readonly top: number; readonly bottom: number };
  readonly vmg: readonly [number, number];
  readonly across: readonly [number, number];
}

const LEFT = 40;
const BETWEEN = 16;
const TOP = 26;
/** Least span of a sheet. [kn] */
const LEAST = 0.9;
const ROOM = 0.12;

/** Settled blocks by course angle and speed with the curves of model and reference; port to the left. */
export function polar(result: Result, series: RaceSeries, options: Partial<PolarOptions> = {}): string {
  const o = { ...POLAR_DEFAULTS, ...options };
  const curves = series.polars ?? [];
  const sheets = sheetsOf(series, curves, o);
  const bottom = sheets[0].box.bottom;
  const body = [
    ...sheets.map((sheet, k) => clip(sheet, k)),
    ...sheets.flatMap((sheet, k) => [
      net(sheet),
      el(
        'g',
        { 'clip-path': `url(#polar-clip-${k})` },
        bestLine(result, sheet),
        ...series.boats.map((b, i) => blockDots(b.blocks, i, sheet)),
        ...curves.map((curve) => curveLine(curve, curves, sheet)),
      ),
      ...result.boats.map((_, i) => meanMark(result, i, sheet)),
    ]),
    text(2, 13, 'VMG, kn', { size: 12, italic: true }),
    text(sheets[0].box.left, bottom + 18, '◂ port tack', { size: 12, italic: true, fill: SOFT }),
    text(sheets[1].box.right, bottom + 18, 'starboard tack ▸', { anchor: 'end', size: 12, italic: true, fill: SOFT }),
    legend(curves, bottom + 38, o.width),
  ];
  const height = bottom + (curves.length > 0 ? 64 : 46);
  return picture(o.width, Math.ceil(height), polarLabel(result, curves), body.join(''), { class: 'polar' });
}

function polarLabel(result: Result, curves: readonly PolarCurve[]): string {
  const parts = result.boats.map((b) => {
    const gamma = settledMean(b, 'gamma_deg');
    const speed = settledMean(b, 'speed_kn');
    return gamma && speed
      ? `${b.name} ${gamma.value.toFixed(1)} degrees at ${speed.value.toFixed(2)} knots`
      : `${b.name} not known`;
  });
  const bests = curves.map(
    ({ kind, boat, up }) =>
      `${kind === 'model' ? `best of the ${boat} model` : 'best of the reference'} ${up.gamma.toFixed(1)} degrees at ${toKnots(up.speed).toFixed(2)} knots`,
  );
  return `Polar diagram of settled sailing: ${[...parts, ...bests].join('; ')}.`;
}

/** Two sheets that hold every block and the best points, on one scale. */
function sheetsOf(series: RaceSeries, curves: readonly PolarCurve[], o: PolarOptions): [Sheet, Sheet] {
  const points: PolarPoint[] = [...series.boats.flatMap((b) => b.blocks), ...curves.map(({ up }) => up)];
  const vmg = spanOf(points.map((p) => toKnots(p.speed) * Math.cos(p.gamma * RAD)));
  const across = spanOf(points.map((p) => toKnots(p.speed) * Math.sin(p.gamma * RAD)));
  const width = (o.width - LEFT - BETWEEN - 8) / 2;
  const scale = Math.min(width / (across[1] - across[0]), (o.most - TOP - 46) / (vmg[1] - vmg[0]));
  // What the shape of the sheet leaves over goes to both sides of the data.
  const spare = (width / scale - (across[1] - across[0])) / 2;
  const wide = [across[0] - spare, across[1] + spare] as const;
  const bottom = TOP + scale * (vmg[1] - vmg[0]);
  return ([-1, 1] as const).map((side): Sheet => {
    const left = side < 0 ? LEFT : LEFT + width + BETWEEN;
    const x = scaleLinear(side < 0 ? [wide[1], wide[0]] : [...wide], [left, left + width]);
    const y = scaleLinear([...vmg], [bottom, TOP]);
    return {
      side,
      at: (gamma, knots) => [x(knots * Math.sin(gamma * RAD)), y(knots * Math.cos(gamma * RAD))],
      box: { left, right: left + width, top: TOP, bottom },
      vmg,
      across: wide,
    };
  }) as [Sheet, Sheet];
}

function spanOf(values: readonly number[]): [number, number] {
  const known = values.filter(Number.isFinite);
  if (known.length === 0) return [0, LEAST];
  const [low, high] = [Math.min(...known), Math.max(...known)];
  const room = Math.max((LEAST - (high - low)) / 2, ROOM);
  return [low - room, high + room];
}

function clip({ box }: Sheet, k: number): string {
  const { left, right, top, bottom } = box;
  return el(
    'clipPath',
    { id: `polar-clip-${k}` },
    el('rect', { x: left, y: top, width: right - left, height: bottom - top }),
  );
}

/** Level lines of VMG, rays of course angle, arcs of speed. */
function net(sheet: Sheet): string {
  const { box, vmg, across, side, at } = sheet;
  const inside = ([x, y]: readonly [number, number]): boolean =>
    x >= box.left - 0.01 && x <= box.right + 0.01 && y >= box.top - 0.01 && y <= box.bottom + 0.01;
  const levels = scaleLinear([...vmg], [box.bottom, box.top]);
  const ticks = levels.ticks(5);
  const digits = tickDigits(ticks);
  const out = ticks.map(
    (v) =>
      line(box.left, levels(v), box.right, levels(v), RULE, { 'stroke-width': 0.7 }) +
      (side < 0 ? numberText(LEFT - 6, levels(v) + 4, v, digits, { anchor: 'end', size: 11, fill: SOFT }) : ''),
  );
  const [slow, fast] = [Math.hypot(vmg[0], across[0]), Math.hypot(vmg[1], across[1])];
  for (let gamma = 20; gamma <= 75; gamma += 5) {
    const ray = along(slow, fast, (knots) => at(gamma, knots)).filter(inside);
    if (ray.length < 2) continue;
    const [x, y] = ray[ray.length - 1];
    out.push(el('path', { d: pathOf([ray[0], ray[ray.length - 1]]), stroke: RULE, 'stroke-width': 0.8 }));
    if (y < box.top + 3) out.push(text(x, box.top - 5, `${gamma}°`, { size: 10.5, fill: SOFT, anchor: 'middle' }));
  }
  const speeds = scaleLinear([slow, fast], [0, 1]).ticks(6);
  for (const knots of speeds) {
    const arc = along(15, 80, (gamma) => at(gamma, knots)).filter(inside);
    if (arc.length < 2) continue;
    const [x, y] = arc[arc.length - 1];
    out.push(
      el('path', { d: curveOf(arc), fill: 'none', stroke: RULE, 'stroke-width': 0.8, 'stroke-dasharray': '1 3' }),
    );
    if (y > box.bottom - 6 && x > box.left + 18 && x < box.right - 18) {
      out.push(
        text(x, box.bottom - 5, `${knots.toFixed(1)} kn`, { size: 10.5, fill: SOFT, anchor: 'middle', extra: EDGE }),
      );
    }
  }
  out.push(
    el('rect', { x: box.left, y: box.top, width: box.right - box.left, height: box.bottom - box.top, fill: 'none', stroke: SOFT, 'stroke-width': 0.8 }),
  ); // prettier-ignore
  return out.join('');
}

const FINE = 120;

function along(from: number, to: number, place: (value: number) => [number, number]): [number, number][] {
  return Array.from({ length: FINE + 1 }, (_, k) => place(from + ((to - from) * k) / FINE));
}

/** A paper-coloured edge keeps words legible over lines. */
const EDGE = { 'paint-order': 'stroke', stroke: PAPER, 'stroke-width': 3.5 };

/** Equal VMG is a level line: the best of the day. */
function bestLine(result: Result, { box, vmg }: Sheet): string {
  const best = dayBest(result)?.vmg.value ?? NaN;
  if (!(best > vmg[0] && best < vmg[1])) return '';
  const y = scaleLinear([...vmg], [box.bottom, box.top])(best);
  return line(box.left, y, box.right, y, INK, BEST);
}

const BEST = { 'stroke-width': 1, 'stroke-dasharray': '1.5 3' };

type Block = RaceSeries['boats'][number]['blocks'][number];

function blockDots(blocks: readonly Block[], index: number, { at, side }: Sheet): string {
  const { colour } = boatPaint(index);
  const places = blocks.filter(({ tack }) => (tack === 'port') === side < 0).map((b) => at(b.gamma, toKnots(b.speed)));
  return dots(index, places, 3.4, { fill: colour, 'fill-opacity': 0.45, stroke: colour, 'stroke-width': 0.8 });
}

/** One model: in ink; of several each in the colour of its first boat. The reference is broken. */
export function curvePaint(
  curve: PolarCurve,
  all: readonly PolarCurve[],
): { readonly stroke: string; readonly dash: string | undefined } {
  const models = all.filter(({ kind }) => kind === 'model').length;
  return {
    stroke: models > 1 ? boatPaint(curve.boats[0]).colour : INK,
    dash: curve.kind === 'model' ? undefined : '7 4',
  };
}

function curveLine(curve: PolarCurve, all: readonly PolarCurve[], { at }: Sheet): string {
  const { stroke, dash } = curvePaint(curve, all);
  const [x, y] = at(curve.up.gamma, toKnots(curve.up.speed));
  const d = curveOf(curve.points.map(({ gamma, speed }) => at(gamma, toKnots(speed))));
  return (
    el('path', { class: 'curve', d, fill: 'none', stroke, 'stroke-width': 1.8, 'stroke-dasharray': dash }) +
    bestSign(x, y, stroke, PAPER)
  );
}

/** What the lines are, under the sheets. */
function legend(curves: readonly PolarCurve[], y: number, width: number): string {
  const [model, reference] = [curves.find(({ kind }) => kind === 'model'), curves.find(({ kind }) => kind !== 'model')];
  const entry = (x: number, at: number, words: string, stroke: Readonly<Record<string, string | number>>): string =>
    line(x, at - 4, x + 26, at - 4, INK, { 'stroke-width': 1.8, ...stroke }) + text(x + 32, at, words, { size: 11.5 });
  const best = entry(LEFT, curves.length > 0 ? y + 18 : y, 'best settled VMG of the day', BEST);
  return (
    (model ? entry(LEFT, y, `boat model in ${toKnots(model.tws).toFixed(1)} kn`, {}) : '') +
    (reference ? entry(width / 2 + 6, y, 'reference', { 'stroke-dasharray': '7 4' }) : '') +
    best
  );
}

function meanMark(result: Result, index: number, { at, side }: Sheet): string {
  const boat = result.boats[index];
  const { colour } = boatPaint(index);
  const legs = upwindLegs(boat).map(({ leg }) => (side < 0 ? leg.steady?.port : leg.steady?.starboard));
  const of = (key: 'gamma_deg' | 'speed_kn'): Q =>
    timeMean(legs.map((s) => ({ q: s?.[key] ?? null, seconds: s?.seconds ?? 0 })));
  const gamma = of('gamma_deg');
  const speed = of('speed_kn');
  if (!gamma || !speed) return '';
  const [x, y] = at(gamma.value, speed.value);
  const error = gamma.se ?? 0;
  const bar = pathOf([at(gamma.value - error, speed.value), at(gamma.value + error, speed.value)]);
  return el('path', { d: bar, stroke: INK, 'stroke-width': 2.2, fill: 'none' }) + dot(index, x, y, 6, colour, 1);
}
