import { el } from './svg.js';

/** Boats differ in shape as well as in colour. */
export function dot(index: number, x: number, y: number, r: number, colour: string, opacity: number): string {
  const paint = { fill: colour, 'fill-opacity': opacity, stroke: colour, 'stroke-width': 0.8 };
  if (index % 4 === 0) return el('circle', { cx: x, cy: y, r, ...paint });
  if (index % 4 === 1) return el('rect', { x: x - r * 0.9, y: y - r * 0.9, width: r * 1.8, height: r * 1.8, ...paint });
  return el('path', { d: outline(index, x, y, r), ...paint });
}

/** Many signs of one boat as one outline, small in the page. */
export function dots(
  index: number,
  places: readonly (readonly [number, number])[],
  r: number,
  paint: Readonly<Record<string, string | number>>,
): string {
  if (places.length === 0) return '';
  return el('path', { d: places.map(([x, y]) => outline(index, x, y, r)).join(''), ...paint });
}

function outline(index: number, x: number, y: number, r: number): string {
  const of = (value: number): string => String(Math.round(value * 10) / 10);
  const by = (dx: number, dy: number): string => `l${of(dx * r)} ${of(dy * r)}`;
  const from = (dx: number, dy: number): string => `M${of(x + dx * r)} ${of(y + dy * r)}`;
  switch (index % 4) {
    case 0:
      return `${from(-1, 0)}a${of(r)} ${of(r)} 0 1 0 ${of(2 * r)} 0a${of(r)} ${of(r)} 0 1 0 ${of(-2 * r)} 0z`;
    case 1:
      return `${from(-0.9, -0.9)}${by(1.8, 0)}${by(0, 1.8)}${by(-1.8, 0)}z`;
    case 2:
      return `${from(0, -1.2)}${by(1.1, 2.2)}${by(-2.2, 0)}z`;
    default:
      return `${from(0, -1.3)}${by(1.3, 1.3)}${by(-1.3, 1.3)}${by(-1.3, -1.3)}z`;
  }
}

/** A cross in a ring: the best there is on a curve. */
export function bestSign(x: number, y: number, ink: string, paper: string): string {
  return (
    el('path', { d: `M${of1(x - 6)} ${of1(y)}h12M${of1(x)} ${of1(y - 6)}v12`, stroke: ink, 'stroke-width': 1.6 }) +
    el('circle', { cx: x, cy: y, r: 4, fill: paper, stroke: ink, 'stroke-width': 1.4 })
  );
}

const of1 = (value: number): number => Math.round(value * 10) / 10;
