/** Debriefs the races of a condition, one after another, and measures them. */
import { debrief } from '../../src/debrief.js';
import { seedsOf, type Trial } from './conditions.js';
import { generateRace } from './generator/index.js';
import { emptyMeasured, measure, type Measured } from './measure.js';
import { CAUSES, statedExcess, trueExcess, type PlantedCause } from './planted.js';

export interface Run {
  readonly measured: Measured;
  readonly races: number;
  /** True upwind legs of all boats. */
  readonly upwindLegs: number;
  readonly seconds: number;
  /** Races the debrief could not make anything of: seed and what it said. */
  readonly failed: readonly string[];
  /** Metres the first boat lost more than the others, race by race: in truth, and as stated (null: no ledger). */
  readonly excess: readonly {
    readonly truth: Record<PlantedCause, number>;
    readonly stated: Record<PlantedCause, number> | null;
  }[];
}

export async function runTrial(trial: Trial, long = false): Promise<Run> {
  const measured = emptyMeasured();
  const seeds = seedsOf(trial, long);
  const excess: Run['excess'][number][] = [];
  const failed: string[] = [];
  let upwindLegs = 0;
  const from = performance.now();
  for (const seed of seeds) {
    const { race, open, truth } = generateRace(trial.condition, seed);
    for (const boat of truth.boats) upwindLegs += boat.legs.filter((leg) => leg.kind === 'upwind').length;
    const debriefed = await debrief(race, open).catch((error: unknown) => {
      failed.push(`seed ${seed}: ${error instanceof Error ? error.message : String(error)}`);
      return null;
    });
    if (!debriefed) continue;
    measure(debriefed.result, debriefed.series, truth, measured);
    excess.push({ truth: trueExcess(truth), stated: statedExcess(debriefed.result) });
  }
  return { measured, races: seeds.length, upwindLegs, seconds: (performance.now() - from) / 1000, failed, excess };
}

/** Mean excess by cause: in truth, and as stated in the races that have a ledger. [m] */
export function meanExcess(run: Run): { cause: PlantedCause; truth: number; stated: number; n: number }[] {
  const told = run.excess.filter((one) => one.stated !== null);
  return CAUSES.map((cause) => ({
    cause,
    truth: run.excess.reduce((sum, one) => sum + one.truth[cause], 0) / run.excess.length,
    stated: told.reduce((sum, one) => sum + one.stated![cause], 0) / told.length,
    n: told.length,
  }));
}
