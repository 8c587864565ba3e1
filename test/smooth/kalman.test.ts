import { describe, expect, it } from 'vitest';
import {
  predict,
  smoothStretch,
  startState,
  updatePosition,
  type NoiseModel,
  type Observations,
  type SmoothedRows,
} from '../../src/smooth/kalman.js';

function observe(time: number[], x: number[]): Observations {
  const none = new Float32Array(time.length).fill(NaN);
  return { time: Float64Array.from(time), x: Float64Array.from(x), y: Float64Array.from(x), vx: none, vy: none };
}

function rows(t0: number, n: number): SmoothedRows {
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

describe('the filter in its steady state', () => {
  // Constant gains of the constant-velocity filter with piecewise-constant white acceleration of standard deviation σa
  // and position noise σv, steps of T: L = σa T²/σv, r = (4 + L - sqrt(8L + L²))/4, α = 1 - r², β = 2(2 - α) - 4 sqrt(1 - α)
  // (P. R. Kalata, IEEE Trans. AES-20 (1984) 174; from memory, checked against the Riccati equation with scipy:
  // the filtered standard deviations of position and velocity).
  it.each([
    [1, 1, 1, 0.75, 0.5, 0.866025, 1.0],
    [1, 0.3, 3, 0.36, 0.08, 1.8, 0.6],
    [1, 0.5, 2.5, 0.467328, 0.145969, 1.709035, 0.821821],
    [0.2, 1, 1, 0.246184, 0.034729, 0.49617, 0.51337],
    [1, 0.1, 3, 0.22742, 0.029299, 1.430658, 0.269483],
  ])('T %s, σa %s, σv %s', (T, σa, σv, α, β, sdPosition, sdVelocity) => {
    const state = startState(0, 0, { ...noise, correlated: 0 });
    const out = new Float64Array(6);
    for (let k = 0; k < 4000; k++) {
      predict(state, T, { ...noise, accel: 0, correlated: 0 });
      // Piecewise-constant acceleration: its covariance in place of the continuous one.
      state[6] += (σa * σa * T ** 4) / 4;
      state[7] += (σa * σa * T ** 3) / 2;
      state[9] += σa * σa * T * T;
      updatePosition(state, 0, 0, σv * σv, out);
    }
    expect(out[0]).toBeCloseTo(α, 5);
    expect(out[1] * T).toBeCloseTo(β, 5);
    expect(Math.sqrt(state[6])).toBeCloseTo(sdPosition, 5);
    expect(Math.sqrt(state[9])).toBeCloseTo(sdVelocity, 5);
  });
});

describe('smoothStretch against batch least squares', () => {
  // The smoothed state is the least-squares solution of all measurements and process equations together: solved here
  // as one system of normal equations, with the receiver's wandering error as a state, velocities measured, irregular
  // steps, and whole seconds without a measurement between.
  it('gives the same states and standard errors', () => {
    const model: NoiseModel = { accel: 0.07, white: 0.4, correlated: 1.2, correlation: 9, doppler: 0.3 };
    const time = [0, 0.7, 1.3, 2, 3.9, 4.2, 6.5, 7];
    const x = [0.1, 1.5, NaN, 4.4, 8.1, 8.3, 12.9, 14.2];
    const vx = [2, NaN, 1.8, NaN, 2.2, 2.1, NaN, 1.9];
    const observations: Observations = {
      time: Float64Array.from(time),
      x: Float64Array.from(x),
      y: Float64Array.from(x, (v) => -v),
      vx: Float32Array.from(vx),
      vy: Float32Array.from(vx, (v) => -v),
    };
    const out = rows(0, 8);
    const prior = { position: 25, velocity: 9 };
    smoothStretch({ observations, from: 0, to: 8, noise: model, variance: prior, start: { x: 0, y: 0 } }, out);
    const expected = batch(time, x, vx, model, prior, [0, 1, 2, 3, 4, 5, 6, 7]);
    expected.forEach(({ p, v, seP, seV }, k) => {
      // Doppler is held in 32 bits.
      expect(out.x[k]).toBeCloseTo(p, 6);
      expect(out.y[k]).toBeCloseTo(-p, 6);
      expect(out.vx[k]).toBeCloseTo(v, 6);
      expect(out.sePosition[k]).toBeCloseTo(seP, 6);
      expect(out.seVelocity[k]).toBeCloseTo(seV, 6);
    });
  });
});

/** All states at once: minimises prior, process and measurement misfits; returns the states at `wanted` times. */
function batch(
  time: number[],
  x: number[],
  vx: number[],
  m: NoiseModel,
  prior: { position: number; velocity: number },
  wanted: number[],
) {
  const times = [...new Set([...time, ...wanted])].sort((a, b) => a - b);
  const size = 3 * times.length;
  const A = Array.from({ length: size }, () => new Array<number>(size).fill(0));
  const b = new Array<number>(size).fill(0);
  const add = (cells: [number, number][], z: number, weight: number) => {
    for (const [i, ci] of cells) {
      b[i] += weight * ci * z;
      for (const [j, cj] of cells) A[i][j] += weight * ci * cj;
    }
  };
  add([[0, 1]], 0, 1 / prior.position);
  add([[1, 1]], 0, 1 / prior.velocity);
  add([[2, 1]], 0, 1 / m.correlated ** 2);
  times.forEach((t, k) => {
    const row = time.indexOf(t);
    const at = 3 * k;
    if (row >= 0 && !Number.isNaN(x[row])) add([[at, 1], [at + 2, 1]], x[row], 1 / m.white ** 2); // prettier-ignore
    if (row >= 0 && !Number.isNaN(vx[row])) add([[at + 1, 1]], vx[row], 1 / m.doppler ** 2);
    if (k === 0) return;
    const dt = t - times[k - 1];
    const before = at - 3;
    const φ = Math.exp(-dt / m.correlation);
    add([[at + 2, 1], [before + 2, -φ]], 0, 1 / (m.correlated ** 2 * (1 - φ * φ))); // prettier-ignore
    // Inverse of q [[dt³/3, dt²/2], [dt²/2, dt]] is (1/q) [[12/dt³, -6/dt²], [-6/dt², 4/dt]], factored into two squares:
    // 12/dt³ (p' - p - dt (v + v')/2)² + (v' - v)²/dt.
    add([[at, 1], [before, -1], [before + 1, -dt / 2], [at + 1, -dt / 2]], 0, 12 / (m.accel * dt ** 3)); // prettier-ignore
    add([[at + 1, 1], [before + 1, -1]], 0, 1 / (m.accel * dt)); // prettier-ignore
  });
  const inverse = invert(A);
  const state = inverse.map((row) => row.reduce((sum, a, j) => sum + a * b[j], 0));
  return wanted.map((t) => {
    const at = 3 * times.indexOf(t);
    return { p: state[at], v: state[at + 1], seP: Math.sqrt(inverse[at][at]), seV: Math.sqrt(inverse[at + 1][at + 1]) };
  });
}

/** Gauss-Jordan with pivoting. */
function invert(matrix: number[][]): number[][] {
  const n = matrix.length;
  const work = matrix.map((row, i) => [...row, ...row.map((_, j) => (i === j ? 1 : 0))]);
  for (let c = 0; c < n; c++) {
    let pivot = c;
    for (let r = c + 1; r < n; r++) if (Math.abs(work[r][c]) > Math.abs(work[pivot][c])) pivot = r;
    [work[c], work[pivot]] = [work[pivot], work[c]];
    const scale = work[c][c];
    work[c] = work[c].map((v) => v / scale);
    for (let r = 0; r < n; r++) {
      if (r === c) continue;
      const f = work[r][c];
      work[r] = work[r].map((v, j) => v - f * work[c][j]);
    }
  }
  return work.map((row) => row.slice(n));
}
