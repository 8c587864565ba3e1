import { bestDownwind, bestUpwind } from '../physics/optimum.js';
import type { PolarCurve, PolarPoint } from '../result/series.js';
import type { RaceModel } from './boat-models.js';
import type { Judgement } from './judge.js';
import type { Sailed } from './sail.js';

/** Points of a model's curve, evenly spread over the course angles. */
const POINTS = 60;
/** Degrees inside the best upwind course at which a curve begins. */
const INSIDE = 6;
/** Widest course angle of an anchored curve: it was anchored close-hauled and says nothing of reaches and runs. [deg] */
const ANCHORED_TO = 75;

/**
 * Speed over course angle of every boat model of the race, and of the reference where that is another, in the mean wind
 * of all settled blocks. None where no block has a known wind.
 */
export function polarCurves(
  models: readonly RaceModel[],
  judgements: readonly Judgement[],
  sailed: readonly Sailed[],
): PolarCurve[] {
  const tws = meanWind(sailed);
  if (Number.isNaN(tws)) return [];
  return [...new Set(models)].flatMap((model) => {
    const boats = models.flatMap((one, k) => (one === model ? [k] : []));
    const { reference } = judgements[boats[0]];
    const named = { boats, boat: model.spec.name, tws };
    const own: PolarCurve = { ...named, kind: 'model', ...modelCurve(model, tws) };
    if (reference.kind === 'model') return [own];
    const gamma = reference.bestGamma(tws);
    const up = { gamma, speed: reference.speed(gamma, tws) };
    const points = along((angle) => reference.speed(angle, tws), gamma - INSIDE, ANCHORED_TO, POINTS / 2);
    return [own, { ...named, kind: reference.kind, points, up, down: null }];
  });
}

function modelCurve({ model, curve }: RaceModel, tws: number): Pick<PolarCurve, 'points' | 'up' | 'down'> {
  const [up, down] = [bestUpwind(model, tws), bestDownwind(model, tws)];
  return {
    points: along((gamma) => curve.speed(gamma, tws), up.gamma - INSIDE, 180, POINTS),
    up: { gamma: up.gamma, speed: up.speed },
    down: { gamma: down.gamma, speed: down.speed },
  };
}

function along(speed: (gamma: number) => number, from: number, to: number, count: number): PolarPoint[] {
  return Array.from({ length: count }, (_, k) => {
    const gamma = from + ((to - from) * k) / (count - 1);
    return { gamma, speed: speed(gamma) };
  }).filter((point) => point.speed > 0);
}

/** Mean over the seconds of all boats' settled blocks. [m/s] */
function meanWind(sailed: readonly Sailed[]): number {
  const blocks = sailed.flatMap((one) => one.blocks).filter(({ tws }) => !Number.isNaN(tws));
  const seconds = blocks.reduce((sum, { from, to }) => sum + to - from, 0);
  return blocks.reduce((sum, { from, to, tws }) => sum + tws * (to - from), 0) / seconds;
}
