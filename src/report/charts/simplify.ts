import { lengthOf } from '../../math/length.js';

/**
 * Rows of a track that are enough to draw it: the line through them stays within `tolerance` of every row left out.
 * Rows that are not finite are left out; a run is never joined across them.
 *
 * [1] D. H. Douglas, T. K. Peucker, Algorithms for the reduction of the number of points required to represent a
 *     digitized line or its caricature, The Canadian Cartographer 10, 1973, 112-122.
 */
export function simplify(x: Float64Array, y: Float64Array, from: number, to: number, tolerance: number): number[][] {
  return runs(x, y, from, to).map(([a, b]) => thin(x, y, a, b, tolerance));
}

function runs(x: Float64Array, y: Float64Array, from: number, to: number): [number, number][] {
  const out: [number, number][] = [];
  let begin = -1;
  for (let i = from; i <= to; i++) {
    const known = i < to && Number.isFinite(x[i]) && Number.isFinite(y[i]);
    if (known && begin < 0) begin = i;
    if (!known && begin >= 0) {
      if (i - begin > 1) out.push([begin, i - 1]);
      begin = -1;
    }
  }
  return out;
}

function thin(x: Float64Array, y: Float64Array, first: number, last: number, tolerance: number): number[] {
  const keep = new Set([first, last]);
  const stack: [number, number][] = [[first, last]];
  for (let span = stack.pop(); span; span = stack.pop()) {
    const [a, b] = span;
    const far = farthest(x, y, a, b);
    if (far.distance <= tolerance) continue;
    keep.add(far.at);
    stack.push([a, far.at], [far.at, b]);
  }
  return [...keep].sort((a, b) => a - b);
}

function farthest(x: Float64Array, y: Float64Array, a: number, b: number): { at: number; distance: number } {
  const dx = x[b] - x[a];
  const dy = y[b] - y[a];
  const square = dx * dx + dy * dy;
  let best = { at: a, distance: -1 };
  for (let i = a + 1; i < b; i++) {
    const along = square > 0 ? Math.max(0, Math.min(1, ((x[i] - x[a]) * dx + (y[i] - y[a]) * dy) / square)) : 0;
    const distance = lengthOf(x[i] - x[a] - along * dx, y[i] - y[a] - along * dy);
    if (distance > best.distance) best = { at: i, distance };
  }
  return best;
}
