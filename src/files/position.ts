import type { LatLon } from './race-types.js';

/**
 * A position as people write it: `46.912, 9.061`, `46 54.72 N 9 03.66 E`, `46°54'43.2"N 9°03'39.6"E`, `N46 54.72 E9 03.66`.
 *
 * Only the last part of an angle may have decimals; minutes and seconds run from 0 to below 60. With letters the
 * order does not matter; without them it is latitude, longitude.
 *
 * @param text Position as written.
 * @returns Latitude and longitude [deg], longitude in [-180, 180); null when it is not a position.
 * @example
 * parsePosition('46 30 N 9 15 E'); // => { lat: 46.5, lon: 9.25 }
 */
export function parsePosition(text: string): LatLon | null {
  const clean = text
    .replace(/[°º'′’"″”,;]/g, ' ')
    .trim()
    .toUpperCase();
  if (!/^[-+\d.\sNSEW]+$/.test(clean)) return null;
  if (!/[NSEW]/.test(clean)) return decimalPair(clean);
  const first = /^[NSEW]/.test(clean)
    ? /^([NSEW])\s*([-+\d.\s]+?)\s*([NSEW])\s*([-+\d.\s]+)$/.exec(clean)
    : /^([-+\d.\s]+?)\s*([NSEW])\s*([-+\d.\s]+?)\s*([NSEW])$/.exec(clean);
  if (!first) return null;
  const lettersLead = /^[NSEW]/.test(clean);
  const [letterA, angleA, letterB, angleB] = lettersLead
    ? [first[1], first[2], first[3], first[4]]
    : [first[2], first[1], first[4], first[3]];
  const a = signed(angleA, letterA);
  const b = signed(angleB, letterB);
  const latFirst = 'NS'.includes(letterA);
  if (latFirst === 'NS'.includes(letterB)) return null;
  return latFirst ? checkedPosition(a, b) : checkedPosition(b, a);
}

/**
 * @param lat Latitude. [deg]
 * @param lon Longitude. [deg, -180..180]
 * @returns The position with longitude in [-180, 180); null when out of range.
 * @example
 * checkedPosition(46.5, 180); // => { lat: 46.5, lon: -180 }
 */
export function checkedPosition(lat: number, lon: number): LatLon | null {
  if (!(Math.abs(lat) <= 90 && Math.abs(lon) <= 180)) return null;
  return { lat, lon: lon === 180 ? -180 : lon };
}

function decimalPair(text: string): LatLon | null {
  const parts = text.split(/\s+/);
  if (parts.length !== 2 || !parts.every((part) => /^[-+]?(\d+\.?\d*|\.\d+)$/.test(part))) return null;
  return checkedPosition(Number(parts[0]), Number(parts[1]));
}

/** Degrees, minutes, seconds to degrees; NaN when malformed. A sign and a letter together are a contradiction. */
function signed(angle: string, letter: string): number {
  const parts = angle.trim().split(/\s+/);
  if (parts.length > 3) return NaN;
  const whole = parts.slice(0, -1).every((part) => /^\d+$/.test(part));
  if (!whole || !/^(\d+\.?\d*|\.\d+)$/.test(parts.at(-1)!)) return NaN;
  const [degrees, minutes = 0, seconds = 0] = parts.map(Number);
  if (minutes >= 60 || seconds >= 60) return NaN;
  const value = degrees + minutes / 60 + seconds / 3600;
  return value !== 0 && 'SW'.includes(letter) ? -value : value;
}
