import { describe, expect, test } from 'vitest';
import { debrief } from '../../src/debrief.js';
import { RAD } from '../../src/math/angles.js';
import { KNOT, toKnots } from '../../src/math/units.js';
import { optimum } from '../../src/optimum.js';
import { polar } from '../../src/report/charts/polar.js';
import { offWind, polarWhole } from '../../src/report/charts/polar-whole.js';
import { debriefPage } from '../../src/report/page.js';
import type { PolarCurve, RaceSeries } from '../../src/result/series.js';
import { condition, generateRace } from '../accuracy/generator/index.js';
import { bareSample, sample } from './sample.js';

const { race, open } = generateRace(condition('polar curves', { beat: [500, 600] }), 1);
const { series, result } = await debrief(race, open);
const curves = series.polars!;
const model = curves.find(({ kind }) => kind === 'model')!;

/** Speed on a curve between its points, straight. [m/s] */
function speedOn({ points }: PolarCurve, gamma: number): number {
  const k = points.findIndex((point) => point.gamma >= gamma);
  const [a, b] = [points[k - 1], points[k]];
  return a.speed + ((b.speed - a.speed) * (gamma - a.gamma)) / (b.gamma - a.gamma);
}

describe('curves of the polar diagram', () => {
  test('the model in the mean wind of the settled blocks, from close-hauled to dead downwind', () => {
    const blocks = series.boats.flatMap((b) => b.blocks);
    const seconds = blocks.reduce((sum, b) => sum + b.to - b.from, 0);
    expect(model.tws).toBeCloseTo(blocks.reduce((sum, b) => sum + b.tws * (b.to - b.from), 0) / seconds, 9);
    expect(model.boats).toEqual([0, 1]); // both sail the same boat file
    expect(model.points).toHaveLength(60);
    expect(model.points[0].gamma).toBeCloseTo(model.up.gamma - 6, 9);
    expect(model.points[59].gamma).toBe(180);
  });

  test('is that of `optimum --polar`', async () => {
    const told = await optimum('single-hander', [toKnots(model.tws)], { polar: true });
    expect(model.up.gamma).toBeCloseTo(told.rows[0].gamma_deg, 4);
    expect(toKnots(model.up.speed)).toBeCloseTo(told.rows[0].speed_kn, 6);
    const within = told.polar!.filter(({ gamma_deg }) => gamma_deg > model.points[0].gamma && gamma_deg < 180);
    expect(within.length).toBeGreaterThan(20);
    for (const { gamma_deg, speed_kn } of within) {
      expect(Math.abs(speedOn(model, gamma_deg) / (speed_kn * KNOT) - 1), `at ${gamma_deg}`).toBeLessThan(0.012);
    }
    const made = told.polar!.map(({ gamma_deg, speed_kn }) => -speed_kn * Math.cos(gamma_deg * RAD));
    const down = model.down!;
    expect(toKnots(-down.speed * Math.cos(down.gamma * RAD))).toBeGreaterThanOrEqual(Math.max(...made) - 1e-6);
  });

  test('the reference too, anchored at what the best boat sailed: her blocks lie about it, half above', () => {
    const best = curves.find(({ kind }) => kind === 'best')!;
    expect(best.down).toBeNull();
    const shares = series.boats.map(({ blocks }) => {
      const above = blocks.filter(
        (b) => b.gamma > best.points[0].gamma && b.speed / b.tws > speedOn(best, b.gamma) / best.tws,
      );
      return above.length / blocks.length;
    });
    // Of the boat it was anchored on the median block lies on the curve, within what a few blocks can tell.
    expect(Math.min(...shares.map((share) => Math.abs(share - 0.5)))).toBeLessThan(0.2);
  });

  test('one boat alone has the model only; without a wind speed there is none', async () => {
    const alone = generateRace(condition('polar alone', { boats: 1, beat: [500, 600] }), 1);
    expect((await debrief(alone.race, alone.open)).series.polars!.map(({ kind }) => kind)).toEqual(['model']);
    const blind = generateRace(condition('polar blind', { station: 'none', beat: [500, 600] }), 1);
    const found = await debrief(blind.race, blind.open);
    expect(found.series.polars).toEqual([]);
    expect(debriefPage(found.result, found.series)).not.toContain('class="polar-whole"');
  });
});

/** Points of a path of moves from point to point. */
function placesOf(d: string): [number, number][] {
  const out: [number, number][] = [];
  for (const [, kind, dx, dy] of d.matchAll(/([Ml])(-?[\d.]+) ?(-?[\d.]+)/g)) {
    const [x, y] = kind === 'M' ? [0, 0] : out[out.length - 1];
    out.push([x + Number(dx), y + Number(dy)]);
  }
  return out;
}

describe('the pictures', () => {
  const curvesIn = (svg: string): [number, number][][] =>
    [...svg.matchAll(/<path class="curve" d="([^"]+)"/g)].map(([, d]) => placesOf(d));
  const rings = (svg: string): [number, number][] =>
    [...svg.matchAll(/<circle cx="([\d.]+)" cy="([\d.]+)" r="4"/g)].map(([, x, y]) => [Number(x), Number(y)]);

  test('close-hauled: on each tack each curve is highest where its best point stands', () => {
    const svg = polar(result, series);
    const [drawn, best] = [curvesIn(svg), rings(svg)];
    expect(drawn).toHaveLength(2 * curves.length);
    drawn.forEach((points, k) => {
      const top = points.reduce((a, b) => (b[1] < a[1] ? b : a));
      expect(Math.abs(top[1] - best[k][1])).toBeLessThan(1);
    });
    expect(best[0][0]).toBeLessThan(best[2][0]); // port to the left
  });

  test('the whole: highest and lowest points of the curve are its best courses, the sides are alike', () => {
    const svg = polarWhole({ ...series, polars: [model] });
    const [port, starboard] = curvesIn(svg);
    const [up, down] = rings(svg);
    for (const points of [port, starboard]) {
      expect(Math.abs(Math.min(...points.map(([, y]) => y)) - up[1])).toBeLessThan(1);
      expect(Math.abs(Math.max(...points.map(([, y]) => y)) - down[1])).toBeLessThan(1);
    }
    expect(Math.abs(Math.min(...port.map(([x]) => x)) + Math.max(...starboard.map(([x]) => x)) - 460)).toBeLessThan(
      0.5,
    );
  });

  test('half minutes off the wind are means of downwind sailing between turns', () => {
    const boat = sample().series.boats[0];
    const found = offWind(boat);
    expect(found.length).toBeGreaterThan(8);
    for (const { gamma, speed } of found) {
      expect(Math.abs(gamma - 142)).toBeLessThan(3); // the toy helm's course
      expect(speed).toBeGreaterThan(1);
    }
  });

  test('are told in words and figures, and without curves the blocks stand alone', () => {
    const full = sample();
    const page = debriefPage(full.result, full.series);
    expect(page).toContain('best upwind');
    expect(page).toContain('class="polar-whole"');
    const without: RaceSeries = { ...full.series, polars: [] };
    expect(polar(full.result, without)).not.toContain('class="curve"');
    const bare = bareSample();
    expect(polar(bare.result, bare.series)).not.toMatch(/NaN|Infinity/);
  });
});
