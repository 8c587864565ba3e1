import { scaleLinear } from 'd3-scale';
import { unwrap, wrap360 } from '../../math/angles.js';
import { toKnots } from '../../math/units.js';
import type { BoatSeries, RaceSeries } from '../../result/series.js';
import { isoOf, timeText } from '../format.js';
import { boatPaint, INK, SOFT } from '../palette.js';
import { curveOf, el, leftAxis, line, picture, text, type Scale } from './svg.js';

/** One quantity against time: which column, how it is written, how the axis is named. */
export interface PanelKind {
  readonly key: 'angle' | 'speed' | 'vmg' | 'direction' | 'wind';
  readonly title: string;
  readonly unit: string;
  /** Scaled to the beats: what lies beyond is cut off, so that a run does not flatten them. */
  readonly beats?: boolean;
  /** Values at all rows in the unit of the panel. */
  readonly values: (boat: BoatSeries) => Float64Array;
}

export const PANELS: readonly PanelKind[] = [
  {
    key: 'angle',
    title: 'Course angle to the true wind',
    unit: '°',
    beats: true,
    values: (b) => b.gamma.map(Math.abs),
  },
  { key: 'speed', title: 'Speed', unit: 'kn', values: (b) => b.speed.map(toKnots) },
  { key: 'vmg', title: 'VMG', unit: 'kn', beats: true, values: (b) => b.vmg.map(toKnots) },
  { key: 'direction', title: 'Wind direction', unit: '°', values: (b) => unwrap(b.twd) },
  { key: 'wind', title: 'Wind speed', unit: 'kn', values: (b) => b.tws.map(toKnots) },
];

export interface SeriesOptions {
  readonly width: number;
  readonly height: number;
  /** Points drawn a line at most, and in all. */
  readonly points: number;
  readonly pointsInAll: number;
}

export const SERIES_DEFAULTS: SeriesOptions = { width: 720, height: 132, points: 360, pointsInAll: 960 };

const MARGIN = { left: 46, right: 12, top: 22, bottom: 24 };

export function panelKnown(panel: PanelKind, series: RaceSeries): boolean {
  return series.boats.some((b) => panel.values(b).some(Number.isFinite));
}

/** First and last second of all boats. */
export function timeSpan(series: RaceSeries): [number, number] {
  const from = Math.min(...series.boats.map((b) => b.t0));
  const to = Math.max(...series.boats.map((b) => b.t0 + b.n - 1));
  return series.boats.length ? [from, Math.max(to, from + 1)] : [0, 1];
}

/** The racing with a minute on both sides; the whole recording when there are no legs. */
export function racingSpan(series: RaceSeries): [number, number] {
  const [from, to] = timeSpan(series);
  const legs = series.boats.flatMap((b) => b.legs.map((l) => [b.t0 + l.from, b.t0 + l.to] as const));
  if (legs.length === 0) return [from, to];
  const first = Math.min(...legs.map((l) => l[0])) - 60;
  const last = Math.max(...legs.map((l) => l[1])) + 60;
  return [Math.max(from, first), Math.min(to, last)];
}

/** One panel: a line a boat, upwind legs shaded, tacks as ticks on the head. */
export function timePanel(panel: PanelKind, series: RaceSeries, options: Partial<SeriesOptions> = {}): string {
  const o = { ...SERIES_DEFAULTS, ...options };
  const [t0, t1] = racingSpan(series);
  const columns = series.boats.map((b) => panel.values(b));
  const points = Math.min(o.points, o.pointsInAll / series.boats.length);
  const x = scaleLinear([t0, t1], [MARGIN.left, o.width - MARGIN.right]);
  const y = scaleLinear(panelRange(panel, series, columns), [o.height - MARGIN.bottom, MARGIN.top]).nice(4);
  const write = panel.key === 'direction' ? wrap360 : undefined;
  const body = [
    ...legBands(series, x, o.height),
    leftAxis(y, MARGIN.left, o.width - MARGIN.right, { count: 4, ...(write ? { write } : {}) }),
    timeAxis(x, o.height - MARGIN.bottom),
    ...series.boats.map((b, i) => boatLine(b, columns[i], i, x, y, points)),
    ...series.boats.flatMap((b, i) => turnTicks(b, i, x)),
    text(MARGIN.left, 12, `${panel.title}, ${panel.unit}`, { size: 12, italic: true, fill: INK }),
  ];
  return picture(o.width, o.height, panelLabel(panel, series, columns), body.join(''), { class: 'time-panel' });
}

function panelLabel(panel: PanelKind, series: RaceSeries, columns: readonly Float64Array[]): string {
  const parts = series.boats.map((b, i) => {
    const known = sortedKnown([columns[i]]);
    if (known.length === 0) return `${b.name}: not known`;
    const at = (share: number): string => String(Math.round(known[Math.floor(share * (known.length - 1))] * 10) / 10);
    return `${b.name}: middle half ${at(0.25)} to ${at(0.75)} ${panel.unit}`;
  });
  return `${panel.title} against time. ${parts.join('; ')}.`;
}

/** Range of a panel: of settled sailing with room for tacks where it is scaled to the beats, else of all rows. */
function panelRange(panel: PanelKind, series: RaceSeries, columns: readonly Float64Array[]): [number, number] {
  const settled = columns.map((c, i) => settledOnly(c, series.boats[i].settled));
  return panel.beats && settled.some((c) => c.some(Number.isFinite)) ? beatRange(settled) : rangeOf(columns);
}

function settledOnly(column: Float64Array, settled: Uint8Array): Float64Array {
  return column.map((value, row) => (settled[row] ? value : NaN));
}

/** Settled values with room below for the dip of a tack. */
export function beatRange(settled: readonly Float64Array[]): [number, number] {
  const [low, high] = rangeOf(settled);
  return [low - 1.2 * (high - low), high + 0.5 * (high - low)];
}

/** The middle 99 % of all values: a single spike must not flatten the line. */
export function rangeOf(columns: readonly Float64Array[]): [number, number] {
  const all = sortedKnown(columns);
  if (all.length === 0) return [0, 1];
  const low = all[Math.floor(0.005 * (all.length - 1))];
  const high = all[Math.ceil(0.995 * (all.length - 1))];
  return high - low < 1 ? [low - 0.5, high + 0.5] : [low, high];
}

/** All values there are, in order. */
function sortedKnown(columns: readonly Float64Array[]): Float64Array {
  const all = new Float64Array(columns.reduce((sum, column) => sum + column.length, 0));
  let n = 0;
  for (const column of columns) for (const value of column) if (Number.isFinite(value)) all[n++] = value;
  return all.subarray(0, n).sort();
}

function legBands(series: RaceSeries, x: Scale, height: number): string[] {
  const boat = series.boats[0];
  if (!boat) return [];
  return boat.legs
    .filter((_, i) => i % 2 === 0)
    .map((leg) =>
      el('rect', {
        x: x(boat.t0 + leg.from),
        y: MARGIN.top,
        width: Math.max(0, x(boat.t0 + leg.to) - x(boat.t0 + leg.from)),
        height: height - MARGIN.top - MARGIN.bottom,
        fill: 'var(--water,#eaf0ef)',
      }),
    );
}

const STEPS = [10, 30, 60, 120, 300, 600, 900, 1800, 3600, 7200, 14400];

/** Ticks at round clock times, at most eight. */
export function clockTicks(from: number, to: number, most = 8): number[] {
  const step = STEPS.find((s) => (to - from) / s <= most) ?? 28800;
  const out: number[] = [];
  for (let t = Math.ceil(from / step) * step; t <= to; t += step) out.push(t);
  return out;
}

function timeAxis(x: Scale, y: number): string {
  const [from, to] = x.domain() as [number, number];
  const style = to - from < 300 ? 'hms' : 'hm';
  const ticks = clockTicks(from, to);
  return (
    line(x(from), y, x(to), y, SOFT, { 'stroke-width': 0.8 }) +
    ticks
      .map(
        (t) =>
          line(x(t), y, x(t), y + 4, SOFT, { 'stroke-width': 0.8 }) +
          text(x(t), y + 16, timeText(isoOf(t), style), {
            anchor: 'middle',
            size: 11,
            fill: SOFT,
            extra: { 'data-ms': String(t * 1000), 'data-t': style },
          }),
      )
      .join('')
  );
}

function boatLine(boat: BoatSeries, values: Float64Array, index: number, x: Scale, y: Scale, points: number): string {
  const { colour, dash } = boatPaint(index);
  const [from, to] = x.domain() as [number, number];
  const first = Math.max(0, from - boat.t0);
  const last = Math.min(boat.n, to - boat.t0 + 1);
  const step = Math.max(1, Math.ceil((last - first) / points));
  const at: [number, number][] = [];
  const [low, high] = y.domain() as [number, number];
  for (let i = first; i < last; i += step) {
    const v = values[i];
    at.push([x(boat.t0 + i), v >= low && v <= high ? y(v) : NaN]);
  }
  return el('path', {
    d: curveOf(at),
    fill: 'none',
    stroke: colour,
    'stroke-width': 1.3,
    'stroke-dasharray': dash || undefined,
    'stroke-linejoin': 'round',
  });
}

function turnTicks(boat: BoatSeries, index: number, x: Scale): string[] {
  const [from, to] = x.domain() as [number, number];
  const { colour, dash } = boatPaint(index);
  return boat.manoeuvres
    .filter((m) => m.kind === 'tack' || m.kind === 'gybe')
    .filter((m) => boat.t0 + m.at >= from && boat.t0 + m.at <= to)
    .map((m) => {
      const at = x(boat.t0 + m.at);
      return line(at, MARGIN.top, at, MARGIN.top - 5, colour, {
        'stroke-width': 1.8,
        'stroke-dasharray': dash ? '2 1.2' : undefined,
      });
    });
}
