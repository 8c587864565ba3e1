import { RAD } from '../../math/angles.js';
import { boatPaint, INK, SOFT } from '../palette.js';
import { draw, make } from './dom.js';
import { localNumber } from './locale.js';
import type { Reading } from './reading.js';

/**
 * The triangle of speeds at the cursor, true wind down the sheet: boat and apparent wind end to end make the true wind.
 * Air past the boat (apparent) is the wind less the boat's own motion.
 */
export interface Triangle {
  readonly element: HTMLElement;
  readonly show: (reading: Reading) => void;
}

const WIDTH = 220;
const HEIGHT = 190;

export interface Corner {
  readonly x: number;
  readonly y: number;
}

/**
 * Corners of the triangle, wind from the top, in knots: where boat and wind begin, where the boat's arrow ends, where
 * the wind's ends.
 */
export function corners(reading: { gamma: number; speed: number; tws: number }): [Corner, Corner, Corner] {
  const γ = reading.gamma * RAD;
  const begin = { x: 0, y: 0 };
  // Course lies gamma to the left of the wind's eye on starboard tack (gamma > 0), to the right on port.
  const boat = { x: -reading.speed * Math.sin(γ), y: -reading.speed * Math.cos(γ) };
  return [begin, boat, { x: 0, y: reading.tws }];
}

function arrow(a: Corner, b: Corner, colour: string, width: number, name: string, dash?: string): SVGElement[] {
  const length = Math.hypot(b.x - a.x, b.y - a.y);
  if (!(length > 4)) return [];
  const ux = (b.x - a.x) / length;
  const uy = (b.y - a.y) / length;
  const wing = (s: number): string =>
    `${(b.x - 9 * ux + s * 4 * uy).toFixed(1)} ${(b.y - 9 * uy - s * 4 * ux).toFixed(1)}`;
  return [
    draw('line', {
      x1: a.x,
      y1: a.y,
      x2: b.x,
      y2: b.y,
      stroke: colour,
      'stroke-width': width,
      'stroke-dasharray': dash,
      'data-side': name,
    }),
    draw('path', { d: `M${b.x.toFixed(1)} ${b.y.toFixed(1)}L${wing(1)}L${wing(-1)}Z`, fill: colour }),
  ];
}

function note(at: Corner, words: string, anchor: string, fill: string): SVGElement {
  return draw(
    'text',
    {
      x: at.x,
      y: at.y,
      'font-size': 12,
      fill,
      'text-anchor': anchor,
      'paint-order': 'stroke',
      stroke: 'var(--paper)',
      'stroke-width': 3,
    },
    words,
  );
}

export function createTriangle(index: number, name: string): Triangle {
  const svg = draw('svg', { viewBox: `0 0 ${WIDTH} ${HEIGHT}`, role: 'img', class: 'triangle', 'data-boat': index });
  const element = make(
    'figure',
    { class: 'triangle-plate' },
    make('figcaption', {}, make('bdi', {}, name), make('span', { class: 'soft' }, ' triangle of speeds')),
    svg,
  );
  return { element, show: (reading) => redraw(svg, index, name, reading) };
}

function redraw(svg: SVGElement, index: number, name: string, reading: Reading): void {
  const known = Number.isFinite(reading.tws) && Number.isFinite(reading.gamma) && Number.isFinite(reading.speed);
  svg.replaceChildren();
  if (!known) {
    svg.setAttribute('aria-label', `Triangle of speeds of ${name}: not known here.`);
    svg.append(
      note(
        { x: WIDTH / 2, y: HEIGHT / 2 },
        Number.isFinite(reading.speed) ? 'wind speed not known' : 'not sailing',
        'middle',
        SOFT,
      ),
    );
    return;
  }
  const [begin, boat, wind] = corners(reading);
  const scale = Math.min(
    (HEIGHT - 34) / (wind.y - Math.min(0, boat.y)),
    (WIDTH / 2 - 20) / Math.max(1, Math.abs(boat.x)),
  );
  const shift = { x: WIDTH / 2 - (boat.x * scale) / 2, y: 16 - Math.min(0, boat.y) * scale };
  const at = (c: Corner): Corner => ({ x: shift.x + c.x * scale, y: shift.y + c.y * scale });
  const [o, b, w] = [at(begin), at(boat), at(wind)];
  const left = boat.x > 0 ? 'end' : 'start';
  const right = boat.x > 0 ? 'start' : 'end';
  svg.setAttribute('data-scale', String(scale));
  svg.setAttribute(
    'aria-label',
    `Triangle of speeds of ${name}: boat ${localNumber(reading.speed, 1)}, true wind ${localNumber(reading.tws, 1)}, apparent wind ${localNumber(reading.aws, 1)} knots.`,
  );
  svg.append(
    ...arrow(o, w, INK, 1.8, 'true'),
    ...arrow(b, w, SOFT, 1.8, 'apparent', '5 3'),
    ...arrow(o, b, boatPaint(index).colour, 2.6, 'boat'),
    note({ x: o.x + (left === 'end' ? -8 : 8), y: (o.y + w.y) / 2 + 6 }, 'true wind', left, INK),
    note({ x: (b.x + w.x) / 2 + (right === 'end' ? -10 : 10), y: (b.y + w.y) / 2 }, 'apparent', right, SOFT),
    note(
      { x: b.x + (right === 'end' ? 4 : -4), y: b.y - 5 },
      'boat',
      right === 'end' ? 'start' : 'end',
      boatPaint(index).colour,
    ),
  );
}
