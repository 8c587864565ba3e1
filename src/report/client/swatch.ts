import { boatPaint } from '../palette.js';
import { draw } from './dom.js';

/** The line and sign of a boat, as in the masthead. */
export function dotSwatch(index: number): SVGElement {
  const { colour, dash } = boatPaint(index);
  const line = draw('path', {
    d: 'M1 8H35',
    stroke: colour,
    'stroke-width': 2.6,
    'stroke-dasharray': dash || undefined,
  });
  return draw(
    'svg',
    { class: 'swatch', viewBox: '0 0 36 16', 'aria-hidden': 'true' },
    line,
    boatSign(index, 18, 8, 4.4),
  );
}

/** Circle, square, triangle, diamond: the same signs as on the still pictures. */
export function boatSign(index: number, x: number, y: number, r: number): SVGElement {
  const fill = boatPaint(index).colour;
  if (index % 4 === 0) return draw('circle', { cx: x, cy: y, r, fill });
  if (index % 4 === 1) return draw('rect', { x: x - r * 0.9, y: y - r * 0.9, width: r * 1.8, height: r * 1.8, fill });
  const triangle = `M${x} ${y - r * 1.2}L${x + r * 1.1} ${y + r}L${x - r * 1.1} ${y + r}Z`;
  const diamond = `M${x} ${y - r * 1.3}L${x + r * 1.3} ${y}L${x} ${y + r * 1.3}L${x - r * 1.3} ${y}Z`;
  return draw('path', { d: index % 4 === 2 ? triangle : diamond, fill });
}
