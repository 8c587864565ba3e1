/** Result files of invented seasons with the truth known: values are dealt here, nothing is computed. */
import type { BoatResult, LegResult, ManoeuvreResult, Q, Result, Steady } from '../../src/result/result.js';
import { generator, normal } from '../between/two-boats.js';

export interface SailorTruth {
  readonly name: string;
  /** Change of efficiency, share and settled speed in a month, as a fraction of their level (0.015 = 1.5 %). */
  readonly gain?: number;
  /** Model digest by race, the same for all when left out. */
  readonly model?: (race: number) => string;
  readonly crewMass?: number;
}

export interface SeasonTruth {
  readonly seed: number;
  readonly races: number;
  /** Days between races. */
  readonly every: number;
  readonly sailors: readonly SailorTruth[];
  /** Scatter from race to race, as a fraction. */
  readonly scatter?: number;
  /** Wind of a race [kn], 6 to 16 at random when left out. */
  readonly wind?: (race: number) => number;
  /** Efficiency lost or won a knot of wind. */
  readonly byWind?: number;
  /** Standard error stated with each value, as a fraction of the scatter; the value is off by it on top. */
  readonly stated?: (race: number) => number;
  readonly legs?: number;
  /** Leave out everything but efficiency. */
  readonly efficiencyOnly?: boolean;
}

const START = Date.UTC(2026, 3, 4, 13, 0, 0);
const DAY = 86400_000;

const q = (value: number, se: number | null = null): Q => ({ value, se, basis: 'derived' });

export function inventedSeason(truth: SeasonTruth): Result[] {
  const random = generator(truth.seed);
  return Array.from({ length: truth.races }, (_, race) => {
    const wind = truth.wind?.(race) ?? 6 + 10 * random();
    const start = START + race * truth.every * DAY;
    return {
      format: 'legwork-result',
      version: 1,
      program: { name: 'legwork', version: '0.0.0' },
      race: { name: `Race ${race + 1}`, start: new Date(start).toISOString(), finish: null },
      inputs: [],
      wind: { sources: ['station'], twd_deg: q(215), tws_kn: q(wind) },
      corrections: { twd_offset_deg: null, current: null },
      boats: truth.sailors.map((sailor) => inventedBoat(random, truth, sailor, race, start, wind)),
      warnings: [],
    };
  });
}

function inventedBoat(
  random: () => number,
  truth: SeasonTruth,
  sailor: SailorTruth,
  race: number,
  start: number,
  wind: number,
): BoatResult {
  const { scatter = 0.03, legs = 2 } = truth;
  const stated = scatter * (truth.stated?.(race) ?? 0.2);
  const skill = 1 + ((sailor.gain ?? 0) * race * truth.every) / 30;
  const deal = (level: number, byWind = 0): { value: number; se: number } => ({
    value: level * (skill + byWind * (wind - 10) + Math.hypot(scatter, stated) * normal(random)),
    se: level * stated,
  });
  const level = {
    efficiency: deal(0.9, truth.byWind),
    share: deal(0.8, truth.byWind),
    settled: deal(0.95, truth.byWind),
  };
  const unchanging = (centre: number): number => centre * (1 + 0.3 * normal(random));
  const off = { leeway: Math.abs(unchanging(1)), sheeting: Math.abs(unchanging(3)), tack: unchanging(9) };
  const only = truth.efficiencyOnly ?? false;
  return {
    name: sailor.name,
    sailor: sailor.name,
    ...(sailor.crewMass ? { crew_mass_kg: sailor.crewMass } : {}),
    model: { boat: 'single-hander', tuned: false, sha256: sailor.model?.(race) ?? 'a'.repeat(64) },
    corrections: { compass_offset_deg: null, awa_offset_deg: null },
    manoeuvres: only ? [] : [0, 1, 2].map((k) => inventedTack(start + k * 100_000, off.tack)),
    legs: Array.from({ length: legs }, (_, lap) => inventedLeg(start, lap, wind, level, off, only)),
    hints: [],
  };
}

function inventedTack(time: number, loss: number): ManoeuvreResult {
  const iso = new Date(time).toISOString();
  return { kind: 'tack', time: iso, from: 'port', to: 'starboard', seconds: 9, loss_m: q(loss, 1) };
}

type Level = Record<'efficiency' | 'share' | 'settled', { value: number; se: number }>;

function inventedLeg(
  start: number,
  lap: number,
  wind: number,
  level: Level,
  off: { leeway: number; sheeting: number },
  only: boolean,
): LegResult {
  const from = start + lap * 1_200_000;
  // Over two legs the error of the mean is that of a leg over sqrt 2.
  const leg = (figure: { value: number; se: number }): Q => q(figure.value, figure.se * Math.SQRT2);
  const bare = {
    kind: 'upwind' as const,
    lap: lap + 1,
    start: new Date(from).toISOString(),
    end: new Date(from + 600_000).toISOString(),
    tacks: 3,
    gybes: 0,
    vmg_kn: null,
    ceiling_vmg_kn: null,
    notes: [],
    efficiency: leg(level.efficiency),
  };
  const best = 3;
  const steady = steadyWith({
    tws_kn: q(wind),
    vmg_kn: only ? null : leg({ value: best * level.settled.value, se: best * level.settled.se }),
    leeway_deg: only ? null : q(5 + off.leeway, 0.2),
    sheeting_deg: only ? null : q(8 - off.sheeting, 1),
  });
  if (only) return { ...bare, steady, optimum: null, share: null, ledger: null };
  const available = ((best * 1852) / 3600) * 600;
  return {
    ...bare,
    steady,
    optimum: { ...emptyOptimum, leeway_deg: q(5), sheeting_deg: q(8) },
    share: leg(level.share),
    ledger: {
      reference: 'best',
      available_m: q(available),
      made_m: q(available * level.share.value),
      lost_m: q(available * (1 - level.share.value)),
      entries: [],
    },
  };
}

const emptyOptimum = {
  gamma_deg: null,
  speed_kn: null,
  vmg_kn: null,
  beta_deg: null,
  leeway_deg: null,
  sheeting_deg: null,
};

function steadyWith(given: Partial<Steady>): Steady {
  return {
    seconds: 400,
    gamma_deg: null,
    speed_kn: null,
    vmg_kn: null,
    tws_kn: null,
    aws_kn: null,
    beta_deg: null,
    awa_deg: null,
    leeway_deg: null,
    sheeting_deg: null,
    incidence_deg: null,
    aero_drag_angle_deg: null,
    hydro_drag_angle_deg: null,
    tacking_angle_deg: null,
    port: null,
    starboard: null,
    ...given,
  };
}
