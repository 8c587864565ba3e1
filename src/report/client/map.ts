import { eastOf, northOf } from '../../math/angles.js';
import { boatPaint, CURSOR, INK, PORT, STARBOARD } from '../palette.js';
import { barLength, toPlane, toSheet, worldTransform, fitView, type MapView, type Place } from '../charts/map-view.js';
import { button, draw } from './dom.js';
import { mountGestures } from './gestures.js';
import type { Boat, Race } from './race.js';
import { choose, spellAt } from './picks.js';
import { rowAt } from './race.js';
import { readingAt } from './reading.js';
import type { Moment, Store } from './store.js';

/** The still map brought to life: it pans, zooms and turns, and shows the boats at the cursor. */

interface Living {
  readonly race: Race;
  readonly store: Store;
  readonly svg: SVGSVGElement;
  /** What moves lies on a sheet of its own, so that the map beneath is not painted again. */
  readonly live: SVGSVGElement;
  view: MapView;
  readonly home: { wind: number };
}

export function mountMap(race: Race, store: Store, wind: number): void {
  const svg = document.querySelector<SVGSVGElement>('#map');
  const tools = document.querySelector<HTMLElement>('.map-tools');
  if (!svg || !tools) return;
  const [, , width, height] = svg.getAttribute('viewBox')!.split(' ').map(Number) as [number, number, number, number];
  const live = draw('svg', { class: 'map-live', viewBox: `0 0 ${width} ${height}`, 'aria-hidden': 'true' });
  svg.after(live);
  const view = { cx: 0, cy: 0, scale: 1, up: wind, width, height };
  const map: Living = { race, store, svg, live, view, home: { wind } };
  map.view = fitView(placesIn(race, null, ...race.racing), wind, width, height);
  mountTools(map, tools);
  mountGestures(svg, {
    view: () => map.view,
    move: (view) => {
      map.view = view;
      redrawSheet(map);
    },
    put: (place, tolerance) => putCursor(map, place, tolerance),
  });
  redrawSheet(map);
  store.listen((now, before) => {
    if (now.pick !== before.pick) showPick(map, now);
    drawLive(map, now.time);
  }, svg);
}

/** Places of one boat or all between two times, and the marks when the whole race is meant. */
function placesIn(race: Race, boat: Boat | null, from: number, to: number): Place[] {
  const out: Place[] = boat ? [] : race.marks.flatMap((m) => [...m.places]);
  for (const b of boat ? [boat] : race.boats) {
    for (let t = from; t <= to; t += 5 * race.step) {
      const i = rowAt(race, b, t);
      if (i >= 0 && Number.isFinite(b.columns.x[i])) out.push({ x: b.columns.x[i], y: b.columns.y[i] });
    }
  }
  return out;
}

function mountTools(map: Living, tools: HTMLElement): void {
  const zoom = (factor: number): void => {
    map.view = { ...map.view, scale: map.view.scale * factor };
    redrawSheet(map);
  };
  const fit = (): void => {
    map.view = fitView(placesIn(map.race, null, ...map.race.racing), map.view.up, map.view.width, map.view.height);
    redrawSheet(map);
  };
  const turn = button('North up', 'Turn the chart: north or wind at the top', () => {
    const north = map.view.up !== 0;
    map.view = { ...map.view, up: north ? 0 : map.home.wind };
    turn.textContent = north ? 'Wind up' : 'North up';
    fit();
  });
  tools.hidden = false;
  tools.append(
    button('+', 'Zoom in', () => zoom(1.4)),
    button('−', 'Zoom out', () => zoom(1 / 1.4)),
    button('Whole course', 'Show the whole course', () => {
      map.store.set({ pick: null, window: map.race.racing });
      fit();
    }),
    turn,
    button('This stretch', 'The settled stretch at the cursor alone, with its figures', () => {
      const pick = spellAt(map.race, map.store.now().time);
      if (pick) choose(map.race, map.store, pick);
    }),
  );
  map.svg.closest<HTMLElement>('.map-frame')!.addEventListener('keydown', (event) => panKey(map, event, zoom));
}

const PAN: Readonly<Record<string, readonly [number, number]>> = {
  ArrowUp: [0, 60],
  ArrowDown: [0, -60],
  ArrowLeft: [60, 0],
  ArrowRight: [-60, 0],
};

function panKey(map: Living, event: KeyboardEvent, zoom: (f: number) => void): void {
  if (event.key === '+' || event.key === '=') return zoom(1.4);
  if (event.key === '-') return zoom(1 / 1.4);
  const move = PAN[event.key];
  if (!move) return;
  event.preventDefault();
  const middle = toPlane(map.view, map.view.width / 2 - move[0], map.view.height / 2 - move[1]);
  map.view = { ...map.view, cx: middle.x, cy: middle.y };
  redrawSheet(map);
}

/** World, pins, scale bar and arrows after a change of view. */
function redrawSheet(map: Living): void {
  const { svg, view, home } = map;
  svg.querySelector('.world')!.setAttribute('transform', worldTransform(view));
  for (const pin of svg.querySelectorAll('[data-x]')) {
    const at = toSheet(view, Number(pin.getAttribute('data-x')), Number(pin.getAttribute('data-y')));
    pin.setAttribute('transform', `translate(${at.x.toFixed(1)} ${at.y.toFixed(1)})`);
  }
  svg.querySelector('.wind-arrow .turns')?.setAttribute('transform', `rotate(${home.wind - view.up})`);
  svg.querySelector('.north-arrow .turns')?.setAttribute('transform', `rotate(${-view.up})`);
  redrawBar(svg, view);
  drawLive(map, map.store.now().time);
}

function redrawBar(svg: SVGSVGElement, view: MapView): void {
  const metres = barLength(view);
  const w = metres * view.scale;
  const [first, second] = svg.querySelectorAll('.scale-bar rect');
  first.setAttribute('width', String(w / 2));
  second.setAttribute('x', String(26 + w / 2));
  second.setAttribute('width', String(w / 2));
  const words = svg.querySelector('.scale-bar text')!;
  words.setAttribute('x', String(33 + w));
  words.textContent = `${metres}\u00a0m`;
}

/** Boats, their last minute, and their laylines at this moment. */
function drawLive(map: Living, time: number): void {
  map.live.replaceChildren(...map.race.boats.flatMap((b) => drawBoat(map, b, time)));
}

function drawBoat(map: Living, boat: Boat, time: number): SVGElement[] {
  const { race, view } = map;
  const r = readingAt(race, boat, time);
  if (!Number.isFinite(r.x)) return [];
  const at = toSheet(view, r.x, r.y);
  const { colour } = boatPaint(boat.index);
  const ray = (direction: number, length: number): string =>
    `M0 0l${(length * eastOf(direction - view.up)).toFixed(1)} ${(-length * northOf(direction - view.up)).toFixed(1)}`;
  const sides = laylineRays(boat, time, r.twd);
  return [
    draw('path', {
      d: wake(map, boat, time),
      fill: 'none',
      stroke: colour,
      'stroke-width': 4,
      opacity: 0.55,
      'stroke-linecap': 'round',
    }),
    draw(
      'g',
      { class: 'boat', 'data-boat': boat.index, transform: `translate(${at.x.toFixed(1)} ${at.y.toFixed(1)})` },
      ...sides.map(({ course, side }) =>
        draw('path', {
          d: ray(course, 150),
          fill: 'none',
          stroke: side === 'port' ? PORT : STARBOARD,
          'stroke-width': 1,
          'stroke-dasharray': '2 4',
        }),
      ),
      draw('path', { class: 'course', d: ray(r.course, 62), fill: 'none', stroke: CURSOR, 'stroke-width': 1.5 }),
      draw('path', {
        class: 'bow',
        d: ray(r.bow, 46),
        fill: 'none',
        stroke: INK,
        'stroke-width': 1.1,
        'stroke-dasharray': r.bowLogged ? undefined : '2 2',
      }),
      draw('path', {
        class: 'wind-barb',
        d: ray(r.twd, 30),
        fill: 'none',
        stroke: INK,
        'stroke-width': 1,
        opacity: 0.6,
      }),
      draw('path', {
        d: 'M0 -13C5 -6 5.5 3 4 10H-4C-5.5 3 -5 -6 0 -13Z',
        fill: colour,
        stroke: 'var(--paper)',
        'stroke-width': 1.2,
        transform: `rotate(${(r.bow - view.up).toFixed(1)})`,
      }),
    ),
  ];
}

/** Close-hauled courses from here, at the angle this leg was sailed. */
function laylineRays(boat: Boat, time: number, twd: number): { side: 'port' | 'starboard'; course: number }[] {
  const span = boat.header.legs.find((l) => time >= l.from && time < l.to);
  const facts = span && boat.legs[span.index];
  if (!facts || facts.kind !== 'upwind' || facts.gamma === null || !Number.isFinite(twd)) return [];
  return [
    { side: 'starboard', course: twd - (facts.gammaStarboard ?? facts.gamma) },
    { side: 'port', course: twd + (facts.gammaPort ?? facts.gamma) },
  ];
}

function wake({ race, view }: Living, boat: Boat, time: number): string {
  const last = rowAt(race, boat, time);
  let d = '';
  for (let i = Math.max(0, last - Math.ceil(60 / race.step)); i <= last; i++) {
    const x = boat.columns.x[i];
    if (!Number.isFinite(x)) continue;
    const p = toSheet(view, x, boat.columns.y[i]);
    d += `${d ? 'L' : 'M'}${p.x.toFixed(1)} ${p.y.toFixed(1)}`;
  }
  return d;
}

/** The time at which a boat was nearest to a place; the place must be within `tolerance` of a track. */
function putCursor(map: Living, place: Place, tolerance: number): boolean {
  let best = { distance: tolerance, time: NaN };
  const { time: now, window } = map.store.now();
  for (const b of map.race.boats) {
    for (let i = 0; i < b.header.rows; i++) {
      const time = b.header.t0 + i * map.race.step;
      if (time < window[0] || time > window[1]) continue;
      // Laps lie over one another: of two places alike, the one nearer in time is meant.
      const away = Math.hypot(b.columns.x[i] - place.x, b.columns.y[i] - place.y) + Math.abs(time - now) * 0.004;
      if (away < best.distance) best = { distance: away, time };
    }
  }
  if (Number.isNaN(best.time)) return false;
  map.store.set({ time: best.time });
  return true;
}

function showPick(map: Living, { pick, window }: Moment): void {
  for (const path of map.svg.querySelectorAll('.leg-path')) {
    const off = pick !== null && pick.leg !== undefined && path.getAttribute('data-leg') !== String(pick.leg);
    path.classList.toggle('dim', off);
  }
  for (const pin of map.svg.querySelectorAll('.tack-pin')) {
    const on =
      pick?.turn !== undefined &&
      pin.getAttribute('data-boat') === String(pick.boat) &&
      pin.getAttribute('data-turn') === String(pick.turn);
    pin.classList.toggle('picked', on);
  }
  if (!pick) return;
  map.view = fitView(
    placesIn(map.race, map.race.boats[pick.boat], window[0], window[1]),
    map.view.up,
    map.view.width,
    map.view.height,
    90,
  );
  redrawSheet(map);
}
