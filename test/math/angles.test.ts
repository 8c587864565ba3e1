import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  angleBetween,
  circularMean,
  directionOf,
  eastOf,
  northOf,
  turn,
  unwrap,
  wrap180,
  wrap360,
} from '../../src/math/angles.js';

const angle = fc.double({ min: -3600, max: 3600, noNaN: true });
const direction = fc.double({ min: 0, max: 360, noNaN: true, maxExcluded: true });

/** Distance on the circle, worked out without the functions under test. */
function apart(a: number, b: number): number {
  const d = Math.abs(a - b) % 360;
  return Math.min(d, 360 - d);
}

describe('wrap360 and wrap180', () => {
  it.each([
    [0, 0, 0],
    [180, 180, -180],
    [-180, 180, -180],
    [359, 359, -1],
    [360, 0, 0],
    [-1, 359, -1],
    [540, 180, -180],
    [-720, 0, 0],
    [-1e-20, 0, 0],
  ])('%s', (a, in360, in180) => {
    expect(wrap360(a)).toBeCloseTo(in360, 12);
    expect(wrap180(a)).toBeCloseTo(in180, 12);
  });

  it('stay in range, twice is once, whole turns change nothing (property)', () => {
    fc.assert(
      fc.property(angle, fc.integer({ min: -10, max: 10 }), (a, k) => {
        const [w, s] = [wrap360(a), wrap180(a)];
        expect(w >= 0 && w < 360).toBe(true);
        expect(s >= -180 && s < 180).toBe(true);
        expect(wrap360(w)).toBe(w);
        expect(apart(wrap180(s), s)).toBeLessThan(1e-9);
        expect(apart(wrap360(a + 360 * k), w)).toBeLessThan(1e-9);
        expect(apart(wrap180(a + 360 * k), s)).toBeLessThan(1e-9);
      }),
    );
  });

  it('keep a negative angle too small to be seen below 360', () => {
    expect(wrap360(-1e-15)).toBeLessThan(360);
    expect(wrap180(180 - 1e-15)).toBeLessThan(180);
  });

  it('leave NaN', () => {
    for (const f of [wrap360, wrap180]) expect(f(NaN)).toBeNaN();
    expect(turn(NaN, 3)).toBeNaN();
    expect(angleBetween(3, NaN)).toBeNaN();
    expect(directionOf(NaN, 1)).toBeNaN();
  });
});

describe('turn and angleBetween', () => {
  it('go the short way round', () => {
    expect(turn(359, 1)).toBeCloseTo(2, 12);
    expect(turn(1, 359)).toBeCloseTo(-2, 12);
    expect(angleBetween(359, 1)).toBeCloseTo(2, 12);
    expect(angleBetween(0, 180)).toBe(180);
  });

  it('lead from one to the other, and back (property)', () => {
    fc.assert(
      fc.property(direction, direction, (a, b) => {
        expect(apart(wrap360(a + turn(a, b)), b)).toBeLessThan(1e-9);
        expect(angleBetween(a, b)).toBeCloseTo(apart(a, b), 9);
        expect(angleBetween(a, b)).toBeCloseTo(angleBetween(b, a), 9);
      }),
    );
  });
});

describe('directionOf', () => {
  it('is clockwise from north', () => {
    expect([directionOf(0, 1), directionOf(1, 0), directionOf(0, -1), directionOf(-1, 0)]).toEqual([0, 90, 180, 270]);
  });

  it('undoes eastOf and northOf (property)', () => {
    fc.assert(
      fc.property(direction, (a) => {
        expect(apart(directionOf(eastOf(a), northOf(a)), a)).toBeLessThan(1e-9);
      }),
    );
  });
});

describe('circularMean', () => {
  it('of two directions is half-way, weights pull (property)', () => {
    fc.assert(
      fc.property(direction, fc.double({ min: 0, max: 89, noNaN: true }), (a, d) => {
        const { mean, resultant, n } = circularMean([a - d, a + d]);
        expect(apart(mean, a)).toBeLessThan(1e-6);
        // Two unit vectors 2d apart add up to 2 cos d.
        expect(resultant).toBeCloseTo(Math.cos((d * Math.PI) / 180), 9);
        expect(n).toBe(2);
      }),
    );
    expect(circularMean([0, 90], [1, 0]).mean).toBe(0);
    expect(circularMean([10, NaN, 350]).mean).toBe(0);
  });

  it('gives the published roulette wheel: mean 51 degrees, resultant 0.711', () => {
    // Nine stops of a roulette wheel: K. V. Mardia, Statistics of Directional Data, 1972, example 2.1 (from memory; the
    // sum of sines and cosines is checked below by hand-written code).
    const stops = [43, 45, 52, 61, 75, 88, 88, 279, 357];
    const { mean, resultant } = circularMean(stops);
    const sum = (f: (a: number) => number) => stops.reduce((s, a) => s + f((a * Math.PI) / 180), 0) / stops.length;
    expect(mean).toBeCloseTo((Math.atan2(sum(Math.sin), sum(Math.cos)) * 180) / Math.PI, 9);
    expect(Math.round(mean)).toBe(51);
    expect(resultant).toBeCloseTo(0.711, 3);
  });

  it('has no mean where directions cancel or none is there', () => {
    expect(circularMean([0, 180]).mean).toBeNaN();
    expect(circularMean([]).mean).toBeNaN();
    expect(circularMean([NaN]).n).toBe(0);
  });
});

describe('unwrap', () => {
  it('never steps by more than half a turn and keeps every direction (property)', () => {
    fc.assert(
      fc.property(fc.array(direction, { minLength: 1 }), (directions) => {
        const line = unwrap(directions);
        directions.forEach((a, i) => {
          expect(apart(line[i], a)).toBeLessThan(1e-6);
          if (i > 0) expect(Math.abs(line[i] - line[i - 1])).toBeLessThanOrEqual(180 + 1e-9);
        });
      }),
    );
  });

  it('steps over what is missing', () => {
    expect(Array.from(unwrap([359, NaN, 1]))).toEqual([359, NaN, 361]);
  });
});
