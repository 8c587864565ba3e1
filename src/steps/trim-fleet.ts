import { ableSpeeds } from './able-speed.js';
import type { RaceModel } from './boat-models.js';
import type { CleanTracks } from './clean-tracks.js';
import type { BoatEstimate } from './estimate-boat.js';
import { bestBoat } from './judge.js';
import type { Corrections } from './reconcile-boats.js';
import type { Sailed } from './sail.js';
import { leewayLevel, trimBoat, type BoatTrim, type Levels } from './trim.js';

/**
 * Leeway, sheeting and drag angles of every boat. The day's best boat comes first: its speed and, where it was measured,
 * its leeway say what the model leaves out for all of its kind, against which the others' trim is then read.
 */
export function trimFleet(
  sailed: readonly Sailed[],
  estimates: readonly BoatEstimate[],
  clean: CleanTracks,
  models: readonly RaceModel[],
  corrections: Corrections,
): BoatTrim[] {
  const speeds = ableSpeeds(sailed, models);
  const trimOf = (k: number, levels: Levels): BoatTrim =>
    trimBoat(sailed[k], estimates[k], clean.boats[k].track, models[k], corrections.boats[k], levels);
  const best = sailed.length > 1 ? bestBoat(sailed, models) : -1;
  if (best < 0) return sailed.map((_, k) => trimOf(k, { speed: speeds[k], leeway: null }));
  const first = trimOf(best, { speed: null, leeway: null });
  const leeway = leewayLevel(first, estimates[best], models[best]);
  return sailed.map((_, k) =>
    k === best ? first : trimOf(k, { speed: speeds[k], leeway: models[k] === models[best] ? leeway : null }),
  );
}
