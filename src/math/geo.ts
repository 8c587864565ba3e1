/**
 * The earth as a local plane: metres east and north of an origin, by the WGS84 radii of curvature there. A sphere
 * would put 0.3 % into every speed; the plane costs less than 0.02 % within 10 km of its origin below latitude 60
 * along the parallels, and nothing at the origin.
 */

import { DEG, RAD, wrap180 } from './angles.js';

/** Equatorial radius of the WGS84 ellipsoid. [m]   [1, table 3.1] */
export const WGS84_A = 6378137;
/** Flattening of the WGS84 ellipsoid.   [1, table 3.1] */
export const WGS84_F = 1 / 298.257223563;

/** Origin and scale of a local plane. */
export interface Frame {
  /** Origin, WGS84. [deg] */
  readonly lat: number;
  readonly lon: number;
  /** Metres per degree of latitude and of longitude there. */
  readonly metresPerDegreeLat: number;
  readonly metresPerDegreeLon: number;
}

const E2 = WGS84_F * (2 - WGS84_F);

/**
 * Radii of curvature of the ellipsoid in the meridian (M) and in the prime vertical (N).
 *
 *     W² = 1 - e² sin² φ,   M = a (1 - e²) / W³,   N = a / W        [2, eq. 4-18 to 4-20]
 *
 * @param lat Latitude, north positive. [deg, -90..90]
 * @returns Both radii. [m, > 0]
 *
 * [1] World Geodetic System 1984, NGA.STND.0036, 2014.
 * [2] J. P. Snyder, Map Projections: A Working Manual, USGS Professional Paper 1395, 1987.
 */
export function radiiOfCurvature(lat: number): { meridian: number; primeVertical: number } {
  const sinφ = Math.sin(RAD * lat);
  const w2 = 1 - E2 * sinφ * sinφ;
  const w = Math.sqrt(w2);
  return { meridian: (WGS84_A * (1 - E2)) / (w2 * w), primeVertical: WGS84_A / w };
}

/**
 * The local plane with its origin at a place.
 *
 *     metres per degree of latitude = M π/180,   of longitude = N cos φ π/180
 *
 * @param lat Latitude of the origin, best the middle of the course. [deg, -90..90]
 * @param lon Longitude of the origin. [deg, any; wrapped]
 * @returns The frame. [deg, m/deg]
 */
export function makeFrame(lat: number, lon: number): Frame {
  const { meridian, primeVertical } = radiiOfCurvature(lat);
  return {
    lat,
    lon: wrap180(lon),
    metresPerDegreeLat: RAD * meridian,
    metresPerDegreeLon: RAD * primeVertical * Math.cos(RAD * lat),
  };
}

/**
 * A place in the plane. The longitude is taken the short way round, so the date line is no edge.
 *
 * @param frame Origin and scale.
 * @param lat   Latitude. [deg]
 * @param lon   Longitude. [deg]
 * @returns East (x) and north (y) of the origin. [m]
 */
export function toPlane(frame: Frame, lat: number, lon: number): { x: number; y: number } {
  return { x: eastInPlane(frame, lon), y: northInPlane(frame, lat) };
}

/**
 * Metres east of the origin.
 *
 * @param frame Origin and scale.
 * @param lon   Longitude. [deg]
 * @returns East of the origin. [m]
 */
export function eastInPlane(frame: Frame, lon: number): number {
  return wrap180(lon - frame.lon) * frame.metresPerDegreeLon;
}

/**
 * Metres north of the origin.
 *
 * @param frame Origin and scale.
 * @param lat   Latitude. [deg]
 * @returns North of the origin. [m]
 */
export function northInPlane(frame: Frame, lat: number): number {
  return (lat - frame.lat) * frame.metresPerDegreeLat;
}

/**
 * A point of the plane as a place: the inverse of `toPlane`.
 *
 * @param frame Origin and scale.
 * @param x     East of the origin. [m]
 * @param y     North of the origin. [m]
 * @returns Latitude and longitude, the longitude in [-180, 180). [deg]
 */
export function fromPlane(frame: Frame, x: number, y: number): { lat: number; lon: number } {
  return { lat: frame.lat + y / frame.metresPerDegreeLat, lon: wrap180(frame.lon + x / frame.metresPerDegreeLon) };
}

/**
 * Distance and direction between two places near each other, by the radii of curvature half-way.
 *
 * @param from First place. [deg]
 * @param to   Second place. [deg]
 * @returns Distance [m, >= 0] and direction at the middle, clockwise from true north [deg, 0..360).
 *
 * Good to 1 mm at 1 km and to 0.2 m at 60 km below latitude 60; not for the poles.
 */
export function shortLine(
  from: { readonly lat: number; readonly lon: number },
  to: { readonly lat: number; readonly lon: number },
): { distance: number; direction: number } {
  const middle = makeFrame((from.lat + to.lat) / 2, from.lon);
  const east = eastInPlane(middle, to.lon);
  const north = (to.lat - from.lat) * middle.metresPerDegreeLat;
  const direction = DEG * Math.atan2(east, north);
  return { distance: Math.hypot(east, north), direction: direction < 0 ? direction + 360 : direction };
}

/** Positions beyond these quantiles do not count for the middle: fixes far away, at 0, 0 for instance. */
const TAIL = 0.05;
/** So many positions, evenly spread, say where a course lies. */
const LOOKED_AT = 4000;

/**
 * The middle of the box that holds nearly all positions: a good origin for one course.
 *
 * @param lat Latitudes; NaN skipped. [deg]
 * @param lon Longitudes; NaN skipped. [deg]
 * @returns The middle between the 5th and the 95th percentile, or null without a position. [deg]
 */
export function middleOf(lat: ArrayLike<number>, lon: ArrayLike<number>): { lat: number; lon: number } | null {
  const isThere = (i: number): boolean => !Number.isNaN(lat[i]) && !Number.isNaN(lon[i]);
  let count = 0;
  for (let i = 0; i < lat.length; i++) if (isThere(i)) count++;
  if (count === 0) return null;
  const stride = Math.max(1, Math.floor(count / LOOKED_AT));
  const some: number[] = [];
  for (let i = 0, k = 0; i < lat.length; i++) if (isThere(i) && k++ % stride === 0) some.push(i);
  const first = lon[some[some.length >> 1]];
  const north = middleQuantile(some.map((i) => lat[i]));
  const east = middleQuantile(some.map((i) => wrap180(lon[i] - first)));
  return { lat: north, lon: wrap180(first + east) };
}

function middleQuantile(values: number[]): number {
  values.sort((a, b) => a - b);
  const tail = Math.round(TAIL * (values.length - 1));
  return (values[tail] + values[values.length - 1 - tail]) / 2;
}
