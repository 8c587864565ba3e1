import { scaleLinear } from 'd3-scale';
import { plain } from '../format.js';
import { boatPaint, INK, PAPER, RULE, SOFT } from '../palette.js';
import { heightOf, WANDER, type Climb, type RungRow } from '../rungs.js';
import { dot } from './sign.js';
import { coordinate, curveOf, el, footAxis, line, numberText, picture, text, type Scale } from './svg.js';

export interface LadderOptions {
  readonly width: number;
  /** Height of the beat at most; less where the boats went far apart. */
  readonly most: number;
}

export const LADDER_DEFAULTS: LadderOptions = { width: 460, most: 330 };

const LEFT = 44;
const TOP = 34;
const BETWEEN = 26;
/** Room for the tracks at least and at most; the gain has the rest. */
const TRACKS = [110, 230] as const;
/** Metres either side of the line of no gain at least: less would make a show of what receivers wander. */
const LEAST_REACH = 10;

/** Where the two panels lie on the sheet; the client puts its cursor by the same figures. */
export interface LadderSheet {
  /** Pixels a metre, the same up and across. */
  readonly scale: number;
  /** Sheet x of the middle line of the first boat's start, sheet y of rung 0. */
  readonly x0: number;
  readonly y0: number;
  /** Edges of the panels. */
  readonly tracks: readonly [number, number];
  readonly gains: readonly [number, number];
  readonly foot: number;
  /** Metres of gain either side. */
  readonly reach: number;
}

/** Panels that hold every row, one scale for both directions of the water. */
export function ladderSheet(climb: Climb, options: Partial<LadderOptions> = {}): LadderSheet {
  const o = { ...LADDER_DEFAULTS, ...options };
  const places = climb.rows.flatMap(({ places }) => [...places]).filter(({ rung }) => Number.isFinite(rung));
  const [low, high] = rangeOf(places.map(({ rung }) => rung));
  const [left, right] = rangeOf(places.map(({ across }) => across));
  const scale = Math.min(o.most / Math.max(1, high - low), (TRACKS[1] - 20) / Math.max(1, right - left));
  const room = Math.max(TRACKS[0], (right - left) * scale + 20);
  const foot = TOP + 10 + (high - low) * scale + 10;
  const reach = Math.max(
    LEAST_REACH,
    ...climb.rows.flatMap(({ gain, shifts }) => [gain, shifts].filter(Number.isFinite).map(Math.abs)),
  );
  return {
    scale,
    x0: LEFT + room / 2 - ((left + right) / 2) * scale,
    y0: foot - 10 + low * scale,
    tracks: [LEFT, LEFT + room],
    gains: [LEFT + room + BETWEEN, o.width - 8],
    foot,
    reach: reach * 1.08,
  };
}

function rangeOf(values: readonly number[]): [number, number] {
  return values.length === 0 ? [0, 1] : [Math.min(...values), Math.max(...values)];
}

/**
 * A beat as a ladder, the mean wind from the top: on the left both tracks with their tacks numbered, on the right at the
 * same height what the first boat had gained by then, and how much of it by shifts.
 */
export function ladder(climb: Climb, options: Partial<LadderOptions> = {}): string {
  const o = { ...LADDER_DEFAULTS, ...options };
  const sheet = ladderSheet(climb, o);
  const gain = scaleLinear([-sheet.reach, sheet.reach], [...sheet.gains]);
  const up = (rung: number): number => sheet.y0 - rung * sheet.scale;
  const body = [
    rungs(sheet, up),
    windSign(sheet),
    ...([0, 1] as const).map((k) => track(climb, k, sheet)),
    gainPanel(climb, sheet, gain, up),
    ...climb.tacks.map((_, k) => tackPin(climb, k, sheet)),
    el('g', { class: 'ladder-live' }),
  ];
  return picture(o.width, Math.ceil(sheet.foot + 44), labelOf(climb), body.join(''), {
    class: 'ladder',
    'data-ladder': JSON.stringify(forClient(climb, sheet)),
  });
}

/** Straight from east, north and gain to the sheet. */
function forClient({ leg, index, origin }: Climb, sheet: LadderSheet): Record<string, number | readonly number[]> {
  const { scale, x0, y0, tracks, gains, reach } = sheet;
  const short = (value: number): number => Math.round(value * 1e5) / 1e5;
  return {
    boats: index,
    span: [leg.from, leg.to],
    wind: [leg.wind.east, leg.wind.north].map(short),
    x: [short(x0 - origin.across * scale), short(scale)],
    y: [short(y0 + origin.rung * scale), short(-scale)],
    gain: [short((gains[0] + gains[1]) / 2 - leg.lead * perMetre(gains, reach)), short(perMetre(gains, reach))],
    edges: [tracks[0], gains[1]].map(short),
  };
}

function perMetre(gains: readonly [number, number], reach: number): number {
  return (gains[1] - gains[0]) / (2 * reach);
}

/** Rungs go through both panels: who is on the same one is level to windward. */
function rungs(sheet: LadderSheet, up: (rung: number) => number): string {
  const heights = scaleLinear(
    [(sheet.y0 - sheet.foot + 10) / sheet.scale, (sheet.y0 - TOP - 10) / sheet.scale],
    [0, 1],
  );
  return heights
    .ticks(7)
    .map(
      (v) =>
        line(sheet.tracks[0], up(v), sheet.gains[1], up(v), RULE, { 'stroke-width': 0.8 }) +
        numberText(sheet.tracks[0] - 6, up(v) + 4, v, 0, { anchor: 'end', size: 11, fill: SOFT }),
    )
    .join('');
}

function windSign({ tracks }: LadderSheet): string {
  const x = tracks[0] + 8;
  return (
    el('path', { d: `M${x} 6V22M${x - 4} 15L${x} 23L${x + 4} 15`, stroke: INK, 'stroke-width': 1.5, fill: 'none' }) +
    text(x + 9, 18, 'mean wind', { size: 11.5, italic: true, fill: SOFT })
  );
}

function track(climb: Climb, k: 0 | 1, sheet: LadderSheet): string {
  const { colour, dash } = boatPaint(climb.index[k]);
  const points = climb.rows.map(({ places }) => places[k]);
  return el('path', {
    d: curveOf(points.map(({ across, rung }) => [sheet.x0 + across * sheet.scale, sheet.y0 - rung * sheet.scale])),
    fill: 'none',
    stroke: colour,
    'stroke-width': 2,
    'stroke-linejoin': 'round',
    'stroke-dasharray': dash || undefined,
  });
}

function gainPanel(climb: Climb, sheet: LadderSheet, x: Scale, up: (rung: number) => number): string {
  const { rows, names, index } = climb;
  const curve = (value: (row: RungRow) => number): string =>
    curveOf(rows.map((row) => [x(value(row)), up(heightOf(row))]));
  const [left, right] = sheet.gains;
  const size = 11.5;
  const bottom = sheet.foot + 4;
  return [
    el('rect', { x: x(-WANDER), y: TOP - 6, width: x(WANDER) - x(-WANDER), height: bottom - TOP + 6, fill: 'var(--water,#e9f0ef)' }),
    line(x(0), TOP - 6, x(0), bottom, SOFT),
    text(left, 18, `◂ ${short(names[1])}`, { size, fill: boatPaint(index[1]).colour }),
    text(right, 18, `${short(names[0])} ▸`, { size, anchor: 'end', fill: boatPaint(index[0]).colour }),
    el('path', { d: curve(({ shifts }) => shifts), fill: 'none', stroke: SOFT, 'stroke-width': 1.5, 'stroke-dasharray': '4 3' }),
    el('path', { d: curve(({ gain }) => gain), fill: 'none', stroke: INK, 'stroke-width': 2.2 }),
    ...climb.tacks.map((tack) => {
      const row = nearest(rows, tack.time);
      return row ? dot(index[tack.boat], x(tack.gain), up(heightOf(row)), 3.2, boatPaint(index[tack.boat]).colour, 1) : '';
    }),
    footAxis(x, bottom, { count: 4 }),
    text(right, bottom + 34, 'm gained: line all, dashes by shifts', { anchor: 'end', size: 11, italic: true, fill: SOFT }),
    text(sheet.tracks[0], bottom + 34, 'm to windward', { size: 11, italic: true, fill: SOFT }),
  ].join(''); // prettier-ignore
}

function nearest(rows: readonly RungRow[], time: number): RungRow | undefined {
  return rows.find((row) => row.time >= time) ?? rows[rows.length - 1];
}

/** Names stand in a corner of a small picture. */
function short(name: string): string {
  const letters = [...name];
  return letters.length > 12 ? `${letters.slice(0, 11).join('')}…` : name;
}

/** A disc with the number the tack has in the table. */
function tackPin(climb: Climb, k: number, sheet: LadderSheet): string {
  const { boat, place, time, onto } = climb.tacks[k];
  if (!Number.isFinite(place.rung)) return '';
  const [x, y] = [sheet.x0 + place.across * sheet.scale, sheet.y0 - place.rung * sheet.scale];
  const { colour } = boatPaint(climb.index[boat]);
  return el(
    'g',
    {
      class: 'ladder-tack',
      transform: `translate(${coordinate(x)} ${coordinate(y)})`,
      'data-at': time,
      'aria-label': `Tack ${k + 1}: ${climb.names[boat]}${onto ? ` onto ${onto}` : ''}`,
    },
    boat === 0
      ? el('circle', { r: 7, fill: PAPER, stroke: colour, 'stroke-width': 1.5 })
      : el('rect', { x: -6.5, y: -6.5, width: 13, height: 13, fill: PAPER, stroke: colour, 'stroke-width': 1.5 }),
    text(0, 3.5, String(k + 1), { anchor: 'middle', size: 9.5, fill: colour }),
  );
}

function labelOf({ leg, names, tacks }: Climb): string {
  const count = (k: 0 | 1): number => tacks.filter(({ boat }) => boat === k).length;
  return (
    `Ladder of lap ${leg.lap}, wind from the top: tracks of ${names[0]} and ${names[1]} and the metres gained. ` +
    `${names[0]} gained ${plain(leg.gain, 0)} metres, of them ${plain(leg.parts.shifts, 0)} by shifts; ` +
    `${names[0]} tacked ${count(0)} times, ${names[1]} ${count(1)} times.`
  );
}
