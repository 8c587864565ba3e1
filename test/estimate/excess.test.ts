import { describe, expect, it } from 'vitest';
import { overstoodStretches } from '../../src/estimate/overstanding.js';
import { rateDifference, type Rate, type WindErrors } from '../../src/estimate/rate-difference.js';
import type { Manoeuvre } from '../../src/segment/manoeuvres.js';
import { makeSailing } from '../../src/segment/sailing.js';
import { chanceOf, wander } from '../accuracy/generator/random.js';

const part = (wander: number): WindErrors['direction'] => ({ wander, tau: 60, slow: 0, gradient: 0, from: 'boats' });
const NO_WIND: WindErrors = { direction: part(0), speed: part(0), shared: true };
const WIND: WindErrors = { direction: part(0), speed: part(0.05), shared: true };

const rate = (time: number, value: number, offered = 0): Rate => ({
  time,
  seconds: 30,
  x: 0,
  y: 0,
  value,
  turning: 0,
  offered,
});

describe('difference of rates', () => {
  it('is the classical two-sample comparison where blocks have nothing in common', () => {
    // Extra hours of sleep by two drugs: A. R. Cushny, A. R. Peebles, J. Physiology 32, 1905, as used by Student,
    // Biometrika 6, 1908; two-sample t = -1.8608 on 18 degrees of freedom, as reference works print it (from memory).
    const first = [0.7, -1.6, -0.2, -1.2, -0.1, 3.4, 3.7, 0.8, 0, 2].map((v, k) => rate(1e4 * k, v));
    const second = [1.9, 0.8, 1.1, 0.1, -0.1, 4.4, 5.5, 1.6, 4.6, 3.4].map((v, k) => rate(1e6 + 1e4 * k, v));
    const found = rateDifference(first, second, NO_WIND);
    expect(found.value).toBeCloseTo(-1.58, 10);
    expect(found.value / found.se).toBeCloseTo(-1.8608, 4);
  });

  it('says nothing of a single block', () => {
    expect(rateDifference([rate(0, 1)], [rate(0, 1), rate(30, 2)], NO_WIND).se).toBe(Infinity);
  });

  const draws = (seed: number): { wind: (k: number) => number; own: () => number } => {
    const chance = chanceOf(`blocks ${seed}`);
    const drift = wander(chance, 0.1, 90);
    const wind = Array.from({ length: 40 }, () => drift(30));
    return { wind: (k) => wind[k], own: () => 0.02 * chance.normal() };
  };

  it('lets the error of a shared wind cancel, and states what is left', () => {
    const plain: number[] = [];
    const paired: number[] = [];
    const ratios: number[] = [];
    for (let seed = 1; seed <= 60; seed++) {
      const { wind, own } = draws(seed);
      // The second boat sails in the second half of the time only, when the wind used for both is off by what it then is.
      const first = Array.from({ length: 40 }, (_, k) => rate(30 * k, 0.1 + wind(k) + own(), 1));
      const second = Array.from({ length: 20 }, (_, k) => rate(30 * (k + 20) + 5, wind(k + 20) + own(), 1));
      const found = rateDifference(first, second, WIND);
      const mean = (rates: readonly Rate[]): number => rates.reduce((sum, r) => sum + r.value, 0) / rates.length;
      plain.push(mean(first) - mean(second) - 0.1);
      paired.push(found.value - 0.1);
      ratios.push((found.value - 0.1) / found.se);
    }
    const rms = (values: readonly number[]): number => Math.sqrt(values.reduce((s, v) => s + v * v, 0) / values.length);
    expect(rms(paired)).toBeLessThan(0.7 * rms(plain));
    expect(rms(ratios)).toBeGreaterThan(0.7);
    expect(rms(ratios)).toBeLessThan(1.4);
  });
});

describe('overstanding', () => {
  /** Wind from the north; starboard from row 50 on; the mark is at the origin, its starboard lay line runs south-east. */
  const stretches = (beyond: number): ReturnType<typeof overstoodStretches> => {
    const side = 200;
    const at = { x: side + beyond * Math.SQRT1_2, y: -side + beyond * Math.SQRT1_2 };
    const n = 150;
    const ux = Float64Array.from({ length: n }, (_, i) => (i < 50 ? 1.5 : -1.5));
    const uy = new Float64Array(n).fill(beyond > 0 ? 1.1 : 1.5);
    const x = Float64Array.from({ length: n }, (_, i) => at.x + (i < 50 ? 1.5 : -1.5) * (i - 50));
    const y = Float64Array.from({ length: n }, (_, i) => at.y + 1.2 * (i - 50));
    const sailing = makeSailing({ t0: 0, x, y, ux, uy, twd: new Float64Array(n) });
    const tack: Manoeuvre = { kind: 'tack', from: 'port', to: 'starboard', time: 50, entry: 45, at: 50, exit: 75 };
    return overstoodStretches(sailing, { from: 0, to: n }, [tack], 45, 0.5, { x: 0, y: 0 });
  };

  it.each([15, 60, 120])('finds a tack %d m beyond the lay line', (beyond) => {
    const [found, ...others] = stretches(beyond);
    expect(others).toEqual([]);
    expect(found.past).toBeCloseTo(beyond, 6);
    expect(found.from).toBeGreaterThan(50);
    expect(found.to).toBe(150);
  });

  it.each([0, -40])('finds none %d m from it', (beyond) => {
    expect(stretches(beyond)).toEqual([]);
  });
});
