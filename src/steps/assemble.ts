import type { Race } from '../files/race-types.js';
import { circularMean, directionOf } from '../math/angles.js';
import type { Issue } from '../recording/issues.js';
import { isoTime, knotsQuantity, quantity } from '../result/quantity.js';
import type {
  Basis,
  BoatResult,
  ExcessResult,
  Hint,
  InputEntry,
  Ledger,
  LegResult,
  ManoeuvreResult,
  OptimumResult,
  Q,
  Result,
  Steady,
  TackSide,
  TrimResult,
  Warning,
  WindSource as SourceName,
} from '../result/result.js';
import { LEEWAY_BASIS } from '../estimate/leeway.js';
import { apparentBy, windBySpeed } from '../estimate/wind-by-speed.js';
import type { Figure, SteadyFigures } from '../estimate/steady.js';
import type { BoatEstimate, LegEstimate } from './estimate-boat.js';
import type { CleanBoat } from './clean-tracks.js';
import type { FoundWind } from './find-wind.js';
import type { ReadFile } from './read-logs.js';
import { CAUSES, type LedgerFigures } from '../estimate/ledger.js';
import type { RaceModel } from './boat-models.js';
import type { BoatExcess } from './hints.js';
import type { Corrections } from './reconcile-boats.js';
import type { BoatTrim, LegTrim, Trim } from './trim.js';
import type { Judgement, LegJudgement, Optimum } from './judge.js';

export interface Assembly {
  readonly race: Race;
  readonly version: string;
  readonly files: readonly ReadFile[];
  readonly boats: readonly CleanBoat[];
  readonly wind: FoundWind;
  readonly handWind: boolean;
  readonly estimates: readonly BoatEstimate[];
  readonly issues: readonly Issue[];
  readonly models: readonly RaceModel[];
  readonly corrections: Corrections;
  readonly trims: readonly BoatTrim[];
  readonly excess: readonly (BoatExcess | null)[];
  readonly hints: readonly (readonly Hint[])[];
  readonly judgements: readonly Judgement[];
}

/** The result file's object from the estimates: units of the outside, notes, warnings. */
export function assemble(a: Assembly): Result {
  return {
    format: 'legwork-result',
    version: 1,
    program: { name: 'legwork', version: a.version },
    race: {
      name: a.race.name,
      start: a.race.start === null ? null : isoTime(a.race.start),
      finish: a.race.finish === null ? null : isoTime(a.race.finish),
    },
    inputs: a.files.map((file) => inputEntry(file, a.boats)),
    wind: windOf(a),
    corrections: { twd_offset_deg: twdOffset(a.wind), current: currentResult(a.corrections) },
    boats: a.boats.map((boat, k) => boatResult(boat, k, a)),
    warnings: a.issues.map(({ code, message, file }): Warning => ({ code, message, ...(file ? { file } : {}) })),
  };
}

/** Counts of one file; fixes the smoother turned away are taken off those the importer kept. */
function inputEntry({ file, log }: ReadFile, boats: readonly CleanBoat[]): InputEntry {
  const user = boats.find((boat) => boat.logs.trackFiles.includes(file) && boat.logs.trackFiles.length === 1);
  const later = user
    ? user.rejected.map((r) => ({ reason: r.reason, count: r.count, first_line: r.firstRow + 1 }))
    : [];
  const lost = later.reduce((sum, r) => sum + r.count, 0);
  const gaps = boats.find((boat) => boat.logs.trackFiles[0] === file)?.gaps ?? [];
  return {
    file,
    sha256: log.sha256,
    kind: log.kind,
    rows: log.rows,
    kept: log.kept - lost,
    ignored: log.ignored,
    ignored_types: log.ignoredTypes,
    rejected: [...log.rejected, ...later],
    fixes: log.fixes - lost,
    samples: log.samples,
    gaps: gaps.map((gap) => ({ from: isoTime(gap.from), seconds: gap.seconds })),
  };
}

function windOf(a: Assembly): Result['wind'] {
  const { wind, handWind } = a;
  const names = new Set<SourceName>(wind.sources.map(({ source }) => source.kind));
  if (handWind) names.add('by-hand');
  const legs = wind.sailed.flatMap((one) => one.legs.map((leg) => ({ one, leg })));
  const directions = legs.flatMap(({ one, leg }) => Array.from(one.sailing.twd.subarray(leg.from, leg.to)));
  const speeds = legs.flatMap(({ one, leg }) => Array.from(one.tws.subarray(leg.from, leg.to)));
  const known = speeds.filter((speed) => !Number.isNaN(speed));
  const offset = firstOffset(wind);
  const direction = {
    value: circularMean(directions).mean,
    se: wind.directionInferred ? 2 : 1,
    sys: wind.directionInferred ? 0 : (offset?.se ?? wind.sources[0].source.accuracyDir),
  };
  const mean = known.reduce((sum, s) => sum + s, 0) / known.length;
  const speed = {
    value: mean,
    se: 0.02 * mean,
    sys: (wind.sources[0]?.source.accuracySpeed ?? 0) * mean,
  };
  const bases = new Set(a.boats.map((_, k) => windBasis(a, k)));
  const basis = bases.size === 1 ? [...bases][0] : 'measured';
  return {
    sources: [...names],
    twd_deg: quantity(direction, wind.directionInferred ? 'inferred' : basis),
    tws_kn: known.length > 0 ? knotsQuantity(speed, handWind ? 'assumed' : basis) : windBySpeeds(a),
  };
}

/** Where no log has the wind's speed: what the models make of the beats' speeds, weighted by their settled time. */
function windBySpeeds({ estimates, models }: Assembly): Q {
  let seconds = 0;
  let value = 0;
  let se = 0;
  estimates.forEach(({ legs }, k) => {
    for (const { all } of legs) {
      const wind = all && shownWind(all, models[k]);
      if (!wind) continue;
      seconds += all.seconds;
      value += all.seconds * wind.value;
      // All of one model: their errors go together.
      se += all.seconds * wind.se;
    }
  });
  return seconds > 0 ? knotsQuantity({ value: value / seconds, se: se / seconds }, 'inferred') : null;
}

function shownWind({ speed, gamma }: SteadyFigures, { curve, accuracy }: RaceModel): Figure | null {
  return windBySpeed(curve, speed, gamma, accuracy.speed);
}

/** The triangle's wind side; through the model, where no log has the wind's speed. */
function windSide(figures: SteadyFigures, wind: WindBasis): Pick<TackSide, 'tws_kn' | 'aws_kn' | 'beta_deg'> {
  const basis: Basis = wind.inferred ? 'inferred' : 'derived';
  if (!Number.isNaN(figures.tws.value)) {
    return {
      tws_kn: knotsQuantity(figures.tws, wind.tws),
      aws_kn: knotsQuantity(figures.aws, basis),
      beta_deg: quantity(figures.beta, basis),
    };
  }
  const tws = shownWind(figures, wind.model);
  const apparent = tws && apparentBy(tws, figures);
  return {
    tws_kn: knotsQuantity(tws, 'inferred'),
    aws_kn: knotsQuantity(apparent && apparent.aws, 'inferred'),
    beta_deg: quantity(apparent && apparent.beta, 'inferred'),
  };
}

/** A station measures the true wind; from a moving boat it is derived. */
function windBasis({ wind }: Assembly, boat: number): Basis {
  const own = wind.sources.filter(({ source }) => source.boat === boat);
  const used = own.length > 0 ? own : wind.sources.filter(({ source }) => source.boat < 0);
  return (used.length > 0 ? used : wind.sources).every(({ source }) => source.kind === 'on-board')
    ? 'derived'
    : 'measured';
}

/** Of the first station where there is one: what the boats measured is theirs. */
function firstOffset(wind: FoundWind): { offset: number; se: number } | null {
  const station = wind.offsets.find((offset, k) => offset !== null && wind.sources[k]?.source.kind === 'station');
  return station ?? wind.offsets.find((offset) => offset !== null) ?? null;
}

function twdOffset(wind: FoundWind): Q {
  const offset = firstOffset(wind);
  return offset ? quantity({ value: offset.offset, se: offset.se }, 'inferred') : null;
}

function boatResult(boat: CleanBoat, k: number, a: Assembly): BoatResult {
  const { reference } = boat.logs;
  const estimate = a.estimates[k];
  const model = a.models[k];
  return {
    name: reference.name,
    sailor: reference.sailor,
    ...(reference.crewMassKg === undefined ? {} : { crew_mass_kg: reference.crewMassKg }),
    model: { boat: reference.boat, tuned: model.tuned, sha256: model.sha256 },
    corrections: {
      compass_offset_deg: quantity(a.corrections.boats[k].compass, 'inferred'),
      awa_offset_deg: quantity(a.corrections.boats[k].masthead, 'inferred'),
    },
    manoeuvres: estimate.manoeuvres.map(({ manoeuvre, loss }): ManoeuvreResult => ({
      kind: manoeuvre.kind,
      time: isoTime(Math.round(manoeuvre.time * 10) / 10),
      from: manoeuvre.from,
      to: manoeuvre.to,
      seconds: manoeuvre.exit - manoeuvre.entry,
      loss_m: quantity(loss, 'derived'),
    })),
    legs: estimate.legs.map((leg, index) => legResult(leg, k, index, a)),
    excess: excessResult(a.excess[k], a.race),
    hints: a.hints[k],
  };
}

function excessResult(found: BoatExcess | null, race: Race): ExcessResult | null {
  if (!found) return null;
  return {
    over: race.boats[found.other].name,
    causes: found.excesses.map(({ cause, metres, se, sys, stands }) => ({
      cause,
      metres: quantity({ value: metres, se, sys }, 'inferred'),
      stands,
    })),
  };
}

function legResult(estimate: LegEstimate, boat: number, index: number, a: Assembly): LegResult {
  const { leg, all } = estimate;
  const { sailing } = a.wind.sailed[boat];
  const { reference, legs } = a.judgements[boat];
  const judged = legs[index];
  const inferred = a.wind.directionInferred;
  return {
    kind: leg.kind,
    lap: leg.lap,
    start: isoTime(sailing.t0 + leg.from),
    end: isoTime(sailing.t0 + leg.to),
    tacks: estimate.tacks,
    gybes: estimate.gybes,
    vmg_kn: knotsQuantity(estimate.vmg, inferred ? 'inferred' : 'derived'),
    steady: all
      ? steadyOf(estimate, a.trims[boat].legs[index], {
          inferred,
          tws: a.handWind ? 'assumed' : windBasis(a, boat),
          model: a.models[boat],
        })
      : null,
    optimum: judged.optimum && optimumResult(judged.optimum),
    ceiling_vmg_kn: all ? knotsQuantity(all.ceiling, 'derived') : null,
    efficiency: quantity(judged.efficiency, 'inferred'),
    share: quantity(judged.share, 'inferred'),
    ledger: judged.ledger && ledgerResult(judged.ledger, reference.kind),
    trim: trimResult(a.trims[boat].legs[index]?.all ?? null),
    notes: legNotes(estimate, judged, a.trims[boat].legs[index]),
  };
}

function legNotes(estimate: LegEstimate, judged: LegJudgement, trim: LegTrim | null): string[] {
  const { leg, all, port, starboard } = estimate;
  if (leg.kind === 'reach') return ['settled figures are for beats only', 'no VMG on a reach'];
  if (leg.kind === 'downwind') {
    return ['settled figures are for beats only', ...(judged.optimum ? [] : ['wind speed unknown'])];
  }
  if (!all) {
    const calm = Number.isNaN(estimate.twd) ? ['wind unknown: no wind log reaches this leg'] : [];
    return ['no settled close-hauled sailing on this leg', ...calm];
  }
  const notes: string[] = [];
  if (!port || !starboard) notes.push(`no settled sailing on ${port ? 'starboard' : 'port'} tack`);
  if (Number.isNaN(all.tws.value)) {
    notes.push('wind speed unknown', 'the wind speed shown is the one the boat model needs for the speed sailed');
  }
  if (judged.ledger && !trim?.loss) {
    notes.push('trim: leeway was not measured closely enough to tell it from speed, so its metres stay in speed');
  }
  if (trim && !trim.all.sheeting) notes.push('sheeting: the log says too little of it');
  if (trim?.all.beatsModel) {
    notes.push(
      trim.all.aero
        ? 'leeway and drag angles: a little faster than the boat file allows, taken as driven in full'
        : 'leeway and drag angles: faster than the boat file allows',
    );
  }
  return notes;
}

function optimumResult(best: Optimum): OptimumResult {
  return {
    gamma_deg: quantity(best.gamma, 'inferred'),
    speed_kn: knotsQuantity(best.speed, 'inferred'),
    vmg_kn: knotsQuantity(best.vmg, 'inferred'),
    beta_deg: quantity(best.beta, 'inferred'),
    aero_drag_angle_deg: quantity(best.aero, 'inferred'),
    hydro_drag_angle_deg: quantity(best.hydro, 'inferred'),
    leeway_deg: quantity(best.leeway, 'inferred'),
    sheeting_deg: quantity(best.sheeting, 'inferred'),
  };
}

function trimResult(trim: Trim | null): TrimResult | null {
  if (!trim) return null;
  const { leeway, posterior } = trim;
  return {
    leeway_ways: (leeway?.ways ?? []).map(({ way, value, se, weight }) => ({
      way,
      leeway_deg: quantity({ value, se }, LEEWAY_BASIS[way]),
      weight,
    })),
    sheeting_prior_deg: posterior && quantity({ value: posterior.priorMean, se: posterior.priorSd }, 'assumed'),
    sheeting_posterior_deg: posterior && quantity({ value: posterior.mean, se: posterior.sd }, 'inferred'),
  };
}

function ledgerResult(ledger: LedgerFigures, reference: Ledger['reference']): Ledger {
  return {
    reference,
    available_m: quantity(ledger.available, 'inferred'),
    made_m: quantity(ledger.made, 'derived'),
    lost_m: quantity(ledger.lost, 'inferred'),
    entries: CAUSES.map((cause) => ({ cause, metres: quantity(ledger.entries[cause], 'inferred') })),
  };
}

/** Standard deviation of a direction of which nothing is known: uniform over the circle, 180 / sqrt(3). [deg] */
const ANY = 180 / Math.sqrt(3);

function currentResult({ current }: Corrections): Result['corrections']['current'] {
  if (!current) return null;
  const { east, north } = current;
  const drift = Math.hypot(east.value, north.value);
  const se = Math.hypot(east.se, north.se) / Math.SQRT2;
  return {
    set_deg: quantity(
      { value: directionOf(east.value, north.value), se: Math.min(ANY, (180 / Math.PI) * (se / drift)) },
      'inferred',
    ),
    drift_kn: knotsQuantity({ value: drift, se }, 'inferred'),
  };
}

/** What the wind of a leg rests on. */
interface WindBasis {
  /** Its direction comes from the tracks. */
  readonly inferred: boolean;
  readonly tws: Basis;
  /** What a speed that no log has is inferred through. */
  readonly model: RaceModel;
}

function steadyOf(estimate: LegEstimate, trim: LegTrim | null, basis: WindBasis): Steady {
  const side = (figures: SteadyFigures | null, own: Trim | null | undefined): TackSide | null =>
    figures && sideOf(figures, null, own ?? null, basis);
  return {
    ...sideOf(estimate.all!, estimate.vane, trim?.all ?? null, basis),
    tacking_angle_deg: quantity(estimate.tackingAngle, basis.inferred ? 'inferred' : 'derived'),
    port: side(estimate.port, trim?.port),
    starboard: side(estimate.starboard, trim?.starboard),
  };
}

function sideOf(figures: SteadyFigures, vane: Figure | null, trim: Trim | null, wind: WindBasis): TackSide {
  const basis: Basis = wind.inferred ? 'inferred' : 'derived';
  const leeway = trim?.leeway ?? null;
  const sheeting = trim?.sheeting ?? null;
  return {
    seconds: figures.seconds,
    gamma_deg: quantity(figures.gamma, basis),
    speed_kn: knotsQuantity(figures.speed, 'measured'),
    vmg_kn: knotsQuantity(figures.vmg, basis),
    ...windSide(figures, wind),
    awa_deg: vane ? quantity(vane, 'measured') : quantity(trim?.awa ?? null, 'inferred'),
    leeway_deg: leeway && quantity(leeway, leeway.basis),
    sheeting_deg: sheeting && quantity({ value: sheeting.mean, se: sheeting.sd }, 'inferred'),
    incidence_deg: quantity(trim?.incidence ?? null, 'inferred'),
    aero_drag_angle_deg: quantity(trim?.aero ?? null, 'inferred'),
    hydro_drag_angle_deg: quantity(trim?.hydro ?? null, 'inferred'),
  };
}
