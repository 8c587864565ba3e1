import { scaleLinear } from 'd3-scale';
import type { Q } from '../../result/result.js';
import { plain } from '../format.js';
import { INK, PAPER, PORT, RULE, SOFT, STARBOARD } from '../palette.js';
import { el, footAxis, line, picture, text } from './svg.js';

/** One leg of one boat, a quantity on each tack. */
export interface TwoTacks {
  readonly name: string;
  readonly port: Q;
  readonly starboard: Q;
}

export interface TwoTacksOptions {
  readonly width: number;
  readonly rowHeight: number;
  readonly unit: string;
  readonly title: string;
}

export const TWO_TACKS_DEFAULTS: TwoTacksOptions = { width: 460, rowHeight: 30, unit: 'kn', title: 'VMG' };
const LEFT = 128;

/** Port and starboard side by side, with one standard error each. */
export function portStarboard(rows: readonly TwoTacks[], options: Partial<TwoTacksOptions> = {}): string {
  const o = { ...TWO_TACKS_DEFAULTS, ...options };
  const all = rows
    .flatMap((r) => [r.port, r.starboard])
    .flatMap((q) => (q ? [q.value - (q.se ?? 0), q.value + (q.se ?? 0)] : []));
  const x = scaleLinear([Math.min(...all), Math.max(...all)], [LEFT, o.width - 30]).nice(5);
  const foot = rows.length * o.rowHeight + 24;
  const body = [
    text(4, 12, `${o.title}, ${o.unit}`, { size: 12, italic: true }),
    ...rows.map((row, i) => rowOf(row, 20 + i * o.rowHeight, x, o)),
    footAxis(x, foot, { count: 5 }),
  ];
  return picture(o.width, foot + 24, labelOf(rows, o), body.join(''), { class: 'two-tacks' });
}

function labelOf(rows: readonly TwoTacks[], o: TwoTacksOptions): string {
  const show = (q: Q): string => (q ? plain(q.value, 2) : 'not known');
  return `${o.title} by tack. ${rows.map((r) => `${r.name}: port ${show(r.port)}, starboard ${show(r.starboard)} ${o.unit}`).join('; ')}.`;
}

function rowOf(row: TwoTacks, top: number, x: (v: number) => number, o: TwoTacksOptions): string {
  const y = top + o.rowHeight / 2;
  return [
    line(LEFT, y, o.width - 20, y, RULE, { 'stroke-width': 0.7 }),
    text(LEFT - 12, y + 4, row.name, { anchor: 'end', size: 12.5 }),
    row.port && row.starboard ? line(x(row.port.value), y, x(row.starboard.value), y, SOFT, { 'stroke-width': 2 }) : '',
    flag(row.port, y - 4, x, PORT, 'P'),
    flag(row.starboard, y + 4, x, STARBOARD, 'S'),
  ].join('');
}

function flag(q: Q, y: number, x: (v: number) => number, colour: string, letter: string): string {
  if (!q) return '';
  const at = x(q.value);
  const bar = q.se ? line(x(q.value - q.se), y, x(q.value + q.se), y, INK, { 'stroke-width': 1.2 }) : '';
  return (
    bar +
    el('circle', { cx: at, cy: y, r: 7, fill: colour }) +
    text(at, y + 3.6, letter, { anchor: 'middle', size: 10, fill: PAPER, weight: 700 })
  );
}
