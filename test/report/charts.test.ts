import { existsSync, mkdirSync, readFileSync, writeFileSync } from 'node:fs';
import { describe, expect, test } from 'vitest';
import { RAD } from '../../src/math/angles.js';
import { KNOT } from '../../src/math/units.js';
import { angleDistribution, histogram } from '../../src/report/charts/angle-distribution.js';
import { dragAngles } from '../../src/report/charts/drag-angles.js';
import {
  barLength,
  fitView,
  toPlane,
  toSheet,
  worldTransform,
  type MapView,
} from '../../src/report/charts/map-view.js';
import { ladder } from '../../src/report/charts/ladder.js';
import { pairBars } from '../../src/report/charts/pair-bars.js';
import { polar } from '../../src/report/charts/polar.js';
import { polarWhole } from '../../src/report/charts/polar-whole.js';
import { portStarboard } from '../../src/report/charts/port-starboard.js';
import { simplify } from '../../src/report/charts/simplify.js';
import { middle, sortTacks, tackOverlay, tacksOf } from '../../src/report/charts/tack-overlay.js';
import { clockTicks, PANELS, timePanel } from '../../src/report/charts/time-series.js';
import { trackMap } from '../../src/report/charts/track-map.js';
import { steps, waterfall } from '../../src/report/charts/waterfall.js';
import { windStrip } from '../../src/report/charts/wind-strip.js';
import { causeTotals, settledMean } from '../../src/report/figures.js';
import { climbOf } from '../../src/report/rungs.js';
import { shiftsOf } from '../../src/report/shifts.js';
import { turnFigures } from '../../src/report/tack-figures.js';
import type { Quantity } from '../../src/result/result.js';
import { bareSample, sample } from './sample.js';
import { sampleLadders } from './sample-ladders.js';

const { result, series } = sample();
const [corrie, linnet] = result.boats;

/**
 * Pictures are compared with files one can open. A difference leaves `<name>-changed.svg` beside the file; to accept
 * it, run the test with ACCEPT=1.
 */
function checkPicture(name: string, svg: string): void {
  const folder = new URL('./pictures/', import.meta.url).pathname;
  const file = `${folder}${name}.svg`;
  mkdirSync(folder, { recursive: true });
  const rounded = `${svg.replace(/-?\d+\.\d{4,}/g, (n) => String(Math.round(Number(n) * 1000) / 1000))}\n`;
  if (process.env.ACCEPT || (!existsSync(file) && !process.env.CI)) writeFileSync(file, rounded);
  const same = readFileSync(file, 'utf8') === rounded;
  if (!same) writeFileSync(`${folder}${name}-changed.svg`, rounded);
  expect(same, `${name}.svg changed: look at ${name}-changed.svg, accept with ACCEPT=1`).toBe(true);
}

const PICTURES: Readonly<Record<string, () => string>> = {
  'track-map': () => trackMap(result, series),
  'time-angle': () => timePanel(PANELS[0], series),
  'time-wind-direction': () => timePanel(PANELS[3], series),
  waterfall: () => waterfall({ boat: 'Corrie', entries: causeTotals(corrie) }),
  polar: () => polar(result, series),
  'polar-whole': () => polarWhole(series),
  'drag-angles': () =>
    dragAngles([{ name: 'Corrie', aero: settledMean(corrie, 'aero_drag_angle_deg'), hydro: settledMean(corrie, 'hydro_drag_angle_deg'), beta: settledMean(corrie, 'beta_deg') }]), // prettier-ignore
  'port-starboard': () => portStarboard([{ name: 'Corrie', port: corrie.legs[0].steady!.port!.vmg_kn, starboard: corrie.legs[0].steady!.starboard!.vmg_kn }]), // prettier-ignore
  'angle-distribution': () => angleDistribution(series.boats, { best: 43.8, bestWords: 'day’s best' }),
  'wind-strip': () => windStrip(series.boats[0], shiftsOf(series.boats[0].twd)),
  'tack-overlay': () => tackOverlay(series.boats[1]),
  ladder: () => ladder(climbOf(sampleLadders({ result, series })[0].legs[0], [series.boats[0], series.boats[1]], [0, 1])), // prettier-ignore
  'pair-bars': () => pairBars([{ name: 'VMG', value: q(0.2, 0.05) }, { name: 'by height', value: null }], { first: 'Corrie', second: 'Linnet' }), // prettier-ignore
};

function q(value: number, se: number | null): Quantity {
  return { value, se, basis: 'derived' };
}

describe('pictures', () => {
  test.each(Object.entries(PICTURES))('%s', (name, make) => checkPicture(name, make()));

  test.each(Object.entries(PICTURES))('%s: named for those who do not see it, without style attributes', (_, make) => {
    const svg = make();
    expect(svg).toMatch(/^<svg [^>]*role="img"[^>]*aria-label="[^"]{20,}"/);
    expect(svg).not.toMatch(/ style=|NaN|undefined|Infinity/);
  });

  test('a boat name cannot break out of a picture', () => {
    const svg = waterfall({ boat: '"><script>', entries: causeTotals(corrie) });
    expect(svg).not.toContain('<script');
    expect(svg).toContain('&quot;&gt;&lt;script&gt;');
  });
});

describe('the waterfall', () => {
  test('its steps begin where the last ended and end at the sum, shifts apart', () => {
    const entries = causeTotals(linnet);
    const sum = entries.filter((e) => e.cause !== 'shifts').reduce((s, e) => s + e.metres.value, 0);
    const { steps: made, lost, shifts } = steps(entries);
    expect(made[0].from).toBe(0);
    made.slice(1).forEach((s, i) => expect(s.from).toBe(made[i].to));
    expect(lost).toBeCloseTo(sum, 9);
    expect(shifts!.cause).toBe('shifts');
  });

  test('lost before shifts and shifts make what the ledgers lost', () => {
    const { lost, shifts } = steps(causeTotals(linnet));
    const ledgers = linnet.legs.reduce((s, l) => s + (l.ledger?.lost_m?.value ?? 0), 0);
    expect(lost + shifts!.metres.value).toBeCloseTo(ledgers, 6);
  });
});

describe('the map view', () => {
  const view: MapView = { cx: 10, cy: 20, scale: 2, up: 215, width: 640, height: 700 };

  test('what lies toward the top direction is higher on the sheet, by its distance', () => {
    const far = { x: 10 + 50 * Math.sin(215 * RAD), y: 20 + 50 * Math.cos(215 * RAD) };
    const at = toSheet(view, far.x, far.y);
    expect(at.x).toBeCloseTo(320, 9);
    expect(at.y).toBeCloseTo(350 - 100, 9);
  });

  test('with north up, east is right', () => {
    expect(toSheet({ ...view, up: 0 }, 11, 20)).toEqual({ x: 322, y: 350 });
  });

  test('sheet to plane undoes plane to sheet, and the transform of paths is the same map', () => {
    for (const [x, y] of [
      [3, 4],
      [-200, 77],
      [10, 20],
    ] as const) {
      // prettier-ignore
      const at = toSheet(view, x, y);
      const back = toPlane(view, at.x, at.y);
      expect(Math.hypot(back.x - x, back.y - y)).toBeLessThan(1e-9);
      const [a, b, c, d, e, f] = worldTransform(view)
        .match(/-?[\d.]+/g)!
        .map(Number);
      expect(Math.hypot(a * x + c * -y + e - at.x, b * x + d * -y + f - at.y)).toBeLessThan(0.01);
    }
  });

  test('a fitted view holds every place within its margin', () => {
    const places = [{ x: 0, y: 0 }, { x: 900, y: -100 }, { x: 250, y: 400 }, { x: NaN, y: 1 }]; // prettier-ignore
    const fitted = fitView(places, 137, 640, 700, 40);
    for (const p of places.slice(0, 3)) {
      const at = toSheet(fitted, p.x, p.y);
      expect(Math.min(at.x, at.y, 640 - at.x, 700 - at.y)).toBeGreaterThan(39.9);
    }
  });

  test('the scale bar is 1, 2 or 5 times a power of ten and fits its room', () => {
    for (const scale of [0.013, 0.2, 0.7, 1, 3.3]) {
      const metres = barLength({ ...view, scale });
      expect([1, 2, 5]).toContain(Number(String(metres).replace(/[0.]/g, '')));
      expect(metres * scale).toBeLessThanOrEqual(110);
      expect(metres * scale).toBeGreaterThan(43);
    }
  });
});

describe('thinning a track for drawing', () => {
  test('every row left out lies within the tolerance of the line drawn', () => {
    const b = series.boats[0];
    const [kept] = simplify(b.x, b.y, 0, 600, 0.6);
    expect(kept.length).toBeLessThan(200);
    for (let k = 1; k < kept.length; k++) {
      const [i, j] = [kept[k - 1], kept[k]];
      const length = Math.hypot(b.x[j] - b.x[i], b.y[j] - b.y[i]);
      for (let r = i + 1; r < j; r++) {
        const off = Math.abs((b.x[j] - b.x[i]) * (b.y[r] - b.y[i]) - (b.y[j] - b.y[i]) * (b.x[r] - b.x[i])) / length;
        expect(off).toBeLessThanOrEqual(0.6 + 1e-9);
      }
    }
  });

  test('it lifts the pen over a gap', () => {
    const x = Float64Array.of(0, 1, NaN, 3, 4);
    expect(simplify(x, x, 0, 5, 0.1)).toEqual([[0, 1], [3, 4]]); // prettier-ignore
  });
});

describe('other figures drawn', () => {
  test('the shares of the distribution add up to the settled time within its range', () => {
    const b = series.boats[0];
    const inside = b.gamma.filter((g, i) => b.settled[i] && Math.abs(g) >= 25 && Math.abs(g) < 65).length;
    const settled = b.settled.reduce((s, v) => s + v, 0);
    const sum = histogram(b, 25, 65, 1).share.reduce((s, v) => s + v, 0);
    expect(sum).toBeCloseTo(inside / settled, 12);
  });

  test('every tack of the boat is laid over in each of three panels, the middle one is their median', () => {
    expect(tacksOf(series.boats[0])).toHaveLength(corrie.manoeuvres.filter((m) => m.kind === 'tack').length);
    const svg = tackOverlay(series.boats[0]);
    for (const title of ['VMG, kn', 'Speed, kn', 'Course angle, °']) expect(svg).toContain(title);
    expect(svg.match(/class="tack-curve/g)).toHaveLength(3 * 8);
    for (const k of tacksOf(series.boats[0])) expect(svg.split(`data-turn="${k}"`)).toHaveLength(1 + 3);
    expect(middle([[[0, 1]], [[0, 5]], [[0, 2]], [[0, 9]]])).toEqual([[0, 3.5]]); // by hand
  });

  test('good and bad tacks: the cheapest third, and what is dear beyond two of its errors', () => {
    const {
      kinds,
      middle: cost,
      cheapTo,
    } = sortTacks([q(6, 2), q(4, 2), q(30, 4), q(5, 2), q(9, 2), q(14, 8), undefined]);
    // by hand: sorted 4 5 6 9 14 30, middle 7.5; 30 - 7.5 > 8, 14 - 7.5 < 16; a third of six is two
    expect(cost).toBe(7.5);
    expect(cheapTo).toBe(5);
    expect(kinds).toEqual(['other', 'cheap', 'dear', 'cheap', 'other', 'other', 'other']);
  });

  test('a tack that cost much is drawn otherwise than by colour alone', () => {
    const boat = series.boats[1];
    const [dear] = tacksOf(boat);
    const costs = new Map(tacksOf(boat).map((k) => [k, q(k === dear ? 40 : 8, 3)]));
    const svg = tackOverlay(boat, { costs });
    const broken = [...svg.matchAll(/<g [^>]*stroke-dasharray[^>]*>(.*?)<\/g>/g)].map(([, curves]) => curves);
    expect(broken).toHaveLength(3);
    for (const curves of broken) {
      expect(curves.match(/<path /g)).toHaveLength(1);
      expect(curves).toContain(`class="tack-curve dear" data-turn="${dear}"`);
    }
    expect(svg.match(/tack-curve dear/g)).toHaveLength(3);
  });

  test('figures of a turn, read off columns made by hand', () => {
    const n = 80;
    const made = (value: (i: number) => number): Float64Array => Float64Array.from({ length: n }, (_, i) => value(i));
    // 4 kn, down to 2 kn at second 34 and back by a tenth of a knot a second; 10 degrees a second from -40 to 45.
    const knots = (i: number): number => (i < 30 ? 4 : i < 35 ? 4 - 0.5 * (i - 30) : Math.min(4, 2 + 0.1 * (i - 34)));
    const gamma = made((i) => Math.max(-40, Math.min(45, 10 * (i - 30))));
    const course = made((i) => 90 - gamma[i]);
    const columns = {
      speed: made((i) => knots(i) * KNOT),
      gamma,
      ux: made((i) => Math.sin(course[i] * RAD)),
      uy: made((i) => Math.cos(course[i] * RAD)),
      heading: made(() => NaN),
    };
    const figures = turnFigures(columns, { entry: 26, at: 30, exit: 60 });
    expect(figures.before).toBeCloseTo(4, 9);
    expect(figures.lowest).toBeCloseTo(2, 9);
    expect(figures.back).toBe(22); // 3.8 kn at second 52
    expect(figures.rate).toBeCloseTo(10, 6);
    expect(figures.out).toBe(45);
    const turned = { ...columns, heading: made((i) => 90 - 2 * gamma[i]) };
    expect(turnFigures(turned, { entry: 26, at: 30, exit: 60 }).rate).toBeCloseTo(20, 6); // the bow where logged
  });

  test('clock ticks stand at round times', () => {
    expect(clockTicks(1000, 1900)).toEqual([1080, 1200, 1320, 1440, 1560, 1680, 1800]); // by hand: every two minutes
    expect(clockTicks(0, 7200)).toEqual([0, 900, 1800, 2700, 3600, 4500, 5400, 6300, 7200]); // quarter hours
  });

  test('shifts: a veer of 12 degrees is told as two marks of at least five', () => {
    const twd = Float64Array.from({ length: 600 }, (_, i) => 350 + 12 / (1 + Math.exp(-(i - 300) / 20)));
    const marks = shiftsOf(twd.map((d) => d % 360));
    expect(marks.map((m) => Math.round(m.by))).toEqual([5, 5]);
    expect(Math.abs(marks[0].row - 300)).toBeLessThan(20);
  });

  test('a wandering wind of two degrees gives no shift', () => {
    const twd = Float64Array.from({ length: 900 }, (_, i) => 2 + 2 * Math.sin(i / 50));
    expect(shiftsOf(twd)).toEqual([]);
  });

  test('nothing known still gives a picture', () => {
    const bare = bareSample();
    for (const svg of [
      polar(bare.result, bare.series),
      trackMap(bare.result, bare.series),
      timePanel(PANELS[4], bare.series),
    ]) {
      expect(svg).not.toMatch(/NaN|Infinity|undefined/);
    }
  });
});
