/** How the two dinghies go: tables of plausible figures for an invented single-hander, not the program's boat model. */
import { between } from './exact.js';

/** Speed close-hauled at 42 degrees over wind. [kn] */
const CLOSE_HAULED = [
  [4, 2.4],
  [6, 3.72],
  [8, 4.5],
  [10, 5.02],
  [12, 5.36],
  [14, 5.5],
  [18, 5.6],
] as const;

/** Speed off the wind as a multiple of that, over the angle to the wind. [deg] */
const OFF_THE_WIND = [
  [60, 1.235],
  [90, 1.4],
  [120, 1.24],
  [150, 1.03],
  [165, 0.955],
  [180, 0.92],
] as const;

/** Steady speed. [kn] of true wind [kn] and angle to it [deg, magnitude] */
export function steadySpeed(wind: number, angle: number): number {
  const base = between(CLOSE_HAULED, wind);
  if (angle >= 60) return base * between(OFF_THE_WIND, angle);
  const off = angle - 42;
  if (angle >= 30) return base * (1 + 0.0155 * off - 0.0001 * off * off);
  return (base * 0.8 * Math.max(0, angle - 12)) / 18;
}

/** Leeway at a speed [kn] and an angle to the wind [deg, magnitude]. [deg, to leeward] */
export function leewayAt(wind: number, angle: number, speed: number): number {
  const slow = steadySpeed(wind, Math.max(30, angle)) / Math.max(1, speed);
  const close = angle < 60 ? 4.3 - 0.11 * (angle - 42) : between([[60, 2.3], [90, 1.2], [120, 0.4], [180, 0]], angle); // prettier-ignore
  return Math.min(10, Math.max(0, close) * slow * slow) * Math.min(1, angle / 25);
}

/** Heel that goes with it. [deg, magnitude] */
export const heelAt = (wind: number, angle: number): number => (angle < 100 ? Math.min(14, 0.06 * wind * wind) : 1);
