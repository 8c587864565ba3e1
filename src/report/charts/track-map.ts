import { circularMean, eastOf, northOf, wrap360 } from '../../math/angles.js';
import type { BoatResult, Result } from '../../result/result.js';
import type { BoatSeries, MarkPlace, RaceSeries } from '../../result/series.js';
import { settledMean } from '../figures.js';
import { boatPaint, INK, PAPER, PORT, SOFT, STARBOARD } from '../palette.js';
import { barLength, fitView, toSheet, worldTransform, type MapView, type Place } from './map-view.js';
import { simplify } from './simplify.js';
import { coordinate, el, line, pathOf, picture, text } from './svg.js';

export interface MapOptions {
  readonly width: number;
  readonly height: number;
  /** Top of the sheet; the mean wind when left out. [deg true] */
  readonly up?: number;
  /** The drawn line stays within this of the track. [m] */
  readonly tolerance: number;
}

export const MAP_DEFAULTS: MapOptions = { width: 640, height: 700, tolerance: 0.6 };

/** Tracks, marks, tacks and laylines in the local plane, wind at the top. */
export function trackMap(result: Result, series: RaceSeries, options: Partial<MapOptions> = {}): string {
  const o = { ...MAP_DEFAULTS, ...options };
  const wind = meanWind(series);
  const view = mapFit(series, o.up ?? (Number.isFinite(wind) ? wind : 0), o);
  const world = el(
    'g',
    { class: 'world', transform: worldTransform(view), fill: 'none' },
    ...laylines(result, series, wind, view),
    ...series.boats.flatMap((boat, i) => boatPaths(boat, i, o.tolerance)),
  );
  const pins = [
    ...series.marks.flatMap((mark) => markPins(mark, view)),
    ...series.boats.flatMap((b, i) => tackPins(b, i, view)),
  ];
  const body = [
    sheet(o.width, o.height),
    el('g', { 'clip-path': 'url(#map-clip)' }, world, el('g', { class: 'pins' }, ...pins)),
    el('g', { class: 'furniture' }, windArrow(o.width, wind, view.up), northArrow(o.width, view.up), scaleBar(view)),
  ];
  return picture(o.width, o.height, mapLabel(result, series, wind), body.join(''), { class: 'track-map', id: 'map' });
}

/** The view of the racing: marks and legs; all there is when there are no legs. */
export function mapFit(series: RaceSeries, up: number, size: { width: number; height: number }): MapView {
  const places: Place[] = series.marks.flatMap((m) => m.places);
  const legs = series.boats.some((b) => b.legs.length > 0);
  for (const b of series.boats) {
    const spans = legs ? b.legs : [{ from: 0, to: b.n }];
    for (const { from, to } of spans) for (let i = from; i < to; i += 5) places.push({ x: b.x[i], y: b.y[i] });
  }
  return fitView(places, up, size.width, size.height);
}

/** Mean wind direction over all boats and rows. [deg true; NaN when unknown] */
export function meanWind(series: RaceSeries): number {
  const means = series.boats.map((b) => circularMean(b.twd).mean);
  return circularMean(means).mean;
}

function mapLabel(result: Result, series: RaceSeries, wind: number): string {
  const names = result.boats.map((b) => b.name).join(', ');
  const from = Number.isFinite(wind) ? ` Mean wind from ${Math.round(wind)} degrees.` : '';
  return `Map of the tracks of ${names}, with ${series.marks.length} marks.${from}`;
}

/** Paper, neatline and the border of alternating bars. */
function sheet(width: number, height: number): string {
  const clip = el('clipPath', { id: 'map-clip' }, el('rect', { x: 9, y: 9, width: width - 18, height: height - 18 }));
  const bars: string[] = [];
  const across = Math.round((width - 12) / 40);
  const down = Math.round((height - 12) / 40);
  const dx = (width - 12) / across;
  const dy = (height - 12) / down;
  for (let i = 0; i < across; i += 2) {
    bars.push(el('rect', { x: 6 + i * dx, y: 3.5, width: dx, height: 3, fill: SOFT }));
    bars.push(el('rect', { x: 6 + i * dx, y: height - 6.5, width: dx, height: 3, fill: SOFT }));
  }
  for (let i = 0; i < down; i += 2) {
    bars.push(el('rect', { x: 3.5, y: 6 + i * dy, width: 3, height: dy, fill: SOFT }));
    bars.push(el('rect', { x: width - 6.5, y: 6 + i * dy, width: 3, height: dy, fill: SOFT }));
  }
  const frame = (inset: number, stroke: number): string =>
    el('rect', {
      x: inset,
      y: inset,
      width: width - 2 * inset,
      height: height - 2 * inset,
      fill: 'none',
      stroke: SOFT,
      'stroke-width': stroke,
    });
  const water = el('rect', { x: 1, y: 1, width: width - 2, height: height - 2, fill: 'var(--water,#eaf0ef)' });
  return el('defs', {}, clip) + water + el('g', { class: 'border' }, ...bars, frame(3, 0.8), frame(7, 0.8));
}

/** What was sailed apart from the legs is faint, and drawn so much coarser. */
const TRAIL = 3;

function boatPaths(boat: BoatSeries, index: number, tolerance: number): string[] {
  const { colour, dash } = boatPaint(index);
  const draw = (from: number, to: number, within: number, extra: Record<string, string | number>): string =>
    el('path', {
      d: simplify(boat.x, boat.y, from, Math.min(to + 1, boat.n), within)
        .map((rows) => metresPath(boat, rows))
        .join(''),
      stroke: colour,
      'stroke-linejoin': 'round',
      'vector-effect': 'non-scaling-stroke',
      ...extra,
    });
  const whole = draw(0, boat.n, TRAIL * tolerance, { class: 'trail', 'stroke-width': 1, opacity: 0.35 });
  const legs = boat.legs.map((leg) =>
    draw(leg.from, leg.to, tolerance, {
      class: 'leg-path',
      'data-boat': index,
      'data-leg': leg.index,
      'stroke-width': 2,
      ...(dash ? { 'stroke-dasharray': dash } : {}),
    }),
  );
  return [whole, ...legs];
}

/** In metres, north up: short, and the same whatever the view. */
function metresPath(boat: BoatSeries, rows: readonly number[]): string {
  return pathOf(rows.map((row) => [boat.x[row], -boat.y[row]]));
}

/** A symbol that keeps its size: placed on the sheet, with its place in the plane for the client. */
function pin(view: MapView, place: Place, extra: Record<string, string | number>, ...children: string[]): string {
  const at = toSheet(view, place.x, place.y);
  return el(
    'g',
    { transform: `translate(${coordinate(at.x)} ${coordinate(at.y)})`, 'data-x': place.x, 'data-y': place.y, ...extra },
    ...children,
  );
}

const ROLE_WORDS: Readonly<Record<string, string>> = {
  windward: 'windward',
  leeward: 'leeward',
  start: 'start',
  finish: 'finish',
};

function markPins(mark: MarkPlace, view: MapView): string[] {
  const words = ROLE_WORDS[mark.role] ?? mark.role;
  return mark.places.map((place, i) =>
    pin(
      view,
      place,
      { class: 'mark-pin' },
      el('circle', {
        r: 6,
        fill: PAPER,
        stroke: INK,
        'stroke-width': 1.6,
        'stroke-dasharray': mark.given ? undefined : '2.5 2',
      }),
      el('circle', { r: 1.6, fill: INK }),
      ...(i === 0
        ? [text(10, -7, mark.given ? words : `${words} (found)`, { size: 12, italic: true, extra: halo() })]
        : []),
    ),
  );
}

/** A paper-coloured edge keeps small words legible over lines. */
function halo(): Record<string, string | number> {
  return { 'paint-order': 'stroke', stroke: 'var(--water,#eaf0ef)', 'stroke-width': 3, 'stroke-linejoin': 'round' };
}

function tackPins(boat: BoatSeries, index: number, view: MapView): string[] {
  const { colour } = boatPaint(index);
  return boat.manoeuvres.flatMap((m, k) => {
    if (m.kind !== 'tack' && m.kind !== 'gybe') return [];
    if (boat.legs.length > 0 && !boat.legs.some((l) => m.at >= l.from && m.at <= l.to)) return [];
    const place = { x: boat.x[m.at], y: boat.y[m.at] };
    if (!Number.isFinite(place.x)) return [];
    const shape =
      m.kind === 'tack'
        ? el('circle', { r: 3.6, fill: PAPER, stroke: colour, 'stroke-width': 1.6 })
        : el('rect', { x: -3, y: -3, width: 6, height: 6, fill: PAPER, stroke: colour, 'stroke-width': 1.6 });
    return [pin(view, place, { class: 'tack-pin', 'data-boat': index, 'data-turn': k }, shape)];
  });
}

/** Both laylines of each boat to the windward mark, at her own settled angle in the mean wind. */
function laylines(result: Result, series: RaceSeries, wind: number, view: MapView): string[] {
  const mark = series.marks.find((m) => m.role === 'windward')?.places[0];
  if (!mark || !Number.isFinite(wind)) return [];
  const length = (0.62 * view.height) / view.scale;
  return result.boats.flatMap((boat, i) => {
    const sides = laylineCourses(boat, wind);
    return sides.map(({ course, side }) =>
      el('path', {
        class: 'layline',
        d: `M${coordinate(mark.x)} ${coordinate(-mark.y)}l${coordinate(-length * eastOf(course))} ${coordinate(length * northOf(course))}`,
        stroke: side === 'port' ? PORT : STARBOARD,
        'stroke-width': 1,
        'stroke-dasharray': boatPaint(i).dash || undefined,
        'vector-effect': 'non-scaling-stroke',
        opacity: 0.7,
      }),
    );
  });
}

/** Courses on which the boat fetches: wind over the starboard side means a course left of the wind's direction. */
export function laylineCourses(boat: BoatResult, wind: number): { side: 'port' | 'starboard'; course: number }[] {
  const gamma = settledMean(boat, 'gamma_deg');
  if (!gamma) return [];
  return [
    { side: 'starboard', course: wrap360(wind - gamma.value) },
    { side: 'port', course: wrap360(wind + gamma.value) },
  ];
}

function windArrow(width: number, wind: number, up: number): string {
  if (!Number.isFinite(wind)) return '';
  return el(
    'g',
    { class: 'wind-arrow', transform: `translate(${width - 46} 50)` },
    el('g', { class: 'turns', transform: `rotate(${coordinate(wind - up)})` },
      el('path', { d: 'M0 -26V14', stroke: INK, 'stroke-width': 1.6 }),
      el('path', { d: 'M-5 6L0 18L5 6Z', fill: INK }),
      el('path', { d: 'M0 -26L8 -31M0 -20L8 -25', stroke: INK, 'stroke-width': 1.4 }),
    ),
    text(0, 36, 'wind', { anchor: 'middle', size: 12, italic: true, fill: SOFT }),
  ); // prettier-ignore
}

function northArrow(width: number, up: number): string {
  return el(
    'g',
    { class: 'north-arrow', transform: `translate(${width - 104} 50)` },
    el('g', { class: 'turns', transform: `rotate(${coordinate(-up)})` },
      el('path', { d: 'M0 -24L6 16L0 10L-6 16Z', fill: PAPER, stroke: SOFT, 'stroke-width': 1.2 }),
      el('path', { d: 'M0 -24L6 16L0 10Z', fill: SOFT }),
    ),
    text(0, 36, 'north', { anchor: 'middle', size: 12, italic: true, fill: SOFT }),
  ); // prettier-ignore
}

/** The bar is redrawn by the client when the scale changes. */
export function scaleBar(view: MapView): string {
  const metres = barLength(view);
  const w = metres * view.scale;
  const y = view.height - 30;
  return el(
    'g',
    { class: 'scale-bar' },
    el('rect', { x: 26, y, width: w / 2, height: 5, fill: INK }),
    el('rect', { x: 26 + w / 2, y, width: w / 2, height: 5, fill: PAPER, stroke: INK, 'stroke-width': 1 }),
    line(26, y - 3, 26, y + 5, INK),
    text(26 + w + 7, y + 6, `${metres}\u00a0m`, { size: 12 }),
  );
}
