/**
 * Length of a vector, never over- or underflowing. The same to the last bit as `Math.hypot` where that scales by the
 * larger part first, as V8 does; but that takes any number of parts, which costs ten times as much.
 */
export function lengthOf(x: number, y: number): number {
  const a = Math.abs(x);
  const b = Math.abs(y);
  const larger = a > b ? a : b;
  if (!(larger > 0 && larger < Infinity && a === a)) return Math.hypot(x, y);
  const p = a / larger;
  const q = b / larger;
  return Math.sqrt(p * p + q * q) * larger;
}
