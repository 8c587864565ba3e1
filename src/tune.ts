import { debrief } from './debrief.js';
import { fitTuning, type TuneBlock, type TuneFit } from './estimate/tune-fit.js';
import { boatText, type BoatContent } from './files/boat.js';
import type { Race } from './files/race-types.js';
import type { LogSource } from './importers/types.js';
import { directionOf, turn } from './math/angles.js';
import { canonicalBoat, type BoatSpec } from './physics/boat-spec.js';
import { UserError } from './recording/issues.js';
import type { BoatResult } from './result/result.js';
import type { BlockRow, BoatSeries } from './result/series.js';
import { boatModels } from './steps/boat-models.js';

export interface TuneJob {
  readonly race: Race;
  readonly open: (file: string) => LogSource;
}

export interface Tuned {
  /** Name of the boat that was tuned, and of the tuned one. */
  readonly boat: string;
  readonly tunedBoat: string;
  readonly fit: TuneFit;
  /** The tuned boat as a boat file. */
  readonly boatFile: string;
  /** Names of the races used. */
  readonly races: readonly string[];
}

/** Sailing of one boat model in all races. */
interface Sailing {
  readonly spec: BoatSpec;
  readonly crews: Set<number | undefined>;
  readonly blocks: TuneBlock[];
  spells: number;
}

/**
 * Fits the boat model to the logs of one or several races.
 *
 *     each race -> debrief -> settled blocks -> factors of the model -> boat file
 *
 * @param jobs Races, all boats of one model.
 * @throws UserError (2) for several boat models, (1) where the logs hold too little or determine nothing.
 */
export async function tune(jobs: readonly TuneJob[], options: { readonly version?: string } = {}): Promise<Tuned> {
  let sailing: Sailing | null = null;
  for (const { race, open } of jobs) {
    const models = await boatModels(race, open);
    const { result, series } = await debrief(race, open, options);
    for (const [k, boat] of series.boats.entries()) {
      const { spec } = models[k];
      sailing ??= { spec, crews: new Set(), blocks: [], spells: 0 };
      refuseOther(sailing.spec, spec);
      sailing.crews.add(race.boats[k].crewMassKg);
      addBlocks(sailing, boat, result.boats[k]);
    }
  }
  if (!sailing) throw new UserError('no race to tune on.', { exitCode: 2 });
  const [crew] = sailing.crews.size === 1 ? sailing.crews : [undefined];
  const fit = fitTuning(sailing.spec, sailing.blocks, crew === undefined ? {} : { crewMassKg: crew });
  return told(sailing, fit, jobs);
}

function refuseOther(first: BoatSpec, second: BoatSpec): void {
  if (canonicalBoat(first) === canonicalBoat(second)) return;
  throw new UserError(`two boat models in these races: ${first.name} and ${second.name}.`, {
    exitCode: 2,
    suggestion: 'Tune one at a time; --boat takes one for all.',
  });
}

function addBlocks(sailing: Sailing, boat: BoatSeries, result: BoatResult): void {
  let last = NaN;
  for (const block of boat.blocks) {
    if (block.from !== last) sailing.spells++;
    last = block.to;
    const leeway = result.corrections.compass_offset_deg ? measuredLeeway(boat, block) : NaN;
    sailing.blocks.push({
      speed: block.speed,
      tws: block.tws,
      gamma: Math.abs(block.gamma),
      leeway,
      heel: NaN,
      spell: sailing.spells,
    });
  }
}

/** Bow to course through the water, to leeward, mean of the block; NaN where no heading was logged. [deg] */
function measuredLeeway(boat: BoatSeries, block: BlockRow): number {
  const toLeeward = block.tack === 'starboard' ? -1 : 1;
  let sum = 0;
  let n = 0;
  for (let i = block.from; i < block.to; i++) {
    const angle = toLeeward * turn(boat.heading[i], directionOf(boat.ux[i], boat.uy[i]));
    if (Number.isNaN(angle)) continue;
    sum += angle;
    n++;
  }
  return n > 0 ? sum / n : NaN;
}

async function told({ spec, blocks, spells }: Sailing, fit: TuneFit | null, jobs: readonly TuneJob[]): Promise<Tuned> {
  if (!fit) {
    const known = blocks.filter((block) => block.tws > 0).length;
    throw new UserError(`too little to tune on: ${known} settled blocks with a known wind speed in ${spells} spells.`, {
      exitCode: 1,
      suggestion: 'At least 12 blocks in 4 spells are needed: more beats, or a wind log with speeds.',
    });
  }
  if (fit.factors.every((factor) => !factor.moved)) {
    throw new UserError('these logs determine none of the factors of the boat model: nothing was moved.', {
      exitCode: 1,
      suggestion: 'Sailing in a wider range of winds tells more.',
    });
  }
  const races = jobs.map(({ race }) => race.name);
  const tunedBoat = spec.name.endsWith('-tuned') ? spec.name : `${spec.name}-tuned`;
  const heading = [
    `${spec.name}, tuned on ${fit.blocks} settled blocks in ${fit.spells} spells.`,
    ...races.map((race) => `  ${race.replaceAll(/[\r\n\u2028\u2029\u0085]+/g, ' ')}`),
  ];
  const content = { ...spec, name: tunedBoat, tuning: fit.tuning } as unknown as BoatContent;
  return { boat: spec.name, tunedBoat, fit, boatFile: await boatText(content, heading), races };
}
