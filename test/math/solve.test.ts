import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { monotoneCurve } from '../../src/math/interpolate.js';
import { maximum, root } from '../../src/math/solve.js';

/** Counts the calls of a function. */
function counted(f: (x: number) => number): { f: (x: number) => number; calls: () => number } {
  let n = 0;
  return { f: (x) => (n++, f(x)), calls: () => n };
}

describe('root', () => {
  it('finds known roots in few calls', () => {
    // Dottie's number; the root of Wallis's cubic x^3 - 2x - 5, published by Newton; ln 1000.
    const cases = [
      [(x: number) => Math.cos(x) - x, 0, 1, 0.7390851332151607],
      [(x: number) => x ** 3 - 2 * x - 5, 2, 3, 2.0945514815423265],
      [(x: number) => Math.exp(x) - 1000, 50, -5, Math.log(1000)],
    ] as const;
    for (const [f, a, b, at] of cases) {
      const g = counted(f);
      expect(root(g.f, a, b)).toBeCloseTo(at, 11);
      expect(g.calls()).toBeLessThan(20);
    }
  });

  it('takes an end that is a root, and has none without a change of sign', () => {
    expect(root((x) => x, 0, 1)).toBe(0);
    expect(root((x) => x - 1, 0, 1)).toBe(1);
    expect(root((x) => x * x + 1, -1, 1)).toBeNaN();
    expect(root(() => NaN, -1, 1)).toBeNaN();
  });

  it('stays inside and ends at a change of sign for any cubic', () => {
    const number = fc.double({ min: -3, max: 3, noNaN: true });
    fc.assert(
      fc.property(number, number, number, number, (a, b, c, d) => {
        const f = (x: number): number => ((a * x + b) * x + c) * x + d;
        fc.pre(f(-2) * f(2) < 0);
        const at = root(f, -2, 2);
        expect(Math.abs(at)).toBeLessThanOrEqual(2);
        expect(f(at - 1e-9) * f(at + 1e-9)).toBeLessThanOrEqual(1e-20);
      }),
      { seed: 4, numRuns: 300 },
    );
  });
});

describe('maximum', () => {
  it('finds known maxima in few calls', () => {
    const sine = counted(Math.sin);
    expect(maximum(sine.f, 0, 3).at).toBeCloseTo(Math.PI / 2, 6);
    expect(sine.calls()).toBeLessThan(25);
    // x e^-x is greatest at 1.
    expect(maximum((x) => x * Math.exp(-x), 0, 12).value).toBeCloseTo(Math.exp(-1), 12);
  });

  it('goes to an end, and to a kink', () => {
    expect(maximum((x) => x, 0, 1).at).toBeCloseTo(1, 6);
    expect(maximum((x) => -x, 0, 1).at).toBeCloseTo(0, 6);
    expect(maximum((x) => -Math.abs(x - 0.3), 0, 1).at).toBeCloseTo(0.3, 6);
  });

  it('finds any parabola', () => {
    fc.assert(
      fc.property(
        fc.double({ min: -4, max: 9, noNaN: true }),
        fc.double({ min: 0.1, max: 50, noNaN: true }),
        (at, k) => {
          expect(maximum((x) => -k * (x - at) ** 2, -5, 10).at).toBeCloseTo(at, 5);
        },
      ),
      { seed: 5, numRuns: 200 },
    );
  });
});

describe('monotone curve', () => {
  it('goes through its points, is straight on a line, never overshoots', () => {
    const steps = fc.array(
      fc.tuple(fc.double({ min: 0.1, max: 3, noNaN: true }), fc.double({ min: 0, max: 5, noNaN: true })),
      { minLength: 2, maxLength: 9 },
    );
    fc.assert(
      fc.property(steps, (pairs) => {
        let [x, y] = [0, 0];
        const points = pairs.map(([dx, dy]): [number, number] => [(x += dx), (y += dy)]);
        const curve = monotoneCurve(
          points.map((p) => p[0]),
          points.map((p) => p[1]),
        );
        for (const [px, py] of points) expect(curve(px)).toBeCloseTo(py, 9);
        let last = -Infinity;
        for (let at = points[0][0]; at <= x; at += 0.05) {
          expect(curve(at)).toBeGreaterThanOrEqual(last - 1e-9);
          last = curve(at);
        }
      }),
      { seed: 6, numRuns: 100 },
    );
    expect(monotoneCurve([0, 2, 3], [1, 5, 7])(2.5)).toBeCloseTo(6, 12);
    expect(monotoneCurve([0, 1], [0, 1])(NaN)).toBeNaN();
    expect(() => monotoneCurve([0, 0], [1, 2])).toThrow(/after/);
  });
});
