/**
 * How wrong a debrief is: its result and series against the truth of an invented race. One `measure()`; what it finds
 * is read by the printer and by the gate. Nothing is dropped: what the debrief leaves null is counted.
 */
import type { Q, Result, TackSide } from '../../src/result/result.js';
import type { BoatSeries, RaceSeries } from '../../src/result/series.js';
import type { TrueBoat, TrueLeg, Truth } from './generator/index.js';
import { trueManoeuvreLoss, trueShifts, trueTackLoss } from './true-ledger.js';

const KNOT = 1852 / 3600;

/** Quantities of an upwind leg. Errors in degrees, or in per cent of the truth where so named. */
export const QUANTITIES = [
  'gamma',
  'gamma port',
  'gamma starboard',
  'beta',
  'speed %',
  'vmg %',
  'tws %',
  'leeway',
  'efficiency',
  'whole leg vmg %',
  'manoeuvres m',
  'shifts m',
] as const;
export type Quantity = (typeof QUANTITIES)[number];

/** One error: of a leg's quantity, or of a single figure of the race. */
export interface Sample {
  readonly race: string;
  readonly boat: string;
  /** Start of the true leg, UTC seconds (0 for a figure of the whole race). */
  readonly leg: number;
  /** Estimate less truth over the truth's own settled seconds, and over the seconds the debrief called settled. */
  readonly error: number;
  readonly errorOwn: number;
  /** Stated, in the unit of the error; null when not stated. */
  readonly se: number | null;
  readonly sys: number;
}

export interface Measured {
  readonly quantities: Record<Quantity, Sample[]>;
  /** True upwind legs with settled sailing for which the debrief has no value. */
  readonly nulls: Record<Quantity, number>;
  readonly tacks: {
    hits: number;
    missed: number;
    extra: number;
    readonly timeErrors: number[];
    readonly losses: Sample[];
  };
  readonly legs: {
    found: number;
    missed: number;
    extra: number;
    readonly startErrors: number[];
    readonly endErrors: number[];
  };
  /** Mean direction of the wind at the boat over settled sailing, leg by leg; and the station's own error there. [deg] */
  readonly direction: Sample[];
  readonly stationDirection: number[];
  /** The offsets and the lag the debrief found, less the truth; nulls counted. */
  readonly corrections: Record<Correction, { readonly samples: Sample[]; nulls: number }>;
}

export const CORRECTIONS = ['station direction', 'compass', 'masthead', 'lag s'] as const;
export type Correction = (typeof CORRECTIONS)[number];

/** The shortest settled sailing of a true leg for which a null counts against the debrief. [s] */
const ENOUGH = 60;

export function emptyMeasured(): Measured {
  const each = <K extends string, V>(keys: readonly K[], make: () => V): Record<K, V> =>
    Object.fromEntries(keys.map((key) => [key, make()])) as Record<K, V>;
  return {
    quantities: each(QUANTITIES, () => []),
    nulls: each(QUANTITIES, () => 0),
    tacks: { hits: 0, missed: 0, extra: 0, timeErrors: [], losses: [] },
    legs: { found: 0, missed: 0, extra: 0, startErrors: [], endErrors: [] },
    direction: [],
    stationDirection: [],
    corrections: each(CORRECTIONS, () => ({ samples: [], nulls: 0 })),
  };
}

/** Errors of one debriefed race, added to `into`. */
export function measure(result: Result, series: RaceSeries, truth: Truth, into: Measured = emptyMeasured()): Measured {
  for (const boat of truth.boats) {
    const found = result.boats.find((b) => b.name === boat.name);
    const rows = series.boats.find((b) => b.name === boat.name);
    if (!found || !rows) throw new Error(`measure: no boat ${boat.name} in the result`);
    measureTacks(found, boat, truth, into);
    measureLegs(found, rows, boat, truth, into);
    const { corrections } = found;
    const { compassError, mastheadError } = boat;
    if (compassError !== null)
      correction(into, 'compass', corrections.compass_offset_deg, -compassError, truth, boat.name);
    if (mastheadError !== null)
      correction(into, 'masthead', corrections.awa_offset_deg, -mastheadError, truth, boat.name);
  }
  if (truth.station) {
    correction(into, 'station direction', result.corrections.twd_offset_deg, -truth.station.direction, truth, '');
    const lag = statedLag(result);
    correction(
      into,
      'lag s',
      lag === null ? null : { value: lag, se: null, basis: 'derived' },
      trueLag(truth),
      truth,
      '',
    );
  }
  return into;
}

function correction(into: Measured, key: Correction, q: Q, true_: number, truth: Truth, boat: string): void {
  const kept = into.corrections[key];
  if (q === null) {
    kept.nulls += 1;
    return;
  }
  const error = q.value - true_;
  kept.samples.push({ race: raceOf(truth), boat, leg: 0, error, errorOwn: error, se: q.se, sys: q.sys ?? 0 });
}

const raceOf = (truth: Truth): string => `${truth.condition}/${truth.seed}`;

/**
 * By how much the station's log is behind the wind at the boats, as a debrief that knows no more must find it: its late
 * stamps, and where its place is not told the way of the wind between the two, meant over settled sailing. [s]
 */
export function trueLag(truth: Truth): number {
  const station = truth.station!;
  if (!station.carried || station.placed) return station.late;
  const up = [Math.sin((truth.twd * Math.PI) / 180), Math.cos((truth.twd * Math.PI) / 180)] as const;
  const ahead = (x: number, y: number): number => x * up[0] + y * up[1];
  let sum = 0;
  let n = 0;
  for (const boat of truth.boats) {
    for (let i = 0; i < boat.n; i++) {
      if (!boat.settled[i]) continue;
      sum += ahead(boat.x[i], boat.y[i]) - ahead(station.x, station.y);
      n += 1;
    }
  }
  return station.late + sum / n / truth.tws;
}

/** Seconds by which the debrief says the station's log is late; null when it says nothing. */
export function statedLag(result: Result): number | null {
  for (const warning of result.warnings) {
    if (!/lag|clock-offset|late/.test(warning.code)) continue;
    const number = /(-?\d+(?:\.\d+)?) ?s(?:econds?)?\b/.exec(warning.message);
    if (number) return Number(number[1]) * (/early|ahead/.test(warning.message) ? -1 : 1);
  }
  return null;
}

type BoatResult = Result['boats'][number];
const seconds = (iso: string): number => Date.parse(iso) / 1000;
const MATCH_S = 10;
const AT_MARK_S = 12;

/** Tacks between gun and finish; turns that belong to a mark rounding count neither way. */
function measureTacks(found: BoatResult, boat: TrueBoat, truth: Truth, into: Measured): void {
  const finish = boat.legs.at(-1)!.end;
  const real = boat.turns.filter((t) => t.racing && t.kind === 'tack' && !t.atMark);
  const marks = [...boat.legs.map((leg) => leg.end), ...boat.turns.filter((t) => t.atMark).map((t) => t.time)];
  const claimed = found.manoeuvres.filter(
    (m) => m.kind === 'tack' && seconds(m.time) >= truth.gun && seconds(m.time) < finish,
  );
  const taken = new Set<number>();
  for (const tack of real) {
    let best = -1;
    claimed.forEach((m, i) => {
      const gap = Math.abs(seconds(m.time) - tack.time);
      if (taken.has(i) || gap > MATCH_S) return;
      if (best < 0 || gap < Math.abs(seconds(claimed[best].time) - tack.time)) best = i;
    });
    if (best < 0) {
      into.tacks.missed += 1;
      continue;
    }
    taken.add(best);
    into.tacks.hits += 1;
    into.tacks.timeErrors.push(seconds(claimed[best].time) - tack.time);
    const loss = claimed[best].loss_m;
    const lost = trueTackLoss(boat, tack);
    // A tack between two others has no settled sailing beside it to say what it cost.
    if (loss && !Number.isNaN(lost)) {
      const error = loss.value - lost;
      const se = loss.se;
      into.tacks.losses.push({
        race: raceOf(truth),
        boat: boat.name,
        leg: tack.time,
        error,
        errorOwn: error,
        se,
        sys: loss.sys ?? 0,
      });
    }
  }
  claimed.forEach((m, i) => {
    if (taken.has(i) || marks.some((t) => Math.abs(t - seconds(m.time)) < AT_MARK_S)) return;
    into.tacks.extra += 1;
  });
}

const overlap = (a0: number, a1: number, b0: number, b1: number): number =>
  Math.max(0, Math.min(a1, b1) - Math.max(a0, b0));

/** Each true leg against the debrief's leg of the same kind that covers most of it (at least half). */
function measureLegs(found: BoatResult, rows: BoatSeries, boat: TrueBoat, truth: Truth, into: Measured): void {
  const taken = new Set<number>();
  for (const leg of boat.legs) {
    let best = -1;
    let most = 0.5 * (leg.end - leg.start);
    found.legs.forEach((candidate, i) => {
      if (taken.has(i) || candidate.kind !== leg.kind) return;
      const shared = overlap(leg.start, leg.end, seconds(candidate.start), seconds(candidate.end));
      if (shared >= most) [best, most] = [i, shared];
    });
    if (best < 0) {
      into.legs.missed += 1;
      if (leg.kind === 'upwind') for (const quantity of QUANTITIES) into.nulls[quantity] += 1;
      continue;
    }
    taken.add(best);
    into.legs.found += 1;
    into.legs.startErrors.push(seconds(found.legs[best].start) - leg.start);
    into.legs.endErrors.push(seconds(found.legs[best].end) - leg.end);
    if (leg.kind === 'upwind') measureUpwind(found, best, rows, boat, leg, truth, into);
  }
  into.legs.extra += found.legs.filter((leg, i) => !taken.has(i) && leg.kind !== 'reach').length;
}

/** Mean of a column over chosen seconds. */
function meanOver(boat: TrueBoat, column: ArrayLike<number>, chosen: readonly number[], magnitude = false): number {
  if (boat.n !== column.length) throw new Error(`meanOver: ${column.length} of ${boat.n}`);
  let sum = 0;
  for (const i of chosen) sum += magnitude ? Math.abs(column[i]) : column[i];
  return chosen.length > 0 ? sum / chosen.length : NaN;
}

/** Truth's settled rows of a leg. */
export function settledRows(boat: TrueBoat, leg: TrueLeg): number[] {
  const rows: number[] = [];
  for (let i = leg.start - boat.t0; i < leg.end - boat.t0; i++) if (boat.settled[i]) rows.push(i);
  return rows;
}

/** The rows of the truth that the debrief called settled, within one of its legs. */
function ownRows(rows: BoatSeries, boat: TrueBoat, legIndex: number): number[] {
  const span = rows.legs.find((leg) => leg.index === legIndex);
  const chosen: number[] = [];
  if (!span) return chosen;
  for (let i = span.from; i < span.to; i++) {
    const k = rows.t0 + i - boat.t0;
    if (rows.settled[i] && k >= 0 && k < boat.n) chosen.push(k);
  }
  return chosen;
}

interface Seen {
  readonly quantity: Quantity;
  readonly q: Q;
  readonly truth: number;
  readonly truthOwn: number;
  /** Multiplies value, se and sys: to per cent of the truth, or to m/s. */
  readonly percent?: boolean;
}

function measureUpwind(
  found: BoatResult,
  index: number,
  rows: BoatSeries,
  boat: TrueBoat,
  leg: TrueLeg,
  truth: Truth,
  into: Measured,
): void {
  const mine = settledRows(boat, leg);
  const own = ownRows(rows, boat, index);
  const result = found.legs[index];
  const { steady } = result;
  const mean = (column: ArrayLike<number>, chosen: readonly number[]): number => meanOver(boat, column, chosen, true);
  const on = (chosen: readonly number[], sign: number): number[] => chosen.filter((i) => boat.gamma[i] * sign > 0);
  const side = (tack: TackSide | null | undefined, sign: number, quantity: Quantity): Seen => ({
    quantity,
    q: tack?.gamma_deg ?? null,
    truth: mean(boat.gamma, on(mine, sign)),
    truthOwn: mean(boat.gamma, on(own, sign)),
  });
  const whole = (value: number): { truth: number; truthOwn: number } => ({ truth: value, truthOwn: value });
  const both = (column: ArrayLike<number>, unit = 1): { truth: number; truthOwn: number } => ({
    truth: mean(column, mine) / unit,
    truthOwn: mean(column, own) / unit,
  });
  const every = Array.from({ length: leg.end - leg.start }, (_, i) => leg.start - boat.t0 + i);
  const entry = (cause: string): Q => result.ledger?.entries.find((e) => e.cause === cause)?.metres ?? null;
  // Against the debrief's own optimum: its boat model is not on trial here, an invented boat is no judge of it.
  const best = (result.optimum?.vmg_kn?.value ?? NaN) * KNOT;
  const seen: Seen[] = [
    { quantity: 'gamma', q: steady?.gamma_deg ?? null, ...both(boat.gamma) },
    side(steady?.port, -1, 'gamma port'),
    side(steady?.starboard, 1, 'gamma starboard'),
    { quantity: 'beta', q: steady?.beta_deg ?? null, ...both(boat.beta) },
    { quantity: 'speed %', q: steady?.speed_kn ?? null, ...both(boat.speed, KNOT), percent: true },
    { quantity: 'vmg %', q: steady?.vmg_kn ?? null, ...both(boat.vmg, KNOT), percent: true },
    { quantity: 'tws %', q: steady?.tws_kn ?? null, ...both(boat.tws, KNOT), percent: true },
    { quantity: 'leeway', q: steady?.leeway_deg ?? null, ...both(boat.leeway) },
    {
      quantity: 'efficiency',
      q: result.efficiency,
      truth: mean(boat.vmg, mine) / best,
      truthOwn: mean(boat.vmg, own) / best,
    },
    { quantity: 'whole leg vmg %', q: result.vmg_kn, ...whole(meanOver(boat, boat.vmg, every) / KNOT), percent: true },
    { quantity: 'manoeuvres m', q: entry('manoeuvres'), ...whole(trueManoeuvreLoss(boat, leg)) },
    { quantity: 'shifts m', q: entry('shifts'), ...whole(trueShifts(boat, leg)) },
  ];
  for (const one of seen) keep(one, mine.length, boat, leg, truth, into);
  measureDirection(rows, boat, leg, own, truth, into);
}

function keep(seen: Seen, settled: number, boat: TrueBoat, leg: TrueLeg, truth: Truth, into: Measured): void {
  const { quantity, q } = seen;
  if (q === null) {
    // A side never sailed for a block's length has no truth to miss.
    if (settled >= ENOUGH && !Number.isNaN(seen.truth)) into.nulls[quantity] += 1;
    return;
  }
  const unit = seen.percent ? 100 / seen.truth : 1;
  const unitOwn = seen.percent ? 100 / seen.truthOwn : 1;
  into.quantities[quantity].push({
    race: raceOf(truth),
    boat: boat.name,
    leg: leg.start,
    error: unit * (q.value - seen.truth),
    errorOwn: unitOwn * (q.value - seen.truthOwn),
    se: q.se === null ? null : unit * q.se,
    sys: unit * (q.sys ?? 0),
  });
}

/** Signed difference of two directions. [deg] */
const apart = (a: number, b: number): number => ((((a - b) % 360) + 540) % 360) - 180;

function measureDirection(
  rows: BoatSeries,
  boat: TrueBoat,
  leg: TrueLeg,
  own: number[],
  truth: Truth,
  into: Measured,
): void {
  let sum = 0;
  let n = 0;
  for (const k of own) {
    const estimate = rows.twd[boat.t0 + k - rows.t0];
    if (Number.isNaN(estimate)) continue;
    sum += apart(estimate, boat.twd[k]);
    n += 1;
  }
  if (n === 0) return;
  const error = sum / n;
  into.direction.push({
    race: raceOf(truth),
    boat: boat.name,
    leg: leg.start,
    error,
    errorOwn: error,
    se: null,
    sys: 0,
  });
  if (truth.station) into.stationDirection.push(truth.station.direction);
}
