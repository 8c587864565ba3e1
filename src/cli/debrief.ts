import type { Command } from 'commander';
import { debrief, debriefPage } from '../index.js';
import { runBatch } from './batch.js';
import { addManners, addOutputOptions, addRaceOptions } from './options.js';
import type { OutputFlags, RaceFlags } from './options.js';
import { referenceFor } from './reference.js';
import { debriefSummary } from './summary.js';
import type { Task } from './task.js';
import { programVersion } from './version.js';

const EXAMPLE = `
Examples:
  legwork debrief                                  the race.yaml of this folder
  legwork debrief corrie.gpx --wind committee.csv  one boat and a wind log
  legwork debrief *.gpx --wind 215@12 --start 14:05 --zone Europe/Zurich
  legwork debrief spring/ --logbook logbook --keep-going

INPUT is a race file, several, a folder of them, or the track files of one race; - is standard input.`;

export interface DebriefFlags extends RaceFlags, OutputFlags {
  readonly reference?: string;
}

export function debriefCommand(program: Command): Command {
  const command = program
    .command('debrief')
    .summary('one race (or training run), one report')
    .description('Says, per upwind leg, where the metres to windward went.')
    .argument('[INPUT...]', 'race file, folder of race files, or the logs of one race');
  addRaceOptions(addOutputOptions(command, 'reports/<race>.html'));
  command
    .option(
      '--reference <model|best|FILE>',
      'what the ledger is measured against (default: model for one boat, else best)',
    )
    .option('--logbook <FOLDER>', 'file the race for the season');
  return addManners(command)
    .addHelpText('after', EXAMPLE)
    .action(async (inputs: string[], flags: DebriefFlags) => {
      process.exitCode = await runDebrief(inputs, flags);
    });
}

export const runDebrief = (inputs: readonly string[], flags: DebriefFlags): Promise<number> =>
  runBatch(inputs, flags, debriefTask(flags));

export function debriefTask(flags: DebriefFlags): Task {
  const reference = () => referenceFor(flags.reference);
  return {
    name: 'debrief',
    suffix: '',
    work: async ({ race, open }) => {
      const { result, series } = await debrief(race, open, { version: programVersion(), ...(await reference()) });
      return { result, series, page: (whole) => debriefPage(whole, series) };
    },
    summary: debriefSummary,
    basis: reference,
  };
}
