import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  apparentWind,
  betaOf,
  ceilingCourse,
  ceilingVmg,
  ceilingVmgDownwind,
  heeledWind,
  speedRatio,
  trueWind,
  vmgOf,
} from '../../src/physics/triangle.js';

/**
 * Numbers below without another source were worked out apart from this program, by plain trigonometry with six digits;
 * for every row of the ceiling a numerical search over gamma agreed with the closed form to 1e-6.
 */
describe('wind triangle', () => {
  it('reaches the ceiling at 45 degrees + beta/2', () => {
    // beta, gamma*, V_S/V_T, V_A/V_T, best VMG/V_T. The row of 30 degrees is exact: 1, sqrt 3, 1/2.
    const rows = [
      [10, 50.0, 3.701666, 4.411474, 2.379385],
      [15, 52.5, 2.352074, 3.065282, 1.431852],
      [20, 55.0, 1.677025, 2.39504, 0.961902],
      [25, 57.5, 1.271359, 1.995634, 0.683101],
      [30, 60.0, 1.0, 1.732051, 0.5],
      [35, 62.5, 0.805034, 1.546456, 0.371723],
      [40, 65.0, 0.657477, 1.409965, 0.277862],
    ] as const;
    for (const [beta, gamma, ratio, apparent, vmg] of rows) {
      expect(ceilingCourse(beta)).toBe(gamma);
      expect(speedRatio(gamma, beta)).toBeCloseTo(ratio, 5);
      expect(apparentWind(ratio, 1, gamma).aws).toBeCloseTo(apparent, 5);
      expect(apparentWind(ratio, 1, gamma).beta).toBeCloseTo(beta, 4);
      expect(ceilingVmg(1, beta)).toBeCloseTo(vmg, 5);
      expect(vmgOf(speedRatio(gamma, beta), gamma)).toBeCloseTo(vmg, 5);
    }
  });

  it('reaches the downwind ceiling at 135 degrees + beta/2', () => {
    for (const [beta, vmg] of [
      [20, 1.961902],
      [30, 1.5],
      [40, 1.277862],
    ] as const) {
      expect(ceilingVmgDownwind(1, beta)).toBeCloseTo(vmg, 5);
      expect(-vmgOf(speedRatio(135 + beta / 2, beta), 135 + beta / 2)).toBeCloseTo(vmg, 5);
    }
  });

  it('falls short of the ceiling off that course', () => {
    for (const [beta, gamma, vmg] of [
      [25, 40, 0.469139],
      [25, 45, 0.572253],
      [25, 50, 0.642788], // V_S = V_T exactly: gamma = 2 beta
      [25, 55, 0.678599],
      [30, 45, 0.366025],
      [30, 50, 0.439693],
      [30, 55, 0.484808],
      [35, 40, 0.116402],
      [35, 45, 0.214074],
      [35, 50, 0.29005],
    ] as const) {
      expect(vmgOf(speedRatio(gamma, beta), gamma)).toBeCloseTo(vmg, 5);
    }
  });

  it('gives apparent wind and speed made good', () => {
    for (const [tws, gamma, speed, aws, beta, vmg] of [
      [10, 45, 5, 13.989663, 30.361193, 3.535534],
      [8, 42, 4.2, 11.470803, 27.818158, 3.121208],
      [10, 90, 6, 11.661904, 59.036243, 0],
      [12, 140, 7, 8.019011, 105.867696, -5.362311],
      [6, 180, 3, 3, 180, -3],
      [10, 0, 2, 12, 0, 2],
    ] as const) {
      const apparent = apparentWind(speed, tws, gamma);
      expect(apparent.aws).toBeCloseTo(aws, 5);
      expect(apparent.beta).toBeCloseTo(beta, 5);
      expect(vmgOf(speed, gamma)).toBeCloseTo(vmg, 5);
    }
  });

  it('is solved back from a track, with the ceiling at that beta', () => {
    for (const [gamma, ratio, beta, ceiling] of [
      [45, 0.5, 30.361193, 0.489219],
      [42, 0.55, 27.359054, 0.587985],
      [40, 0.45, 27.860434, 0.569932],
      [45, 0.8, 25.135106, 0.677151],
      [48, 0.6, 30.351288, 0.489511],
    ] as const) {
      expect(betaOf(gamma, ratio)).toBeCloseTo(beta, 5);
      expect(ceilingVmg(1, beta)).toBeCloseTo(ceiling, 5);
    }
  });

  it('leans with heel as the effective-angle convention says (Kerwin 1978, from memory)', () => {
    for (const [beta, heel, effective, factor] of [
      [30, 10, 29.621652, 0.996224],
      [30, 20, 28.481238, 0.985269],
      [30, 30, 26.565051, 0.968246],
      [25, 20, 23.662353, 0.989498],
      [60, 20, 58.433296, 0.955127],
    ] as const) {
      expect(heeledWind(beta, heel).beta).toBeCloseTo(effective, 5);
      expect(heeledWind(beta, heel).factor).toBeCloseTo(factor, 5);
    }
  });

  it('turns round to the true wind it came from', () => {
    const speed = fc.double({ min: 0, max: 10, noNaN: true });
    const tws = fc.double({ min: 0.5, max: 20, noNaN: true });
    const gamma = fc.double({ min: 0.5, max: 179.5, noNaN: true });
    fc.assert(
      fc.property(speed, tws, gamma, (v, w, g) => {
        const { beta, aws } = apparentWind(v, w, g);
        fc.pre(aws > 0.01);
        const back = trueWind(v, aws, beta);
        expect(back.tws).toBeCloseTo(w, 8);
        expect(back.gamma).toBeCloseTo(g, 5);
      }),
      { seed: 1, numRuns: 200 },
    );
  });

  it('never makes good more than the ceiling at its own beta', () => {
    const gamma = fc.double({ min: 1, max: 89, noNaN: true });
    const ratio = fc.double({ min: 0.01, max: 3, noNaN: true });
    fc.assert(
      fc.property(gamma, ratio, (g, q) => {
        expect(vmgOf(q, g)).toBeLessThanOrEqual(ceilingVmg(1, betaOf(g, q)) * (1 + 1e-9));
      }),
      { seed: 2, numRuns: 500 },
    );
  });

  it('has no value outside its range', () => {
    expect(ceilingVmg(5, 0)).toBeNaN();
    expect(ceilingVmg(5, NaN)).toBeNaN();
    expect(speedRatio(45, 180)).toBeNaN();
    expect(apparentWind(NaN, 5, 45).beta).toBeNaN();
  });
});
