import { describe, expect, it } from 'vitest';
import { leewayOfSailing, type LeewayInput } from '../../src/estimate/leeway.js';
import { sheetingPosterior, trimLoss } from '../../src/estimate/sheeting.js';
import { fitTuning, type TuneBlock } from '../../src/estimate/tune-fit.js';
import { UNTUNED, type Tuning } from '../../src/physics/boat-spec.js';
import { BUILT_IN_BOATS } from '../../src/physics/built-in.js';
import { makeModel, sail, sailWithSheeting } from '../../src/physics/model.js';
import { bestUpwind } from '../../src/physics/optimum.js';

const KNOT = 1852 / 3600;
const dinghy = BUILT_IN_BOATS[0];
const model = makeModel(dinghy);
/** What the model's leeway is taken to be good to, as a share. */
const SHARE = 0.12;
const GOOD = { leeway: SHARE, speed: 0.02 };

/** Standard normal numbers (Park & Miller 1988; Box & Muller 1958). */
function normals(seed: number): () => number {
  let state = seed;
  const uniform = (): number => (state = (state * 48271) % 2147483647) / 2147483647;
  return () => Math.sqrt(-2 * Math.log(uniform())) * Math.cos(2 * Math.PI * uniform());
}

describe('leeway', () => {
  const truth = sailWithSheeting(model, 7 * KNOT, 46, 12);
  const input: LeewayInput = {
    speed: truth.speed,
    tws: truth.tws,
    gamma: truth.gamma,
    drift: truth.leeway,
    mastheadAngle: truth.beta - truth.leeway,
  };
  const errors: LeewayInput = { speed: 0.02, tws: 0.1, gamma: 0.5, drift: 0.3, mastheadAngle: 1 };

  it('comes out alike by heading, masthead and forces', () => {
    const found = leewayOfSailing(model, input, errors, GOOD)!;
    expect(found.ways.map((one) => one.way)).toEqual(['heading', 'masthead', 'forces']);
    for (const { value } of found.ways) expect(value).toBeCloseTo(truth.leeway, 5);
    expect(found.value).toBeCloseTo(truth.leeway, 5);
    expect(found.basis).toBe('measured');
    expect(found.beatsModel).toBe(false);
  });

  it('carries its errors: by heading only that of heading and course, whatever the wind', () => {
    const found = leewayOfSailing(null, { ...input, mastheadAngle: NaN }, errors, GOOD)!;
    expect(found.ways).toHaveLength(1);
    expect(found.se).toBeCloseTo(errors.drift, 9);
    const masthead = leewayOfSailing(null, { ...input, drift: NaN }, errors, GOOD)!;
    expect(masthead.basis).toBe('derived');
    expect(masthead.se).toBeGreaterThan(1);
    expect(leewayOfSailing(null, { ...input, drift: NaN, mastheadAngle: NaN }, errors, GOOD)).toBeNull();
  });

  it('states the scatter it really has', () => {
    const next = normals(3);
    let [squares, stated] = [0, 0];
    for (let trial = 0; trial < 300; trial++) {
      const noisy = Object.fromEntries(
        Object.entries(input).map(([key, value]) => [key, value + errors[key as keyof LeewayInput] * next()]),
      ) as unknown as LeewayInput;
      const found = leewayOfSailing(null, noisy, errors, GOOD)!;
      squares += (found.value - truth.leeway) ** 2;
      stated += found.se ** 2;
    }
    expect(Math.sqrt(squares / stated)).toBeGreaterThan(0.88);
    expect(Math.sqrt(squares / stated)).toBeLessThan(1.12);
  });

  it('does without forces for a boat that beats its model, and says so', () => {
    const fast = { ...input, speed: bestSpeed() * 1.03, drift: NaN };
    const found = leewayOfSailing(model, fast, errors, GOOD)!;
    expect(found.beatsModel).toBe(true);
    expect(found.ways.map((one) => one.way)).toEqual(['masthead']);
  });

  it('takes a boat that beats its model by less than the model is good to as driven in full', () => {
    const only = { ...input, drift: NaN, mastheadAngle: NaN, speed: bestSpeed() * 1.01 };
    const found = leewayOfSailing(model, only, errors, GOOD)!;
    const full = sail(model, truth.tws, truth.gamma);
    expect(found.beatsModel).toBe(true);
    // Side force hardly changes; leeway goes with one over speed squared.
    expect(found.value).toBeCloseTo(full.leeway / 1.01 ** 2, 1);
    expect(found.se).toBeGreaterThan(SHARE * found.value);
  });

  const bestSpeed = (): number => sail(model, truth.tws, truth.gamma).speed;

  it('by forces alone is moved by a few tenths of a degree by 2 % of speed, 1 degree of course or 5 % of wind', () => {
    const only = { ...input, drift: NaN, mastheadAngle: NaN };
    const at = (change: Partial<LeewayInput>): number =>
      leewayOfSailing(model, { ...only, ...change }, errors, GOOD)!.value;
    const here = at({});
    expect(Math.abs(at({ speed: only.speed * 0.98 }) - here)).toBeLessThan(0.4);
    expect(Math.abs(at({ gamma: only.gamma + 1 }) - here)).toBeLessThan(0.4);
    expect(Math.abs(at({ tws: only.tws * 1.05 }) - here)).toBeLessThan(0.4);
  });
});

describe('sheeting', () => {
  it('stays its prior without data, and is then not to be shown', () => {
    const best = bestUpwind(model, 8 * KNOT);
    const found = sheetingPosterior(model, {
      speed: best.speed,
      tws: best.tws,
      gamma: best.gamma,
      leewayLevel: { share: 1, se: SHARE },
    })!;
    expect(found.mean).toBeCloseTo(found.priorMean, 9);
    expect(found.narrowed).toBe(false);
    // Prior about the model's trim, cut off at the centreline.
    expect(Math.abs(found.priorMean - best.sheeting)).toBeLessThan(2);
  });

  it('finds a boom that was eased, from a well measured leeway', () => {
    const truth = sailWithSheeting(model, 8 * KNOT, 45, 16);
    const { speed, tws, gamma } = truth;
    const data = { speed, tws, gamma, leeway: { value: truth.leeway, se: 0.05 }, leewayLevel: { share: 1, se: SHARE } };
    expect(sheetingPosterior(model, data)!.narrowed).toBe(false);
    const found = sheetingPosterior(model, { ...data, leewayLevel: { share: 1, se: 0.02 } })!;
    expect(found.mean).toBeGreaterThan(found.priorMean + 1);
    expect(Math.abs(found.mean - 16)).toBeLessThan(2.5 * found.sd);
    expect(found.sd).toBeLessThan(found.priorSd);
    const withSpeed = sheetingPosterior(model, {
      ...data,
      leewayLevel: { share: 1, se: 0.02 },
      able: { share: 1, se: 0.01 },
    })!;
    expect(withSpeed.sd).toBeLessThan(found.sd);
    expect(withSpeed.points.reduce((sum, point) => sum + point.weight, 0)).toBeCloseTo(1, 9);
  });

  it('costs nothing when trimmed, and what the model says when not', () => {
    const [tws, gamma] = [8 * KNOT, 45];
    const best = sail(model, tws, gamma);
    const sure = (sheeting: number): Parameters<typeof trimLoss>[3] => ({
      mean: sheeting,
      sd: 0,
      priorMean: 0,
      priorSd: 5,
      narrowed: true,
      points: [{ sheeting, weight: 1 }],
    });
    expect(trimLoss(model, tws, gamma, sure(best.sheeting)).loss).toBeCloseTo(0, 7);
    const eased = trimLoss(model, tws, gamma, sure(best.sheeting + 8));
    expect(eased.loss).toBeCloseTo(best.speed - sailWithSheeting(model, tws, gamma, best.sheeting + 8).speed, 9);
    expect(eased.loss).toBeGreaterThan(0.02);
  });
});

describe('tuning', () => {
  /** Blocks of a boat whose factors are planted, with 2 % of noise, in winds from `from` to `to` knots. */
  function sailed(planted: Partial<Tuning>, from: number, to: number, seed: number, leeway: boolean): TuneBlock[] {
    const next = normals(seed);
    const boat = makeModel({ ...dinghy, tuning: { ...UNTUNED, ...planted } });
    return Array.from({ length: 90 }, (_, i) => {
      const tws = (from + ((to - from) * i) / 89) * KNOT;
      const gamma = 45 + 3 * next();
      const state = sail(boat, tws, gamma);
      return {
        speed: state.speed * (1 + 0.015 * next()),
        tws,
        gamma,
        leeway: leeway ? state.leeway + 0.4 * next() : NaN,
        heel: NaN,
        spell: Math.floor(i / 5),
      };
    });
  }

  it('finds planted factors', () => {
    const fit = fitTuning(dinghy, sailed({ hullResistance: 1.12, rightingMoment: 0.9 }, 5, 17, 1, true))!;
    const factor = Object.fromEntries(fit.factors.map((one) => [one.name, one]));
    for (const [name, truth] of [
      ['hullResistance', 1.12],
      ['rightingMoment', 0.9],
      ['foilSlope', 1],
    ] as const) {
      expect(Math.abs(factor[name].value - truth), name).toBeLessThan(3 * factor[name].se + 0.01);
      expect(factor[name].moved, name).toBe(true);
    }
    expect(fit.after.rms).toBeLessThan(0.5 * fit.before.rms);
    expect(Math.abs(fit.after.mean)).toBeLessThan(0.01);
    // What is left is the noise that was put in, 1.5 % of some 2.3 m/s.
    expect(fit.after.rms).toBeLessThan(0.05);
  });

  it('does not move what the log cannot tell: righting moment in light air, foils without leeway', () => {
    const fit = fitTuning(dinghy, sailed({ hullResistance: 1.1 }, 4, 7, 2, false))!;
    const factor = Object.fromEntries(fit.factors.map((one) => [one.name, one]));
    expect(factor.rightingMoment).toMatchObject({ moved: false, value: 1 });
    expect(factor.foilSlope).toMatchObject({ moved: false, value: 1 });
    expect(fit.factors.some((one) => one.moved)).toBe(true);
    for (const one of fit.factors) expect(one.reason === '').toBe(one.moved);
    expect(Math.abs(fit.after.mean)).toBeLessThan(Math.abs(fit.before.mean));
  });

  it('refuses too little sailing', () => {
    const blocks = sailed({}, 6, 12, 3, true);
    expect(fitTuning(dinghy, blocks.slice(0, 8))).toBeNull();
    expect(
      fitTuning(
        dinghy,
        blocks.map((block) => ({ ...block, spell: 1 })),
      ),
    ).toBeNull();
  });
});
