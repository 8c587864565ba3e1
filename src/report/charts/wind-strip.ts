import { scaleLinear } from 'd3-scale';
import { circularMean, turn, wrap360 } from '../../math/angles.js';
import type { BoatSeries } from '../../result/series.js';
import { isoOf, timeText } from '../format.js';
import { CURSOR, INK, PORT, RULE, SOFT, STARBOARD } from '../palette.js';
import { smoothedWind, type Shift } from '../shifts.js';
import { clockTicks } from './time-series.js';
import { curveOf, el, line, numberText, picture, text } from './svg.js';

export interface WindStripOptions {
  readonly width: number;
  readonly height: number;
  /** UTC seconds shown; the whole recording when left out. */
  readonly span?: readonly [number, number];
}

export const WIND_STRIP_DEFAULTS: WindStripOptions = { width: 460, height: 220 };

/** Wind direction about its mean over the legs sailed, shifts marked. Veered (right) is up. */
export function windStrip(boat: BoatSeries, shifts: readonly Shift[], options: Partial<WindStripOptions> = {}): string {
  const o = { ...WIND_STRIP_DEFAULTS, ...options };
  const [from, to] = o.span ?? [boat.t0, boat.t0 + boat.n - 1];
  const first = Math.max(0, from - boat.t0);
  const last = Math.min(boat.n, to - boat.t0 + 1);
  const mean = circularMean(boat.twd.subarray(first, last)).mean;
  const smooth = smoothedWind(boat.twd);
  const swings = Array.from(boat.twd, (d) => turn(mean, d));
  const reach = swings.slice(first, last).reduce((most, swing) => Math.max(most, Math.abs(swing) || 0), 6);
  const x = scaleLinear([from, Math.max(to, from + 1)], [44, o.width - 10]);
  const y = scaleLinear([-reach, reach], [o.height - 26, 22]);
  const step = Math.max(1, Math.ceil((last - first) / 500));
  const rows = Array.from({ length: Math.max(0, Math.ceil((last - first) / step)) }, (_, k) => first + k * step);
  const shown = shifts.filter((s) => s.row >= first && s.row < last);
  const body = [
    ...y.ticks(5).map((v) => line(44, y(v), o.width - 10, y(v), v === 0 ? SOFT : RULE, { 'stroke-width': 0.7 })),
    ...y.ticks(5).map((v) => numberText(38, y(v) + 4, wrap360(mean + v), 0, { anchor: 'end', size: 11, fill: SOFT })),
    el('path', {
      d: curveOf(rows.map((i) => [x(boat.t0 + i), y(swings[i])])),
      fill: 'none',
      stroke: SOFT,
      'stroke-width': 0.7,
      opacity: 0.7,
    }),
    el('path', {
      d: curveOf(rows.map((i) => [x(boat.t0 + i), y(turn(mean, smooth[i]))])),
      fill: 'none',
      stroke: INK,
      'stroke-width': 1.7,
    }),
    ...shown.map((s) => shiftMark(s, boat, x, y, mean)),
    ...clockTicks(from, to, 6).map((t) =>
      text(x(t), o.height - 8, timeText(isoOf(t), 'hm'), {
        anchor: 'middle',
        size: 11,
        fill: SOFT,
        extra: { 'data-ms': String(t * 1000), 'data-t': 'hm' },
      }),
    ),
    text(44, 12, 'Wind from, °; up is veered', { size: 12, italic: true }),
  ];
  const label = `Wind direction at ${boat.name}, mean ${Math.round(mean)} degrees, ${shown.length} shifts marked.`;
  return picture(o.width, o.height, label, body.join(''), { class: 'wind-strip' });
}

/** A triangle to the side the wind went: up and green-edged for veered, down and red-edged for backed. */
function shiftMark(
  s: Shift,
  boat: BoatSeries,
  x: (v: number) => number,
  y: (v: number) => number,
  mean: number,
): string {
  const px = x(boat.t0 + s.row);
  const py = y(turn(mean, s.twd));
  const up = s.by > 0;
  const d = up ? 'M-5 -6L5 -6L0 -14Z' : 'M-5 6L5 6L0 14Z';
  return el('g', { transform: `translate(${Math.round(px * 10) / 10} ${Math.round(py * 10) / 10})` },
    el('circle', { r: 2.6, fill: CURSOR }),
    el('path', { d, fill: up ? STARBOARD : PORT }),
  ); // prettier-ignore
}
