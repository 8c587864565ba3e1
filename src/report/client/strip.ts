import { boatPaint, INK, LOSS, PORT, SOFT, STARBOARD } from '../palette.js';
import { byId, draw, make } from './dom.js';
import { localNumber } from './locale.js';
import { behindAt, referenceRate } from './reading.js';
import { rowAt, type Boat, type Race } from './race.js';
import type { Store } from './store.js';

/**
 * The strip of a boat's race: starboard tack drawn above the line and port below it, full where settled; turns as
 * notches; and over it the metres behind the reference, counted from the start of each beat.
 */

const WIDTH = 1000;
const LANE = 46;
const BAND = 20;

export function mountStrips(race: Race, store: Store): void {
  const home = byId('strips');
  if (!home || !race.boats.some((b) => b.header.legs.length > 0)) return;
  home.hidden = false;
  const strips = race.boats.map((b) => createStrip(race, b, store));
  home.append(
    make('h3', {}, 'Running account'),
    make(
      'p',
      { class: 'plate-words' },
      'Starboard tack above the line, port below, full where settled (a touch picks that stretch); notches are turns. The curve is metres behind the reference since each beat began; shifts are not in it.',
    ),
    ...strips.map((s) => s.element),
  );
  store.listen(({ time, window }) => strips.forEach((s) => s.show(time, window)), home);
}

interface Strip {
  readonly element: HTMLElement;
  readonly show: (time: number, window: readonly [number, number]) => void;
}

function createStrip(race: Race, boat: Boat, store: Store): Strip {
  const out = make('output', { 'data-strip': boat.index, 'aria-live': 'off' });
  const span = race.to - race.from;
  const x = (t: number): number => ((t - race.from) / span) * WIDTH;
  // On a sheet of its own and moved as a whole, so that the strip is not painted again.
  const cursor = make('div', { class: 'strip-cursor', 'aria-hidden': 'true' });
  const body = draw('svg', {
    viewBox: `0 0 ${WIDTH} ${LANE + BAND + 2}`,
    preserveAspectRatio: 'none',
    class: 'strip',
    role: 'img',
    'aria-label': `Running account of ${boat.name}`,
  });
  body.append(...bands(race, boat, x), ...lossCurve(race, boat, x));
  let pressed = NaN;
  body.addEventListener('pointerdown', (event) => {
    pressed = event.clientX;
    put(event, body, store);
  });
  // A finger drawn along the strip moves the cursor and picks nothing.
  body.addEventListener('click', (event) => Math.abs(event.clientX - pressed) > 6 && event.stopPropagation());
  body.addEventListener('pointermove', (event) => event.buttons > 0 && put(event, body, store));
  const element = make(
    'div',
    { class: 'strip-row' },
    make('div', { class: 'strip-head' }, make('bdi', {}, boat.name), ' ', out),
    make('div', { class: 'strip-sheet' }, body, cursor),
  );
  let inView: readonly [number, number] | null = null;
  const show = (time: number, window: readonly [number, number]): void => {
    cursor.style.transform = `translateX(${((100 * (time - window[0])) / (window[1] - window[0])).toFixed(3)}%)`;
    const left = x(window[0]);
    if (window !== inView) body.setAttribute('viewBox', `${left} 0 ${x(window[1]) - left} ${LANE + BAND + 2}`);
    inView = window;
    const behind = behindAt(race, boat, time);
    out.textContent = Number.isFinite(behind) ? `${localNumber(behind, 0)} m behind` : '–';
  };
  return { element, show };
}

function put(event: PointerEvent, body: SVGElement, store: Store): void {
  const box = body.getBoundingClientRect();
  const [from, to] = store.now().window;
  store.set({ time: Math.round(from + ((event.clientX - box.left) / box.width) * (to - from)) });
}

function bands(race: Race, boat: Boat, x: (t: number) => number): SVGElement[] {
  const middle = LANE + BAND / 2;
  const out: SVGElement[] = [
    draw('line', {
      x1: 0,
      x2: WIDTH,
      y1: middle,
      y2: middle,
      stroke: SOFT,
      'stroke-width': 1,
      'vector-effect': 'non-scaling-stroke',
    }),
  ];
  for (const [spell, [from, to]] of boat.header.settled.entries()) {
    const row = rowAt(race, boat, Math.floor((from + to) / 2));
    const starboard = row >= 0 && boat.columns.gamma[row] > 0;
    out.push(
      draw('rect', {
        class: 'spell',
        'data-boat': boat.index,
        'data-spell': spell,
        x: x(from),
        y: starboard ? LANE : middle,
        width: Math.max(0.5, x(to) - x(from)),
        height: BAND / 2,
        fill: starboard ? STARBOARD : PORT,
      }),
    );
  }
  for (const turn of boat.header.turns) {
    out.push(
      draw('line', {
        x1: x(turn.at),
        x2: x(turn.at),
        y1: LANE - 3,
        y2: LANE + BAND + 2,
        stroke: INK,
        'stroke-width': 1.6,
        'vector-effect': 'non-scaling-stroke',
      }),
    );
  }
  return out;
}

/** Metres behind, one curve a beat, all on one scale. */
function lossCurve(race: Race, boat: Boat, x: (t: number) => number): SVGElement[] {
  const curves = boat.header.legs.flatMap((span) => {
    const facts = boat.legs[span.index];
    if (facts?.kind !== 'upwind') return [];
    const rate = referenceRate(race, facts.available, span.to - span.from);
    return Number.isFinite(rate) ? [behindCurve(race, boat, span, rate)] : [];
  });
  const most = Math.max(20, ...curves.flatMap((c) => c.map((p) => p[1])));
  return curves.map((curve) => {
    const d = curve
      .map(
        ([t, v], i) =>
          `${i ? 'L' : 'M'}${x(t).toFixed(1)} ${(LANE - 6 - (Math.max(0, v) / most) * (LANE - 10)).toFixed(1)}`,
      )
      .join('');
    return draw('path', {
      d,
      fill: 'none',
      stroke: boat.index === 0 ? LOSS : boatPaint(boat.index).colour,
      'stroke-width': 1.8,
      'vector-effect': 'non-scaling-stroke',
    });
  });
}

function behindCurve(race: Race, boat: Boat, span: { from: number; to: number }, rate: number): [number, number][] {
  const out: [number, number][] = [];
  let behind = 0;
  for (let t = span.from; t < span.to; t += race.step) {
    const row = rowAt(race, boat, t);
    if (row < 0) continue;
    if ((t - span.from) % (5 * race.step) === 0) out.push([t, behind]);
    behind += (rate - (boat.columns.vmg[row] || 0)) * race.step;
  }
  return out;
}
