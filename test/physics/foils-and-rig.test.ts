import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { BUILT_IN_BOATS } from '../../src/physics/built-in.js';
import { dragAngle, driveAndSide, leastDragAngle } from '../../src/physics/drag-angles.js';
import {
  bestFoilLeeway,
  helmboldSlope,
  inducedDrag,
  leewayFromHeel,
  leewayOf,
  liftingLineSlope,
  mirroredAspectRatio,
  whickerFehlnerSlope,
} from '../../src/physics/foils.js';
import {
  attachedDrag,
  rigAspectRatio,
  rigCurve,
  rigParasite,
  spanEfficiency,
  stallIncidence,
} from '../../src/physics/rig.js';

const DEG = 180 / Math.PI;
const KNOT = 1852 / 3600;

describe('foil lift slopes', () => {
  it('agree with the formulas worked out apart, per radian', () => {
    // AR, Helmbold 1942, Whicker & Fehlner 1958 (formula from memory), lifting line. Helmbold at 10: 0.0899 per degree is
    // printed in handbooks (second hand).
    for (const [ar, helmbold, whicker, line] of [
      [1, 1.483259, 1.401083, 2.094395],
      [2, 2.602581, 2.443537, 3.141593],
      [3, 3.362659, 3.138366, 3.769911],
      [4, 3.883222, 3.606342, 4.18879],
      [5, 4.253924, 3.935099, 4.48799],
      [6, 4.528664, 4.17613, 4.712389],
      [8, 4.905763, 4.503084, 5.026548],
      [10, 5.15098, 4.713159, 5.235988],
    ] as const) {
      expect(helmboldSlope(ar)).toBeCloseTo(helmbold, 5);
      expect(whickerFehlnerSlope(ar)).toBeCloseTo(whicker, 5);
      expect(liftingLineSlope(ar)).toBeCloseTo(line, 5);
    }
    [3.138366, 3.125639, 3.081873, 2.99042].forEach((slope, i) => {
      expect(whickerFehlnerSlope(3, 10 * i)).toBeCloseTo(slope, 5);
    });
  });

  it('have the right limits: pi AR/2 for slender wings (R. T. Jones 1946), 2 pi for long ones', () => {
    expect(helmboldSlope(1e-4) / ((Math.PI * 1e-4) / 2)).toBeCloseTo(1, 4);
    expect(helmboldSlope(1e6)).toBeCloseTo(2 * Math.PI, 4);
    expect(helmboldSlope(4, 30)).toBeLessThan(helmboldSlope(4));
  });

  it('give the leeway and induced drag of a board', () => {
    // A 0.30 m2, AR_e 5.4, slope 4.37318 per rad, sea water of 15 deg C; worked out apart.
    expect(helmboldSlope(5.4)).toBeCloseTo(4.37318, 4);
    for (const [knots, side, leeway] of [
      [4, 250, 5.025989],
      [4.5, 300, 4.765382],
      [5, 350, 4.503286],
      [3, 120, 4.288844],
    ] as const) {
      const pressure = 0.5 * 1026.021 * (knots * KNOT) ** 2;
      expect(leewayOf(side, pressure, 0.3 * 4.37318)).toBeCloseTo(leeway, 4);
      if (knots === 4) expect(inducedDrag(side, pressure, Math.sqrt(5.4 * 0.3))).toBeCloseTo(5.6532, 3);
    }
    expect(mirroredAspectRatio(0.9, 0.3)).toBeCloseTo(5.4, 10);
  });

  it('give the leeway of best lift over drag', () => {
    for (const [cd0, ar, e, cl, ld, angle, leeway] of [
      [0.008, 4, 0.9, 0.300795, 18.799712, 3.044825, 4.438146],
      [0.01, 3, 0.9, 0.291244, 14.562194, 3.928389, 4.962456],
      [0.012, 4, 0.85, 0.358018, 14.917422, 3.835125, 5.28245],
    ] as const) {
      const best = bestFoilLeeway(cd0, ar, e);
      expect(best.cl).toBeCloseTo(cl, 5);
      expect(best.liftToDrag).toBeCloseTo(ld, 4);
      expect(best.angle).toBeCloseTo(angle, 4);
      expect(best.leeway).toBeCloseTo(leeway, 4);
    }
  });

  it('keelboat rules of thumb', () => {
    // k heel/V^2 with k in use between 8 and 16, and Garrett 1987 section 3.5.3: 464 sin(heel)/V^2 (second hand).
    for (const [k, heel, knots, leeway] of [
      [8, 10, 4, 5.0],
      [9, 10, 4, 5.625],
      [10, 10, 4, 6.25],
      [12, 15, 5, 7.2],
      [16, 10, 4, 10.0],
      [10, 20, 6, 5.555556],
    ] as const) {
      expect(leewayFromHeel(heel, knots, k)).toBeCloseTo(leeway, 5);
    }
    const garrett = (heel: number): number => (464 * Math.sin(heel / DEG)) / heel;
    expect(leewayFromHeel(10, 4, garrett(10))).toBeCloseTo(5.035797, 5);
    expect(leewayFromHeel(20, 6, garrett(20))).toBeCloseTo(4.40826, 5);
    // 58.5 heel/V^3 (a yachting magazine's article, second hand).
    expect(leewayFromHeel(10, 4, 58.5, 3)).toBeCloseTo(9.140625, 6);
    expect(leewayFromHeel(20, 6, 58.5, 3)).toBeCloseTo(5.416667, 5);
  });
});

describe('drag angles', () => {
  it('agree with values worked out apart', () => {
    // CL, AR, k, CD0 -> CD, drag angle.
    for (const [cl, ar, k, cd0, cd, angle] of [
      [1.2, 4, 0.01, 0.05, 0.178992, 8.48367],
      [1.5, 4.5, 0.016, 0.06, 0.255155, 9.653797],
      [0.8, 4, 0.016, 0.06, 0.12117, 8.61267],
    ] as const) {
      expect(attachedDrag(cl, cd0, k, ar)).toBeCloseTo(cd, 5);
      expect(dragAngle(cd, cl)).toBeCloseTo(angle, 4);
    }
    // Hazen 1980 (from memory): CL^2 (1/(pi AR) + 0.005).
    for (const [cl, ar, plain, separated] of [
      [0.5, 6, 0.013263, 0.014513],
      [1.0, 5, 0.063662, 0.068662],
      [1.2, 4, 0.114592, 0.121792],
      [1.5, 5, 0.143239, 0.154489],
    ] as const) {
      expect(attachedDrag(cl, 0, 0, ar)).toBeCloseTo(plain, 5);
      expect(attachedDrag(cl, 0, 0.005, ar)).toBeCloseTo(separated, 5);
    }
    // Best tunnel point of a small two-sail rig, 1.3 over 0.25 (Woodhead & Gilbert, second hand).
    expect(dragAngle(0.25, 1.3)).toBeCloseTo(10.886, 3);
  });

  it('least drag angle is least', () => {
    const polar = { cd0: 0.1, factor: 0.08 };
    const best = leastDragAngle(polar);
    const angleAt = (cl: number): number => dragAngle(polar.cd0 + polar.factor * cl * cl, cl);
    expect(angleAt(best.cl)).toBeCloseTo(best.angle, 10);
    expect(angleAt(best.cl * 1.05)).toBeGreaterThan(best.angle);
    expect(angleAt(best.cl * 0.95)).toBeGreaterThan(best.angle);
    expect(1 / best.liftToDrag).toBeCloseTo(Math.tan(best.angle / DEG), 12);
  });

  it('an upright triangular sail has span efficiency 2/3 with a second harmonic of half the first (Glauert 1926)', () => {
    expect(spanEfficiency(0.5)).toBeCloseTo(0.666667, 6);
  });
});

describe.each(BUILT_IN_BOATS.map((boat) => [boat.name, boat.rig] as const))('rig of the %s', (_, rig) => {
  const curve = rigCurve(rig);
  const stall = stallIncidence(rig);

  it('has exactly the stated greatest lift, at the stall', () => {
    expect(curve(stall).lift).toBeCloseTo(rig.clMax, 10);
    for (let α = -10; α <= 90; α += 0.5) expect(curve(α).lift).toBeLessThanOrEqual(rig.clMax + 1e-12);
    // Sails reach their greatest lift between 15 and 30 degrees (common practice, no source).
    expect(stall).toBeGreaterThan(15);
    expect(stall).toBeLessThan(30);
  });

  it('has parabolic drag at small lift, and the lifting line slope between luff and stall', () => {
    const { lift, drag } = curve(2);
    const whole = attachedDrag(lift, rigParasite(rig), rig.viscous, rigAspectRatio(rig));
    expect(drag / whole).toBeCloseTo(1, 2);
    expect(curve(0)).toEqual({ lift: 0, drag: rigParasite(rig) });
    expect(curve(90).lift).toBeCloseTo(0, 10);
  });

  it('has a continuous slope and a convex polar', () => {
    const heading = (α: number): number => {
      const [a, b] = [curve(α - 0.01), curve(α + 0.01)];
      return DEG * Math.atan2(b.lift - a.lift, b.drag - a.drag);
    };
    let last = heading(0.5);
    for (let α = 0.6; α < 89; α += 0.1) {
      const next = heading(α);
      expect(next, `turns one way at ${α}`).toBeLessThan(last + 1e-6);
      expect(last - next, `no kink at ${α}`).toBeLessThan(8);
      last = next;
    }
    const slope = (α: number, h: number): number => (curve(α + h).drag - curve(α).drag) / h;
    expect(slope(stall, 1e-4) / slope(stall, -1e-4)).toBeCloseTo(1, 3);
  });

  it('drives: one best incidence at any apparent wind', () => {
    fc.assert(
      fc.property(fc.double({ min: 15, max: 179, noNaN: true }), (beta) => {
        let turns = 0;
        let rising = true;
        for (let α = 1; α <= 90; α += 0.5) {
          const [a, b] = [curve(α), curve(α + 0.5)];
          const gain = driveAndSide(b.lift, b.drag, beta).drive - driveAndSide(a.lift, a.drag, beta).drive;
          if (gain > 0 !== rising) turns++;
          rising = gain > 0;
        }
        expect(turns).toBeLessThanOrEqual(1);
      }),
      { seed: 3, numRuns: 60 },
    );
  });
});
