/** The demo race: the same bytes everywhere, and the afternoon its stories promise. */
import { createHash } from 'node:crypto';
import { readdirSync, readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { demoFiles } from '../../src/demo/index.js';
import { apart, bearingOf, compass, cosine, dice, sine } from '../../src/demo/exact.js';

const files = demoFiles();
const KNOT = 1852 / 3600;

describe('its arithmetic', () => {
  it('agrees with the engine to 1e-11 (Math.sin, Math.atan2)', () => {
    for (let angle = -765; angle <= 765; angle += 0.7) {
      expect(Math.abs(sine(angle) - Math.sin((angle * Math.PI) / 180))).toBeLessThan(1e-11);
      expect(Math.abs(cosine(angle) - Math.cos((angle * Math.PI) / 180))).toBeLessThan(1e-11);
      const [east, north] = [3 * Math.sin((angle * Math.PI) / 180), 3 * Math.cos((angle * Math.PI) / 180)];
      const bearing = (Math.atan2(east, north) * 180) / Math.PI;
      expect(Math.abs(apart(bearing, bearingOf(east, north)))).toBeLessThan(1e-9);
    }
    expect(compass(-10)).toBe(350);
  });

  it('throws fair dice', () => {
    const lot = dice(1);
    const throws = Array.from({ length: 20000 }, () => lot.bell());
    const mean = throws.reduce((sum, v) => sum + v, 0) / throws.length;
    const variance = throws.reduce((sum, v) => sum + (v - mean) ** 2, 0) / throws.length;
    // Four standard errors: 1/sqrt(20000) for the mean, sqrt(2/20000) for the variance.
    expect(Math.abs(mean)).toBeLessThan(0.029);
    expect(Math.abs(variance - 1)).toBeLessThan(0.04);
  });

  it('uses no library function whose last bit an engine may choose', () => {
    const folder = new URL('../../src/demo/', import.meta.url);
    for (const name of readdirSync(folder)) {
      const used = readFileSync(new URL(name, folder), 'utf8').match(/Math\.\w+/g) ?? [];
      for (const call of used) {
        expect(
          ['Math.sqrt', 'Math.abs', 'Math.min', 'Math.max', 'Math.floor', 'Math.round', 'Math.imul'],
          name,
        ).toContain(call);
      }
    }
  });
});

describe('its files', () => {
  it('are these, byte for byte', () => {
    const digests = [...files].map(
      ([name, text]) => `${name} ${createHash('sha256').update(text).digest('hex').slice(0, 16)}`,
    );
    expect(digests).toMatchInlineSnapshot(`
      [
        "race.yaml 525e0ffd42d6b6f1",
        "corrie.gpx f0a01d5efc085838",
        "corrie-mast.csv abe88bfa3a157d32",
        "linnet.csv 3f87ea72117dd9e6",
        "committee.csv 4ce020e2ad6bfec2",
      ]
    `);
    expect(demoFiles()).toEqual(files);
  });

  it('are all named in the race file, and nothing else is', () => {
    const named = [...files.get('race.yaml')!.matchAll(/(?:file|track|instruments): (\S+)/g)].map((m) => m[1]);
    expect(new Set([...named, 'race.yaml'])).toEqual(new Set(files.keys()));
  });

  it('hold no number that is not one', () => {
    for (const [name, text] of files) expect(text, name).not.toMatch(/NaN|Infinity|undefined|,,/);
  });
});

interface Row {
  readonly t: number;
  readonly lat: number;
  readonly lon: number;
}

function linnet(): (Row & { sog: number; cog: number })[] {
  return files
    .get('linnet.csv')!
    .trim()
    .split('\n')
    .slice(1)
    .map((line) => {
      const [time, lat, lon, sog, cog] = line.split(',');
      return { t: Date.parse(time) / 1000, lat: Number(lat), lon: Number(lon), sog: Number(sog), cog: Number(cog) };
    });
}

function corrie(): Row[] {
  const points = files.get('corrie.gpx')!.matchAll(/lat="([^"]+)" lon="([^"]+)"><time>([^<]+)/g);
  return [...points].map((m) => ({ t: Date.parse(m[3]) / 1000, lat: Number(m[1]), lon: Number(m[2]) }));
}

/** The committee's wind, a minute's mean around a time. */
function windAt(t: number): { direction: number; knots: number } {
  const rows = files
    .get('committee.csv')!
    .trim()
    .split('\n')
    .slice(1)
    .map((line) => line.split(','));
  const near = rows.filter(([time]) => Math.abs(Date.parse(time) / 1000 - t) <= 30);
  const east = near.reduce((sum, r) => sum + Math.sin((Number(r[1]) * Math.PI) / 180), 0);
  const north = near.reduce((sum, r) => sum + Math.cos((Number(r[1]) * Math.PI) / 180), 0);
  return {
    direction: compass((Math.atan2(east, north) * 180) / Math.PI),
    knots: near.reduce((sum, r) => sum + Number(r[2]), 0) / near.length,
  };
}

/** Half-minute stretches of the first beat between tacks: angle to the wind and speed. */
function firstBeat(rows: readonly Row[]): { angle: number; knots: number }[] {
  const gun = Date.parse('2026-04-18T12:05:00Z') / 1000;
  const stretches: { angle: number; knots: number }[] = [];
  for (let t = gun + 40; t < gun + 480; t += 30) {
    const [a, b, c] = [t, t + 15, t + 30].map((at) => rows.find((row) => row.t === at)!);
    const leg = (p: Row, q: Row): [number, number] => [(q.lon - p.lon) * 76180.8, (q.lat - p.lat) * 111169.1];
    const [first, second] = [leg(a, b), leg(b, c)];
    const course = (v: [number, number]): number => (Math.atan2(v[0], v[1]) * 180) / Math.PI;
    if (Math.abs(apart(course(first), course(second))) > 10) continue;
    const [east, north] = leg(a, c);
    const angle = Math.abs(apart(course([east, north]), windAt(t + 15).direction));
    stretches.push({ angle, knots: Math.hypot(east, north) / 30 / KNOT });
  }
  return stretches;
}

const median = (values: number[]): number => values.sort((a, b) => a - b)[Math.floor(values.length / 2)];

describe('its afternoon', () => {
  it('has Corrie sail higher and Linnet faster', () => {
    const high = firstBeat(corrie());
    const low = firstBeat(linnet());
    expect(high.length).toBeGreaterThan(5);
    expect(low.length).toBeGreaterThan(5);
    expect(median(low.map((s) => s.angle)) - median(high.map((s) => s.angle))).toBeGreaterThan(1.5);
    expect(median(low.map((s) => s.knots)) - median(high.map((s) => s.knots))).toBeGreaterThan(0.1);
  });

  it('blows about 11 knots from the southwest', () => {
    const { direction, knots } = windAt(Date.parse('2026-04-18T12:20:00Z') / 1000);
    expect(Math.abs(apart(218, direction))).toBeLessThan(12);
    expect(Math.abs(knots - 11)).toBeLessThan(2.5);
  });

  it('keeps the receiver and its speed in step', () => {
    const rows = linnet();
    let worst = 0;
    for (let i = 60; i < rows.length; i += 30) {
      const path = rows.slice(i - 30, i).reduce((sum, r) => sum + r.sog * KNOT, 0);
      const [p, q] = [rows[i - 30], rows[i]];
      const straight = Math.hypot((q.lon - p.lon) * 76180.8, (q.lat - p.lat) * 111169.1);
      worst = Math.max(worst, straight - path);
    }
    // A straight line is never longer than the way sailed, but for the receiver's wander.
    expect(worst).toBeLessThan(6);
  });
});
