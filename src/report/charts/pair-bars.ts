import { scaleLinear } from 'd3-scale';
import type { Q } from '../../result/result.js';
import { GAIN, INK, LOSS, SOFT } from '../palette.js';
import { plain } from '../format.js';
import { el, footAxis, line, numberText, picture, text } from './svg.js';

export interface PairBar {
  readonly name: string;
  readonly value: Q;
}

export interface PairBarsOptions {
  readonly width: number;
  readonly rowHeight: number;
  readonly first: string;
  readonly second: string;
}

export const PAIR_DEFAULTS: PairBarsOptions = { width: 460, rowHeight: 32, first: 'first', second: 'second' };
const LEFT = 120;
const RIGHT = 54;

/** A difference and its parts about zero: to the right the first boat gains. The thin bar is two standard errors. */
export function pairBars(rows: readonly PairBar[], options: Partial<PairBarsOptions> = {}): string {
  const o = { ...PAIR_DEFAULTS, ...options };
  const reach = Math.max(0.1, ...rows.map((r) => (r.value ? Math.abs(r.value.value) + 2 * (r.value.se ?? 0) : 0)));
  const x = scaleLinear([-reach, reach], [LEFT, o.width - RIGHT]).nice(4);
  const foot = rows.length * o.rowHeight + 22;
  const body = [
    line(x(0), 16, x(0), foot, SOFT),
    text(x(0) - 8, 11, `◂ ${o.second} gains`, { anchor: 'end', size: 11.5, italic: true, fill: SOFT }),
    text(x(0) + 8, 11, `${o.first} gains ▸`, { size: 11.5, italic: true, fill: SOFT }),
    ...rows.map((r, i) => bar(r, 20 + i * o.rowHeight + o.rowHeight / 2, x, o)),
    footAxis(x, foot, { count: 5 }),
    text(o.width - 4, foot + 18, 'kn', { anchor: 'end', size: 11, fill: SOFT }),
  ];
  const label = `Difference in VMG, ${o.first} less ${o.second}: ${rows.map((r) => `${r.name} ${r.value ? plain(r.value.value, 2) : 'not known'}`).join(', ')} knots.`;
  return picture(o.width, foot + 24, label, body.join(''), { class: 'pair-bars' });
}

function bar(row: PairBar, y: number, x: (v: number) => number, o: PairBarsOptions): string {
  const name = text(LEFT - 10, y + 4, row.name, { anchor: 'end', size: 12.5 });
  if (!row.value) return name + text(x(0) + 8, y + 4, 'not known', { size: 12, italic: true, fill: SOFT });
  const { value, se } = row.value;
  return [
    name,
    el('rect', {
      x: x(Math.min(0, value)),
      y: y - 8,
      width: Math.max(1, Math.abs(x(value) - x(0))),
      height: 16,
      fill: value < 0 ? LOSS : GAIN,
    }),
    se ? line(x(value - 2 * se), y, x(value + 2 * se), y, INK, { 'stroke-width': 1.3 }) : '',
    numberText(o.width - 8, y + 4, value, 2, { anchor: 'end', size: 12.5 }),
  ].join('');
}
