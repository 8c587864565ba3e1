import { median } from '../math/median.js';
import type { RaceModel } from './boat-models.js';
import { bestBoat } from './judge.js';
import type { Sailed } from './sail.js';

/** What a boat trimmed as the model would does, as a share of the model's; `se` one standard deviation of `share`. */
export interface Level {
  readonly share: number;
  readonly se: number;
}

/** How far from its own best trim the day's best boat may have sailed, in speed: common practice, no source. */
const BEST_BOAT = 0.02;

/**
 * What each boat is able to, so that its speed can tell of its trim. Where there are several boats the day's best sets
 * the level: what the model, the wind log and the sea take from all then drops out. That boat's own speed tells nothing
 * of its trim (null). A boat alone has only the model, which is good to what its file is.
 */
export function ableSpeeds(sailed: readonly Sailed[], models: readonly RaceModel[]): (Level | null)[] {
  if (sailed.length === 1) return [{ share: 1, se: models[0].accuracy.speed }];
  const best = bestBoat(sailed, models);
  if (best < 0) return sailed.map(() => null);
  const { curve } = models[best];
  const share = median(sailed[best].blocks.map(({ speed, gamma, tws }) => speed / curve.speed(Math.abs(gamma), tws)));
  return sailed.map((_, k) => (k === best ? null : { share, se: BEST_BOAT }));
}
