import uPlot from 'uplot';
import { unwrap, wrap360 } from '../../math/angles.js';
import { toKnots } from '../../math/units.js';
import { beatRange } from '../charts/time-series.js';
import { boatPaint, RULE, SOFT } from '../palette.js';
import { button, byId, make, paint } from './dom.js';
import { localNumber, type Clock } from './locale.js';
import type { Boat, Race } from './race.js';
import { rowAt } from './race.js';
import type { Store } from './store.js';

/** The living curves: one cursor through all of them, a drag to look closer. */

interface Panel {
  readonly key: string;
  readonly title: string;
  readonly unit: string;
  readonly digits: number;
  readonly values: (boat: Boat) => Float64Array;
  /** Scaled to the beats unless only other sailing is in view. */
  readonly beats?: boolean;
}

const PANELS: readonly Panel[] = [
  {
    key: 'angle',
    title: 'Course angle to the true wind',
    unit: '°',
    digits: 1,
    beats: true,
    values: (b) => b.columns.gamma.map(Math.abs),
  },
  { key: 'speed', title: 'Speed', unit: 'kn', digits: 2, values: (b) => b.columns.speed.map(toKnots) },
  { key: 'vmg', title: 'VMG', unit: 'kn', digits: 2, beats: true, values: (b) => b.columns.vmg.map(toKnots) },
  { key: 'direction', title: 'Wind direction', unit: '°', digits: 0, values: (b) => unwrap(b.columns.twd) },
  { key: 'wind', title: 'Wind speed', unit: 'kn', digits: 1, values: (b) => b.columns.tws.map(toKnots) },
];

interface Living {
  readonly panel: Panel;
  readonly plot: uPlot;
  readonly readouts: readonly HTMLElement[];
  readonly data: readonly (readonly (number | null)[])[];
}

export function mountSeries(race: Race, store: Store, clock: Clock): void {
  const home = byId('live-series');
  if (!home) return;
  home.hidden = false;
  const times = commonTimes(race);
  const tools = make(
    'div',
    { class: 'map-tools' },
    button('The racing', 'Show the racing', () => store.set({ window: race.racing })),
    button('All times', 'Show the whole recording', () => store.set({ window: [race.from, race.to] })),
    make('span', { class: 'soft' }, 'Drag across the curves to look closer.'),
  );
  home.append(tools);
  const living: Living[] = [];
  // Asked once: after each new panel the answer would cost a layout of the page.
  let width = home.clientWidth;
  for (const panel of PANELS) {
    const columns = race.boats.map((b) => onTimes(race, b, panel.values(b), times));
    if (!columns.some((c) => c.some((v) => v !== null))) continue;
    living.push(mountPanel(home, panel, race, store, clock, [times, ...columns], width));
  }
  const resize = (): void => {
    if (home.clientWidth === width) return;
    width = home.clientWidth;
    living.forEach(({ plot }) => plot.setSize({ width, height: plot.height }));
  };
  new ResizeObserver(resize).observe(home);
  matchMedia('(prefers-color-scheme: dark)').addEventListener('change', () =>
    living.forEach(({ plot }) => plot.redraw()),
  );
  for (const one of living) {
    let inView: readonly [number, number] | null = null;
    store.listen(({ time, window }) => {
      if (window !== inView) one.plot.setScale('x', { min: window[0], max: window[1] });
      inView = window;
      follow(one, race, time);
    }, one.plot.root);
  }
}

function commonTimes(race: Race): number[] {
  const out: number[] = [];
  for (let t = race.from; t <= race.to; t += race.step) out.push(t);
  return out;
}

function onTimes(race: Race, boat: Boat, values: Float64Array, times: readonly number[]): (number | null)[] {
  return times.map((t) => {
    const i = rowAt(race, boat, t);
    return i >= 0 && Number.isFinite(values[i]) ? values[i] : null;
  });
}

/** Cursor line and figures of one panel at a time. */
function follow({ plot, readouts, data, panel }: Living, race: Race, time: number): void {
  plot.setCursor({ left: plot.valToPos(time, 'x'), top: 10 }, false);
  const i = Math.round((time - race.from) / race.step);
  readouts.forEach((readout, k) => {
    const v = data[k + 1][i];
    const shown = v === null || v === undefined ? NaN : panel.key === 'direction' ? wrap360(v) : v;
    readout.textContent = localNumber(shown, panel.digits);
  });
}

function mountPanel(
  home: HTMLElement,
  panel: Panel,
  race: Race,
  store: Store,
  clock: Clock,
  data: (number | null)[][],
  width: number,
): Living {
  const readouts = race.boats.map((b) =>
    make('output', { 'data-panel': panel.key, 'data-boat': b.index, 'aria-live': 'off' }),
  );
  const heads = race.boats.map((b, k) => make('span', { class: 'reading' }, make('bdi', {}, b.name), ' ', readouts[k]));
  const frame = make('div', {
    class: 'live-panel',
    role: 'img',
    'aria-label': `${panel.title} against time; the figures are in the table below`,
  });
  home.append(make('div', { class: 'live-head' }, make('i', {}, `${panel.title}, ${panel.unit}`), ...heads), frame);
  const plot = new uPlot(optionsFor(panel, race, store, clock, width), data as uPlot.AlignedData, frame);
  mountTouch(plot, store);
  return { panel, plot, readouts, data };
}

function optionsFor(panel: Panel, race: Race, store: Store, clock: Clock, width: number): uPlot.Options {
  const font = '12px Georgia, serif';
  const axis = {
    stroke: () => paint(SOFT),
    grid: { stroke: () => paint(RULE), width: 1 },
    ticks: { stroke: () => paint(RULE), width: 1 },
    font,
  };
  const write = (v: number, step: number): string =>
    localNumber(panel.key === 'direction' ? wrap360(v) : v, step % 1 === 0 ? 0 : 1);
  return {
    width,
    height: window.innerWidth < 640 ? 118 : 138,
    legend: { show: false },
    scales: { x: { time: false }, y: { range: yRange(panel, race) } },
    padding: [8, 8, 0, 0],
    cursor: {
      y: false,
      points: { show: false },
      drag: { x: true, y: false, setScale: false },
      bind: { dblclick: () => () => (store.set({ window: race.racing }), null) },
    },
    series: [{}, ...race.boats.map((b) => lineOf(b))],
    axes: [
      {
        ...axis,
        size: 26,
        gap: 3,
        values: (u, ticks) => ticks.map((t) => clock.write(t, u.scales.x.max! - u.scales.x.min! < 300 ? 'hms' : 'hm')),
        incrs: [1, 5, 10, 30, 60, 120, 300, 600, 900, 1800, 3600, 7200, 14400],
      },
      { ...axis, size: 42, gap: 4, values: (_u, ticks, _axis, _space, step) => ticks.map((v) => write(v, step)) },
    ],
    hooks: {
      setCursor: [(u) => hovered(u, store)],
      setSelect: [(u) => selected(u, store)],
      drawClear: [(u) => shadeLegs(u, race)],
      draw: [(u) => markTurns(u, race)],
    },
  };
}

/** As on the still pictures: to the scale of settled sailing, unless nothing in view is near it. */
function yRange(panel: Panel, race: Race): uPlot.Range.Function {
  const fitted = (min: number, max: number): uPlot.Range.MinMax => uPlot.rangeNum(min, max, 0.08, true);
  const settled = race.boats.map((b) => {
    const values = panel.values(b);
    return values.filter((_, i) =>
      b.header.settled.some(([from, to]) => inside(b.header.t0 + i * race.step, from, to)),
    );
  });
  if (!panel.beats || !settled.some((c) => c.some(Number.isFinite))) return (_u, min, max) => fitted(min, max);
  const [low, high] = beatRange(settled);
  return (_u, min, max) => (max < low || min > high ? fitted(min, max) : [low, high]);
}

function inside(time: number, from: number, to: number): boolean {
  return time >= from && time < to;
}

function lineOf(boat: Boat): uPlot.Series {
  const { colour, dash } = boatPaint(boat.index);
  const line: uPlot.Series = { stroke: () => paint(colour), width: 1.4, points: { show: false }, spanGaps: false };
  return dash ? { ...line, dash: dash.split(' ').map(Number) } : line;
}

/** Only the hand moves the cursor: uPlot also calls back when the store does. */
function hovered(u: uPlot, store: Store): void {
  const { left, event } = u.cursor;
  if (!event || left === undefined || left === null || left < 0) return;
  store.set({ time: Math.round(u.posToVal(left, 'x')) });
}

function selected(u: uPlot, store: Store): void {
  const { left, width } = u.select;
  if (width < 8) return;
  store.set({ window: [Math.round(u.posToVal(left, 'x')), Math.round(u.posToVal(left + width, 'x'))] });
  u.setSelect({ left: 0, top: 0, width: 0, height: 0 }, false);
}

function shadeLegs(u: uPlot, race: Race): void {
  const boat = race.boats[0];
  if (!boat) return;
  u.ctx.save();
  u.ctx.fillStyle = paint('var(--water)');
  for (const leg of boat.header.legs) {
    if (boat.legs[leg.index]?.kind !== 'upwind') continue;
    const a = Math.max(u.bbox.left, u.valToPos(leg.from, 'x', true));
    const b = Math.min(u.bbox.left + u.bbox.width, u.valToPos(leg.to, 'x', true));
    if (b > a) u.ctx.fillRect(a, u.bbox.top, b - a, u.bbox.height);
  }
  u.ctx.restore();
}

function markTurns(u: uPlot, race: Race): void {
  u.ctx.save();
  u.ctx.lineWidth = 2 * devicePixelRatio;
  for (const boat of race.boats) {
    u.ctx.strokeStyle = paint(boatPaint(boat.index).colour);
    const [top, length] = [u.bbox.top - 6 * devicePixelRatio, (boat.index % 2 ? 9 : 6) * devicePixelRatio];
    for (const t of boat.header.turns) {
      const x = u.valToPos(t.at, 'x', true);
      if (x < u.bbox.left || x > u.bbox.left + u.bbox.width) continue;
      u.ctx.beginPath();
      u.ctx.moveTo(x, top);
      u.ctx.lineTo(x, top + length);
      u.ctx.stroke();
    }
  }
  u.ctx.restore();
}

/** A finger drawn sideways over a curve moves the cursor; up and down stays with the page. */
function mountTouch(plot: uPlot, store: Store): void {
  const move = (event: PointerEvent): void => {
    if (event.pointerType === 'mouse') return;
    const box = plot.over.getBoundingClientRect();
    store.set({ time: Math.round(plot.posToVal(event.clientX - box.left, 'x')) });
  };
  plot.over.addEventListener('pointerdown', move);
  plot.over.addEventListener('pointermove', move);
}
