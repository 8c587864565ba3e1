import { describe, expect, it } from 'vitest';
import { choleskyInverse, choleskySolve, fitLeastSquares } from '../../src/math/least-squares.js';

const matrix = (rows: number[][]): Float64Array[] => rows.map((row) => Float64Array.from(row));

/** A small generator of standard normal numbers, for tests only (Park & Miller 1988; Box & Muller 1958). */
function normals(seed: number): () => number {
  let state = seed;
  const uniform = (): number => (state = (state * 48271) % 2147483647) / 2147483647;
  return () => Math.sqrt(-2 * Math.log(uniform())) * Math.cos(2 * Math.PI * uniform());
}

describe('Cholesky', () => {
  it('solves and inverts a worked case', () => {
    // A = L L' with L = [[2,0,0],[6,1,0],[-8,5,3]], the factorisation most textbooks print.
    const a = matrix([
      [4, 12, -16],
      [12, 37, -43],
      [-16, -43, 98],
    ]);
    // A (1, 1, 1)' by hand.
    expect([...choleskySolve(a, [0, 6, 39])!]).toEqual([1, 1, 1].map((x) => expect.closeTo(x, 9) as number));
    const inverse = choleskyInverse(a)!;
    for (let i = 0; i < 3; i++) {
      for (let j = 0; j < 3; j++) {
        const entry = a[i].reduce((sum, value, k) => sum + value * inverse[k][j], 0);
        expect(entry).toBeCloseTo(i === j ? 1 : 0, 8);
      }
    }
    expect(
      choleskyInverse(
        matrix([
          [1, 2],
          [2, 1],
        ]),
      ),
    ).toBeNull();
  });
});

describe('least squares', () => {
  it('fits a straight line as the closed form of the textbooks does', () => {
    const x = [0, 1, 2, 3, 4, 5];
    const y = [1.1, 2.9, 5.2, 6.8, 9.1, 10.9];
    const n = x.length;
    const [sx, sy] = [x, y].map((v) => v.reduce((s, e) => s + e, 0));
    const sxx = x.reduce((s, e) => s + e * e, 0);
    const sxy = x.reduce((s, e, i) => s + e * y[i], 0);
    const slope = (n * sxy - sx * sy) / (n * sxx - sx * sx);
    const level = (sy - slope * sx) / n;
    const fit = fitLeastSquares({
      residuals: ([a, b]) => y.map((value, i) => (value - a - b * x[i]) / 0.1),
      mean: [0, 0],
      sd: [1e6, 1e6],
    });
    expect(fit.converged).toBe(true);
    expect(fit.parameters[0]).toBeCloseTo(level, 6);
    expect(fit.parameters[1]).toBeCloseTo(slope, 7);
    // Textbook standard error of a slope with known noise: sigma / sqrt(Sxx - n xbar^2).
    expect(fit.plainSe[1]).toBeCloseTo(0.1 / Math.sqrt(sxx - (sx * sx) / n), 6);
  });

  it('solves NIST StRD Misra1a to its certified parameters', () => {
    // Data and certified values as published by NIST (Statistical Reference Datasets, nonlinear regression, Misra1a).
    const y = [10.07, 14.73, 17.94, 23.93, 29.61, 35.18, 40.02, 44.82, 50.76, 55.05, 61.01, 66.4, 75.47, 81.78];
    const x = [77.6, 114.9, 141.1, 190.8, 239.9, 289, 332.8, 378.4, 434.8, 477.3, 536.8, 593.1, 689.1, 760];
    const fit = fitLeastSquares({
      residuals: ([b1, b2]) => y.map((value, i) => value - b1 * (1 - Math.exp(-b2 * x[i]))),
      mean: [250, 5e-4],
      sd: [1e5, 0.1],
      start: [250, 5e-4],
    });
    expect(fit.parameters[0] / 238.94212918).toBeCloseTo(1, 5);
    expect(fit.parameters[1] / 5.5015643181e-4).toBeCloseTo(1, 5);
    expect(fit.cost / 0.12455138894).toBeCloseTo(1, 5);
  });

  it('lets a prior stand where the data are silent', () => {
    const fit = fitLeastSquares({ residuals: ([a]) => [a - 4], mean: [0, 7], sd: [1, 2] });
    // One datum of unit variance against a prior of unit variance: half way, and an error of sqrt(1/2).
    expect(fit.parameters[0]).toBeCloseTo(2, 6);
    expect(fit.plainSe[0]).toBeCloseTo(Math.SQRT1_2, 6);
    expect(fit.parameters[1]).toBeCloseTo(7, 9);
    expect(fit.se[1]).toBeCloseTo(2, 6);
  });

  it('is not moved far by one wild value', () => {
    const data = [1, 1.2, 0.9, 1.1, 0.8, 40];
    const mean = (huber?: number): number =>
      fitLeastSquares({
        residuals: ([a]) => data.map((value) => (value - a) / 0.2),
        mean: [0],
        sd: [1e4],
        ...(huber !== undefined && { huber }),
      }).parameters[0];
    expect(mean()).toBeCloseTo(7.5, 3);
    expect(mean(2.5)).toBeLessThan(1.2);
  });

  it('gives honest errors to residuals that hang together', () => {
    const next = normals(11);
    let [squares, stated] = [0, 0];
    const trials = 200;
    for (let trial = 0; trial < trials; trial++) {
      const clusters = Array.from({ length: 240 }, (_, i) => Math.floor(i / 12));
      const shared = Array.from({ length: 20 }, () => 2 * next());
      const data = clusters.map((c) => shared[c] + next());
      const fit = fitLeastSquares({
        residuals: ([a]) => data.map((value) => value - a),
        mean: [0],
        sd: [100],
        clusters,
      });
      squares += fit.parameters[0] ** 2;
      stated += fit.se[0] ** 2;
      // As if independent: seven times too sure.
      expect(fit.plainSe[0]).toBeCloseTo(1 / Math.sqrt(240), 4);
    }
    expect(Math.sqrt(squares / stated)).toBeGreaterThan(0.85);
    expect(Math.sqrt(squares / stated)).toBeLessThan(1.15);
  });

  it('leaves absent residuals out', () => {
    const fit = fitLeastSquares({ residuals: ([a]) => [a - 3, NaN, a - 5], mean: [0], sd: [1e4] });
    expect(fit.parameters[0]).toBeCloseTo(4, 6);
  });
});
