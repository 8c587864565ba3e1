import type { Command } from 'commander';
import { join } from 'node:path';
import { demoFiles } from '../index.js';
import { runDebrief } from './debrief.js';
import { forMessages, kindOf, readText, unusable, writeWhole } from './files.js';
import { addManners } from './options.js';
import { print } from './terminal.js';

const EXAMPLE = `
Examples:
  legwork demo                 writes legwork-demo/ and debriefs it
  legwork demo somewhere/else`;

interface DemoFlags {
  readonly quiet?: boolean;
  readonly progress: boolean;
}

export function demoCommand(program: Command): Command {
  const command = program
    .command('demo')
    .summary('write an invented race and debrief it')
    .description('Writes the demo race (invented boats, invented data) and debriefs it. Never overwrites your files.')
    .argument('[FOLDER]', 'where to', 'legwork-demo');
  return addManners(command, false)
    .addHelpText('after', EXAMPLE)
    .action(async (folder: string, flags: DemoFlags) => {
      process.exitCode = await runDemo(folder, flags);
    });
}

async function runDemo(folder: string, flags: DemoFlags): Promise<number> {
  if ((await kindOf(folder)) === 'file')
    throw unusable(`${forMessages(folder)}: a file, not a folder.`, 'Name another.');
  const files = [...(await demoFiles())].map(([name, text]) => ({ path: join(folder, ...name.split('/')), text }));
  const fresh = [];
  for (const file of files) {
    const kind = await kindOf(file.path);
    if (kind === null) fresh.push(file);
    else if (kind === 'folder' || (await readText(file.path)) !== file.text) {
      throw unusable(
        `${forMessages(file.path)}: is there already and is not the demo's.`,
        'Nothing was written. Name another folder.',
      );
    }
  }
  for (const { path, text } of fresh) await writeWhole(path, text);
  const race = files.find(({ path }) => /race\.(ya?ml|json)$/.test(path)) ?? files[0];
  if (!flags.quiet)
    await print(
      `The demo race lies in ${forMessages(folder)} (${files.length} files); its race file is ${forMessages(race.path)}.\n\n`,
    );
  const flagsForDebrief = {
    wind: [],
    out: `${join(folder, 'reports')}/`,
    progress: flags.progress,
    quiet: flags.quiet ?? false,
  };
  const code = await runDebrief([race.path], flagsForDebrief);
  if (!flags.quiet)
    await print(`\nOpen the report in a browser, then try it on your own logs: legwork debrief --help.\n`);
  return code;
}
