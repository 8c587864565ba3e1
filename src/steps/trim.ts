import type { Race } from '../files/race-types.js';
import { leewayOfSailing, type LeewayEstimate } from '../estimate/leeway.js';
import { sheetingPosterior, trimLoss, type SheetingPosterior } from '../estimate/sheeting.js';
import type { BlockEstimate } from '../estimate/blocks.js';
import type { Figure, SteadyFigures } from '../estimate/steady.js';
import { directionOf, turn } from '../math/angles.js';
import { achieved } from '../physics/achieved.js';
import { bestLoads, flowAt } from '../physics/balance.js';
import type { Issue } from '../recording/issues.js';
import type { Track } from '../recording/track.js';
import { tackSign } from '../segment/sailing.js';
import type { RaceModel } from './boat-models.js';
import type { Level } from './able-speed.js';
import type { BoatEstimate, LegEstimate } from './estimate-boat.js';
import type { BoatCorrections } from './reconcile-boats.js';
import type { Sailed } from './sail.js';

/** What the model and the sensors say of a stretch's trim. null: not to be had. */
export interface Trim {
  readonly leeway: LeewayEstimate | null;
  /** True where no trim of the model drives the boat so fast. */
  readonly beatsModel: boolean;
  /** The same, by more than the errors of speed and wind. */
  readonly clearlyBeats: boolean;
  /** Where the boom was (speed included), however little the log says of it; null where the model cannot sail there. */
  readonly posterior: SheetingPosterior | null;
  /** The same where the log says enough of it to be shown. */
  readonly sheeting: SheetingPosterior | null;
  readonly incidence: Figure | null;
  readonly aero: Figure | null;
  readonly hydro: Figure | null;
  readonly awa: Figure | null;
}

export interface LegTrim {
  readonly all: Trim;
  readonly port: Trim | null;
  readonly starboard: Trim | null;
  /** Speed that the trim cost, where leeway was measured and the posterior without speed is narrow. [m/s] */
  readonly loss: { readonly loss: number; readonly sd: number } | null;
}

export interface BoatTrim {
  /** One a leg; null where there is no settled sailing in known wind. */
  readonly legs: readonly (LegTrim | null)[];
  /** Share of the legs on which the boat was faster than the model can be. */
  readonly beatsModel: number;
}

/** A posterior wider than this says nothing of what trim cost. [deg] */
const NARROW = 2;
/** What is left of a compass's and a vane's error in a leg's mean, their offsets apart: common practice, no source. [deg] */
const COMPASS_NOISE = 0.2;
const VANE_NOISE = 0.4;

/** What the day's best boat tells of what the others are able to; null: nothing. */
export interface Levels {
  readonly speed: Level | null;
  readonly leeway: Level | null;
}

/** Leeway, sheeting and drag angles of every beat of a boat. */
export function trimBoat(
  one: Sailed,
  estimate: BoatEstimate,
  track: Track,
  model: RaceModel,
  corrections: BoatCorrections,
  levels: Levels,
): BoatTrim {
  const legs = estimate.legs.map((leg) => (leg.all && !Number.isNaN(leg.all.tws.value) ? legTrim(leg) : null));
  const judged = legs.filter((leg) => leg !== null);
  const beaten = judged.filter((leg) => leg.all.clearlyBeats).length;
  return { legs, beatsModel: judged.length > 0 ? beaten / judged.length : 0 };

  function legTrim(leg: LegEstimate): LegTrim {
    const of = (figures: SteadyFigures, blocks: readonly BlockEstimate[]): Trim =>
      trimOf(figures, blocks, track, one, model, corrections, levels);
    const on = (tack: string): readonly BlockEstimate[] => leg.blocks.filter((block) => block.tack === tack);
    const all = of(leg.all!, leg.blocks);
    return {
      all,
      port: leg.port ? of(leg.port, on('port')) : null,
      starboard: leg.starboard ? of(leg.starboard, on('starboard')) : null,
      loss: lossOf(leg.all!, all.leeway, model, levels),
    };
  }
}

function trimOf(
  figures: SteadyFigures,
  blocks: readonly BlockEstimate[],
  track: Track,
  one: Sailed,
  { model, accuracy }: RaceModel,
  corrections: BoatCorrections,
  { speed: able, leeway: level }: Levels,
): Trim {
  const speed = figures.speed.value;
  const tws = figures.tws.value;
  const gamma = figures.gamma.value;
  const total = (figure: Figure): number => Math.hypot(figure.se, figure.sys);
  const drift = corrections.leeway && corrections.compass ? driftOf(track, one, blocks) : NaN;
  const mast = corrections.masthead && track.awa ? meanSize(track.awa, blocks) : NaN;
  const errors = {
    speed: total(figures.speed),
    tws: total(figures.tws),
    gamma: total(figures.gamma),
    drift: Math.hypot(corrections.compass?.se ?? 0, COMPASS_NOISE),
    mastheadAngle: Math.hypot(corrections.masthead?.se ?? 0, VANE_NOISE),
  };
  const input = { speed, tws, gamma, drift, mastheadAngle: mast };
  const leeway = leewayOfSailing(model, input, errors, accuracy);
  const posterior = sheetingPosterior(model, {
    speed,
    tws,
    gamma,
    leewayLevel: level ?? ownLevel(accuracy),
    ...(able ? { able: { share: able.share, se: Math.hypot(able.se, errors.speed / speed) } } : {}),
    ...(measured(leeway) ? { leeway: measured(leeway)! } : {}),
    ...(track.heel ? { heel: { value: meanSize(track.heel, blocks), se: 1 } } : {}),
  });
  const fits = posterior && Math.abs(posterior.mean - posterior.priorMean) < MOST_ASTRAY * posterior.priorSd;
  const sheeting = posterior?.narrowed && fits ? posterior : null;
  const { eased, full, margin } = achieved(model, { speed, tws, gamma });
  const byForces = leeway?.ways.some(({ way }) => way === 'forces');
  const state = byForces ? (eased ?? full) : null;
  const beta = figures.beta;
  const aero = state ? { value: state.aeroDragAngle, se: MODEL_ANGLE, sys: 0 } : null;
  return {
    leeway,
    posterior,
    beatsModel: margin < 0,
    clearlyBeats: achieved(model, { speed: speed - 2 * errors.speed, tws: tws + 2 * errors.tws, gamma }).margin < 0,
    sheeting,
    incidence:
      sheeting && leeway
        ? {
            value: beta.value - sheeting.mean - leeway.value,
            se: Math.hypot(beta.se, sheeting.sd, leeway.se),
            sys: beta.sys,
          }
        : null,
    aero,
    hydro: aero ? { value: beta.value - aero.value, se: Math.hypot(beta.se, MODEL_ANGLE), sys: beta.sys } : null,
    awa: leeway ? { value: beta.value - leeway.value, se: Math.hypot(beta.se, leeway.se), sys: beta.sys } : null,
  };
}

/** A posterior further from its prior than so many of its standard deviations tells of the boat file, not of the boom. */
const MOST_ASTRAY = 2;

/** What the model's drag angles are good to: common practice, no source. [deg] */
const MODEL_ANGLE = 1.5;

/** Of a model with nothing beside it. */
const ownLevel = ({ leeway }: RaceModel['accuracy']): Level => ({ share: 1, se: leeway });

/** How far the day's best boat and another of its kind may differ in leeway for the same forces: common practice, no source. */
const KIND_LEEWAY = 0.05;

/**
 * Measured leeway of a boat over what its model has at the speed it sailed, trimmed for most drive: mean of its beats.
 * null without leeway measured. Of booms hauled in 6 degrees in twenty invented races the posterior missed four with the
 * model's own leeway, none with this.
 */
export function leewayLevel(trim: BoatTrim, { legs }: BoatEstimate, { model }: RaceModel): Level | null {
  const shares = trim.legs.flatMap((leg, k) => {
    const known = measured(leg?.all.leeway ?? null);
    const figures = legs[k].all;
    if (!known || !figures) return [];
    const speed = figures.speed.value;
    const loads = bestLoads(model, flowAt(model, speed, figures.tws.value, figures.gamma.value));
    const expected = model.leeway(speed, loads.side, loads.heel);
    return expected > 0 ? [{ share: known.value / expected, se: known.se / expected }] : [];
  });
  if (shares.length === 0) return null;
  const share = shares.reduce((sum, one) => sum + one.share, 0) / shares.length;
  return { share, se: Math.hypot(KIND_LEEWAY, Math.hypot(...shares.map(({ se }) => se)) / shares.length) };
}

/** Leeway as the sensors have it, the model's own left out; null where only the forces told it. */
function measured(leeway: LeewayEstimate | null): { value: number; se: number } | null {
  const ways = (leeway?.ways ?? []).filter(({ way }) => way !== 'forces');
  if (ways.length === 0) return null;
  const total = ways.reduce((sum, way) => sum + 1 / way.se ** 2, 0);
  return { value: ways.reduce((sum, way) => sum + way.value / way.se ** 2, 0) / total, se: Math.sqrt(1 / total) };
}

function lossOf(
  figures: SteadyFigures,
  leeway: LeewayEstimate | null,
  { model, accuracy }: RaceModel,
  levels: Levels,
): LegTrim['loss'] {
  const known = measured(leeway);
  if (!known) return null;
  const { speed, tws, gamma } = figures;
  const posterior = sheetingPosterior(model, {
    speed: speed.value,
    tws: tws.value,
    gamma: gamma.value,
    leeway: known,
    leewayLevel: levels.leeway ?? ownLevel(accuracy),
  });
  if (!posterior || posterior.sd >= NARROW) return null;
  return trimLoss(model, tws.value, gamma.value, posterior);
}

/** Mean angle from the bow to the course through the water over the blocks, positive to leeward. [deg] */
function driftOf(track: Track, one: Sailed, blocks: readonly BlockEstimate[]): number {
  if (!track.heading) return NaN;
  let sum = 0;
  let n = 0;
  for (const block of blocks) {
    for (let i = block.from; i < block.to; i++) {
      const course = directionOf(one.sailing.ux[i], one.sailing.uy[i]);
      const drift = tackSign(block.tack) * turn(course, track.heading[i]);
      if (Number.isNaN(drift)) continue;
      sum += drift;
      n++;
    }
  }
  return n > 0 ? sum / n : NaN;
}

function meanSize(values: Float64Array, blocks: readonly BlockEstimate[]): number {
  let sum = 0;
  let n = 0;
  for (const block of blocks) {
    for (let i = block.from; i < block.to; i++) {
      if (Number.isNaN(values[i])) continue;
      sum += Math.abs(values[i]);
      n++;
    }
  }
  return n > 0 ? sum / n : NaN;
}

/** Half the beats: then it is the boat file that is slow, not a puff. */
const MODEL_SLOW = 0.5;

/** Says which boats beat their model. */
export function trimIssues(race: Race, trims: readonly BoatTrim[]): Issue[] {
  return trims.flatMap((trim, k) => {
    if (trim.beatsModel < MODEL_SLOW) return [];
    return [
      {
        code: 'model-slow',
        message: `${race.boats[k].name} was faster than its boat file allows, so the forces cannot tell its leeway or trim. Fit the file to your own races with \`legwork tune\`.`,
      },
    ];
  });
}
