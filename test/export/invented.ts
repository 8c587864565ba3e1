/** A small race by hand, for tests of the tables: one boat, ten seconds, one beat. */
import type { BoatResult, LegResult, Quantity, Result, TackSide } from '../../src/result/result.js';
import type { BoatSeries, RaceSeries } from '../../src/result/series.js';

const q = (value: number, se: number | null = 0.5): Quantity => ({ value, se, basis: 'derived' });

const tack: TackSide = {
  seconds: 120,
  gamma_deg: q(42),
  speed_kn: q(5),
  vmg_kn: q(3.7),
  tws_kn: q(12),
  aws_kn: q(16),
  beta_deg: q(30),
  awa_deg: q(27),
  leeway_deg: q(3),
  sheeting_deg: null,
  incidence_deg: null,
  aero_drag_angle_deg: q(14),
  hydro_drag_angle_deg: q(16),
};

export const LEG: LegResult = {
  kind: 'upwind',
  lap: 1,
  start: '2026-04-18T12:00:00.000Z',
  end: '2026-04-18T12:00:09.000Z',
  tacks: 1,
  gybes: 0,
  vmg_kn: q(3.5),
  steady: { ...tack, tacking_angle_deg: q(84), port: tack, starboard: null },
  optimum: null,
  ceiling_vmg_kn: null,
  efficiency: q(0.95, null),
  share: q(0.9),
  ledger: {
    reference: 'model',
    available_m: q(100),
    made_m: q(90),
    lost_m: q(10),
    entries: [
      { cause: 'manoeuvres', metres: q(12) },
      { cause: 'shifts', metres: q(-2) },
    ],
  },
  notes: ['one', 'two, with "quotes"'],
};

export function inventedResult(name = 'Ann'): Result {
  const boat: BoatResult = {
    name,
    sailor: name,
    model: { boat: 'single-hander', tuned: false, sha256: 'a'.repeat(64) },
    corrections: { compass_offset_deg: null, awa_offset_deg: null },
    manoeuvres: [],
    legs: [LEG],
    hints: [],
  };
  return {
    format: 'legwork-result',
    version: 1,
    program: { name: 'legwork', version: '0.0.0' },
    race: { name: 'Test', start: null, finish: null },
    inputs: [],
    wind: { sources: ['station'], twd_deg: q(0), tws_kn: q(12) },
    corrections: { twd_offset_deg: null, current: null },
    boats: [boat],
    warnings: [],
  };
}

/** Ten seconds due east at 2 m/s through the origin; seconds 4 and 5 are a gap. */
export function inventedSeries(name = 'Ann', lon = 9): RaceSeries {
  const n = 10;
  const gap = (i: number): boolean => i === 4 || i === 5;
  const column = (value: (i: number) => number): Float64Array =>
    Float64Array.from({ length: n }, (_, i) => (gap(i) ? NaN : value(i)));
  const boat: BoatSeries = {
    name,
    t0: Date.UTC(2026, 3, 18, 12) / 1000,
    n,
    x: column((i) => 2 * (i - 5)),
    y: column(() => 0),
    ux: column(() => 2),
    uy: column(() => 0),
    vx: column(() => 2),
    vy: column(() => 0),
    twd: column(() => 45),
    tws: column(() => NaN),
    gamma: column(() => -45),
    speed: column(() => 2),
    vmg: column(() => Math.SQRT2),
    beta: column(() => 30),
    aws: column(() => NaN),
    heading: column(() => NaN),
    settled: Uint8Array.from({ length: n }, (_, i) => (i < 3 ? 1 : 0)),
    legs: [{ index: 0, from: 0, to: 10 }],
    manoeuvres: [{ kind: 'tack', from: 'port', to: 'starboard', entry: 6, at: 7, exit: 9, loss: NaN }],
    blocks: [{ leg: 0, from: 0, to: 3, tack: 'port', gamma: 45, speed: 2, vmg: 1.41, tws: NaN, twd: 45, beta: 30 }],
  };
  // Round numbers in place of a real plane: 100 km a degree both ways.
  return {
    frame: { lat: 0, lon, metresPerDegreeLat: 1e5, metresPerDegreeLon: 1e5 },
    zone: null,
    marks: [
      { role: 'windward', given: true, places: [{ x: 0, y: 100 }] },
      {
        role: 'leeward',
        given: false,
        places: [
          { x: -10, y: 0 },
          { x: 10, y: 0 },
        ],
      },
    ],
    boats: [boat],
  };
}
