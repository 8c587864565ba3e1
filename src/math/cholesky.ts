/**
 * Cholesky's factor of a symmetric positive definite matrix, in place: lower L with L L' = matrix. Two rows and two
 * columns at a time, so that every number fetched is used twice; sums run in the usual order and come to the same bits.
 *
 * Rows below the matrix are right-hand sides: each becomes the solution x of L x = row.
 *
 * @param a    Rows of n numbers one after another; of the matrix only the lower triangle is read and written.
 * @param n    Order of the matrix.
 * @param rows Rows in all, n or more.
 * @returns Whether the matrix is positive definite; if not, `a` is half done.
 */
export function choleskyInPlace(a: Float64Array, n: number, rows: number): boolean {
  for (let i = 0; i < rows; i += 2) {
    const r = i * n;
    // A last row without a neighbour is its own.
    const s = i + 1 < rows ? r + n : r;
    const done = eliminate(a, n, r, s, Math.min(i, n));
    for (let j = done; j < Math.min(i, n); j++) finishColumn(a, n, r, s, j);
    if (i < n && !finishDiagonal(a, n, i, r, s)) return false;
  }
  return true;
}

/** The entries of two rows (beginning at r and s) in pairs of columns before `to`; returns the columns done. */
function eliminate(a: Float64Array, n: number, r: number, s: number, to: number): number {
  let j = 0;
  for (; j + 1 < to; j += 2) {
    const p = j * n;
    const q = p + n;
    let rp = a[r + j];
    let rq = a[r + j + 1];
    let sp = a[s + j];
    let sq = a[s + j + 1];
    for (let k = 0; k < j; k++) {
      const x = a[r + k];
      const y = a[s + k];
      const u = a[p + k];
      const v = a[q + k];
      rp -= x * u;
      rq -= x * v;
      sp -= y * u;
      sq -= y * v;
    }
    rp /= a[p + j];
    sp /= a[p + j];
    a[r + j] = rp;
    a[s + j] = sp;
    a[r + j + 1] = (rq - rp * a[q + j]) / a[q + j + 1];
    a[s + j + 1] = (sq - sp * a[q + j]) / a[q + j + 1];
  }
  return j;
}

/** The entries of two rows in one column. */
function finishColumn(a: Float64Array, n: number, r: number, s: number, j: number): void {
  const p = j * n;
  let rp = a[r + j];
  let sp = a[s + j];
  for (let k = 0; k < j; k++) {
    rp -= a[r + k] * a[p + k];
    sp -= a[s + k] * a[p + k];
  }
  a[r + j] = rp / a[p + j];
  a[s + j] = sp / a[p + j];
}

/** The entries of rows i and i + 1 in columns i and i + 1; whether the roots are real. */
function finishDiagonal(a: Float64Array, n: number, i: number, r: number, s: number): boolean {
  if (!root(a, r, i)) return false;
  if (s === r) return true;
  let below = a[s + i];
  for (let k = 0; k < i; k++) below -= a[s + k] * a[r + k];
  a[s + i] = below / a[r + i];
  return i + 1 === n || root(a, s, i + 1);
}

function root(a: Float64Array, row: number, i: number): boolean {
  let sum = a[row + i];
  for (let k = 0; k < i; k++) sum -= a[row + k] * a[row + k];
  a[row + i] = Math.sqrt(sum);
  return sum > 0;
}
