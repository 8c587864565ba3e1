import { describe, expect, it } from 'vitest';
import { smoothStretch, type NoiseModel, type Observations, type SmoothedRows } from '../../src/smooth/kalman.js';

function observe(time: number[], x: number[]): Observations {
  const none = new Float32Array(time.length).fill(NaN);
  return { time: Float64Array.from(time), x: Float64Array.from(x), y: Float64Array.from(x), vx: none, vy: none };
}

export function rows(t0: number, n: number): SmoothedRows {
  const column = () => new Float64Array(n).fill(NaN);
  return { t0, x: column(), y: column(), vx: column(), vy: column(), sePosition: column(), seVelocity: column() };
}

/** Spectral density 0.1, measurement variance 0.25, no wandering error. */
const noise: NoiseModel = { accel: 0.1, white: 0.5, correlated: 0, correlation: 80, doppler: 1 };
const variance = { position: 100, velocity: 100 };
const start = { x: 0, y: 0 };

// Worked case: six positions a second apart, computed independently with numpy and cross-checked there by batch
// weighted least squares (largest difference 4e-14). Position, velocity, their standard deviations.
const WORKED = [
  [0.02700986, 1.99714058, 0.41104076, 0.37116549],
  [2.02334386, 1.99372224, 0.28860381, 0.26582422],
  [4.01595444, 1.99480418, 0.27633251, 0.22127101],
  [6.01183242, 1.99252673, 0.27634841, 0.22130352],
  [8.00470232, 2.00133253, 0.28872017, 0.26597998],
  [10.01708957, 2.01791461, 0.41148314, 0.37152647],
];
const MEASURED = [0.0, 2.1, 3.9, 6.2, 7.8, 10.1];

describe('smoothStretch', () => {
  it('gives the worked case', () => {
    const out = rows(0, 6);
    const observations = observe([0, 1, 2, 3, 4, 5], MEASURED);
    expect(smoothStretch({ observations, from: 0, to: 6, noise, variance, start }, out)).toBe(6);
    WORKED.forEach(([p, v, seP, seV], k) => {
      expect(out.x[k]).toBeCloseTo(p, 7);
      expect(out.y[k]).toBeCloseTo(p, 7);
      expect(out.vx[k]).toBeCloseTo(v, 7);
      expect(out.sePosition[k]).toBeCloseTo(seP, 7);
      expect(out.seVelocity[k]).toBeCloseTo(seV, 7);
    });
  });

  it('gives the worked case with a measurement missing, whether its row is there or not', () => {
    for (const keep of [true, false]) {
      const time = keep ? [0, 1, 2, 3, 4, 5] : [0, 1, 3, 4, 5];
      const x = MEASURED.filter((_, k) => keep || k !== 2).map((z, k) => (keep && k === 2 ? NaN : z));
      const out = rows(0, 6);
      smoothStretch({ observations: observe(time, x), from: 0, to: time.length, noise, variance, start }, out);
      // Same source as above.
      expect(out.x[2]).toBeCloseTo(4.06694629, 7);
      expect(out.vx[2]).toBeCloseTo(1.9951156, 7);
      expect(out.sePosition[2]).toBeCloseTo(0.33157111, 7);
      expect(out.seVelocity[2]).toBeCloseTo(0.22127384, 7);
      expect(out.x[3]).toBeCloseTo(6.05193897, 7);
      expect(out.vx[3]).toBeCloseTo(1.97434336, 7);
    }
  });
});
