import fc from 'fast-check';
import geodesic from 'geographiclib-geodesic';
import { describe, expect, it } from 'vitest';
import {
  eastInPlane,
  fromPlane,
  makeFrame,
  middleOf,
  radiiOfCurvature,
  shortLine,
  toPlane,
  WGS84_A,
} from '../../src/math/geo.js';

/** Independent solution of the geodesic problem: C. F. F. Karney, J. Geodesy 87 (2013) 43, its author's library. */
const WGS84 = geodesic.Geodesic.WGS84;

function geodesicLine(from: { lat: number; lon: number }, to: { lat: number; lon: number }) {
  const { s12, azi1, azi2 } = WGS84.Inverse(from.lat, from.lon, to.lat, to.lon);
  return { distance: s12!, azimuths: [azi1!, azi2!] as const };
}

describe('makeFrame', () => {
  // Metres per degree on the WGS84 ellipsoid, computed independently with numpy from M and N cos φ.
  it.each([
    [0, 110574.2758, 111319.4908],
    [30, 110852.4425, 96486.2803],
    [45, 111131.7774, 78846.8351],
    [50.5, 111238.6861, 70949.4422],
    [60, 111412.2875, 55800.0016],
  ])('at latitude %s', (lat, metresLat, metresLon) => {
    for (const sign of [1, -1]) {
      const frame = makeFrame(sign * lat, 7);
      expect(frame.metresPerDegreeLat).toBeCloseTo(metresLat, 3);
      expect(frame.metresPerDegreeLon).toBeCloseTo(metresLon, 3);
    }
  });

  it('has the radii of the ellipsoid at equator and pole', () => {
    // b²/a = 6335439.327 m at the equator, a²/b = 6399593.626 m at the pole: WGS84, NGA.STND.0036, derived constants
    // (polar radius of curvature c = 6399593.6258 m, table 3.5).
    expect(radiiOfCurvature(0).meridian).toBeCloseTo(6335439.327, 2);
    expect(radiiOfCurvature(0).primeVertical).toBe(WGS84_A);
    expect(radiiOfCurvature(90).meridian).toBeCloseTo(6399593.6258, 3);
    expect(radiiOfCurvature(90).primeVertical).toBeCloseTo(6399593.6258, 3);
  });
});

describe('the plane', () => {
  const places = [
    { name: 'Europe', lat: 50.5, lon: -2.4 },
    { name: '0,0', lat: 0, lon: 0 },
    { name: 'south', lat: -36.8, lon: 174.8 },
    { name: 'date line', lat: -17.5, lon: 179.999 },
    { name: 'latitude 80', lat: 80, lon: -150 },
  ];

  it.each(places)('agrees with the geodesic over a course of 2 km: $name', ({ lat, lon }) => {
    const frame = makeFrame(lat, lon);
    for (let azimuth = 0; azimuth < 360; azimuth += 30) {
      const end = WGS84.Direct(lat, lon, azimuth, 1000);
      const to = toPlane(frame, end.lat2!, end.lon2!);
      // One origin for all: the parallel's scale changes by tan φ dφ, 0.9 m at latitude 80, 0.2 m at 50 over 1 km.
      const tolerance = 1e-3 + 0.5 * Math.tan((Math.abs(lat) * Math.PI) / 180) * (1000 / 6.37e6) * 1000 * 1.1;
      expect(Math.abs(Math.hypot(to.x, to.y) - 1000)).toBeLessThan(tolerance);
      const off = Math.hypot(
        to.x - 1000 * Math.sin((azimuth * Math.PI) / 180),
        to.y - 1000 * Math.cos((azimuth * Math.PI) / 180),
      );
      expect(off).toBeLessThan(2 * tolerance);
    }
  });

  it('steps over the date line as over any other meridian', () => {
    const frame = makeFrame(-17.5, 179.999);
    const east = toPlane(frame, -17.5, -179.999);
    const { distance } = geodesicLine({ lat: -17.5, lon: 179.999 }, { lat: -17.5, lon: -179.999 });
    expect(east.x).toBeCloseTo(distance, 3);
    const back = fromPlane(frame, east.x, 0);
    expect(back.lon).toBeCloseTo(-179.999, 9);
    expect(makeFrame(0, 180).lon).toBe(-180);
  });

  it('comes back where it was (property)', () => {
    const lat = fc.double({ min: -85, max: 85, noNaN: true });
    const lon = fc.double({ min: -180, max: 180, noNaN: true, maxExcluded: true });
    const metres = fc.double({ min: -20000, max: 20000, noNaN: true });
    fc.assert(
      fc.property(lat, lon, metres, metres, (φ, λ, x, y) => {
        const frame = makeFrame(φ, λ);
        const place = fromPlane(frame, x, y);
        expect(place.lon).toBeGreaterThanOrEqual(-180);
        expect(place.lon).toBeLessThan(180);
        const again = toPlane(frame, place.lat, place.lon);
        expect(again.x).toBeCloseTo(x, 4);
        expect(again.y).toBeCloseTo(y, 4);
      }),
    );
  });

  it('leaves what is not a number so', () => {
    expect(eastInPlane(makeFrame(50, 0), NaN)).toBeNaN();
  });
});

describe('shortLine', () => {
  it('gives the published line from Flinders Peak to Buninyong', () => {
    // Geocentric Datum of Australia technical manual (worked example on GRS80; from memory, recomputed on WGS84 by two
    // other programs: 54972.271 m). The mid-latitude formula is good to some decimetres over 55 km.
    const flinders = { lat: -(37 + 57 / 60 + 3.7203 / 3600), lon: 144 + 25 / 60 + 29.5244 / 3600 };
    const buninyong = { lat: -(37 + 39 / 60 + 10.1561 / 3600), lon: 143 + 55 / 60 + 35.3839 / 3600 };
    const line = shortLine(flinders, buninyong);
    expect(Math.abs(line.distance - 54972.271)).toBeLessThan(0.3);
    // Azimuth 306 52 05.37 at the start; half-way it differs by half the convergence.
    const { azimuths } = geodesicLine(flinders, buninyong);
    expect(azimuths[0] + 360).toBeCloseTo(306 + 52 / 60 + 5.37 / 3600, 4);
    expect(line.direction).toBeCloseTo((azimuths[0] + azimuths[1]) / 2 + 360, 3);
  });

  it('agrees with the geodesic to 1 mm over 1.5 km, below latitude 60 (property)', () => {
    const lat = fc.double({ min: -60, max: 60, noNaN: true });
    const lon = fc.double({ min: -180, max: 180, noNaN: true });
    const azimuth = fc.double({ min: 0, max: 360, noNaN: true });
    fc.assert(
      fc.property(lat, lon, azimuth, fc.double({ min: 1, max: 1500, noNaN: true }), (φ, λ, α, s) => {
        const end = WGS84.Direct(φ, λ, α, s);
        const line = shortLine({ lat: φ, lon: λ }, { lat: end.lat2!, lon: end.lon2! });
        expect(Math.abs(line.distance - s)).toBeLessThan(1e-3);
      }),
    );
  });
});

describe('middleOf', () => {
  it('finds the middle across the date line', () => {
    const middle = middleOf([-17, NaN, -18], [179.9, NaN, -179.9])!;
    expect(middle.lat).toBeCloseTo(-17.5, 12);
    expect(Math.abs(middle.lon)).toBeCloseTo(180, 9);
    expect(middleOf([NaN], [NaN])).toBeNull();
  });

  it('is not moved by a fix at 0, 0', () => {
    const lat = Array.from({ length: 40 }, (_, i) => (i === 7 ? 0 : 46.9 + i / 10000));
    const lon = Array.from({ length: 40 }, (_, i) => (i === 7 ? 0 : 9.06));
    expect(middleOf(lat, lon)!.lat).toBeCloseTo(46.902, 3);
    expect(middleOf(lat, lon)!.lon).toBeCloseTo(9.06, 9);
  });
});
