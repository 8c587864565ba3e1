import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { achieved } from '../../src/physics/achieved.js';
import { canonicalBoat, isUntuned, UNTUNED, type BoatSpec } from '../../src/physics/boat-spec.js';
import { BUILT_IN_BOATS, builtInBoat, DEFAULT_BOAT } from '../../src/physics/built-in.js';
import { boatFacts } from '../../src/physics/facts.js';
import type { SailingState } from '../../src/physics/balance.js';
import { makeModel, sail, sailWithSheeting, type BoatModel } from '../../src/physics/model.js';
import { bestDownwind, bestUpwind, optimumTable, polar } from '../../src/physics/optimum.js';
import { speedCurve } from '../../src/physics/speed-curve.js';
import { ceilingVmg } from '../../src/physics/triangle.js';

const KNOT = 1852 / 3600;
const RAD = Math.PI / 180;
const models = BUILT_IN_BOATS.map((boat): [string, BoatModel] => [boat.name, makeModel(boat)]);
const dinghy = models[0][1];

/** Every identity a balanced state must keep, and the physics it must not break. */
function checkBalance(model: BoatModel, state: SailingState): void {
  const { beta, gamma, tws, speed } = state;
  expect(state.aeroDragAngle + state.hydroDragAngle).toBeCloseTo(beta, 6);
  expect(state.incidence + state.sheeting + state.leeway).toBeCloseTo(beta, 9);
  expect(Math.abs(state.drive / state.resistance - 1)).toBeLessThan(1e-6);
  // The triangle closes.
  expect(state.aws * Math.cos(beta * RAD)).toBeCloseTo(speed + tws * Math.cos(gamma * RAD), 9);
  expect(state.aws * Math.sin(beta * RAD)).toBeCloseTo(tws * Math.sin(gamma * RAD), 9);
  // Side force = foil lift, solved back through the leeway; moment = what hull and crew hold at that heel.
  const perDegree = model.leeway(speed, 1, state.heel);
  expect(state.leeway / perDegree / state.side).toBeCloseTo(1, 6);
  const held = state.side * model.arm * Math.cos(state.heel * RAD);
  expect(state.moment / held).toBeCloseTo(1, 9);
  const lever = (state.moment - model.stability!.hull(state.heel)) / model.stability!.crew(1, state.heel);
  expect(lever).toBeLessThanOrEqual(model.boat.crew.lever * (1 + 1e-6));
  expect(state.momentUsed).toBeLessThanOrEqual(1 + 1e-6);
  expect(state.vmg).toBeLessThan(ceilingVmg(tws, beta));
}

/** A boat with every number moved at random within 15 %. */
const anyBoat = fc
  .tuple(
    fc.constantFrom(...BUILT_IN_BOATS),
    fc.array(fc.double({ min: 0.85, max: 1.15, noNaN: true }), { minLength: 40, maxLength: 40 }),
  )
  .map(([boat, factors]): BoatSpec => {
    let i = 0;
    const moved = (value: unknown, key: string): unknown => {
      if (typeof value === 'number')
        return key === 'sheetingMin' || key === 'heelPower' ? value : value * factors[i++ % 40];
      if (value === null || typeof value !== 'object') return value;
      return Object.fromEntries(Object.entries(value).map(([k, inner]) => [k, moved(inner, k)]));
    };
    return moved(boat, '') as BoatSpec;
  });

describe('balance', () => {
  it('keeps its identities for any boat, wind and course', () => {
    const tws = fc.double({ min: 1.5, max: 12, noNaN: true });
    const gamma = fc.double({ min: 46, max: 130, noNaN: true });
    fc.assert(
      fc.property(anyBoat, tws, gamma, (boat, w, g) => {
        const model = makeModel(boat);
        checkBalance(model, sail(model, w, g));
      }),
      { seed: 7, numRuns: 300 },
    );
  });

  it.each(models)('keeps them on the best courses of the %s', (_, model) => {
    for (let kn = 3; kn <= 24; kn += 1.5) {
      checkBalance(model, bestUpwind(model, kn * KNOT));
      const down = bestDownwind(model, kn * KNOT);
      expect(Math.abs(down.drive / down.resistance - 1)).toBeLessThan(1e-6);
      expect(down.vmg).toBeLessThan(0);
    }
  });

  it('finds the best sheeting: any other is slower', () => {
    for (const [, model] of models) {
      for (const [kn, gamma] of [
        [6, 44],
        [10, 42],
        [10, 60],
        [15, 42],
        [8, 100],
      ] as const) {
        const best = sail(model, kn * KNOT, gamma);
        const same = sailWithSheeting(model, kn * KNOT, gamma, best.sheeting);
        expect(same.speed / best.speed).toBeCloseTo(1, 7);
        for (const off of [-4, -1, 1, 4]) {
          if (best.sheeting + off < 0) continue;
          const other = sailWithSheeting(model, kn * KNOT, gamma, best.sheeting + off);
          checkBalance(model, other);
          expect(other.speed, `${kn} kn, ${off}`).toBeLessThanOrEqual(best.speed * (1 + 1e-9));
        }
      }
    }
  });

  it('finds the best course: any other makes less good', () => {
    for (const [, model] of models) {
      for (const kn of [4, 8, 12, 18]) {
        const best = bestUpwind(model, kn * KNOT);
        for (let g = best.gamma - 8; g <= best.gamma + 20; g += 0.7) {
          expect(sail(model, kn * KNOT, g).vmg).toBeLessThanOrEqual(best.vmg * (1 + 1e-10));
        }
      }
    }
  });

  it('takes well under 100 ms of processor time for the best courses in 20 winds', () => {
    const spent = models.map(([, model]) => {
      const before = process.cpuUsage();
      for (let kn = 4; kn < 24; kn++) bestUpwind(model, kn * KNOT);
      const { user, system } = process.cpuUsage(before);
      return (user + system) / 1000;
    });
    expect(Math.min(...spent)).toBeLessThan(100);
  });

  it('does not sail into the wind, and says so with NaN', () => {
    expect(sail(dinghy, 5, 10).speed).toBeNaN();
    expect(sail(dinghy, 5, 10).leeway).toBeNaN();
  });

  it('is smooth in the wind: third differences of the best VMG are far below any grid', () => {
    for (const [, model] of models) {
      const at = (kn: number): number => bestUpwind(model, kn * KNOT).vmg;
      for (const kn of [5, 7, 9, 13, 17]) {
        const h = 0.01;
        const third = at(kn + 2 * h) - 3 * at(kn + h) + 3 * at(kn) - at(kn - h);
        expect(Math.abs(third)).toBeLessThan(1e-6);
      }
    }
  });

  it('changes speed smoothly with the course: at a best course by tan gamma per radian, never off a cliff', () => {
    for (const [, model] of models) {
      for (const kn of [5, 8, 10, 14, 18]) {
        const best = bestUpwind(model, kn * KNOT);
        const at = (off: number): number => sail(model, kn * KNOT, best.gamma + off).speed;
        // d ln V/d gamma = tan gamma is what makes a course the best: 1.4 to 2 % a degree.
        const slope = Math.log(at(0.05) / at(-0.05)) / (0.1 * RAD);
        expect(slope).toBeCloseTo(Math.tan(best.gamma * RAD), 1);
        for (let off = 0; off < 30; off++) expect(at(off + 1) / at(off), `${kn} kn, +${off}`).toBeLessThan(1.02);
        for (let off = -7; off < 0; off++) expect(at(off) / at(off + 1), `${kn} kn, ${off}`).toBeGreaterThan(0.95);
      }
    }
  });
});

/** Facts of the trade for such boats: common practice, no source, unless said. */
describe('single-hander', () => {
  const at10 = bestUpwind(dinghy, 10 * KNOT);

  it('in 10 kn sails 4.2 to 5.2 kn at 40 to 48 degrees with 2 to 5 degrees of leeway', () => {
    expect(at10.speed / KNOT).toBeGreaterThan(4.2);
    expect(at10.speed / KNOT).toBeLessThan(5.2);
    expect(at10.gamma).toBeGreaterThan(40);
    expect(at10.gamma).toBeLessThan(48);
    for (const kn of [5, 8, 10, 14]) {
      const { leeway } = bestUpwind(dinghy, kn * KNOT);
      expect(leeway).toBeGreaterThan(2);
      expect(leeway).toBeLessThan(5);
    }
  });

  it('resists 50 to 90 N near 4.8 kn', () => {
    let kn = 8;
    while (bestUpwind(dinghy, kn * KNOT).speed < 4.8 * KNOT) kn += 0.1;
    const { resistance } = bestUpwind(dinghy, kn * KNOT);
    expect(resistance).toBeGreaterThan(50);
    expect(resistance).toBeLessThan(90);
  });

  it('near full power has a rig lift of 1.2 to 1.4 and lift over drag of 4 to 5', () => {
    expect(at10.momentUsed).toBeGreaterThan(0.8);
    expect(at10.liftCoefficient).toBeGreaterThan(1.2);
    expect(at10.liftCoefficient).toBeLessThan(1.4);
    expect(at10.liftCoefficient / at10.dragCoefficient).toBeGreaterThan(4);
    expect(at10.liftCoefficient / at10.dragCoefficient).toBeLessThan(5);
  });

  it('sheets near the centreline until overpowered, then opens', () => {
    const sheeting = [4, 6, 8, 10, 14, 18, 22].map((kn) => bestUpwind(dinghy, kn * KNOT).sheeting);
    for (const angle of sheeting.slice(0, 4)) {
      expect(angle).toBeGreaterThanOrEqual(0);
      expect(angle).toBeLessThan(10);
    }
    expect(sheeting[4]).toBeGreaterThan(sheeting[3] + 5);
    expect(sheeting[5]).toBeGreaterThan(sheeting[4]);
    expect(sheeting[6]).toBeGreaterThan(sheeting[5]);
  });

  it('goes downwind best between 140 and 175 degrees', () => {
    for (const kn of [5, 8, 10, 12, 16, 20]) {
      const { gamma } = bestDownwind(dinghy, kn * KNOT);
      expect(gamma).toBeGreaterThan(140);
      expect(gamma).toBeLessThan(175);
    }
  });

  it('is faster in a breeze with a heavier crew, slower in light air', () => {
    const boat = builtInBoat(DEFAULT_BOAT)!;
    const heavy = makeModel(boat, { crewMassKg: boat.crew.mass + 10 });
    expect(bestUpwind(heavy, 16 * KNOT).vmg).toBeGreaterThan(bestUpwind(dinghy, 16 * KNOT).vmg);
    expect(bestUpwind(heavy, 5 * KNOT).vmg).toBeLessThan(bestUpwind(dinghy, 5 * KNOT).vmg);
  });
});

describe('built-in boats', () => {
  it('are three, each its own', () => {
    const facts = BUILT_IN_BOATS.map(boatFacts);
    expect(facts.map((one) => one.name)).toEqual(['single-hander', 'two-person', 'day-keelboat']);
    expect(facts.map((one) => one.jibArea > 0)).toEqual([false, true, true]);
    for (const one of facts) {
      const [light, middle, fresh] = one.upwind;
      expect(middle.speedKn).toBeGreaterThan(light.speedKn);
      expect(fresh.speedKn).toBeGreaterThan(middle.speedKn);
      for (const row of one.upwind) {
        expect(row.gamma).toBeGreaterThan(37);
        expect(row.gamma).toBeLessThan(50);
        expect(row.vmgKn).toBeCloseTo(row.speedKn * Math.cos(row.gamma * RAD), 9);
      }
    }
    // The keelboat holds several times the dinghy's moment, and heels.
    expect(facts[2].rightingLimit).toBeGreaterThan(3 * facts[0].rightingLimit);
    expect(bestUpwind(models[2][1], 10 * KNOT).heel).toBeGreaterThan(10);
    expect(bestUpwind(dinghy, 10 * KNOT).heel).toBeLessThan(6);
  });

  it('respond to tuning as they must', () => {
    const boat = builtInBoat('two-person')!;
    const tuned = (tuning: Partial<typeof UNTUNED>, kn: number): SailingState =>
      bestUpwind(makeModel({ ...boat, tuning: { ...UNTUNED, ...tuning } }), kn * KNOT);
    const [light, fresh] = [tuned({}, 7), tuned({}, 16)];
    expect(tuned({ hullResistance: 1.1 }, 7).vmg).toBeLessThan(light.vmg);
    expect(tuned({ rigDrag: 1.1 }, 7).vmg).toBeLessThan(light.vmg);
    expect(tuned({ foilSlope: 1.2 }, 7).leeway).toBeLessThan(light.leeway);
    expect(tuned({ rightingMoment: 1.1 }, 16).vmg).toBeGreaterThan(fresh.vmg);
    expect(isUntuned(boat.tuning)).toBe(true);
    expect(isUntuned({ ...UNTUNED, rigDrag: 1.01 })).toBe(false);
  });

  it('have one canonical text however their keys are ordered', () => {
    const boat = BUILT_IN_BOATS[0];
    const turned = Object.fromEntries(Object.entries(boat).reverse()) as unknown as BoatSpec;
    expect(canonicalBoat(turned)).toBe(canonicalBoat(boat));
    expect(canonicalBoat({ ...boat, name: 'other' })).not.toBe(canonicalBoat(boat));
    expect(JSON.parse(canonicalBoat(boat))).toEqual(boat);
  });
});

describe('achieved state', () => {
  it('gives back what the boat sailed with', () => {
    for (const [, model] of models) {
      for (const [kn, gamma, sheeting] of [
        [6, 44, 12],
        [9, 42, 14],
        [10, 50, 20],
      ] as const) {
        const truth = sailWithSheeting(model, kn * KNOT, gamma, sheeting);
        const { eased, margin } = achieved(model, truth);
        expect(margin).toBeGreaterThan(0);
        expect(eased!.leeway).toBeCloseTo(truth.leeway, 5);
        expect(eased!.sheeting).toBeCloseTo(sheeting, 4);
        expect(eased!.aeroDragAngle + eased!.hydroDragAngle).toBeCloseTo(truth.beta, 6);
      }
    }
  });

  it('knows an oversheeted boat too', () => {
    const truth = sailWithSheeting(dinghy, 6 * KNOT, 46, 2);
    const { oversheeted } = achieved(dinghy, truth);
    expect(oversheeted!.sheeting).toBeCloseTo(2, 4);
    expect(oversheeted!.leeway).toBeCloseTo(truth.leeway, 5);
  });

  it('has no root for a boat faster than the model, nor without data', () => {
    const best = sail(dinghy, 8 * KNOT, 43);
    const faster = achieved(dinghy, { ...best, speed: best.speed * 1.02 });
    expect(faster.eased).toBeNull();
    expect(faster.margin).toBeLessThan(0);
    expect(achieved(dinghy, { ...best, speed: NaN }).eased).toBeNull();
  });
});

describe('speed curve', () => {
  it.each(models)('agrees with the model of the %s', (_, model) => {
    const curve = speedCurve(model);
    for (let tws = 2.13; tws < 12; tws += 0.61) {
      const best = bestUpwind(model, tws);
      expect(Math.abs(curve.bestVmg(tws) / best.vmg - 1)).toBeLessThan(0.001);
      expect(Math.abs(curve.bestGamma(tws) - best.gamma)).toBeLessThan(0.3);
      for (let off = -6; off <= 12; off += 1.7) {
        const ratio = curve.speed(best.gamma + off, tws) / sail(model, tws, best.gamma + off).speed;
        expect(Math.abs(ratio - 1), `${tws} m/s, ${off}`).toBeLessThan(0.002);
        const made = curve.speed(best.gamma + off, tws) * Math.cos((best.gamma + off) * RAD);
        expect(made).toBeLessThan(curve.bestVmg(tws) * (1 + 1e-4));
      }
      for (let gamma = 60; gamma <= 180; gamma += 9.3) {
        expect(Math.abs(curve.speed(gamma, tws) / sail(model, tws, gamma).speed - 1)).toBeLessThan(0.01);
      }
    }
  });

  it('does not depend on what was asked before, and is quiet at the ends', () => {
    const [a, b] = [speedCurve(dinghy), speedCurve(dinghy)];
    b.speed(100, 7);
    b.bestVmg(4.4);
    expect(b.speed(43, 5.2)).toBe(a.speed(43, 5.2));
    expect(a.speed(5, 5)).toBe(0);
    expect(a.speed(45, 0)).toBe(0);
    expect(a.speed(NaN, 5)).toBeNaN();
    expect(a.speed(45, NaN)).toBeNaN();
    expect(a.bestVmg(NaN)).toBeNaN();
  });
});

describe('tables', () => {
  it('give the best upwind sailing in knots', () => {
    const table = optimumTable(dinghy, 'single-hander', [6, 10], { polar: true });
    expect(table).toMatchObject({ format: 'legwork-optimum', version: 1, boat: 'single-hander' });
    const best = bestUpwind(dinghy, 10 * KNOT);
    expect(table.rows[1].speed_kn * KNOT).toBeCloseTo(best.speed, 9);
    for (const row of table.rows) {
      expect(row.aero_drag_angle_deg + row.hydro_drag_angle_deg).toBeCloseTo(row.beta_deg, 6);
      expect(row.incidence_deg + row.sheeting_deg + row.leeway_deg).toBeCloseTo(row.beta_deg, 6);
      expect(row.vmg_kn).toBeCloseTo(row.speed_kn * Math.cos(row.gamma_deg * RAD), 9);
    }
    const ten = table.polar!.filter((point) => point.tws_kn === 10);
    expect(ten.at(-1)!.gamma_deg).toBe(180);
    expect(ten[0].gamma_deg).toBeLessThan(best.gamma);
    expect(optimumTable(dinghy, 'x', [6]).polar).toBeUndefined();
  });

  it('give the whole diagram in rising angles with the best courses in it', () => {
    const points = polar(dinghy, [5]);
    const angles = points.map((point) => point.gamma);
    expect([...angles].sort((a, b) => a - b)).toEqual(angles);
    expect(angles).toContain(bestUpwind(dinghy, 5).gamma);
    expect(angles).toContain(bestDownwind(dinghy, 5).gamma);
    for (const { speed } of points) expect(speed).toBeGreaterThan(0);
  });
});
