/** An analyst who knows the truth, and errs only as told: proves that `measure()` finds the errors that are there. */
import type { LegResult, Q, Result, Steady, TackSide } from '../../src/result/result.js';
import type { BoatSeries, RaceSeries } from '../../src/result/series.js';
import { settledRows } from './measure.js';
import type { TrueBoat, TrueLeg, Truth } from './generator/index.js';
import { trueManoeuvreLoss, trueShifts, trueTackLoss } from './true-ledger.js';

const KNOT = 1852 / 3600;

export interface Slips {
  /** Added to every gamma, beta and leeway [deg], and to speeds as a fraction. */
  readonly gamma?: number;
  readonly beta?: number;
  readonly leeway?: number;
  readonly speed?: number;
  /** Added to the wind direction. [deg] */
  readonly direction?: number;
  /** Tacks come late by this [s]; the first tack of each boat is left out; one is made up before each finish. */
  readonly late?: number;
  readonly missTack?: boolean;
  readonly falseTack?: boolean;
  /** Legs begin late by this [s]; the last upwind leg is left out. */
  readonly legLate?: number;
  readonly missLeg?: boolean;
  /** Stated standard error of everything, and the shift of calibration. */
  readonly se?: number;
  readonly sys?: number;
}

const iso = (t: number): string => new Date(t * 1000).toISOString();

export function oracle(truth: Truth, slips: Slips = {}): { result: Result; series: RaceSeries } {
  const result: Result = {
    format: 'legwork-result',
    version: 1,
    program: { name: 'legwork', version: '0' },
    race: { name: truth.condition, start: iso(truth.gun), finish: iso(truth.finish) },
    inputs: [],
    wind: { sources: ['station'], twd_deg: q(truth.twd, slips), tws_kn: q(truth.tws / KNOT, slips) },
    corrections: { twd_offset_deg: truth.station ? q(-truth.station.direction, slips) : null, current: null },
    boats: truth.boats.map((boat) => ({
      name: boat.name,
      sailor: boat.name,
      model: { boat: 'single-hander', tuned: false, sha256: '' },
      corrections: {
        compass_offset_deg: boat.compassError === null ? null : q(-boat.compassError, slips),
        awa_offset_deg: boat.mastheadError === null ? null : q(-boat.mastheadError, slips),
      },
      manoeuvres: tacks(boat, slips),
      legs: legsOf(boat, slips).map((leg) => legResult(boat, leg, slips)),
      hints: [],
    })),
    warnings: [],
  };
  const series: RaceSeries = {
    frame: { ...truth.frame, metresPerDegreeLat: 111132, metresPerDegreeLon: 111320 },
    zone: null,
    marks: [],
    boats: truth.boats.map((boat) => seriesOf(boat, slips)),
  };
  return { result, series };
}

function q(value: number, slips: Slips, unit = 1): NonNullable<Q> {
  return { value, se: slips.se === undefined ? null : slips.se * unit, sys: (slips.sys ?? 0) * unit, basis: 'derived' };
}

function tacks(boat: TrueBoat, slips: Slips): Result['boats'][number]['manoeuvres'] {
  const real = boat.turns.filter((t) => t.racing && t.kind === 'tack');
  const kept = slips.missTack ? real.filter((t) => t !== real.find((other) => !other.atMark)) : real;
  const told = kept.map((t) => ({
    kind: 'tack' as const,
    time: iso(t.time + (slips.late ?? 0)),
    from: t.from,
    to: t.to,
    seconds: t.end - t.start,
    loss_m: q(trueTackLoss(boat, t), slips),
  }));
  const last = boat.legs.at(-1)!;
  const made = {
    kind: 'tack' as const,
    time: iso(0.5 * (last.start + last.end)),
    from: 'port',
    to: 'starboard',
    seconds: 8,
    loss_m: null,
  } as const;
  return slips.falseTack ? [...told, made] : told;
}

function legsOf(boat: TrueBoat, slips: Slips): TrueLeg[] {
  const lastUp = boat.legs.findLast((leg) => leg.kind === 'upwind');
  return boat.legs.filter((leg) => !slips.missLeg || leg !== lastUp);
}

function tackSide(boat: TrueBoat, rows: readonly number[], slips: Slips): TackSide {
  const mean = (column: Float64Array): number => rows.reduce((sum, i) => sum + Math.abs(column[i]), 0) / rows.length;
  const fast = 1 + (slips.speed ?? 0);
  return {
    seconds: rows.length,
    gamma_deg: q(mean(boat.gamma) + (slips.gamma ?? 0), slips),
    speed_kn: q((mean(boat.speed) / KNOT) * fast, slips, mean(boat.speed) / KNOT / 100),
    vmg_kn: q((mean(boat.vmg) / KNOT) * fast, slips, mean(boat.vmg) / KNOT / 100),
    tws_kn: q(mean(boat.tws) / KNOT, slips),
    aws_kn: null,
    beta_deg: q(mean(boat.beta) + (slips.beta ?? 0), slips),
    awa_deg: null,
    leeway_deg: q(mean(boat.leeway) + (slips.leeway ?? 0), slips),
    sheeting_deg: null,
    incidence_deg: null,
    aero_drag_angle_deg: null,
    hydro_drag_angle_deg: null,
  };
}

function steadyOf(boat: TrueBoat, leg: TrueLeg, slips: Slips): Steady | null {
  const rows = settledRows(boat, leg);
  if (rows.length === 0) return null;
  const on = (sign: number): TackSide | null => {
    const own = rows.filter((i) => boat.gamma[i] * sign > 0);
    return own.length > 0 ? tackSide(boat, own, slips) : null;
  };
  return { ...tackSide(boat, rows, slips), tacking_angle_deg: null, port: on(-1), starboard: on(1) };
}

function legResult(boat: TrueBoat, leg: TrueLeg, slips: Slips): LegResult {
  let sum = 0;
  for (let i = leg.start - boat.t0; i < leg.end - boat.t0; i++) sum += boat.vmg[i];
  const upwind = leg.kind === 'upwind';
  const entry = (cause: 'manoeuvres' | 'shifts', metres: number) => ({ cause, metres: q(metres, slips) });
  return {
    kind: leg.kind,
    lap: leg.lap,
    start: iso(leg.start + (slips.legLate ?? 0)),
    end: iso(leg.end),
    tacks: 0,
    gybes: 0,
    vmg_kn: q(sum / (leg.end - leg.start) / KNOT, slips),
    steady: upwind ? steadyOf(boat, leg, slips) : null,
    optimum: upwind ? optimumOf(boat, leg, slips) : null,
    ceiling_vmg_kn: null,
    efficiency: upwind ? efficiencyOf(boat, leg, slips) : null,
    share: null,
    ledger: upwind
      ? {
          reference: 'best',
          available_m: null,
          made_m: null,
          lost_m: null,
          entries: [entry('manoeuvres', trueManoeuvreLoss(boat, leg)), entry('shifts', trueShifts(boat, leg))],
        }
      : null,
    notes: [],
  };
}

function optimumOf(boat: TrueBoat, leg: TrueLeg, slips: Slips): LegResult['optimum'] {
  const rows = settledRows(boat, leg);
  const best = rows.reduce((sum, i) => sum + boat.bestVmg[i], 0) / rows.length;
  const rest = { gamma_deg: null, speed_kn: null, beta_deg: null, leeway_deg: null, sheeting_deg: null };
  return { ...rest, vmg_kn: q(best / KNOT, slips) };
}

function efficiencyOf(boat: TrueBoat, leg: TrueLeg, slips: Slips): Q {
  const rows = settledRows(boat, leg);
  const total = (column: Float64Array): number => rows.reduce((sum, i) => sum + column[i], 0);
  return rows.length > 0 ? q(total(boat.vmg) / total(boat.bestVmg), slips) : null;
}

function seriesOf(boat: TrueBoat, slips: Slips): BoatSeries {
  const { t0, n, x, y, ux, uy, vx, vy, tws, gamma, speed, vmg, beta, heading, settled } = boat;
  return {
    name: boat.name,
    t0,
    n,
    x,
    y,
    ux,
    uy,
    vx,
    vy,
    twd: boat.twd.map((d) => d + (slips.direction ?? 0)),
    tws,
    gamma,
    speed,
    vmg,
    beta,
    aws: new Float64Array(n).fill(NaN),
    heading,
    settled,
    legs: legsOf(boat, slips).map((leg, index) => ({ index, from: leg.start - t0, to: leg.end - t0 })),
    manoeuvres: [],
    blocks: [],
  };
}
