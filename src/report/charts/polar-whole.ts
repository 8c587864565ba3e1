import { scaleLinear } from 'd3-scale';
import { RAD } from '../../math/angles.js';
import { toKnots } from '../../math/units.js';
import type { BoatSeries, PolarCurve, PolarPoint, RaceSeries } from '../../result/series.js';
import { boatPaint, PAPER, RULE, SOFT } from '../palette.js';
import { bestSign, dots } from './sign.js';
import { curveOf, el, line, numberText, picture, text } from './svg.js';
import { curvePaint } from './polar.js';

export interface PolarWholeOptions {
  readonly width: number;
}

export const POLAR_WHOLE_DEFAULTS: PolarWholeOptions = { width: 460 };

interface Fan {
  readonly cx: number;
  readonly cy: number;
  readonly r: (knots: number) => number;
  readonly limit: number;
}

/** The whole polar diagram from close-hauled to dead downwind, wind from the top, port tack to the left. */
export function polarWhole(series: RaceSeries, options: Partial<PolarWholeOptions> = {}): string {
  const { width } = { ...POLAR_WHOLE_DEFAULTS, ...options };
  const curves = series.polars ?? [];
  const sailed = series.boats.map((boat) => ({ up: boat.blocks, down: offWind(boat) }));
  const speeds = [...curves.flatMap(({ points }) => points), ...sailed.flatMap(({ up, down }) => [...up, ...down])];
  const limit = 0.3 + Math.max(2, ...speeds.map(({ speed }) => toKnots(speed)));
  const radius = width / 2 - 34;
  const fan: Fan = { cx: width / 2, cy: radius + 22, r: scaleLinear([0, limit], [0, radius]), limit };
  const body = [
    net(fan),
    ...sailed.flatMap(({ up, down }, i) => [signs(up, i, fan, 0.45), signs(down, i, fan, 0)]),
    ...curves.flatMap((curve) => curveLines(curve, curves, fan)),
    text(8, 16, '◂ port tack', { size: 12, italic: true, fill: SOFT }),
    text(width - 8, 16, 'starboard tack ▸', { anchor: 'end', size: 12, italic: true, fill: SOFT }),
  ];
  return picture(width, Math.ceil(fan.cy + radius + 22), labelOf(curves), body.join(''), { class: 'polar-whole' });
}

function labelOf(curves: readonly PolarCurve[]): string {
  const told = curves.flatMap(({ kind, boat, up, down }) =>
    kind === 'model' && down
      ? [
          `best of the ${boat} model ${up.gamma.toFixed(0)} degrees upwind at ${toKnots(up.speed).toFixed(1)} knots, ` +
            `${down.gamma.toFixed(0)} degrees downwind at ${toKnots(down.speed).toFixed(1)} knots`,
        ]
      : [],
  );
  return `Whole polar diagram with what was sailed: ${told.join('; ') || 'no model'}.`;
}

export interface Sailed extends PolarPoint {
  readonly tack: 'port' | 'starboard';
}

const BLOCK = 30;

/** Half minutes off the wind: means over downwind legs, turns and their windows left out. */
export function offWind(boat: BoatSeries): Sailed[] {
  const turning = (row: number): boolean => boat.manoeuvres.some((m) => row >= m.entry && row < m.exit);
  return boat.legs.flatMap(({ from, to }) => {
    const out: Sailed[] = [];
    for (let begin = from; begin + BLOCK <= to; begin += BLOCK) {
      const rows = Array.from({ length: BLOCK }, (_, k) => begin + k);
      const tack = boat.gamma[begin] < 0 ? 'port' : 'starboard';
      const one = rows.every((i) => Math.abs(boat.gamma[i]) > 90 && boat.gamma[i] < 0 === (tack === 'port'));
      if (!one || rows.some(turning)) continue;
      const mean = (value: (row: number) => number): number => rows.reduce((sum, i) => sum + value(i), 0) / BLOCK;
      out.push({ gamma: mean((i) => Math.abs(boat.gamma[i])), speed: mean((i) => boat.speed[i]), tack });
    }
    return out;
  });
}

function at({ cx, cy, r }: Fan, gamma: number, knots: number): [number, number] {
  return [cx + r(knots) * Math.sin(gamma * RAD), cy - r(knots) * Math.cos(gamma * RAD)];
}

function net(fan: Fan): string {
  const out: string[] = [];
  const step = fan.limit > 9 ? 2 : 1;
  for (let v = step; v <= fan.limit; v += step) {
    out.push(el('circle', { cx: fan.cx, cy: fan.cy, r: fan.r(v), fill: 'none', stroke: RULE, 'stroke-width': 0.8 }));
    out.push(numberText(fan.cx + 3, fan.cy - fan.r(v) + 11, v, 0, { size: 10.5, fill: SOFT }));
  }
  for (const gamma of [30, 45, 60, 90, 120, 150]) {
    for (const side of [-1, 1]) {
      const [x, y] = at(fan, side * gamma, fan.limit);
      out.push(line(fan.cx, fan.cy, x, y, RULE, { 'stroke-width': 0.6 }));
      const anchor = side < 0 ? 'end' : 'start';
      out.push(text(x + side * 4, y + 4, `${gamma}°`, { size: 10.5, fill: SOFT, anchor }));
    }
  }
  out.push(line(fan.cx, fan.cy - fan.r(fan.limit), fan.cx, fan.cy + fan.r(fan.limit), SOFT, { 'stroke-width': 0.8 }));
  out.push(text(fan.cx - 5, fan.cy + 14, 'knots', { size: 10.5, italic: true, fill: SOFT, anchor: 'end' }));
  return out.join('');
}

/** Filled upwind, open off the wind. */
function signs(points: readonly Sailed[], index: number, fan: Fan, opacity: number): string {
  const { colour } = boatPaint(index);
  const places = points.map(({ gamma, speed, tack }) => at(fan, tack === 'port' ? -gamma : gamma, toKnots(speed)));
  return dots(index, places, 2.8, { fill: colour, 'fill-opacity': opacity, stroke: colour, 'stroke-width': 0.8 });
}

function curveLines(curve: PolarCurve, all: readonly PolarCurve[], fan: Fan): string[] {
  const { stroke, dash } = curvePaint(curve, all);
  return [-1, 1].map((side) => {
    const d = curveOf(curve.points.map(({ gamma, speed }) => at(fan, side * gamma, toKnots(speed))));
    const path = el('path', { class: 'curve', d, fill: 'none', stroke, 'stroke-width': 1.8, 'stroke-dasharray': dash });
    const bests = curve.kind === 'model' ? [curve.up, curve.down] : [];
    const signed = bests.map((best) =>
      best ? bestSign(...at(fan, side * best.gamma, toKnots(best.speed)), stroke, PAPER) : '',
    );
    return path + signed.join('');
  });
}
