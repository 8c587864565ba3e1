import { describe, expect, it } from 'vitest';
import { anchorAt, anchoredReference } from '../../src/estimate/reference.js';
import { evenedLevel, tiltOf, type WindPoint } from '../../src/estimate/wind-response.js';
import { builtInBoat } from '../../src/physics/built-in.js';
import type { SpeedCurve } from '../../src/physics/speed-curve.js';
import { modelOf } from '../../src/steps/boat-models.js';

/** A curve that is all in the wind: V*(W) as given. */
function curveOf(bestVmg: (tws: number) => number): SpeedCurve {
  return { bestVmg, bestGamma: () => 45, speed: (_, tws) => bestVmg(tws) / Math.SQRT1_2 };
}

/** Change of ln V* for a unit of ln W. */
function power(bestVmg: (tws: number) => number, tws: number): number {
  return Math.log(bestVmg(tws * 1.02) / bestVmg(tws * 0.98)) / Math.log(1.02 / 0.98);
}

/** Boats on tacks whose levels differ, their speeds growing with the wind by a power; scatter of a fixed pattern. */
function sailed(t: number, scatter: number): WindPoint[][] {
  return [0.02, -0.03, 0, 0.05].map((level, group) =>
    Array.from({ length: 20 }, (_, k) => {
      const wind = 0.1 * Math.sin(1.7 * k + group);
      return { wind, excess: level + t * wind + scatter * Math.SQRT2 * Math.sin(97 * k * k + 31 * group) };
    }),
  );
}

describe('the power of the wind', () => {
  it.each([-0.4, 0, 0.25])('is had from the fleet: %d', (t) => {
    const { power: found, se } = tiltOf(sailed(t, 0.03));
    expect(se).toBeGreaterThan(0.02);
    expect(se).toBeLessThan(0.15);
    expect(Math.abs(found - t)).toBeLessThan(2 * se);
  });

  it('is sure where nothing scatters, and does not see whose level is whose', () => {
    const { power: found, se } = tiltOf(sailed(0.3, 0));
    expect(found).toBeCloseTo(0.3, 12);
    expect(se).toBeCloseTo(0, 6);
  });

  it('is left to the model where one wind blew or too little was sailed, with the error of a model', () => {
    const calm = [Array.from({ length: 9 }, () => ({ wind: 0.1, excess: 0.01 }))];
    expect(tiltOf(calm)).toEqual({ power: 0, se: 0.5 });
    expect(tiltOf([[{ wind: 0, excess: 0 }], [{ wind: 0.1, excess: 0.2 }]])).toEqual({ power: 0, se: 0.5 });
  });

  it('is drawn towards the model by scatter', () => {
    const [sure, unsure] = [tiltOf(sailed(0.4, 0.02)), tiltOf(sailed(0.4, 0.6))];
    expect(unsure.se).toBeGreaterThan(3 * sure.se);
    expect(unsure.se).toBeLessThanOrEqual(0.5);
  });

  it('passes over blocks without wind', () => {
    const rows = sailed(0.3, 0.02);
    const holed = rows.map((group) => [...group, { wind: NaN, excess: 1 }, { wind: 0, excess: NaN }]);
    expect(tiltOf(holed)).toEqual(tiltOf(rows));
  });
});

describe('a curve evened over the wind', () => {
  it('stays what it is where it is a power of the wind', () => {
    const level = evenedLevel(curveOf((tws) => 0.6 * tws ** 0.7));
    for (const tws of [2, 5.013, 11]) expect(level(tws)).toBeCloseTo(1, 9);
    expect(level(NaN)).toBeNaN();
  });

  it('has no corner where a boat is overpowered: its power falls by less than 0.3 for 5 % of wind', () => {
    const corner = (tws: number): number => Math.min(tws, 6);
    const level = evenedLevel(curveOf(corner));
    const evened = (tws: number): number => level(tws) * corner(tws);
    expect(power(corner, 5.7) - power(corner, 6.3)).toBeCloseTo(1, 6);
    let steepest = 0;
    for (let tws = 4; tws < 8; tws *= 1.01) {
      steepest = Math.max(steepest, power(evened, tws) - power(evened, 1.05 * tws));
    }
    expect(steepest).toBeLessThan(0.3);
    expect(steepest).toBeGreaterThan(0.1);
  });
});

it('an anchored reference has its best where the best boat settled, whatever the tilt', () => {
  const { curve } = modelOf(builtInBoat('single-hander')!);
  const anchor = anchorAt(curve, 46, 2.4, 5, 0.01);
  for (const tilt of [0, 0.3]) {
    const reference = anchoredReference(curve, { ...anchor, tilt: { power: tilt, se: 0.05 } });
    expect(reference.speed(46, 5)).toBeCloseTo(2.4, 9);
    expect(reference.bestGamma(5)).toBeCloseTo(46, 1);
    expect(reference.levelSe(5)).toBeCloseTo(0.01, 12);
    expect(reference.levelSe(6)).toBeCloseTo(Math.hypot(0.01, 0.05 * Math.log(1.2)), 12);
  }
  const tilted = anchoredReference(curve, { ...anchor, tilt: { power: 0.3, se: 0 } });
  expect(tilted.bestVmg(6) / anchoredReference(curve, anchor).bestVmg(6)).toBeCloseTo(1.2 ** 0.3, 3);
});
