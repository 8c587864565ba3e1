import { boatPaint, CURSOR, PAPER } from '../palette.js';
import { draw } from './dom.js';
import { rowAt, type Race } from './race.js';
import { roving } from './roving.js';
import type { Store } from './store.js';

/** The ladders brought to life: each boat's rung at the cursor, and what is gained by then. A touch moves the cursor. */

/** As `charts/ladder.ts` writes it: sheet = first + second x metres. */
interface Frame {
  readonly boats: readonly [number, number];
  readonly span: readonly [number, number];
  readonly wind: readonly [number, number];
  readonly x: readonly [number, number];
  readonly y: readonly [number, number];
  readonly gain: readonly [number, number];
  readonly edges: readonly [number, number];
}

interface Place {
  readonly x: number;
  readonly y: number;
  /** Metres to windward. */
  readonly rung: number;
}

export function mountLadders(race: Race, store: Store): void {
  for (const svg of document.querySelectorAll<SVGSVGElement>('svg.ladder')) {
    const frame = JSON.parse(svg.dataset.ladder ?? 'null') as Frame | null;
    const live = svg.querySelector('.ladder-live');
    if (!frame || !live) continue;
    store.listen(({ time }) => {
      const on = time >= frame.span[0] && time <= frame.span[1];
      if (on) live.replaceChildren(...marks(race, frame, time));
      else if (live.firstChild) live.replaceChildren();
    }, svg);
    const put = (event: PointerEvent): void => {
      const time = timeAt(race, frame, svg, event);
      if (Number.isFinite(time)) store.set({ time });
    };
    mountPins(svg, store);
    svg.addEventListener('pointerdown', put);
    svg.addEventListener('pointermove', (event) => event.buttons > 0 && put(event));
  }
}

/** Every tack by the keyboard too: a button that takes the cursor there. */
function mountPins(svg: SVGSVGElement, store: Store): void {
  const pins = [...svg.querySelectorAll<SVGGElement>('.ladder-tack')];
  // An image holds no buttons.
  svg.setAttribute('role', 'group');
  for (const pin of pins) {
    pin.setAttribute('role', 'button');
    const go = (): void => store.set({ time: Number(pin.dataset.at) });
    pin.addEventListener('keydown', (event) => {
      if (event.key !== 'Enter' && event.key !== ' ') return;
      event.preventDefault();
      go();
    });
    pin.addEventListener('click', go);
  }
  roving(pins);
}

function placeAt(race: Race, frame: Frame, index: number, time: number): Place | null {
  const boat = race.boats[index];
  const row = boat ? rowAt(race, boat, time) : -1;
  if (!boat || row < 0 || !Number.isFinite(boat.columns.x[row])) return null;
  const [east, north] = frame.wind;
  const rung = boat.columns.x[row] * east + boat.columns.y[row] * north;
  const across = boat.columns.x[row] * north - boat.columns.y[row] * east;
  return { x: frame.x[0] + frame.x[1] * across, y: frame.y[0] + frame.y[1] * rung, rung };
}

function marks(race: Race, frame: Frame, time: number): SVGElement[] {
  const places = frame.boats.map((index) => placeAt(race, frame, index, time));
  const rungs = places.flatMap((place, k) => (place ? [boatMark(place, frame, frame.boats[k])] : []));
  const [first, second] = places;
  if (!first || !second) return rungs.flat();
  const cx = frame.gain[0] + frame.gain[1] * (first.rung - second.rung);
  const cy = (first.y + second.y) / 2;
  return [...rungs.flat(), draw('circle', { class: 'gain-mark', cx, cy, r: 5, fill: CURSOR, stroke: PAPER })];
}

function boatMark({ x, y }: Place, { edges }: Frame, index: number): SVGElement[] {
  const { colour, dash } = boatPaint(index);
  return [
    draw('line', { x1: edges[0], x2: edges[1], y1: y, y2: y, stroke: colour, 'stroke-dasharray': dash || undefined }),
    draw('circle', { class: 'rung-mark', cx: x, cy: y, r: 5, fill: colour, stroke: PAPER, 'stroke-width': 1.5 }),
  ];
}

/** The second of the beat at which either boat was nearest to the touch; over the gains, nearest in height. */
function timeAt(race: Race, frame: Frame, svg: SVGSVGElement, event: PointerEvent): number {
  const matrix = svg.getScreenCTM();
  if (!matrix) return NaN;
  const at = new DOMPoint(event.clientX, event.clientY).matrixTransform(matrix.inverse());
  let best = NaN;
  let least = Infinity;
  for (let time = frame.span[0]; time <= frame.span[1]; time += race.step) {
    for (const [k, index] of frame.boats.entries()) {
      const place = placeAt(race, frame, index, time);
      if (!place) continue;
      const other = k === 0 ? placeAt(race, frame, frame.boats[1], time) : null;
      const onCurve = other ? frame.gain[0] + frame.gain[1] * (place.rung - other.rung) : Infinity;
      const overCurve = Math.hypot(onCurve - at.x, (other ? (place.y + other.y) / 2 : Infinity) - at.y);
      const distance = Math.min(Math.hypot(place.x - at.x, place.y - at.y), overCurve);
      if (distance < least) [least, best] = [distance, time];
    }
  }
  return best;
}
