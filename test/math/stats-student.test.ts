import { describe, expect, it } from 'vitest';
import { holm } from '../../src/math/holm.js';
import { normalTwoSided, normalUpperQuantile, normalUpperTail } from '../../src/math/normal.js';
import { incompleteBeta, studentInterval, studentTwoSided } from '../../src/math/student.js';

const relative = (got: number, want: number): number => Math.abs(got / want - 1);

describe("Student's t", () => {
  it.each([
    // NIST/SEMATECH e-Handbook of Statistical Methods, table 1.3.6.7.2 (upper critical values), columns 0.975 and 0.99.
    [0.95, 1, 12.706],
    [0.95, 4, 2.776],
    [0.95, 10, 2.228],
    [0.95, 30, 2.042],
    [0.95, 100, 1.984],
    [0.98, 5, 3.365],
    [0.98, 19, 2.539],
  ])('%d interval with %d degrees of freedom', (level, freedom, t) => {
    expect(studentInterval(level, freedom)).toBeCloseTo(t, 3);
  });
  it.each([
    // scipy 1.17 stats.t.sf and stats.t.ppf
    [2.5, 7, 0.04099221858575289],
    [4.3, 19, 0.0003863778032160928],
    [0.3, 3, 0.783763292039919],
    [-12, 4, 0.000276428548502973],
    [1.5, 200, 0.1351913212270349],
  ])('p of t = %d with %d', (t, freedom, p) => {
    expect(relative(studentTwoSided(t, freedom), p)).toBeLessThan(1e-11);
  });
  it('inverts itself', () => {
    expect(studentTwoSided(studentInterval(0.999, 9), 9)).toBeCloseTo(0.001, 12);
    expect(studentInterval(0.999, 9)).toBeCloseTo(4.780912585931217, 9);
  });
  it('has nothing to say without freedom', () => {
    expect(studentTwoSided(1, 0)).toBeNaN();
    expect(studentInterval(0.95, 0)).toBeNaN();
  });
});

describe('incomplete beta', () => {
  it.each([
    // scipy 1.17 special.betainc; the last is 1/3 exactly: (2/pi) asin(sqrt(1/4)).
    [0.1, 2, 0.5, 0.0038825370469605107],
    [0.35, 40, 60, 0.15345812249917395],
    [0.999, 5000, 0.5, 0.0015615791602892836],
    [0.25, 0.5, 0.5, 1 / 3],
  ])('I_%d(%d, %d)', (x, a, b, value) => {
    expect(relative(incompleteBeta(x, a, b), value)).toBeLessThan(1e-10);
  });
});

describe('normal tail', () => {
  it.each([
    // scipy 1.17 stats.norm.sf; both sides of the change of method at 2.5
    [0.5, 0.3085375387259869],
    [1.96, 0.024997895148220435],
    [2.499, 0.0062272155519885125],
    [2.5, 0.006209665325776132],
    [4, 3.167124183311986e-5],
    [8, 6.22096057427174e-16],
  ])('Q(%d)', (z, q) => {
    expect(relative(normalUpperTail(z), q)).toBeLessThan(1e-10);
    expect(normalUpperTail(-z)).toBeCloseTo(1 - q, 14);
    expect(normalUpperQuantile(normalUpperTail(z))).toBeCloseTo(z, 8);
  });
  it('two-sided 5 % is at 1.959964 (any table)', () => {
    expect(normalTwoSided(-1.959964)).toBeCloseTo(0.05, 7);
  });
});

describe("Holm's adjustment", () => {
  it('four p-values by hand', () => {
    // Sorted 0.005 x 4, 0.01 x 3, 0.03 x 2 and 0.04 x 1: 0.02, 0.03, 0.06, and 0.04 raised to 0.06 to keep the order.
    const adjusted = holm([0.01, 0.04, 0.03, 0.005]);
    [0.03, 0.06, 0.06, 0.02].forEach((p, i) => expect(adjusted[i]).toBeCloseTo(p, 12));
  });
  it('leaves untested ones out of the count', () => {
    expect(holm([NaN, 0.02, 0.5])).toEqual([NaN, 0.04, 0.5]);
  });
  it('never exceeds one', () => {
    expect(holm([0.9, 0.8])).toEqual([1, 1]);
  });
});
