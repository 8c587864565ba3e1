import { Command } from 'commander';
import { compareCommand } from './compare.js';
import { debriefCommand } from './debrief.js';
import { demoCommand } from './demo.js';
import { inspectCommand } from './inspect.js';
import { optimumCommand } from './optimum.js';
import { seasonCommand } from './season.js';
import { tuneCommand } from './tune.js';
import { programVersion } from './version.js';

const EXAMPLE = `
Start here:
  legwork demo                                     an invented race, debriefed
  legwork inspect corrie.gpx                       what a log holds
  legwork debrief corrie.gpx --wind committee.csv  where the metres to windward went

legwork COMMAND --help tells the options of a command.
Exit codes: 0 done, 1 understood but cannot be analysed, 2 command line or file unusable, 3 a fault of the program.`;

/** The command line, one file a command. */
export function makeProgram(): Command {
  const program = new Command('legwork')
    .description('Reads what a sailing boat and an anemometer recorded and says where the metres to windward went.')
    .version(programVersion(), '-V, --version', 'print the version')
    .helpOption('-h, --help', 'print help')
    .helpCommand('help [COMMAND]', 'print help for a command')
    .addHelpText('after', EXAMPLE)
    .configureHelp({ helpWidth: 100 });
  for (const add of [
    debriefCommand,
    compareCommand,
    seasonCommand,
    inspectCommand,
    optimumCommand,
    tuneCommand,
    demoCommand,
  ]) {
    const command = add(program);
    const name = command.name();
    command.helpOption('-h, --help', 'print help').showHelpAfterError(`legwork ${name} --help shows the options.`);
  }
  for (const command of [program, ...program.commands]) {
    command
      .exitOverride()
      .configureOutput({ outputError: (text, write) => write(text.replace(/^error: /, 'legwork: ')) });
  }
  return program.showHelpAfterError('legwork --help shows the commands.').showSuggestionAfterError();
}
