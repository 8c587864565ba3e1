import type { Command } from 'commander';
import { basename, isAbsolute } from 'node:path';
import { inspect, resultFiles } from '../index.js';
import type { ImportOptions, InspectFile } from '../index.js';
import { exitCodeOf, tellFailure } from './failures.js';
import { forMessages, logSource, STDIN_NAME, writeWhole } from './files.js';
import { pathsOf } from './inputs.js';
import { addColumns, addManners, checkFlags } from './options.js';
import { outColour, print, Progress } from './terminal.js';

const EXAMPLE = `
Examples:
  legwork inspect corrie.gpx committee.csv
  legwork inspect committee.csv --columns 'wind dir=twd_deg' --zone Europe/Zurich
  legwork inspect watch.gpx --json -`;

interface InspectFlags {
  readonly json?: string;
  readonly columns?: Readonly<Record<string, string>>;
  readonly zone?: string;
  readonly date?: string;
  readonly quiet?: boolean;
  readonly progress: boolean;
  readonly keepGoing?: boolean;
}

export function inspectCommand(program: Command): Command {
  const command = program
    .command('inspect')
    .summary('what a log holds; judges nothing')
    .description('Format, columns as understood, span, rate, gaps, rejections of logs.')
    .argument('<FILE...>', 'logs; - is standard input')
    .option('--json <FILE>', 'the same for programs; - is standard output')
    .option(
      '--columns <HEADER=FIELD,...>',
      "how to read a table's headers: 'wind dir=twd_deg,Speed=sog_kn:m/s'",
      addColumns,
    )
    .option('--zone <IANA>', 'time zone for times that carry none')
    .option('--date <DAY>', 'day (YYYY-MM-DD) of a log that carries none');
  return addManners(command)
    .addHelpText('after', EXAMPLE)
    .action(async (words: string[], flags: InspectFlags) => {
      process.exitCode = await runInspect(words, flags);
    });
}

async function runInspect(words: readonly string[], flags: InspectFlags): Promise<number> {
  await checkFlags(flags);
  const progress = new Progress(flags.progress);
  const options: ImportOptions = {
    ...(flags.zone === undefined ? {} : { zone: flags.zone }),
    ...(flags.date === undefined ? {} : { date: flags.date }),
    ...(flags.columns === undefined ? {} : { columns: flags.columns }),
  };
  const paths = (await Promise.all(words.map(pathsOf))).flat();
  const files: InspectFile[] = [];
  let worst = 0;
  for (const path of paths) {
    const name = path === '-' ? STDIN_NAME : resultName(path);
    progress.say(`reading ${name}`);
    try {
      files.push(...(await inspect([name], () => logSource(name, path), options)).files);
    } catch (error) {
      progress.clear();
      if (!flags.keepGoing) throw error;
      tellFailure(error);
      worst = Math.max(worst, exitCodeOf(error));
    }
  }
  progress.clear();
  const { jsonText } = await resultFiles();
  const json = jsonText({ format: 'legwork-inspect', version: 1, files });
  if (flags.json === '-') await print(json);
  else if (flags.json !== undefined) await writeWhole(flags.json, json);
  if (!flags.quiet && flags.json !== '-') await print(`${files.map((file) => fileText(file)).join('\n\n')}\n`);
  return worst;
}

/** From the working folder, or by its own name where it lies elsewhere: never an absolute path. */
function resultName(path: string): string {
  const shown = forMessages(path);
  return isAbsolute(shown) || shown.startsWith('..') ? basename(shown) : shown;
}

/** A log in words. */
function fileText(file: InspectFile): string {
  const rejected = file.rejected.reduce((sum, { count }) => sum + count, 0);
  const lines = [
    outColour.bold(file.file),
    `  ${file.kind}: ${file.rows} records = ${file.kept} kept + ${file.ignored} ignored + ${rejected} rejected; ` +
      `${file.fixes} positions, ${file.samples} with wind`,
  ];
  if (file.from !== null && file.to !== null) lines.push(`  ${spanText(file.from, file.to)}${rateText(file.rate_hz)}`);
  lines.push(...columnLines(file.columns));
  for (const { reason, count, first_line } of file.rejected)
    lines.push(`  rejected: ${count} x ${reason}, first at line ${first_line}`);
  const ignored = Object.entries(file.ignored_types).map(([type, count]) => `${count} x ${type}`);
  if (ignored.length > 0) lines.push(`  ignored: ${ignored.join(', ')}`);
  lines.push(...gapLines(file));
  for (const { from, to, what } of file.stretches) lines.push(`  ${spanText(from, to)}: ${what}`);
  for (const { message } of file.warnings) lines.push(outColour.yellow(`  ! ${message}`));
  return lines.join('\n');
}

function columnLines(columns: InspectFile['columns']): string[] {
  if (columns.length === 0) return [];
  const rows = columns.map(({ header, means, unit }) => [header, means ?? '(not used)', unit ?? '']);
  const widths = [0, 1].map((i) => rows.reduce((most, row) => Math.max(most, row[i].length), 0));
  return rows.map(([header, means, unit]) =>
    `    ${header.padEnd(widths[0])}  ${means.padEnd(widths[1])}  ${unit}`.trimEnd(),
  );
}

function gapLines({ gaps }: InspectFile): string[] {
  if (gaps.length === 0) return ['  no gaps'];
  const longest = gaps.reduce((most, { seconds }) => Math.max(most, seconds), 0);
  const shown = gaps.slice(0, 5).map(({ from, seconds }) => `${from.slice(11, 19)} ${duration(seconds)}`);
  const more = gaps.length > shown.length ? ', ...' : '';
  return [
    `  ${gaps.length} ${gaps.length === 1 ? 'gap' : 'gaps'}, the longest ${duration(longest)}: ${shown.join(', ')}${more}`,
  ];
}

function spanText(from: string, to: string): string {
  const sameDay = from.slice(0, 10) === to.slice(0, 10);
  const shown = (iso: string): string =>
    iso
      .replace('T', ' ')
      .replace(/\.\d+Z$/, '')
      .replace('Z', '');
  const seconds = (Date.parse(to) - Date.parse(from)) / 1000;
  return `${shown(from)} to ${sameDay ? shown(to).slice(11) : shown(to)} UTC (${duration(seconds)})`;
}

const rateText = (rate: number | null): string =>
  rate === null
    ? ''
    : rate >= 1
      ? `, ${Number(rate.toPrecision(3))} Hz`
      : `, every ${Number((1 / rate).toPrecision(3))} s`;

function duration(seconds: number): string {
  if (seconds < 120) return `${Number(seconds.toFixed(1))} s`;
  if (seconds < 7200) return `${Number((seconds / 60).toFixed(1))} min`;
  return `${Number((seconds / 3600).toFixed(1))} h`;
}
