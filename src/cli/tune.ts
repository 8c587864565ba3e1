import type { Command } from 'commander';
import { tune, tunePage } from '../index.js';
import type { Tuned } from '../index.js';
import { expandInputs } from './inputs.js';
import { forMessages, kindOf, unusable, writeWhole } from './files.js';
import { addManners, addRaceOptions, checkFlags, raceOptions } from './options.js';
import type { RaceFlags } from './options.js';
import { jobOf, loadRaces } from './races.js';
import type { Job } from './races.js';
import { slugOf } from './slug.js';
import { outColour, print, Progress } from './terminal.js';
import { programVersion } from './version.js';

const EXAMPLE = `
Examples:
  legwork tune race1.yaml race2.yaml --boat single-hander
  legwork tune spring/ --boat-out my-boat.yaml --force`;

interface TuneFlags extends RaceFlags {
  readonly out?: string;
  readonly boatOut?: string;
  readonly force?: boolean;
}

export function tuneCommand(program: Command): Command {
  const command = program
    .command('tune')
    .summary('fit the boat model to the logs; write a boat file')
    .description('Moves a few numbers of the boat model, as far as the logs determine them, and writes a boat file.')
    .argument('[INPUT...]', 'race files, or the logs of one race')
    .option('--out <FILE>', 'the report (default: reports/<boat>-tune.html)')
    .option('--boat-out <FILE>', 'the boat file (default: <boat>-tuned.yaml)')
    .option('--force', 'write over an existing boat file');
  return addManners(addRaceOptions(command), false).addHelpText('after', EXAMPLE).action(runTune);
}

async function runTune(inputs: string[], flags: TuneFlags): Promise<void> {
  await checkFlags(flags);
  if (flags.boatOut !== undefined) await mustBeNew(flags.boatOut, flags.force);
  const progress = new Progress(flags.progress && !flags.quiet);
  const jobs: Job[] = [];
  for (const source of await expandInputs(inputs)) {
    for (const job of await loadRaces(source, raceOptions(flags))) jobs.push(jobOf(await job(), progress));
  }
  const tuned = await tune(
    jobs.map(({ race, open }) => ({ race, open })),
    { version: programVersion() },
  );
  progress.clear();
  const boatFile = flags.boatOut ?? `${slugOf(tuned.boat)}-tuned.yaml`;
  const html = flags.out ?? `reports/${slugOf(tuned.boat)}-tune.html`;
  await mustBeNew(boatFile, flags.force);
  await writeWhole(boatFile, tuned.boatFile);
  await writeWhole(html, await tunePage(tuned));
  if (flags.quiet) return;
  await print(
    `${[...summary(tuned), `Boat file: ${forMessages(boatFile)}`, `Report: ${forMessages(html)}`].join('\n')}\n`,
  );
}

async function mustBeNew(boatFile: string, force = false): Promise<void> {
  if (force || (await kindOf(boatFile)) === null) return;
  throw unusable(
    `${forMessages(boatFile)}: is there already.`,
    'Choose another name with --boat-out, or give --force.',
  );
}

/** What was moved, and how much nearer the model came. */
function summary({ boat, races, fit }: Tuned): string[] {
  const rms = ({ rms }: { rms: number }): string => ((rms * 3600) / 1852).toFixed(3);
  return [
    outColour.bold(
      `${boat}, tuned on ${fit.blocks} settled blocks of ${races.length} ${races.length === 1 ? 'race' : 'races'}`,
    ),
    ...fit.factors.map(({ name, value, se, moved, reason }) =>
      moved
        ? `  ${inWords(name)} ${value.toFixed(3)} ± ${se.toFixed(3)}`
        : `  ${inWords(name)} left at ${value.toFixed(3)}: ${reason}`,
    ),
    `Speed, measured less modelled: ${rms(fit.before)} kn before, ${rms(fit.after)} kn after (root mean square)`,
  ];
}

/** `hullResistance` as "hull resistance". */
const inWords = (name: string): string => name.replace(/[A-Z]/g, (letter) => ` ${letter.toLowerCase()}`);
