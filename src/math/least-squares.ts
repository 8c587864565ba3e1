/**
 * Least squares with priors: damped, robust, with standard errors that allow for residuals that hang together.
 */

export type Matrix = readonly Float64Array[];

/**
 * Solution of a symmetric positive definite system by Cholesky's factorisation.
 *
 * @param matrix Rows; only the lower triangle is read.
 * @param right  Right-hand side.
 * @returns Solution; null when the matrix is not positive definite.
 */
export function choleskySolve(matrix: Matrix, right: ArrayLike<number>): Float64Array | null {
  const lower = cholesky(matrix);
  return lower && substitute(lower, right);
}

/**
 * Inverse of a symmetric positive definite matrix.
 *
 * @param matrix Rows.
 * @returns Inverse; null when the matrix is not positive definite.
 */
export function choleskyInverse(matrix: Matrix): Matrix | null {
  const lower = cholesky(matrix);
  if (!lower) return null;
  return matrix.map((_, k) =>
    substitute(
      lower,
      matrix.map((__, i) => (i === k ? 1 : 0)),
    ),
  );
}

/**
 * Cholesky's factor of a symmetric positive definite matrix: lower L with L L' = matrix.
 *
 * @param matrix Rows; only the lower triangle is read.
 * @returns Rows of L; null when the matrix is not positive definite.
 */
export function cholesky(matrix: Matrix): Matrix | null {
  const lower = matrix.map((row) => new Float64Array(row.length));
  for (let i = 0; i < lower.length; i++) {
    for (let j = 0; j <= i; j++) {
      let sum = matrix[i][j];
      for (let k = 0; k < j; k++) sum -= lower[i][k] * lower[j][k];
      if (i !== j) lower[i][j] = sum / lower[j][j];
      else if (sum > 0) lower[i][i] = Math.sqrt(sum);
      else return null;
    }
  }
  return lower;
}

function substitute(lower: Matrix, right: ArrayLike<number>): Float64Array {
  const n = lower.length;
  const out = Float64Array.from(right);
  for (let i = 0; i < n; i++) {
    for (let k = 0; k < i; k++) out[i] -= lower[i][k] * out[k];
    out[i] /= lower[i][i];
  }
  for (let i = n - 1; i >= 0; i--) {
    for (let k = i + 1; k < n; k++) out[i] -= lower[k][i] * out[k];
    out[i] /= lower[i][i];
  }
  return out;
}

export interface Problem {
  /** Residuals at a parameter vector, each in units of its standard deviation; always as many; NaN counts as absent. */
  readonly residuals: (parameters: Float64Array) => ArrayLike<number>;
  /** Prior mean and standard deviation of each parameter; the search starts at the means unless told. */
  readonly mean: readonly number[];
  readonly sd: readonly number[];
  readonly start?: readonly number[];
  /** Residuals beyond this many standard deviations count in proportion, not squared. Default: none do. */
  readonly huber?: number;
  /** Cluster of each residual: residuals of one cluster may hang together. Default: each its own. */
  readonly clusters?: ArrayLike<number>;
  readonly maxRounds?: number;
  /** Ends when a step is below this share of a standard error, all parameters together. Default: a millionth. */
  readonly tolerance?: number;
}

export interface Fit {
  readonly parameters: Float64Array;
  /** One standard error of each parameter. */
  readonly se: Float64Array;
  /** The same from data and prior as if residuals were independent and of unit variance. */
  readonly plainSe: Float64Array;
  /** Correlations between the parameters' errors. */
  readonly correlation: Matrix;
  readonly residuals: Float64Array;
  /** Weight each residual had, 0 to 1. */
  readonly weights: Float64Array;
  /** Sum of squared residuals under the robust loss, priors apart. */
  readonly cost: number;
  readonly rounds: number;
  readonly converged: boolean;
}

/**
 * Fits parameters to residuals by damped Gauss-Newton steps [1] with Huber's weights [2] and normal priors.
 *
 * Standard errors are the larger of two: those of the curvature, and those of the sandwich over clusters [3], which
 * allows for residuals that are larger than stated or hang together within a cluster. With few clusters the latter are
 * too small: they are scaled by n/(n - 1).
 *
 * @param problem Residuals, priors, clusters.
 * @returns Parameters, errors, residuals.
 *
 * [1] D. W. Marquardt, J. Soc. Indust. Appl. Math. 11, 1963, 431-441.
 * [2] P. J. Huber, Ann. Math. Statist. 35, 1964, 73-101.
 * [3] K.-Y. Liang, S. L. Zeger, Biometrika 73, 1986, 13-22.
 */
export function fitLeastSquares(problem: Problem): Fit {
  const { mean, maxRounds = 60, tolerance = 1e-6 } = problem;
  let parameters = Float64Array.from(problem.start ?? mean);
  let state = costAt(problem, parameters);
  let damping = 1e-3;
  let converged = false;
  let rounds = 0;
  while (rounds < maxRounds && !converged) {
    rounds++;
    const jacobian = jacobianAt(problem, parameters);
    const { normal, slope } = normalEquations(problem, parameters, state, jacobian);
    let improved = false;
    for (let tries = 0; tries < 12 && !improved; tries++) {
      const step = choleskySolve(
        damped(normal, damping),
        slope.map((g) => -g),
      );
      if (!step) break;
      const trial = parameters.map((value, i) => value + step[i]);
      const next = costAt(problem, trial);
      const small = quadratic(normal, step) < tolerance * tolerance;
      if (next.total <= state.total) {
        [parameters, state, improved] = [trial, next, true];
        damping = Math.max(damping / 10, 1e-12);
        converged = small;
      } else {
        damping *= 10;
        if (small) break;
      }
    }
    if (!improved) converged = true;
  }
  return { ...errorsOf(problem, parameters, state), rounds, converged };
}

interface State {
  readonly residuals: Float64Array;
  readonly weights: Float64Array;
  /** Robust data cost, and with the priors. */
  readonly cost: number;
  readonly total: number;
}

function costAt({ residuals, mean, sd, huber = Infinity }: Problem, parameters: Float64Array): State {
  const r = Float64Array.from(residuals(parameters));
  const weights = new Float64Array(r.length);
  let cost = 0;
  for (let i = 0; i < r.length; i++) {
    if (Number.isNaN(r[i])) {
      r[i] = 0;
      continue;
    }
    const size = Math.abs(r[i]);
    weights[i] = size <= huber ? 1 : huber / size;
    cost += size <= huber ? size * size : huber * (2 * size - huber);
  }
  const prior = parameters.reduce((sum, value, i) => sum + ((value - mean[i]) / sd[i]) ** 2, 0);
  return { residuals: r, weights, cost, total: cost + prior };
}

/** Slopes of the residuals, parameter by parameter, by central differences. */
function jacobianAt({ residuals, sd }: Problem, parameters: Float64Array): Float64Array[] {
  return Array.from(parameters, (value, k) => {
    const h = 1e-5 * sd[k];
    const at = (offset: number): Float64Array => {
      const moved = parameters.slice();
      moved[k] = value + offset;
      return Float64Array.from(residuals(moved));
    };
    const [up, down] = [at(h), at(-h)];
    return up.map((r, i) => (Number.isNaN(r - down[i]) ? 0 : (r - down[i]) / (2 * h)));
  });
}

function normalEquations(
  { mean, sd }: Problem,
  parameters: Float64Array,
  { residuals, weights }: State,
  jacobian: readonly Float64Array[],
): { normal: Matrix; slope: Float64Array } {
  const n = parameters.length;
  const normal = Array.from({ length: n }, () => new Float64Array(n));
  const slope = new Float64Array(n);
  for (let i = 0; i < n; i++) {
    for (let k = 0; k < residuals.length; k++) slope[i] += weights[k] * jacobian[i][k] * residuals[k];
    for (let j = 0; j <= i; j++) {
      let sum = 0;
      for (let k = 0; k < residuals.length; k++) sum += weights[k] * jacobian[i][k] * jacobian[j][k];
      normal[i][j] = normal[j][i] = sum;
    }
    normal[i][i] += 1 / sd[i] ** 2;
    slope[i] += (parameters[i] - mean[i]) / sd[i] ** 2;
  }
  return { normal, slope };
}

/** x' M x. */
function quadratic(matrix: Matrix, x: Float64Array): number {
  return matrix.reduce((sum, row, i) => sum + x[i] * row.reduce((inner, value, j) => inner + value * x[j], 0), 0);
}

function damped(normal: Matrix, damping: number): Matrix {
  return normal.map((row, i) => {
    const copy = row.slice();
    copy[i] *= 1 + damping;
    return copy;
  });
}

function errorsOf(problem: Problem, parameters: Float64Array, state: State): Omit<Fit, 'rounds' | 'converged'> {
  const jacobian = jacobianAt(problem, parameters);
  const { normal } = normalEquations(problem, parameters, state, jacobian);
  const plain = choleskyInverse(normal) ?? normal.map((row) => new Float64Array(row.length).fill(NaN));
  const spread = clusterSpread(problem, state, jacobian);
  const sandwich = product(product(plain, spread), plain);
  const plainSe = Float64Array.from(plain, (row, i) => Math.sqrt(row[i]));
  const se = plainSe.map((value, i) => Math.max(value, Math.sqrt(sandwich[i][i])));
  const correlation = plain.map((row, i) => row.map((value, j) => value / (plainSe[i] * plainSe[j])));
  const { residuals, weights, cost } = state;
  return { parameters, se, plainSe, correlation, residuals, weights, cost };
}

/** Spread of the slopes summed by cluster, with the priors' own information. */
function clusterSpread(problem: Problem, { residuals, weights }: State, jacobian: readonly Float64Array[]): Matrix {
  const n = jacobian.length;
  const sums = new Map<number, Float64Array>();
  for (let k = 0; k < residuals.length; k++) {
    if (weights[k] === 0) continue;
    const key = problem.clusters ? problem.clusters[k] : k;
    let sum = sums.get(key);
    if (!sum) sums.set(key, (sum = new Float64Array(n)));
    for (let i = 0; i < n; i++) sum[i] += weights[k] * jacobian[i][k] * residuals[k];
  }
  const few = sums.size > 1 ? sums.size / (sums.size - 1) : 1;
  const spread = Array.from({ length: n }, () => new Float64Array(n));
  for (const sum of sums.values()) {
    for (let i = 0; i < n; i++) for (let j = 0; j < n; j++) spread[i][j] += few * sum[i] * sum[j];
  }
  for (let i = 0; i < n; i++) spread[i][i] += 1 / problem.sd[i] ** 2;
  return spread;
}

function product(a: Matrix, b: Matrix): Matrix {
  return a.map((row) => Float64Array.from(row, (_, j) => row.reduce((sum, value, k) => sum + value * b[k][j], 0)));
}
