import { scaleLinear } from 'd3-scale';
import type { Q } from '../../result/result.js';
import { INK, SOFT } from '../palette.js';
import { el, footAxis, line, numberText, picture, text } from './svg.js';

/** One row: what was achieved, or the model's best. */
export interface DragAngleRow {
  readonly name: string;
  readonly aero: Q;
  readonly hydro: Q;
  readonly beta: Q;
}

export interface DragAngleOptions {
  readonly width: number;
  readonly rowHeight: number;
}

export const DRAG_DEFAULTS: DragAngleOptions = { width: 460, rowHeight: 46 };
const LEFT = 142;

/** Rig and hull drag angles end to end: together they are the course angle to the apparent wind. */
export function dragAngles(rows: readonly DragAngleRow[], options: Partial<DragAngleOptions> = {}): string {
  const o = { ...DRAG_DEFAULTS, ...options };
  const known = rows.filter((r) => r.beta);
  const reach = Math.max(10, ...known.map((r) => r.beta!.value + (r.beta!.se ?? 0)));
  const x = scaleLinear([0, reach], [LEFT, o.width - 24]).nice(5);
  const foot = known.length * o.rowHeight + 6;
  const body = [
    ...known.map((row, i) => rowOf(row, i * o.rowHeight, x)),
    footAxis(x, foot, { count: 5 }),
    text(o.width - 4, foot + 18, '°', { anchor: 'end', size: 11, fill: SOFT }),
  ];
  return picture(o.width, foot + 26, dragLabel(known), body.join(''), { class: 'drag-angles' });
}

function dragLabel(rows: readonly DragAngleRow[]): string {
  const words = rows.map((r) => {
    const split =
      r.aero && r.hydro ? `rig ${r.aero.value.toFixed(1)} plus hull ${r.hydro.value.toFixed(1)} gives ` : '';
    return `${r.name}: ${split}${r.beta!.value.toFixed(1)} degrees`;
  });
  return `Drag angles. ${words.join('; ')}.`;
}

function rowOf(row: DragAngleRow, top: number, x: (v: number) => number): string {
  const y = top + 12;
  const beta = row.beta!;
  const name = text(LEFT - 10, y + 13, row.name, { anchor: 'end', size: 12.5 });
  const end = beta.se
    ? line(x(beta.value - beta.se), y + 9, x(beta.value + beta.se), y + 9, INK, { 'stroke-width': 1.4 })
    : '';
  const value = numberText(x(beta.value), y - 3, beta.value, 1, { anchor: 'end', size: 11 });
  if (!row.aero || !row.hydro) {
    return (
      name +
      el('rect', {
        x: x(0),
        y,
        width: x(beta.value) - x(0),
        height: 18,
        fill: 'none',
        stroke: INK,
        'stroke-width': 1.1,
      }) +
      end +
      value
    );
  }
  const split = x(row.aero.value);
  return [
    name,
    el('rect', { x: x(0), y, width: split - x(0), height: 18, fill: 'var(--air,#7d97ad)' }),
    el('rect', { x: split, y, width: x(beta.value) - split, height: 18, fill: 'var(--sea,#3f6f6d)' }),
    text((x(0) + split) / 2, y + 13, 'rig', { anchor: 'middle', size: 11, fill: 'var(--on-air,#10181f)' }),
    text((split + x(beta.value)) / 2, y + 13, 'hull and foils', {
      anchor: 'middle',
      size: 11,
      fill: 'var(--on-sea,#ffffff)',
    }),
    row.aero.se
      ? line(x(row.aero.value - row.aero.se), y + 22, x(row.aero.value + row.aero.se), y + 22, SOFT, {
          'stroke-width': 1.4,
        })
      : '',
    end,
    value,
  ].join('');
}
