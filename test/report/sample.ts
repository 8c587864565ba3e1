import { directionOf, eastOf, northOf, RAD, turn, wrap360 } from '../../src/math/angles.js';
import { KNOT } from '../../src/math/units.js';
import type {
  BoatResult,
  Cause,
  LegResult,
  ManoeuvreResult,
  PairResult,
  Q,
  Quantity,
  Result,
  Side,
  Steady,
  TackSide,
} from '../../src/result/result.js';
import type {
  BlockRow,
  BoatSeries,
  LegSpan,
  ManoeuvreSpan,
  MarkPlace,
  PolarCurve,
  PolarPoint,
  RaceSeries,
} from '../../src/result/series.js';

/**
 * An invented race of two boats over two laps, for the tests of the report only: a toy boat in a swinging wind, and a
 * result whose figures are plain means of what was simulated. Nothing in it is a claim about boats.
 */

const T0 = Date.UTC(2026, 3, 18, 12, 5, 0) / 1000;
const COURSE_AXIS = 215;
const BEAT = 900;

interface Helm {
  readonly name: string;
  readonly sailor: string;
  /** Course angle upwind. [deg] */
  readonly gamma: number;
  /** Speed factor. */
  readonly pace: number;
  /** Seconds a tack takes to heal. */
  readonly recovery: number;
  /** Widest distance off the middle of the course. [m] */
  readonly corridor: number;
  readonly heading: boolean;
  readonly delay: number;
}

const HELMS: readonly Helm[] = [
  { name: 'Corrie', sailor: 'Corrie', gamma: 44, pace: 1, recovery: 8, corridor: 120, heading: true, delay: 0 },
  { name: 'Linnet', sailor: 'Maren', gamma: 40.5, pace: 0.985, recovery: 15, corridor: 100, heading: false, delay: 3 },
];

/** A small generator so that the same sample comes out each time (linear congruential, Numerical Recipes' constants). */
function seeded(seed: number): () => number {
  let state = seed >>> 0;
  return () => {
    state = (1664525 * state + 1013904223) >>> 0;
    return state / 2 ** 32 - 0.5;
  };
}

function windAt(t: number): { twd: number; tws: number } {
  const twd = COURSE_AXIS + 7 * Math.sin((2 * Math.PI * t) / 460) + 2.5 * Math.sin((2 * Math.PI * t) / 97 + 1);
  return { twd: wrap360(twd), tws: 5.6 + 0.7 * Math.sin((2 * Math.PI * t) / 700 + 2) + 0.25 * Math.sin(t / 23) };
}

/** Toy polar. [m/s] */
function toySpeed(gamma: number, tws: number): number {
  const up = 2.75 * Math.tanh(((gamma - 22) / 22) * 1.05) + 0.012 * (gamma - 44);
  return Math.max(0.2, up * (0.55 + 0.08 * tws));
}

interface Row {
  x: number;
  y: number;
  course: number;
  speed: number;
  mode: 'up' | 'down';
  tack: number;
}

interface Sim {
  rows: Row[];
  tacks: { at: number; from: number; kind: 'tack' | 'gybe' }[];
  legs: { kind: 'upwind' | 'downwind'; from: number; to: number }[];
}

/** Along and across the course axis, metres up the course and to its right. */
function courseFrame(x: number, y: number): { up: number; right: number } {
  const e = eastOf(COURSE_AXIS);
  const n = northOf(COURSE_AXIS);
  return { up: x * e + y * n, right: x * n - y * e };
}

function simulate(helm: Helm, seed: number): Sim {
  const noise = seeded(seed);
  const rows: Row[] = [];
  const tacks: Sim['tacks'] = [];
  const legs: Sim['legs'] = [];
  let x = helm.delay * 4;
  let y = 0;
  let tack = 1;
  let lap = 0;
  let mode: 'up' | 'down' = 'up';
  let sinceTurn = 999;
  let legFrom = 0;
  let wander = 0;
  for (let i = 0; i < 6000 && lap < 2; i++) {
    const { twd, tws } = windAt(i);
    wander = 0.93 * wander + 1.1 * noise();
    sinceTurn++;
    const { up, right } = courseFrame(x, y);
    const gamma = (mode === 'up' ? helm.gamma : 142) + wander;
    const damage = mode === 'up' ? 0.5 * Math.exp(-sinceTurn / helm.recovery) : 0.3 * Math.exp(-sinceTurn / 6);
    const speed = toySpeed(Math.min(gamma, 90), tws) * helm.pace * (mode === 'up' ? 1 : 0.98) * (1 - damage);
    const swing = Math.max(0, 1 - sinceTurn / 6);
    const course = wrap360(twd - tack * gamma * (1 - 2 * swing * (sinceTurn < 3 ? 1 : 0.4)));
    rows.push({ x, y, course, speed, mode, tack });
    x += speed * eastOf(course);
    y += speed * northOf(course);
    const target = mode === 'up' ? BEAT : 0;
    const toGo = mode === 'up' ? target - up : up;
    const half = Math.tan((mode === 'up' ? helm.gamma : 38) * RAD);
    // Wind over the starboard side takes a boat to the left of the wind's eye, upwind and down.
    const limit = Math.min(mode === 'up' ? helm.corridor : 90, Math.max(6, toGo * half));
    if (-tack * right > limit && sinceTurn > 30 && toGo > 25) {
      tacks.push({ at: i, from: tack, kind: mode === 'up' ? 'tack' : 'gybe' });
      tack = -tack;
      sinceTurn = 0;
    }
    if (toGo < 4) {
      legs.push({ kind: mode === 'up' ? 'upwind' : 'downwind', from: legFrom, to: i });
      legFrom = i;
      if (mode === 'down') lap++;
      mode = mode === 'up' ? 'down' : 'up';
      sinceTurn = 0;
    }
  }
  return { rows, tacks, legs };
}

function sideOf(tack: number): Side {
  return tack > 0 ? 'starboard' : 'port';
}

function boatSeries(helm: Helm, sim: Sim): BoatSeries {
  const n = sim.rows.length;
  const column = (): Float64Array => new Float64Array(n);
  const s = {
    x: column(), y: column(), ux: column(), uy: column(), vx: column(), vy: column(), twd: column(), tws: column(),
    gamma: column(), speed: column(), vmg: column(), beta: column(), aws: column(), heading: column().fill(NaN),
  }; // prettier-ignore
  const settled = new Uint8Array(n);
  const manoeuvres: ManoeuvreSpan[] = sim.tacks.map((m) => ({
    kind: m.kind,
    from: sideOf(m.from),
    to: sideOf(-m.from),
    entry: Math.max(0, m.at - 3),
    at: m.at + 2,
    exit: Math.min(n - 1, m.at + 24),
    loss: 0,
  }));
  sim.rows.forEach((row, i) => fillRow(s, row, i, helm));
  for (const leg of sim.legs) {
    if (leg.kind !== 'upwind') continue;
    settled.fill(1, leg.from + 20, Math.max(leg.from + 20, leg.to - 6));
  }
  for (const m of manoeuvres) settled.fill(0, m.entry, m.exit);
  const legs: LegSpan[] = sim.legs.map((leg, index) => ({ index, from: leg.from, to: leg.to }));
  const series = { name: helm.name, t0: T0, n, ...s, settled, legs, manoeuvres, blocks: [] as BlockRow[] };
  const blocks = blocksOf(series);
  return { ...series, blocks, manoeuvres: manoeuvres.map((m) => ({ ...m, loss: lossOf(series, m) })) };
}

function fillRow(s: Record<string, Float64Array>, row: Row, i: number, helm: Helm): void {
  const { twd, tws } = windAt(i);
  const signed = turn(row.course, twd);
  const γ = signed * RAD;
  s.x[i] = row.x;
  s.y[i] = row.y;
  s.ux[i] = s.vx[i] = row.speed * eastOf(row.course);
  s.uy[i] = s.vy[i] = row.speed * northOf(row.course);
  s.twd[i] = twd;
  s.tws[i] = tws;
  s.gamma[i] = signed;
  s.speed[i] = row.speed;
  s.vmg[i] = row.speed * Math.cos(γ);
  s.beta[i] = Math.abs(Math.atan2(tws * Math.sin(γ), row.speed + tws * Math.cos(γ))) / RAD;
  s.aws[i] = Math.hypot(row.speed + tws * Math.cos(γ), tws * Math.sin(γ));
  if (helm.heading) s.heading[i] = wrap360(row.course + Math.sign(signed) * (Math.abs(signed) < 90 ? 3.6 : 0.8));
}

function mean(column: ArrayLike<number>, rows: readonly number[]): number {
  return rows.reduce((sum, i) => sum + column[i], 0) / rows.length;
}

function blocksOf(s: BoatSeries): BlockRow[] {
  const out: BlockRow[] = [];
  for (const leg of s.legs) {
    for (let i = leg.from; i < leg.to; i++) {
      let to = i;
      while (to < leg.to && s.settled[to] && to - i < 30) to++;
      if (to - i >= 20) {
        const rows = Array.from({ length: to - i }, (_, k) => i + k);
        const abs = s.gamma.map(Math.abs);
        out.push({
          leg: leg.index,
          from: i,
          to,
          tack: s.gamma[i] > 0 ? 'starboard' : 'port',
          gamma: mean(abs, rows),
          speed: mean(s.speed, rows),
          vmg: mean(s.vmg, rows),
          tws: mean(s.tws, rows),
          twd: mean(s.twd, rows),
          beta: mean(s.beta, rows),
        });
      }
      if (to > i) i = to - 1;
    }
  }
  return out;
}

function lossOf(s: BoatSeries, m: ManoeuvreSpan): number {
  const before = s.vmg[Math.max(0, m.entry - 5)];
  let loss = 0;
  for (let i = m.entry; i < m.exit; i++) loss += Math.abs(before) - Math.abs(s.vmg[i]);
  return loss;
}

function q(value: number, se: number | null, basis: Quantity['basis'] = 'derived', sys?: number): Quantity {
  return { value, se, basis, ...(sys === undefined ? {} : { sys }) };
}

function tackSide(s: BoatSeries, rows: readonly number[]): TackSide | null {
  if (rows.length < 20) return null;
  const root = Math.sqrt(rows.length / 30);
  const beta = mean(s.beta, rows);
  const heading = !Number.isNaN(s.heading[rows[0]]);
  const leeway = heading ? q(3.6, 0.4, 'measured', 0.3) : q(4.1, 0.9, 'inferred', 0.6);
  return {
    seconds: rows.length,
    gamma_deg: q(mean(s.gamma.map(Math.abs), rows), 1.1 / root, 'derived', 2),
    speed_kn: q(mean(s.speed, rows) / KNOT, 0.08 / root, 'measured'),
    vmg_kn: q(mean(s.vmg, rows) / KNOT, 0.07 / root, 'derived', 0.09),
    tws_kn: q(mean(s.tws, rows) / KNOT, 0.15, 'measured', 0.22),
    aws_kn: q(mean(s.aws, rows) / KNOT, 0.15, 'derived', 0.2),
    beta_deg: q(beta, 0.9 / root, 'derived', 1.2),
    awa_deg: q(beta - leeway.value, 1 / root, 'derived', 1.2),
    leeway_deg: leeway,
    sheeting_deg: q(8.4, 2.6, 'inferred', 1.1),
    incidence_deg: q(beta - 8.4 - leeway.value, 2.8, 'inferred'),
    aero_drag_angle_deg: q(beta * 0.55, 1.4, 'inferred'),
    hydro_drag_angle_deg: q(beta * 0.45, 1.4, 'inferred'),
  };
}

function steadyOf(s: BoatSeries, span: LegSpan): Steady | null {
  const rows: number[] = [];
  for (let i = span.from; i < span.to; i++) if (s.settled[i]) rows.push(i);
  const all = tackSide(s, rows);
  if (!all) return null;
  const port = tackSide(
    s,
    rows.filter((i) => s.gamma[i] < 0),
  );
  const starboard = tackSide(
    s,
    rows.filter((i) => s.gamma[i] > 0),
  );
  const tacking = port && starboard ? q(port.gamma_deg!.value + starboard.gamma_deg!.value, 0.8) : null;
  return { ...all, tacking_angle_deg: tacking, port, starboard };
}

function iso(row: number): string {
  return new Date((T0 + row) * 1000).toISOString();
}

function ledgerOf(s: BoatSeries, span: LegSpan, optimumVmg: number): LegResult['ledger'] {
  let made = 0;
  let shifts = 0;
  for (let i = span.from; i < span.to; i++) {
    const along = s.ux[i] * eastOf(COURSE_AXIS) + s.uy[i] * northOf(COURSE_AXIS);
    made += along;
    shifts += s.vmg[i] - along;
  }
  const available = optimumVmg * (span.to - span.from);
  const tacks = s.manoeuvres.filter((m) => m.at >= span.from && m.at < span.to);
  const manoeuvres = tacks.reduce((sum, m) => sum + m.loss, 0);
  const blocks = s.blocks.filter((b) => b.leg === span.index);
  const angle = blocks.reduce((sum, b) => sum + 0.0016 * (b.gamma - 44) ** 2 * (b.to - b.from), 0);
  const high = blocks[0] && blocks[0].gamma < 43 ? angle : angle * 0.4;
  const low = blocks[0] && blocks[0].gamma < 43 ? 1.2 : angle * 0.6;
  const lost = available - made;
  const start = 9.5;
  const fixed: readonly [Cause, number, number | null][] = [
    ['manoeuvres', manoeuvres, 4],
    ['start', start, 2.5],
    ['high', high, 3.5],
    ['low', low, 2],
    ['trim', 0, null],
    ['overstood', 3.1, 1.4],
    ['stopped', 0, null],
    ['shifts', shifts, 6],
  ];
  const rest = lost - fixed.reduce((sum, [, metres]) => sum + metres, 0);
  const rows = [...fixed.slice(0, 5), ['speed', rest, 7] as const, ...fixed.slice(5)];
  return {
    reference: 'best',
    available_m: q(available, 6, 'inferred', 14),
    made_m: q(made, 1.5, 'derived'),
    lost_m: q(lost, 6, 'inferred', 14),
    entries: rows.map(([cause, metres, se]) => ({ cause, metres: q(metres, se, 'inferred') })),
  };
}

function legResult(s: BoatSeries, span: LegSpan, sim: Sim): LegResult {
  const kind = sim.legs[span.index].kind;
  const tacks = s.manoeuvres.filter((m) => m.at >= span.from && m.at < span.to);
  const rows = Array.from({ length: span.to - span.from }, (_, k) => span.from + k);
  const steady = kind === 'upwind' ? steadyOf(s, span) : null;
  const best = 1.6 + 0.008 * span.index;
  const sinβ = Math.sin((steady?.beta_deg?.value ?? 30) * RAD);
  return {
    kind,
    lap: Math.floor(span.index / 2) + 1,
    start: iso(span.from),
    end: iso(span.to),
    tacks: tacks.filter((m) => m.kind === 'tack').length,
    gybes: tacks.filter((m) => m.kind === 'gybe').length,
    vmg_kn: q(Math.abs(mean(s.vmg, rows)) / KNOT, 0.02, 'derived', 0.09),
    steady,
    optimum: steady && {
      gamma_deg: q(43.6, 0.6, 'inferred'),
      speed_kn: q(best / Math.cos(43.6 * RAD) / KNOT, 0.08, 'inferred'),
      vmg_kn: q(best / KNOT, 0.06, 'inferred', 0.1),
      beta_deg: q(29.2, 0.8, 'inferred'),
      aero_drag_angle_deg: q(13.1, 0.5, 'inferred'),
      hydro_drag_angle_deg: q(16.1, 0.6, 'inferred'),
      leeway_deg: q(3.4, 0.3, 'inferred'),
      sheeting_deg: q(7.6, 1.4, 'inferred'),
    },
    ceiling_vmg_kn: steady && q(((1 - sinβ) / (2 * sinβ)) * steady.tws_kn!.value, 0.2, 'derived', 0.4),
    efficiency: steady && q(steady.vmg_kn!.value / (best / KNOT), 0.015, 'inferred', 0.04),
    share: steady && q((mean(s.vmg, rows) / best) * 1, 0.01, 'inferred', 0.03),
    ledger: kind === 'upwind' ? ledgerOf(s, span, best) : null,
    trim: steady && {
      leeway_ways: [
        { way: 'heading', leeway_deg: q(3.6, 0.4, 'measured'), weight: 0.8 },
        { way: 'forces', leeway_deg: q(4.1, 0.9, 'inferred'), weight: 0.2 },
      ],
      sheeting_prior_deg: q(7.6, 4, 'assumed'),
      sheeting_posterior_deg: q(8.4, 2.6, 'inferred'),
    },
    notes: kind === 'upwind' ? ['Trim is kept within speed: sheeting has not narrowed enough to be told apart.'] : [],
  };
}

function boatResult(helm: Helm, s: BoatSeries, sim: Sim): BoatResult {
  const manoeuvres: ManoeuvreResult[] = s.manoeuvres.map((m) => ({
    kind: m.kind,
    time: iso(m.at),
    from: m.from,
    to: m.to,
    seconds: m.exit - m.entry,
    loss_m: q(m.loss, 1.6),
  }));
  const pinched = helm.gamma < 42;
  return {
    name: helm.name,
    sailor: helm.sailor,
    model: { boat: 'single-hander', tuned: false, sha256: 'c0ffee'.repeat(10) + '0123' },
    corrections: { compass_offset_deg: helm.heading ? q(-2.3, 0.2) : null, awa_offset_deg: null },
    manoeuvres,
    legs: s.legs.map((span) => legResult(s, span, sim)),
    hints: pinched
      ? [
          { text: 'Foot off two to three degrees: the settled angle is narrower than the best of the day and the speed does not pay it back.', metres: q(31, 7) },
          { text: 'Let the boat accelerate before hardening in after a tack: recovery takes about twice as long as the other boat’s.', metres: q(24, 6) },
        ]
      : [{ text: 'Tack a little earlier under the layline: the last tack of each beat fetched the mark with room to spare.', metres: q(6, 2) }],
  };
} // prettier-ignore

function marksOf(): MarkPlace[] {
  const at = (up: number, right: number): { x: number; y: number } => ({
    x: up * eastOf(COURSE_AXIS) + right * northOf(COURSE_AXIS),
    y: up * northOf(COURSE_AXIS) - right * eastOf(COURSE_AXIS),
  });
  return [
    { role: 'windward', given: true, places: [at(BEAT, 0)] },
    { role: 'leeward', given: false, places: [at(0, -12), at(0, 12)] },
  ];
}

/** The toy polar as the curve of a model, and the same two per cent slower and turned by a degree as the reference. */
function polarsOf(): PolarCurve[] {
  const tws = 5.6;
  const off = (gamma: number): number => toySpeed(Math.min(gamma, 90), tws) * (1 - Math.max(0, gamma - 90) / 300);
  const curve = (kind: PolarCurve['kind'], speed: (gamma: number) => number, last: number): PolarCurve => {
    const points = Array.from({ length: 60 }, (_, k) => 38 + ((last - 38) * k) / 59).map((gamma) => ({ gamma, speed: speed(gamma) })); // prettier-ignore
    const best = (sign: number): PolarPoint =>
      points.reduce((a, b) => (sign * (b.speed * Math.cos(b.gamma * RAD) - a.speed * Math.cos(a.gamma * RAD)) > 0 ? b : a)); // prettier-ignore
    return { kind, boat: 'single-hander', boats: [0, 1], tws, points, up: best(1), down: last > 90 ? best(-1) : null };
  };
  return [curve('model', off, 180), curve('best', (gamma) => 0.98 * off(gamma - 1), 75)];
}

function pairOf(a: BoatResult, b: BoatResult): PairResult {
  const mean = (boat: BoatResult): number => boat.legs[0].steady!.vmg_kn!.value;
  const d = mean(a) - mean(b);
  const part = (lap: number): PairResult['legs'][number] => ({
    lap,
    vmg_difference_kn: q(d, 0.05),
    height_part_kn: q(-0.09, 0.04),
    speed_part_kn: q(d + 0.09, 0.05),
    gamma_difference_deg: q(3.4, 0.5),
    gain_m: q(38, 3),
    leeway_difference_deg: q(-1.6, 0.3, 'measured', 0.28),
    sheeting_difference_deg: lap === 1 ? q(6.2, 1.2, 'inferred', 1.9) : null,
    blocks: 9,
  });
  const ways: PairResult['leeway_ways'] = [{ way: 'heading', leeway_difference_deg: q(-1.6, 0.3, 'measured', 0.28), weight: 1 }];
  return { boats: [a.name, b.name], ...part(1), settled_s: 540, gain_m: q(74, 5), blocks: 18, faster: a.name, higher: b.name, quicker: a.name, more_leeway: b.name, sheeted_wider: a.name, leeway_ways: ways, legs: [part(1), part(2)], notes: [] };
} // prettier-ignore

export interface Sample {
  readonly result: Result;
  readonly series: RaceSeries;
}

/** The race with every field filled. */
export function sample(): Sample {
  const sims = HELMS.map((helm, i) => simulate(helm, 7 + i));
  const boats = HELMS.map((helm, i) => boatSeries(helm, sims[i]));
  const results = HELMS.map((helm, i) => boatResult(helm, boats[i], sims[i]));
  const digest = '9f86d081884c7d659a2feaa0c55ad015a3bf4f1b2b0b822cd15d6c15b0f00a08';
  const result: Result = {
    format: 'legwork-result',
    version: 1,
    program: { name: 'legwork', version: '0.1.0' },
    race: { name: 'Ferrow Lake spring series, race 2', start: iso(0), finish: iso(boats[0].n - 1) },
    inputs: [
      { file: 'corrie.gpx', sha256: digest, kind: 'gpx', rows: boats[0].n + 10, kept: boats[0].n, ignored: 0, ignored_types: {}, rejected: [{ reason: 'time does not advance', count: 10, first_line: 7 }], fixes: boats[0].n, samples: 0, gaps: [{ from: iso(700), seconds: 20 }] },
      { file: 'linnet.csv', sha256: digest, kind: 'csv', rows: boats[1].n, kept: boats[1].n, ignored: 0, ignored_types: {}, rejected: [], fixes: boats[1].n, samples: 0, gaps: [] },
      { file: 'committee.csv', sha256: digest, kind: 'csv', rows: 3000, kept: 2990, ignored: 10, ignored_types: { battery: 10 }, rejected: [], fixes: 0, samples: 2990, gaps: [] },
    ],
    wind: { sources: ['station', 'tracks'], twd_deg: q(214.8, 0.6, 'measured', 2), tws_kn: q(10.9, 0.1, 'measured', 0.22) },
    corrections: { twd_offset_deg: q(1.4, 0.4), current: { set_deg: q(92, 14), drift_kn: q(0.12, 0.04) } },
    boats: results,
    pairs: [pairOf(results[0], results[1])],
    warnings: [{ code: 'boat-assumed', message: 'No boat was named, so the built-in single-hander was taken.' }],
  }; // prettier-ignore
  const frame = { lat: 46.912, lon: 9.061, metresPerDegreeLat: 111170, metresPerDegreeLon: 76190 };
  return { result, series: { frame, zone: 'Europe/Zurich', marks: marksOf(), boats, polars: polarsOf() } };
}

/** The same race with null in every place that may hold null, and no wind speed in the series. */
export function bareSample(): Sample {
  const { result, series } = sample();
  const boats = result.boats.map((boat) => ({
    ...boat,
    hints: [],
    corrections: { compass_offset_deg: null, awa_offset_deg: null },
    manoeuvres: boat.manoeuvres.map((m) => ({ ...m, loss_m: null })),
    legs: boat.legs.map((leg) => ({
      ...leg,
      vmg_kn: null,
      steady: null,
      optimum: null,
      ceiling_vmg_kn: null,
      efficiency: null,
      share: null,
      ledger: null,
      trim: null,
      notes: ['wind speed unknown'],
    })),
  }));
  const blank = (n: number): Float64Array => new Float64Array(n).fill(NaN);
  const bare: Result = {
    ...result,
    race: { name: 'An evening with no wind log', start: null, finish: null },
    wind: { sources: ['tracks'], twd_deg: null, tws_kn: null },
    corrections: { twd_offset_deg: null, current: null },
    boats,
    warnings: [{ code: 'wind-unknown', message: 'There is no wind log: wind speed is not known.' }],
  };
  const without = series.boats.map((b) => ({ ...b, tws: blank(b.n), beta: blank(b.n), aws: blank(b.n), heading: blank(b.n), blocks: [], manoeuvres: b.manoeuvres.map((m) => ({ ...m, loss: NaN })) })); // prettier-ignore
  return { result: withoutPairs(bare), series: { ...series, zone: null, marks: [], boats: without, polars: [] } };
}

function withoutPairs(result: Result): Result {
  const { pairs, ...rest } = result;
  return pairs ? rest : result;
}

/** Wind speed unknown, everything else there: the common case without an anemometer. */
export function noWindSpeedSample(): Sample {
  const { result, series } = sample();
  const unknown = <T extends TackSide>(s: T): T => ({ ...s, tws_kn: null, aws_kn: null, beta_deg: null, awa_deg: null, leeway_deg: null, sheeting_deg: null, incidence_deg: null, aero_drag_angle_deg: null, hydro_drag_angle_deg: null }); // prettier-ignore
  const boats = result.boats.map((boat) => ({
    ...boat,
    legs: boat.legs.map((leg) => ({
      ...leg,
      steady: leg.steady && { ...unknown(leg.steady), port: leg.steady.port && unknown(leg.steady.port), starboard: leg.steady.starboard && unknown(leg.steady.starboard) },
      optimum: null, ceiling_vmg_kn: null, efficiency: null, share: null, ledger: null, trim: null, notes: ['wind speed unknown'],
    })),
  })); // prettier-ignore
  const blank = (n: number): Float64Array => new Float64Array(n).fill(NaN);
  const bare = series.boats.map((b) => ({ ...b, tws: blank(b.n), beta: blank(b.n), aws: blank(b.n) }));
  return {
    result: { ...result, boats, wind: { ...result.wind, tws_kn: null } },
    series: { ...series, boats: bare, polars: [] },
  };
}

/** Boats renamed, the race too: for names that try to break out. */
export function renamed(from: Sample, name: string): Sample {
  const boats = from.result.boats.map((b, i) => ({ ...b, name: i ? `${name} ${i}` : name, sailor: name }));
  const seriesBoats = from.series.boats.map((b, i) => ({ ...b, name: boats[i].name }));
  const pairs = (from.result.pairs ?? []).map((p) => ({
    ...p,
    boats: [boats[0].name, boats[1].name] as const,
    faster: name,
  }));
  const race = { ...from.result.race, name };
  const inputs = from.result.inputs.map((input) => ({ ...input, file: name }));
  return { result: { ...from.result, race, inputs, boats, pairs }, series: { ...from.series, boats: seriesBoats } };
}

/** Course of a row, for checks made from the velocity alone. [deg] */
export function courseOf(s: BoatSeries, row: number): number {
  return directionOf(s.ux[row], s.uy[row]);
}

export type { Q };
