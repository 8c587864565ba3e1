import { scaleLinear } from 'd3-scale';
import { plain } from '../format.js';
import { CAUSE_WORDS } from '../causes.js';
import type { CauseTotal } from '../figures.js';
import { ANGLE_AND_SPEED } from '../findings.js';
import { GAIN, INK, LOSS, SOFT } from '../palette.js';
import { coordinate, el, footAxis, line, numberText, picture, text } from './svg.js';

export interface WaterfallData {
  readonly boat: string;
  readonly entries: readonly CauseTotal[];
}

export interface WaterfallOptions {
  readonly width: number;
  readonly rowHeight: number;
  /** Right end of the scale, shared between boats; from the data when left out. [m] */
  readonly reach?: number;
  /** Left end, likewise. [m] */
  readonly floor?: number;
}

export const WATERFALL_DEFAULTS: WaterfallOptions = { width: 460, rowHeight: 27 };

const LEFT = 176;
const RIGHT = 64;

/** Where the steps of a waterfall begin and end: running sums before shifts, shifts apart from zero. */
export interface Step {
  readonly entry: CauseTotal;
  readonly from: number;
  readonly to: number;
}

export function steps(entries: readonly CauseTotal[]): { steps: Step[]; lost: number; shifts: CauseTotal | null } {
  let at = 0;
  const out: Step[] = [];
  for (const entry of entries) {
    if (entry.cause === 'shifts') continue;
    out.push({ entry, from: at, to: at + entry.metres.value });
    at += entry.metres.value;
  }
  return { steps: out, lost: at, shifts: entries.find((e) => e.cause === 'shifts') ?? null };
}

/** Metres by cause, each step from where the last one ended; the whisker is one standard error. */
export function waterfall(data: WaterfallData, options: Partial<WaterfallOptions> = {}): string {
  const o = { ...WATERFALL_DEFAULTS, ...options };
  const parts = steps(data.entries);
  const reach = o.reach ?? waterfallReach([data]);
  const low = o.floor ?? waterfallFloor([data]);
  const x = scaleLinear([low, reach], [LEFT, o.width - RIGHT]);
  const together = togetherStep(parts.steps);
  const after = together ? parts.steps.indexOf(together.last) + 1 : parts.steps.length;
  const rowOf = (i: number): number => (i + (i >= after && together ? 1 : 0)) * o.rowHeight;
  const rows = parts.steps.length + 1 + (together ? 1 : 0) + (parts.shifts ? 1 : 0);
  const foot = rows * o.rowHeight + (parts.shifts ? 16 : 8);
  const body = [
    line(x(0), 4, x(0), foot, SOFT, { 'stroke-width': 0.9 }),
    ...parts.steps.map((s, i) => stepRow(s, rowOf(i), o, x)),
    together ? togetherRow(together, after * o.rowHeight, o, x) : '',
    totalRow(parts.lost, rowOf(parts.steps.length), o, x),
    parts.shifts ? shiftRow(parts.shifts, rowOf(parts.steps.length) + o.rowHeight + 8, o, x) : '',
    footAxis(x, foot, { count: 5 }),
    text(o.width, foot + 18, 'metres', { size: 11, italic: true, fill: SOFT, anchor: 'end' }),
  ];
  return picture(o.width, foot + 26, waterfallLabel(data), body.join(''), { class: 'waterfall' });
}

/** From where angle and speed begin to where they end. */
interface Together {
  readonly from: number;
  readonly to: number;
  readonly last: Step;
}

/** Angle and speed as one, where both came to something: they stand next to one another in the ledger. */
export function togetherStep(all: readonly Step[]): Together | null {
  const trade = all.filter(({ entry }) => ANGLE_AND_SPEED.has(entry.cause));
  const telling = trade.filter(({ entry }) => Math.abs(entry.metres.value) >= 0.5);
  if (telling.length < 2) return null;
  const last = trade[trade.length - 1];
  return { from: trade[0].from, to: last.to, last };
}

function togetherRow({ from, to }: Together, top: number, o: WaterfallOptions, x: X): string {
  const middle = top + o.rowHeight / 2;
  return [
    text(LEFT - 10, middle + 3, 'angle and speed together', { anchor: 'end', size: 11.5, italic: true, fill: SOFT }),
    el('path', { d: `M${coordinate(x(from))} ${middle - 5}V${middle}H${coordinate(x(to))}V${middle - 5}`, fill: 'none', stroke: INK, 'stroke-width': 1.2 }),
    line(x(to), middle, x(to), middle + o.rowHeight - 7, SOFT, { 'stroke-width': 0.7, 'stroke-dasharray': '1.5 2' }),
    numberText(o.width - RIGHT + 44, middle + 4, to - from, 0, { anchor: 'end', size: 11.5, italic: true, fill: SOFT }),
  ].join(''); // prettier-ignore
}

export function waterfallFloor(all: readonly WaterfallData[]): number {
  const ends = all.flatMap((d) => {
    const parts = steps(d.entries);
    const shifts = parts.shifts?.metres;
    return [...parts.steps.map((s) => Math.min(s.from, s.to)), shifts ? shifts.value - (shifts.se ?? 0) : 0];
  });
  return Math.min(0, ...ends);
}

export function waterfallReach(all: readonly WaterfallData[]): number {
  const ends = all.flatMap((d) => steps(d.entries).steps.map((s) => Math.max(s.to, s.from) + (s.entry.metres.se ?? 0)));
  return Math.max(10, ...ends);
}

function waterfallLabel(data: WaterfallData): string {
  const words = data.entries.map((e) => `${CAUSE_WORDS[e.cause]} ${plain(e.metres.value, 0)}`).join(', ');
  return `Metres to windward lost by ${data.boat}: ${words}.`;
}

type X = (value: number) => number;

function stepRow(s: Step, top: number, o: WaterfallOptions, x: X): string {
  const middle = top + o.rowHeight / 2;
  const { value, se } = s.entry.metres;
  const left = x(Math.min(s.from, s.to));
  const width = Math.max(1, Math.abs(x(s.to) - x(s.from)));
  return [
    text(LEFT - 10, middle + 4, CAUSE_WORDS[s.entry.cause], { anchor: 'end', size: 12.5 }),
    el('rect', { x: left, y: middle - 7, width, height: 14, fill: value < 0 ? GAIN : LOSS }),
    whisker(s.to, se, middle, x),
    line(x(s.to), middle + 7, x(s.to), middle + o.rowHeight - 7, SOFT, {
      'stroke-width': 0.7,
      'stroke-dasharray': '1.5 2',
    }),
    numberText(o.width - RIGHT + 44, middle + 4, value, 0, { anchor: 'end', size: 12.5 }),
  ].join('');
}

function whisker(at: number, se: number | null, y: number, x: X): string {
  if (!se) return '';
  return (
    line(x(at - se), y, x(at + se), y, INK, { 'stroke-width': 1.1 }) +
    line(x(at - se), y - 4, x(at - se), y + 4, INK) +
    line(x(at + se), y - 4, x(at + se), y + 4, INK)
  );
}

function totalRow(lost: number, top: number, o: WaterfallOptions, x: X): string {
  const middle = top + o.rowHeight / 2;
  return [
    text(LEFT - 10, middle + 4, 'Lost before shifts', { anchor: 'end', size: 12.5, weight: 700 }),
    el('rect', {
      x: x(Math.min(0, lost)),
      y: middle - 7,
      width: Math.abs(x(lost) - x(0)),
      height: 14,
      fill: 'none',
      stroke: INK,
      'stroke-width': 1.4,
    }),
    numberText(o.width - RIGHT + 44, middle + 4, lost, 0, { anchor: 'end', size: 12.5, weight: 700 }),
  ].join('');
}

function shiftRow(entry: CauseTotal, top: number, o: WaterfallOptions, x: X): string {
  const middle = top + o.rowHeight / 2;
  const { value, se } = entry.metres;
  return [
    text(LEFT - 10, middle + 4, value < 0 ? 'Shifts (gained)' : 'Shifts', { anchor: 'end', size: 12.5, italic: true }),
    el('rect', {
      x: x(Math.min(0, value)),
      y: middle - 6,
      width: Math.max(1, Math.abs(x(value) - x(0))),
      height: 12,
      fill: 'none',
      stroke: value < 0 ? GAIN : LOSS,
      'stroke-width': 1.4,
      'stroke-dasharray': '3 2',
    }),
    whisker(value, se, middle, x),
    numberText(o.width - RIGHT + 44, middle + 4, value, 0, { anchor: 'end', size: 12.5, italic: true }),
  ].join('');
}
