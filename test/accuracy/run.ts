/** Debriefs the races of a condition, one after another, and measures them. */
import { debrief } from '../../src/debrief.js';
import { seedsOf, type Trial } from './conditions.js';
import { generateRace } from './generator/index.js';
import { emptyMeasured, measure, type Measured } from './measure.js';

export interface Run {
  readonly measured: Measured;
  readonly races: number;
  /** True upwind legs of all boats. */
  readonly upwindLegs: number;
  readonly seconds: number;
}

export async function runTrial(trial: Trial, long = false): Promise<Run> {
  const measured = emptyMeasured();
  const seeds = seedsOf(trial, long);
  let upwindLegs = 0;
  const from = performance.now();
  for (const seed of seeds) {
    const { race, open, truth } = generateRace(trial.condition, seed);
    const { result, series } = await debrief(race, open);
    measure(result, series, truth, measured);
    for (const boat of truth.boats) upwindLegs += boat.legs.filter((leg) => leg.kind === 'upwind').length;
  }
  return { measured, races: seeds.length, upwindLegs, seconds: (performance.now() - from) / 1000 };
}
