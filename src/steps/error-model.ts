import { estimateMismatch, ON_BOARD_MISMATCH } from '../estimate/mismatch.js';
import type { ErrorModel } from '../estimate/steady.js';
import type { CleanBoat, CleanTracks } from './clean-tracks.js';
import { typicalDistance, type FoundWind } from './find-wind.js';
import type { Corrections } from './reconcile-boats.js';

/** Gamma whose wind direction came from the tracks is not better known than this: boats tack on shifts. [deg] */
const INFERRED_GAMMA = 2;

/** Error model of each boat: its receiver, and how far the wind used for it can be from the wind it had. */
export function errorModels(
  clean: CleanTracks,
  wind: FoundWind,
  corrections: Corrections,
  displacement: (boat: CleanBoat) => (seconds: number) => number,
): ErrorModel[] {
  const { current } = corrections;
  const hasOwn = clean.boats.map((_, k) => wind.sources.some(({ source }) => source.boat === k));
  const ashore = wind.sailed.filter((_, k) => !hasOwn[k]).map((one) => one.blocks);
  const distance = typicalDistance(wind.atBoats.filter((_, k) => !hasOwn[k]));
  const uniform = wind.sources.every(({ source, carry }) => source.kind !== 'station' || carry === 0);
  const shared = estimateMismatch(ashore, distance, uniform && wind.sources.some(({ source }) => source.place));
  return clean.boats.map((boat, k) => {
    const index = wind.sources.findIndex(({ source }) => source.boat === k);
    const used = index >= 0 ? index : 0;
    const source = wind.sources[used].source;
    return {
      mismatch: hasOwn[k] ? ON_BOARD_MISMATCH : shared,
      sysDirection: wind.directionInferred ? 0 : (wind.offsets[used]?.se ?? source.accuracyDir),
      sysSpeed: source.hasSpeed ? source.accuracySpeed : 0,
      displacementSe: displacement(boat),
      drift: current ? Math.hypot(current.east.se, current.north.se) / Math.SQRT2 : 0,
      leastGamma: wind.directionInferred ? INFERRED_GAMMA : 0,
    };
  });
}
