import type { SheetingPrior, TrimForces } from '../between/boat.js';
import { achieved } from '../physics/achieved.js';
import { flowAt, sheetedLoads, type ForceModel } from '../physics/balance.js';
import { sheetingPosterior } from './sheeting.js';

/**
 * What a boat file says of leeway and sheeting, for comparisons: the same physics as of one boat's legs, but asked for a
 * state at a time, so that what two boats share can be set apart.
 *
 * @param model Boat.
 * @param good  What the file's leeway and speed are good to, as shares of themselves.
 * @param file  Tells one boat file and crew from another.
 */
export function trimForces(
  model: ForceModel,
  good: { readonly leeway: number; readonly speed: number },
  file: string,
): TrimForces {
  return {
    file,
    leewayShare: good.leeway,
    leeway: (state) => {
      const { eased, full } = achieved(model, state);
      if (!full) return null;
      const near = eased ?? achieved(model, { ...state, speed: state.speed * (1 - good.speed) }).eased;
      if (!near) return null;
      // A slow boat eased, or hull, sea and helm took it and the sail drove in full: anywhere between.
      const open = eased ? Math.abs(full.leeway - eased.leeway) / Math.sqrt(12) : 0;
      return { value: (eased ?? full).leeway, open };
    },
    leewayAt: ({ speed, tws, gamma }, sheeting) => {
      const loads = sheetedLoads(model, flowAt(model, speed, tws, gamma), sheeting);
      return model.leeway(speed, loads.side, loads.heel);
    },
    sheetingPrior: (state): SheetingPrior | null => {
      const before = sheetingPosterior(model, { ...state, leewayLevel: { share: 1, se: good.leeway } });
      return before && { mean: before.priorMean, sd: before.priorSd, points: before.points };
    },
  };
}
