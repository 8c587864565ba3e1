import type { Command } from 'commander';
import { compare, comparePage } from '../index.js';
import { runBatch } from './batch.js';
import { addManners, addOutputOptions, addRaceOptions, collect } from './options.js';
import type { OutputFlags, RaceFlags } from './options.js';
import { referenceFor } from './reference.js';
import { compareSummary } from './summary.js';
import type { Task } from './task.js';
import { programVersion } from './version.js';
import { unusable } from './files.js';
import type { Job } from './races.js';

const EXAMPLE = `
Examples:
  legwork compare race.yaml --pair Corrie --pair Linnet
  legwork compare corrie.gpx linnet.gpx --wind committee.csv`;

interface CompareFlags extends RaceFlags, OutputFlags {
  readonly pair?: readonly string[];
  readonly reference?: string;
}

export function compareCommand(program: Command): Command {
  const command = program
    .command('compare')
    .summary('two or more boats of one race against each other')
    .description('Who made more to windward while both sailed settled, by height or by speed.')
    .argument('[INPUT...]', 'race file, folder of race files, or the logs of one race');
  addRaceOptions(addOutputOptions(command, 'reports/<race>-compare.html'));
  command
    .option('--pair <BOAT>', 'compare just these: --pair A --pair B', collect)
    .option('--reference <model|best|FILE>', 'what the ledger is measured against')
    .option('--logbook <FOLDER>', 'file the race for the season');
  return addManners(command)
    .addHelpText('after', EXAMPLE)
    .action(async (inputs: string[], flags: CompareFlags) => {
      if (flags.pair?.length === 1)
        throw unusable(`--pair ${flags.pair[0]}: one boat alone.`, 'Name two: --pair A --pair B.');
      process.exitCode = await runBatch(inputs, flags, compareTask(flags));
    });
}

export function compareTask(flags: CompareFlags): Task {
  const basis = async () => ({
    ...(flags.pair ? { pairs: [...flags.pair] } : {}),
    ...(await referenceFor(flags.reference)),
  });
  return {
    name: 'compare',
    suffix: '-compare',
    work: async (job) => {
      checkPairs(flags.pair ?? [], job);
      const options = { version: programVersion(), ...(await basis()) };
      const { result, series, ladders } = await compare(job.race, job.open, options);
      return { result, series, page: (whole) => comparePage(whole, series, ladders) };
    },
    summary: compareSummary,
    basis,
  };
}

function checkPairs(pair: readonly string[], job: Job): void {
  const names = job.race.boats.map((boat) => boat.name);
  if (names.length < 2)
    throw unusable(`${job.race.name}: one boat alone cannot be compared.`, 'Give two tracks or more.');
  for (const name of pair) {
    if (!names.includes(name))
      throw unusable(`--pair ${name}: no boat of that name.`, `The boats are ${names.join(', ')}.`);
  }
}
