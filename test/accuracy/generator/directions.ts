/** Directions, written again here so that a mistake in the program's own cannot hide. Degrees, clockwise from north. */

const RADIAN = Math.PI / 180;

export const sind = (angle: number): number => Math.sin(angle * RADIAN);
export const cosd = (angle: number): number => Math.cos(angle * RADIAN);

/** Direction a vector (east, north) points to, -180..180. */
export const pointing = (east: number, north: number): number => Math.atan2(east, north) / RADIAN;

/** Remainder in [-180, 180]. */
export function signed(angle: number): number {
  const r = angle % 360;
  return r > 180 ? r - 360 : r < -180 ? r + 360 : r;
}

/** Remainder in [0, 360). */
export function compass(angle: number): number {
  const r = angle % 360;
  return r < 0 ? (r + 360) % 360 : r;
}
