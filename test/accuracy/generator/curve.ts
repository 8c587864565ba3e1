/** A smooth curve through a table that never overshoots it (F. N. Fritsch, J. Butland, SIAM J. Sci. Stat. Comput. 5, 1984). */
export function curveThrough(xs: readonly number[], ys: readonly number[]): (x: number) => number {
  const n = xs.length;
  const slope = xs.slice(1).map((x, i) => (ys[i + 1] - ys[i]) / (x - xs[i]));
  const m = xs.map((_, i) => {
    if (i === 0) return slope[0];
    if (i === n - 1) return slope[n - 2];
    const a = slope[i - 1];
    const b = slope[i];
    return a * b <= 0 ? 0 : (2 * a * b) / (a + b);
  });
  return (x) => {
    if (x <= xs[0]) return ys[0];
    if (x >= xs[n - 1]) return ys[n - 1] + m[n - 1] * (x - xs[n - 1]);
    let i = 0;
    while (x > xs[i + 1]) i++;
    const h = xs[i + 1] - xs[i];
    const t = (x - xs[i]) / h;
    const u = 1 - t;
    return ys[i] * u * u * (1 + 2 * t) + ys[i + 1] * t * t * (3 - 2 * t) + h * t * u * (m[i] * u - m[i + 1] * t);
  };
}
