import { legLedger, type LedgerFigures } from '../estimate/ledger.js';
import { overstoodStretches, type Overstood } from '../estimate/overstanding.js';
import { anchorAt, anchoredReference, modelReference, type Anchor, type Reference } from '../estimate/reference.js';
import type { Figure } from '../estimate/steady.js';
import { tiltOf, type WindPoint } from '../estimate/wind-response.js';
import { median } from '../math/median.js';
import type { SailingState } from '../physics/balance.js';
import { bestDownwind, bestUpwind } from '../physics/optimum.js';
import type { Place } from '../segment/legs.js';
import type { RaceModel } from './boat-models.js';
import type { BoatEstimate, LegEstimate } from './estimate-boat.js';
import type { Sailed } from './sail.js';
import type { BoatTrim } from './trim.js';

export interface Optimum {
  readonly gamma: Figure;
  readonly speed: Figure;
  readonly vmg: Figure;
  readonly beta: Figure;
  /** Aerodynamic and hydrodynamic drag angles: together beta. */
  readonly aero: Figure;
  readonly hydro: Figure;
  readonly leeway: Figure;
  readonly sheeting: Figure;
}

/** What a leg is set beside. All null where the wind speed is not known. */
export interface LegJudgement {
  readonly optimum: Optimum | null;
  readonly efficiency: Figure | null;
  readonly share: Figure | null;
  readonly ledger: LedgerFigures | null;
}

export interface Judgement {
  readonly reference: Reference;
  readonly legs: readonly LegJudgement[];
}

export interface JudgeInput {
  readonly sailed: readonly Sailed[];
  readonly estimates: readonly BoatEstimate[];
  readonly trims: readonly BoatTrim[];
  readonly models: readonly RaceModel[];
  /** `best` needs settled sailing in known wind; without it the model stands alone. */
  readonly reference: 'model' | 'best' | RaceModel;
  readonly windward: Place | null;
  /** Wind direction every boat's made-good is taken along, per lap; null: each leg's own. */
  readonly sharedWind: ((lap: number) => number) | null;
}

/** Sets every leg of every boat beside the model and the reference. */
export function judge(input: JudgeInput): Judgement[] {
  const anchor = input.reference === 'best' ? anchorOfBest(input) : null;
  return input.sailed.map((one, k) => {
    const model = input.models[k];
    const reference =
      typeof input.reference === 'object'
        ? modelReference(input.reference.curve, 'file')
        : anchor
          ? anchoredReference(model.curve, anchor)
          : modelReference(model.curve);
    const legs = input.estimates[k].legs.map((leg, index) => judgeLeg(input, one, k, leg, index, reference));
    return { reference, legs };
  });
}

/**
 * Between a dinghy's light winds and its strong ones the best speed made good goes with the wind to a power of 1 to 0.3:
 * common practice, no source. A power law, so that an error in the scale of the wind speed does not change who is best.
 */
const WIND_POWER = 0.6;

/**
 * Index of the boat with the best settled VMG of the day for its wind and kind: the median of its blocks, brought to the
 * middle wind of the race. -1 when none has settled sailing in known wind.
 */
export function bestBoat(sailed: readonly Sailed[], models: readonly RaceModel[]): number {
  const wind = median(sailed.flatMap((one) => one.blocks.map(({ tws }) => tws)));
  const shares = sailed.map(
    ({ blocks }, k) =>
      median(blocks.map(({ vmg, tws }) => vmg * (wind / tws) ** WIND_POWER)) / models[k].curve.bestVmg(wind),
  );
  let best = -1;
  shares.forEach((share, k) => {
    if (!Number.isNaN(share) && (best < 0 || share > shares[best])) best = k;
  });
  return best;
}

/** A median is less sure than a mean by this: normal scatter. */
const MEDIAN = Math.sqrt(Math.PI / 2);

/** Standard error of a boat's settled VMG of the day, as a share of it. */
function settledSe({ legs }: BoatEstimate): number {
  const shares = legs.flatMap(({ all }) => (all ? [all.vmg.se / all.vmg.value] : []));
  return (MEDIAN * Math.hypot(...shares)) / shares.length;
}

function anchorOfBest({ sailed, models, estimates }: JudgeInput): Anchor | null {
  const best = bestBoat(sailed, models);
  if (best < 0) return null;
  const { blocks } = sailed[best];
  const of = (pick: (b: (typeof blocks)[number]) => number): number => median(blocks.map(pick));
  const anchor = anchorAt(
    models[best].curve,
    of((b) => b.gamma),
    of((b) => b.speed),
    of((b) => b.tws),
    settledSe(estimates[best]),
  );
  if (!(Number.isFinite(anchor.scale) && anchor.scale > 0)) return null;
  return { ...anchor, tilt: tiltOf(windPoints(anchor, sailed, models)) };
}

/** Settled blocks of each boat on each tack beside the anchored reference of its kind. */
function windPoints(anchor: Anchor, sailed: readonly Sailed[], models: readonly RaceModel[]): WindPoint[][] {
  return sailed.flatMap(({ blocks }, k) => {
    const reference = anchoredReference(models[k].curve, anchor);
    return (['port', 'starboard'] as const).map((tack) =>
      blocks
        .filter((block) => block.tack === tack)
        .map(({ tws, speed, gamma }) => ({
          wind: Math.log(tws / anchor.tws),
          excess: Math.log(speed / reference.speed(gamma, tws)),
        })),
    );
  });
}

const NOTHING: LegJudgement = { optimum: null, efficiency: null, share: null, ledger: null };

function judgeLeg(
  input: JudgeInput,
  one: Sailed,
  boat: number,
  leg: LegEstimate,
  index: number,
  reference: Reference,
): LegJudgement {
  const model = input.models[boat];
  const { errors } = input.estimates[boat];
  if (leg.leg.kind === 'reach') return NOTHING;
  if (leg.leg.kind === 'downwind') {
    const tws = meanTws(one, leg);
    return Number.isNaN(tws.value) ? NOTHING : { ...NOTHING, optimum: optimumAt(model, tws, bestDownwind) };
  }
  if (!leg.all || Number.isNaN(leg.all.tws.value)) return NOTHING;
  const optimum = optimumAt(model, leg.all.tws, bestUpwind);
  const rows = one.rows[index];
  const ledger = rows
    ? legLedger({
        sailing: one.sailing,
        tws: one.tws,
        leg: leg.leg,
        rows,
        reference,
        errors,
        overstood: overstood(input, one, leg),
        trim: input.trims[boat].legs[index]?.loss ?? null,
        ...(input.sharedWind ? { meanWind: input.sharedWind(leg.leg.lap) } : {}),
      })
    : null;
  return { optimum, efficiency: ratio(leg.all.vmg, optimum.vmg), share: ledger && shareOf(ledger), ledger };
}

function meanTws(one: Sailed, leg: LegEstimate): Figure {
  let sum = 0;
  let n = 0;
  for (let i = leg.leg.from; i < leg.leg.to; i++) {
    if (Number.isNaN(one.tws[i])) continue;
    sum += one.tws[i];
    n++;
  }
  const value = n > 0 ? sum / n : NaN;
  return { value, se: 0.02 * value, sys: 0.02 * value };
}

/** The model's best in a wind, with what the wind's error makes of it, by central differences of 2 %. */
function optimumAt(model: RaceModel, tws: Figure, best: (m: RaceModel['model'], tws: number) => SailingState): Optimum {
  const at = best(model.model, tws.value);
  const low = best(model.model, tws.value * 0.98);
  const high = best(model.model, tws.value * 1.02);
  const figure = (pick: (state: SailingState) => number, own: (value: number) => number): Figure => {
    const slope = (pick(high) - pick(low)) / (0.04 * tws.value);
    const value = pick(at);
    return { value, se: Math.abs(slope) * tws.se, sys: Math.hypot(slope * tws.sys, own(value)) };
  };
  const angle = (): number => model.accuracy.angle;
  const share = (value: number): number => model.accuracy.speed * value;
  return {
    gamma: figure((s) => s.gamma, angle),
    speed: figure((s) => s.speed, share),
    vmg: figure((s) => Math.abs(s.vmg), share),
    beta: figure((s) => s.beta, angle),
    aero: figure((s) => s.aeroDragAngle, angle),
    hydro: figure((s) => s.hydroDragAngle, angle),
    leeway: figure((s) => s.leeway, angle),
    sheeting: figure((s) => s.sheeting, angle),
  };
}

function overstood(input: JudgeInput, one: Sailed, leg: LegEstimate): Overstood[] {
  if (!leg.all) return [];
  const end = Math.min(leg.leg.to, one.sailing.n - 1);
  const mark = input.windward ?? { x: one.sailing.x[end], y: one.sailing.y[end] };
  return overstoodStretches(one.sailing, leg.leg, one.manoeuvres, one.own, leg.all.gamma.se, mark);
}

/** a / b with errors; the two wind errors act against each other through the optimum only. */
function ratio(a: Figure, b: Figure): Figure {
  const value = a.value / b.value;
  return {
    value,
    se: value * Math.hypot(a.se / a.value, b.se / b.value),
    sys: Math.abs(value) * Math.hypot(a.sys / a.value, b.sys / b.value),
  };
}

function shareOf(ledger: LedgerFigures): Figure {
  return ratio(ledger.made, ledger.available);
}
