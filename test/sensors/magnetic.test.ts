import { readFileSync } from 'node:fs';
import { createRequire } from 'node:module';
import { dirname, join } from 'node:path';
import { afterEach, describe, expect, it, vi } from 'vitest';
import { createRecording } from '../../src/recording/recording.js';
import { chooseVariation, declination, trueHeading } from '../../src/sensors/magnetic.js';

/** Decimal year as UTC seconds. */
function yearToTime(year: number): number {
  const whole = Math.floor(year);
  const [from, to] = [Date.UTC(whole, 0, 1), Date.UTC(whole + 1, 0, 1)];
  return (from + (year - whole) * (to - from)) / 1000;
}

// The official test table that comes with the model's coefficients: date, km, lat, lon, X, Y, Z, H, F, I, D.
const table = join(dirname(createRequire(import.meta.url).resolve('geomagnetism')), 'test/values.csv');
const rows = readFileSync(table, 'utf8')
  .trim()
  .split('\n')
  .slice(1)
  .map((line) => line.split(',').map(Number));

afterEach(() => vi.restoreAllMocks());

describe('declination', () => {
  it('agrees with the official table of the 2025 model, row by row', () => {
    const model2025 = rows.filter(([year]) => year >= 2025 && year < 2030 - 0.2);
    expect(model2025.length).toBeGreaterThanOrEqual(100);
    for (const [year, altitude, lat, lon, , , , h, , , d] of model2025) {
      const { value, yearsOff, se } = declination(lat, lon, yearToTime(year), altitude);
      // Rounded to 0.01 there; the package's year has 365 days.
      expect(Math.abs(((value - d + 540) % 360) - 180)).toBeLessThan(0.012);
      expect(yearsOff).toBe(0);
      // Error model of the 2025 report: 0.26 and 5417/H degrees, added as squares.
      expect(se).toBeCloseTo(Math.sqrt(0.26 ** 2 + (5417 / h) ** 2), 2);
    }
  });

  // WMM2025 test values, NOAA/NCEI and BGS, at sea level.
  it.each([
    [2025.0, 80, 0, 1.28],
    [2025.0, 0, 120, -0.16],
    [2025.0, -80, 240, 68.78],
    [2027.5, 80, 0, 2.59],
    [2027.5, 0, 120, -0.24],
    [2027.5, -80, 240, 68.49],
  ])('%s, %s N %s E', (year, lat, lon, d) => {
    expect(declination(lat, lon, yearToTime(year)).value).toBeCloseTo(d, 2);
  });

  it('outside its dates takes the nearest, says how far, and prints nothing', () => {
    const printed = [vi.spyOn(console, 'error'), vi.spyOn(console, 'warn'), vi.spyOn(console, 'log')];
    const written = vi.spyOn(process.stderr, 'write');
    const early = declination(50, 5, Date.UTC(2009, 11, 15) / 1000);
    expect(early.yearsOff).toBeCloseTo(5, 2);
    expect(early.value).toBe(declination(50, 5, Date.UTC(2014, 11, 15, 12) / 1000).value);
    expect(early.se).toBeGreaterThan(0.75);
    const late = declination(50, 5, Date.UTC(2035, 0, 1) / 1000);
    expect(late.yearsOff).toBeCloseTo(5.13, 1);
    for (const spy of [...printed, written]) expect(spy).not.toHaveBeenCalled();
  });
});

describe('chooseVariation', () => {
  const model = (value: number, yearsOff = 0) => ({ value, se: 0.4 + 0.15 * yearsOff, yearsOff });

  it.each([
    ['the log within 2 degrees of the model', 3, model(4.4), 3, 'log'],
    ['across north and south', -179.5, model(179.5), -179.5, 'log'],
    ['the model where the log is a setting', 0, model(4.4), 4.4, 'model'],
    ['the model where the log is silent', NaN, model(4.4), 4.4, 'model'],
    ['the log alone outside the dates', 9, model(4.4, 6), 9, 'log-alone'],
    ['the log alone without a place', 9, null, 9, 'log-alone'],
    ['the nearest year with neither', NaN, model(4.4, 6), 4.4, 'nearest-year'],
  ] as const)('%s', (_, log, given, variation, source) => {
    const chosen = chooseVariation(log, given);
    expect(chosen.variation).toBe(variation);
    expect(chosen.source).toBe(source);
    expect(chosen.message !== '').toBe(source === 'nearest-year' || (source === 'model' && Number.isFinite(log)));
  });

  it('has none without a log and a place', () => {
    expect(chooseVariation(NaN, null)).toMatchObject({ variation: NaN, source: 'none', code: 'variation-unknown' });
  });
});

describe('trueHeading', () => {
  const time = Float64Array.of(0, 1, 2).map((t) => t + Date.UTC(2026, 6, 1) / 1000);
  const place = { lat: Float64Array.of(54.42, NaN, 54.42), lon: Float64Array.of(10.2, NaN, 10.2) };

  it('adds the declination of date and place to headings and wind directions', () => {
    const recording = createRecording({
      time,
      channels: {
        ...place,
        headingMagnetic: Float64Array.of(358, NaN, 10),
        twdMagnetic: Float64Array.of(100, 200, 356),
      },
    });
    const { recording: out, variation, source, issues } = trueHeading(recording);
    // 54.42 N 10.20 E on 2026-07-01: 4.381, computed with the model's package apart from this program.
    expect(variation).toBeCloseTo(4.381, 2);
    expect(source).toBe('model');
    expect(issues).toEqual([]);
    expect(out.channels.heading![0]).toBeCloseTo(2.381, 2);
    expect(out.channels.heading![1]).toBeNaN();
    expect(out.channels.twd![2]).toBeCloseTo(0.381, 2);
    expect(recording.channels.heading).toBeUndefined();
  });

  it('keeps a true heading and fills in beside it', () => {
    const channels = { ...place, heading: Float64Array.of(50, NaN, NaN), headingMagnetic: Float64Array.of(1, 2, NaN) };
    const { recording } = trueHeading(createRecording({ time, channels }));
    expect(recording.channels.heading![0]).toBe(50);
    expect(recording.channels.heading![1]).toBeCloseTo(6.381, 2);
    expect(recording.channels.heading![2]).toBeNaN();
  });

  it('says when a variation was set wrong, and when nothing can be said', () => {
    const wrong = { ...place, headingMagnetic: Float64Array.of(1, 2, 3), variation: Float64Array.of(-12, -12, -12) };
    const told = trueHeading(createRecording({ time, channels: wrong }), { file: 'mast.csv' });
    expect(told.issues).toMatchObject([{ code: 'variation-mismatch', file: 'mast.csv' }]);
    const nowhere = trueHeading(createRecording({ time, channels: { headingMagnetic: Float64Array.of(1, 2, 3) } }));
    expect(nowhere.issues.map(({ code }) => code)).toEqual(['variation-unknown']);
    expect(nowhere.recording.channels.heading).toBeUndefined();
    const placed = trueHeading(createRecording({ time, channels: { headingMagnetic: Float64Array.of(1, 2, 3) } }), {
      place: { lat: 54.42, lon: 10.2 },
    });
    expect(placed.recording.channels.heading![0]).toBeCloseTo(5.381, 2);
  });
});
