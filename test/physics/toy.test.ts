import { describe, expect, it } from 'vitest';
import { balance, type ForceModel } from '../../src/physics/balance.js';
import { inducedDrag, leewayOf } from '../../src/physics/foils.js';
import { bestUpwind } from '../../src/physics/optimum.js';

/**
 * A closed little boat whose forces all go with the square of the speed: constant rig coefficients, constant hull drag
 * area. Solved apart from this program with another solver; here the boat's own solver must give the same numbers.
 * Air 1.225, water 1026.021 kg/m3, sail 7.06 m2, CL 1.2, CD 0.18, hull drag area 0.03 m2, effective span 1.6 m, foils
 * of 0.30 m2 with 4.37318 per radian.
 */
function toy(span: number): ForceModel {
  const pressure = (v: number): number => 0.5 * 1026.021 * v * v;
  return {
    airDensity: 1.225,
    area: 7.06,
    rig: () => ({ lift: 1.2, drag: 0.18 }),
    upright: (v) => pressure(v) * 0.03,
    resistance: (upright, v, side) => upright + inducedDrag(side, pressure(v), span),
    leeway: (v, side) => leewayOf(side, pressure(v), 0.3 * 4.37318),
    arm: 2.8,
    stability: null,
    zeroLift: 0,
    stall: 20,
    sheetingMin: -90,
    sheetingMax: 90,
  };
}

describe('closed little boat', () => {
  // gamma, V_S/V_T, beta, leeway, VMG/V_T with induced drag; V_S/V_T, VMG/V_T without.
  const rows = [
    [40, 0.455062, 27.762217, 3.8784, 0.348598, 0.463016, 0.354691],
    [45, 0.491573, 30.536555, 3.319449, 0.347594, 0.497953, 0.352106],
    [50, 0.522546, 33.319346, 2.888369, 0.335886, 0.527733, 0.33922],
    [55, 0.548292, 36.135715, 2.540732, 0.314487, 0.552535, 0.316921],
    [60, 0.569014, 39.011485, 2.250425, 0.284507, 0.572486, 0.286243],
    [90, 0.597189, 59.154826, 1.077974, 0, 0.59801, 0],
  ] as const;

  it.each(rows)('sails at %s degrees', (gamma, q, beta, leeway, vmg, qFree, vmgFree) => {
    const state = balance(toy(1.6), 6, gamma);
    expect(state.speed / 6).toBeCloseTo(q, 5);
    expect(state.beta).toBeCloseTo(beta, 4);
    expect(state.leeway).toBeCloseTo(leeway, 4);
    expect(state.vmg / 6).toBeCloseTo(vmg, 5);
    expect(state.aeroDragAngle).toBeCloseTo(8.530766, 5);
    expect(state.aeroDragAngle + state.hydroDragAngle).toBeCloseTo(state.beta, 7);
    const free = balance(toy(1e6), 6, gamma);
    expect(free.speed / 6).toBeCloseTo(qFree, 5);
    expect(free.vmg / 6).toBeCloseTo(vmgFree, 5);
  });

  it('has its best course where it must be', () => {
    const best = bestUpwind(toy(1.6), 6);
    expect(best.gamma).toBeCloseTo(42.0355, 3);
    expect(best.speed / 6).toBeCloseTo(0.470621, 5);
    expect(best.beta).toBeCloseTo(28.892209, 3);
    expect(best.vmg / 6).toBeCloseTo(0.34954453, 7);
    const free = bestUpwind(toy(1e6), 6);
    expect(free.gamma).toBeCloseTo(41.2878, 3);
    expect(free.speed / 6).toBeCloseTo(0.47252, 5);
    expect(free.beta).toBeCloseTo(28.329965, 3);
    expect(free.vmg / 6).toBeCloseTo(0.35505406, 7);
  });

  it('does not care how strong the wind is', () => {
    const q = balance(toy(1.6), 6, 45).speed / 6;
    for (const tws of [0.5, 3, 12, 30]) expect(balance(toy(1.6), tws, 45).speed / tws).toBeCloseTo(q, 9);
  });
});
