import { expect, test } from 'vitest';
import { choleskyInPlace } from '../../src/math/cholesky.js';
import { cholesky } from '../../src/math/least-squares.js';

/** Numbers in -1..1 that look drawn, the same every time. */
const drawn = (k: number): number => Math.sin(12.9898 * k + 78.233 * (k % 7)) * Math.cos(k / 3);

/** B B' plus a little on the diagonal, so positive definite. */
function definite(n: number): Float64Array[] {
  const b = Array.from({ length: n }, (_, i) => Array.from({ length: n }, (__, j) => drawn(i * n + j)));
  return b.map((row, i) =>
    Float64Array.from(b, (other, j) => row.reduce((sum, x, k) => sum + x * other[k], i === j ? 0.1 : 0)),
  );
}

test.each([1, 2, 3, 4, 5, 8, 13, 30])('order %i: the same bits as row by row, and right-hand sides solved', (n) => {
  for (const sides of [0, 1, 2, 3]) {
    const matrix = definite(n);
    const rights = Array.from({ length: sides }, (_, k) =>
      Array.from({ length: n }, (__, j) => drawn(1000 + n * k + j)),
    );
    const a = Float64Array.from([...matrix, ...rights].flatMap((row) => [...row]));
    expect(choleskyInPlace(a, n, n + sides)).toBe(true);
    const lower = cholesky(matrix)!;
    for (let i = 0; i < n; i++) expect([...a.subarray(i * n, i * n + i + 1)]).toEqual([...lower[i].slice(0, i + 1)]);
    rights.forEach((right, k) => {
      const x = a.subarray((n + k) * n, (n + k + 1) * n);
      right.forEach((wanted, i) => {
        const found = lower[i].reduce((sum, l, j) => (j <= i ? sum + l * x[j] : sum), 0);
        expect(found).toBeCloseTo(wanted, 9);
      });
    });
  }
});

test.each([1, 2, 3, 6, 7])('order %i: one that is not positive definite is told', (n) => {
  for (let at = 0; at < n; at++) {
    const matrix = definite(n);
    matrix[at][at] = at === 0 ? 0 : -1;
    expect(cholesky(matrix)).toBeNull();
    expect(choleskyInPlace(Float64Array.from(matrix.flatMap((row) => [...row])), n, n)).toBe(false);
  }
});
