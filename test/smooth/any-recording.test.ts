import fc from 'fast-check';
import { expect, it } from 'vitest';
import { wrap180 } from '../../src/math/angles.js';
import { makeFrame } from '../../src/math/geo.js';
import { createRecording } from '../../src/recording/recording.js';
import { checkClocks } from '../../src/sensors/clock.js';
import { findEngine } from '../../src/sensors/engine.js';
import { trueHeading } from '../../src/sensors/magnetic.js';
import { findStuckWind } from '../../src/sensors/stuck.js';
import { smoothTrack } from '../../src/smooth/index.js';

/** A row as a broken logger may write it: steps from a millisecond to years, positions anywhere, anything missing. */
const row = fc.record({
  step: fc.oneof(
    fc.constantFrom(1, 1, 1, 5, 0.1),
    fc.double({ min: 0.001, max: 100, noNaN: true }),
    fc.constantFrom(1000, 6e8),
  ),
  east: fc.oneof(fc.constant(0), fc.double({ min: -0.0001, max: 0.0001, noNaN: true }), fc.constantFrom(1, 170)),
  north: fc.oneof(fc.constant(0), fc.double({ min: -0.0001, max: 0.0001, noNaN: true }), fc.constantFrom(0.5, -0.5)),
  value: fc.oneof(fc.constant(NaN), fc.double({ min: 0, max: 359, noNaN: true })),
  missing: fc.boolean(),
});

it('no recording breaks the smoother or the sensors; every row is known or NaN throughout (property)', () => {
  fc.assert(
    fc.property(fc.array(row, { maxLength: 60 }), fc.nat(59), (rows, at) => {
      let [time, lat, lon] = [1.7e9, 50, 179.9999];
      const places = rows.map((r) => {
        time += r.step;
        lat = Math.max(-89, Math.min(89, lat + r.north));
        lon = wrap180(lon + r.east);
        return r.missing && r.value > 180 ? { time, lat: NaN, lon: NaN } : { time, lat, lon };
      });
      const value = Float64Array.from(rows, (r) => r.value);
      const recording = createRecording({
        time: Float64Array.from(places, (p) => p.time),
        channels: {
          lat: Float64Array.from(places, (p) => p.lat),
          lon: Float64Array.from(places, (p) => p.lon),
          sog: value.map((v) => v / 50),
          cog: value,
          headingMagnetic: value,
          awa: value.map(wrap180),
          aws: value.map((v) => v / 30),
        },
        breaks: at > 0 && at < rows.length ? [at] : [],
      });
      const directed = trueHeading(recording).recording;
      const { track, gaps, rejected } = smoothTrack(directed, makeFrame(50, 180));
      for (const column of [track.x, track.y, track.vx, track.vy, track.sePosition, track.seVelocity]) {
        expect(column.length).toBe(track.n);
        column.forEach((v, i) => expect(Number.isFinite(v)).toBe(!Number.isNaN(track.x[i])));
      }
      expect(track.n).toBeLessThanOrEqual(7 * 86400 + 1);
      for (const gap of gaps) expect(gap.seconds).toBeGreaterThan(0);
      const fixes = places.filter((p) => !Number.isNaN(p.lat)).length;
      expect(rejected.reduce((sum, { count }) => sum + count, 0)).toBeLessThanOrEqual(fixes);
      expect(findEngine(track).mask.length).toBe(track.n);
      expect(findStuckWind(directed).issues).toBeDefined();
      expect(checkClocks([{ file: 'a', isTrack: true, recording }]).issues).toEqual([]);
    }),
    { numRuns: 100 },
  );
});
