import { describe, expect, it } from 'vitest';
import { createRecording } from '../../src/recording/recording.js';
import { findEngine } from '../../src/sensors/engine.js';
import { smoothTrack } from '../../src/smooth/index.js';
import { beat, FRAME, normal, record, T0, type Path } from '../smooth/synthetic.js';

/** Under engine: one course, one speed within 0.5 % over a minute. */
function motoring(seconds: number, course: number, speed: number, seed: number): Path {
  const dt = 0.05;
  const n = Math.round(seconds / dt) + 1;
  const path = { dt, x: new Float64Array(n), y: new Float64Array(n), vx: new Float64Array(n), vy: new Float64Array(n) };
  const random = normal(seed);
  const keep = Math.exp(-dt / 60);
  let wander = 0;
  for (let i = 0; i < n; i++) {
    wander = keep * wander + Math.sqrt(1 - keep * keep) * random();
    const v = speed * (1 + 0.005 * wander);
    path.vx[i] = v * Math.sin(((course + wander) * Math.PI) / 180);
    path.vy[i] = v * Math.cos(((course + wander) * Math.PI) / 180);
    if (i === 0) continue;
    path.x[i] = path.x[i - 1] + path.vx[i] * dt;
    path.y[i] = path.y[i - 1] + path.vy[i] * dt;
  }
  return path;
}

const share = (mask: Uint8Array) => mask.reduce((sum, m) => sum + m, 0) / mask.length;

describe('findEngine', () => {
  const straight = smoothTrack(record(motoring(2400, 10, 3, 1), { step: 1, seed: 2 }), FRAME).track;
  const sailed = smoothTrack(record(beat(2400, 5), { step: 1, seed: 3 }), FRAME).track;

  it('knows a boat that goes straight into a station wind', () => {
    const twd = new Float64Array(straight.n).fill(5);
    const { issues, mask } = findEngine(straight, { twd }, 'launch.gpx');
    expect(issues).toMatchObject([{ code: 'under-engine', file: 'launch.gpx' }]);
    expect(share(mask)).toBeGreaterThan(0.95);
    // On a beam reach the same track may be sailing.
    expect(findEngine(straight, { twd: new Float64Array(straight.n).fill(100) }).issues).toEqual([]);
  });

  it('knows it by the apparent wind over the bow', () => {
    const random = normal(9);
    const awa = Float64Array.from({ length: straight.n }, () => -6 + 8 * random());
    expect(share(findEngine({ ...straight, awa }).mask)).toBeGreaterThan(0.95);
    const close = awa.map((a) => a - 22);
    expect(findEngine({ ...straight, awa: close }).issues).toEqual([]);
  });

  it('knows it by a water speed that does not follow the wind', () => {
    const random = normal(4);
    const aws = Float64Array.from({ length: straight.n }, (_, i) => 7 + Math.sin(i / 40) + 0.3 * random());
    const awa = new Float64Array(straight.n).fill(40);
    const steady = Float64Array.from({ length: straight.n }, () => 3 + 0.01 * random());
    expect(share(findEngine({ ...straight, awa, aws, stw: steady }).mask)).toBeGreaterThan(0.9);
    const following = aws.map((w) => 3 + 0.15 * (w - 7));
    expect(findEngine({ ...straight, awa, aws, stw: following }).issues).toEqual([]);
    // A paddle wheel full of weed says the same for ever.
    expect(findEngine({ ...straight, awa, aws, stw: new Float64Array(straight.n).fill(3) }).issues).toEqual([]);
  });

  it('knows it from the track alone, and a beat is no motoring', () => {
    expect(share(findEngine(straight).mask)).toBeGreaterThan(0.9);
    expect(findEngine(sailed)).toMatchObject({ issues: [] });
    expect(share(findEngine(sailed).mask)).toBe(0);
    const twd = new Float64Array(sailed.n).fill(0);
    expect(share(findEngine(sailed, { twd }).mask)).toBe(0);
  });

  it('is not misled by a station that points 30 degrees off', () => {
    for (const off of [-30, 30]) {
      const { issues, mask } = findEngine(sailed, { twd: new Float64Array(sailed.n).fill(off) });
      expect(issues).toEqual([]);
      expect(share(mask)).toBe(0);
    }
  });

  it('says nothing of leaving the harbour', () => {
    const short = smoothTrack(record(motoring(400, 0, 2.5, 6), { step: 1, seed: 7 }), FRAME).track;
    const { issues, mask } = findEngine(short, { twd: new Float64Array(short.n) });
    expect(issues).toEqual([]);
    expect(share(mask)).toBeGreaterThan(0.8);
  });

  it('survives gaps and an empty track', () => {
    const { lat, lon } = record(motoring(2400, 10, 3, 1), { step: 1, seed: 2 }).channels;
    const time = Float64Array.from({ length: lat!.length }, (_, i) => T0 + i + (i > 1200 ? 600 : 0));
    const { track } = smoothTrack(createRecording({ time, channels: { lat: lat!, lon: lon! } }), FRAME);
    expect(share(findEngine(track).mask)).toBeGreaterThan(0.5);
    const none = createRecording({ time: new Float64Array(0), channels: {} });
    expect(findEngine(smoothTrack(none, FRAME).track)).toEqual({ issues: [], mask: new Uint8Array(0) });
  });
});
