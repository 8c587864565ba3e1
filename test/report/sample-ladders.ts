import { ladder } from '../../src/between/ladder.js';
import { betweenBoat, type PairLadder } from '../../src/compare.js';
import type { Sample } from './sample.js';

/** The ladders of the sample's two boats, as a comparison makes them. */
export function sampleLadders({ result, series }: Sample): PairLadder[] {
  const [first, second] = series.boats.map((boat, k) => betweenBoat(boat, result.boats[k], []));
  return [{ boats: [first.name, second.name], legs: ladder(first, second) }];
}
