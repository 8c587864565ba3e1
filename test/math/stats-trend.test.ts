import { describe, expect, it } from 'vitest';
import { mannKendall } from '../../src/math/kendall.js';
import { theilSen } from '../../src/math/theil-sen.js';

const steps = (n: number): number[] => Array.from({ length: n }, (_, i) => i + 1);

describe('Mann-Kendall', () => {
  it('EPA QA/G-9S (2006), page 109: ties of 4 and 2, S = 22, var 155.33, Z = 1.685', () => {
    const test = mannKendall(steps(11), [10, 10, 10, 5, 10, 20, 18, 17, 15, 24, 15]);
    expect(test.s).toBe(22);
    expect(test.variance).toBeCloseTo(155.333333, 6);
    expect(test.z).toBeCloseTo(1.68495, 5);
    expect(test.p).toBeCloseTo(0.091998, 6);
    expect(test.exact).toBe(false);
  });
  it("Sen's 1968 example: S = 21, var 44.333333, Z 3.003757 and the exact chance 2/7!", () => {
    const test = mannKendall([1, 2, 3, 4, 10, 12, 18], [9, 15, 19, 20, 45, 55, 78]);
    expect(test.s).toBe(21);
    expect(test.variance).toBeCloseTo(44.333333, 6);
    expect(test.z).toBeCloseTo(3.003757, 6);
    expect(test.p).toBeCloseTo(2 / 5040, 12);
  });
  it.each([
    // scipy 1.17 stats.kendalltau(method='exact')
    [[1, 3, 2, 5, 4, 8, 6, 7, 10, 9], 0.0009463183421516755],
    [[12, 11, 14, 13, 17, 15, 16, 21, 18, 22, 20, 25], 0.00010742344075677409],
  ])('exact p of %j', (y, p) => {
    expect(mannKendall(steps(y.length), y).p).toBeCloseTo(p, 12);
  });
  it('exact upper tails of Kendall: n = 10, S = 21 is 0.036 (Gilbert 1987, table A18)', () => {
    // Twelve inversions make S = 45 - 24 = 21.
    const y = [4, 3, 2, 1, 8, 7, 6, 5, 9, 10];
    const test = mannKendall(steps(10), y);
    expect(test.s).toBe(21);
    expect(test.p / 2).toBeCloseTo(0.036, 3);
  });
  it('variance with weights and ties in both is that of all permutations, enumerated', () => {
    const t = [0, 1, 1, 3, 4, 7];
    const y = [2, 5, 2, 3, 8, 7];
    const errors = [1, 3, 0.5, 1, 2, 1];
    const weight = (i: number, j: number): number => 1 / Math.hypot(errors[i], errors[j]);
    const sums = permutations(6).map((order) => {
      let s = 0;
      for (let a = 0; a < 6; a++)
        for (let b = a + 1; b < 6; b++)
          s += weight(order[a], order[b]) * Math.sign(t[b] - t[a]) * Math.sign(y[order[b]] - y[order[a]]);
      return s;
    });
    const spread = sums.reduce((total, s) => total + s * s, 0) / sums.length;
    const test = mannKendall(t, y, weight);
    expect(test.variance).toBeCloseTo(spread, 10);
    const far = sums.filter((s) => Math.abs(s) >= Math.abs(test.s) - 1e-9).length / sums.length;
    expect(test.p).toBeCloseTo(far, 12);
  });
  it('equal weights scale S and change nothing else', () => {
    const y = [10, 10, 10, 5, 10, 20, 18, 17, 15, 24, 15];
    const test = mannKendall(steps(11), y, () => 0.25);
    expect(test.z).toBeCloseTo(1.68495, 5);
  });
  it('tells nothing from two points, or from points all alike', () => {
    expect(mannKendall([1, 2], [1, 2]).p).toBe(1);
    expect(mannKendall(steps(12), new Array<number>(12).fill(3)).p).toBe(1);
  });
});

function permutations(n: number): number[][] {
  if (n === 0) return [[]];
  return permutations(n - 1).flatMap((rest) =>
    Array.from({ length: n }, (_, at) => [...rest.slice(0, at), n - 1, ...rest.slice(at)]),
  );
}

describe('Theil-Sen', () => {
  it("Sen's 1968 example: slope 4, 93 % interval 26/7 to 35/8, intercept 4", () => {
    const line = theilSen([1, 2, 3, 4, 10, 12, 18], [9, 15, 19, 20, 45, 55, 78], 0.93);
    expect(line.slope).toBe(4);
    expect(line.low).toBeCloseTo(26 / 7, 12);
    expect(line.high).toBeCloseTo(35 / 8, 12);
    expect(line.intercept).toBe(4);
    expect(line.pairs).toBe(21);
  });
  it('slope 1 per step on the EPA series (all pairwise slopes sorted by an independent script)', () => {
    expect(theilSen(steps(11), [10, 10, 10, 5, 10, 20, 18, 17, 15, 24, 15]).slope).toBeCloseTo(1, 12);
  });
  it('interval of a 12-point series as scipy 1.17 stats.theilslopes', () => {
    const line = theilSen(steps(12), [12, 11, 14, 13, 17, 15, 16, 21, 18, 22, 20, 25]);
    expect([line.slope, line.low, line.high]).toEqual([1, expect.closeTo(0.8, 12), expect.closeTo(1.4, 12)]);
  });
  it('with equal errors is the median weighted by distance, here counted by hand', () => {
    // Slopes 0 (weight 1), 1 (weight 1), 0.5 (weight 2): half of 4 is passed at 0.5.
    expect(theilSen([0, 1, 2], [0, 0, 1], 0.95, [1, 1, 1]).slope).toBe(0.5);
  });
  it('believes the sure points', () => {
    const t = steps(8);
    const y = t.map((time, i) => 2 * time + (i % 2 === 0 ? 0 : 40));
    const errors = t.map((_, i) => (i % 2 === 0 ? 0.01 : 100));
    expect(theilSen(t, y, 0.95, errors).slope).toBeCloseTo(2, 12);
  });
  it('weighted interval covers the truth as often as it says (600 series, 95 % and 68 %)', () => {
    const random = generator(7);
    let wide = 0;
    let narrow = 0;
    for (let k = 0; k < 600; k++) {
      const errors = Array.from({ length: 15 }, () => 0.5 + 2 * random());
      const y = errors.map((error, i) => 0.3 * i + error * normal(random));
      const at95 = theilSen(steps(15), y, 0.95, errors);
      const at68 = theilSen(steps(15), y, 0.6827, errors);
      if (at95.low <= 0.3 && at95.high >= 0.3) wide++;
      if (at68.low <= 0.3 && at68.high >= 0.3) narrow++;
    }
    expect(wide / 600).toBeGreaterThan(0.925);
    expect(wide / 600).toBeLessThan(0.98);
    expect(narrow / 600).toBeGreaterThan(0.63);
    expect(narrow / 600).toBeLessThan(0.75);
  });
  it('has no slope without two different times', () => {
    expect(theilSen([1, 1], [2, 3]).slope).toBeNaN();
    expect(theilSen([1, 2], [2, 3]).low).toBe(-Infinity);
  });
});

/** Multiplicative congruential generator of Lehmer (Park and Miller 1988). */
function generator(seed: number): () => number {
  let state = seed;
  return () => (state = (state * 48271) % 2147483647) / 2147483647;
}

function normal(random: () => number): number {
  return Math.sqrt(-2 * Math.log(1 - random())) * Math.cos(2 * Math.PI * random());
}
