import type { Command } from 'commander';
import { join } from 'node:path';
import { resultFiles, season, seasonPage } from '../index.js';
import type { Result, SeasonResult } from '../index.js';
import { forMessages, kindOf, readText, unusable, writeWhole } from './files.js';
import { readLogbook } from './logbook.js';
import { addManners } from './options.js';
import { pagesBeside, racePage } from './pages-beside.js';
import type { RacePage } from './pages-beside.js';
import { outColour, print } from './terminal.js';

const EXAMPLE = `
Examples:
  legwork season                    the folder "logbook"
  legwork season spring --out spring.html --json spring.json

A sailors.yaml in the folder joins spellings of one name and hides names:
  aliases: { Corrie: [Corrie B, corrie-2] }
  hidden: [Linnet]
A logbook is filled by: legwork debrief race.yaml --logbook logbook`;

interface SeasonFlags {
  readonly out?: string;
  readonly json?: string;
  readonly quiet?: boolean;
}

export function seasonCommand(program: Command): Command {
  const command = program
    .command('season')
    .summary('every race in a logbook folder, as trends per sailor')
    .description('What changed over the races of a logbook, per sailor, and whether it can be told from chance.')
    .argument('[FOLDER]', 'the logbook', 'logbook')
    .option('--out <FILE>', 'the report (default: reports/season.html)')
    .option('--json <FILE>', 'the trends for programs; - is standard output');
  return addManners(command, false).addHelpText('after', EXAMPLE).action(runSeason);
}

async function runSeason(folder: string, flags: SeasonFlags): Promise<void> {
  let races = 0;
  const pages: RacePage[] = [];
  async function* results(): AsyncGenerator<Result> {
    for await (const filed of readLogbook(folder)) {
      races++;
      pages.push(...racePage(filed));
      yield filed.result;
    }
  }
  const sailors = join(folder, 'sailors.yaml');
  const known =
    (await kindOf(sailors)) === 'file' ? { file: forMessages(sailors), text: await readText(sailors) } : undefined;
  const found = await season(results(), known);
  const result = found.json;
  const html = flags.out ?? (flags.json === '-' ? null : 'reports/season.html');
  if (html === '-') throw unusable('--out -: only --json goes to standard output.', 'Name a file.');
  const { jsonText } = await resultFiles();
  if (flags.json !== undefined && flags.json !== '-') await writeWhole(flags.json, jsonText(result));
  if (html !== null) await writeWhole(html, await seasonPage(found, { pageOf: await pagesBeside(html, pages) }));
  if (flags.json === '-') await print(jsonText(result));
  else if (!flags.quiet) await print(`${[...summary(result, races), `Report: ${forMessages(html!)}`].join('\n')}\n`);
}

/** Most sailors in the summary; the rest are in the report. */
const MOST_SAILORS = 8;

function summary(result: SeasonResult, races: number): string[] {
  const lines = [outColour.bold(`${races} ${races === 1 ? 'race' : 'races'}, ${result.sailors.length} sailors`)];
  for (const sailor of result.sailors.slice(0, MOST_SAILORS)) {
    const shown = sailor.trends.filter(({ verdict }) => verdict !== 'nothing shown yet');
    const words = shown.map(({ quantity, verdict }) => `${quantity} ${verdict}`).join(', ') || 'nothing shown yet';
    lines.push(`${sailor.name} (${sailor.races}): ${words}`);
  }
  if (result.sailors.length > MOST_SAILORS)
    lines.push(`… and ${result.sailors.length - MOST_SAILORS} more in the report`);
  return lines;
}
