/**
 * Holm's step-down adjustment: several p-values read at once keep the chance of any false finding below the level,
 * whatever their dependence.            p'(k) = max over j <= k of min(1, (m - j + 1) p(j)),  p(1) <= p(2) <= ...
 *
 * @param ps P-values in any order; NaN (not tested) stays NaN and is not counted.
 * @returns Adjusted p-values in the same order: compare each with the level. [0..1]
 *
 * [1] S. Holm, A simple sequentially rejective multiple test procedure, Scandinavian Journal of Statistics 6, 1979.
 * @example
 * holm([0.01, 0.5]); // => [0.02, 0.5]
 */
export function holm(ps: ArrayLike<number>): number[] {
  const adjusted = new Array<number>(ps.length).fill(NaN);
  const order = Array.from(ps, (p, index) => ({ p, index }))
    .filter(({ p }) => !Number.isNaN(p))
    .sort((a, b) => a.p - b.p);
  let largest = 0;
  order.forEach(({ p, index }, k) => {
    largest = Math.max(largest, Math.min(1, (order.length - k) * p));
    adjusted[index] = largest;
  });
  return adjusted;
}
