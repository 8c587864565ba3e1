import type { Command } from 'commander';
import { optimum, resultFiles } from '../index.js';
import type { OptimumTable } from '../index.js';
import { forMessages, kindOf, readText, writeWhole } from './files.js';
import { readWinds } from './options.js';
import { outColour, print } from './terminal.js';

const EXAMPLE = `
Examples:
  legwork optimum                              the built-in single-hander, 4 to 24 knots
  legwork optimum --boat my-boat.yaml --tws 6:16:1
  legwork optimum --polar --json polar.json`;

interface OptimumFlags {
  readonly boat?: string;
  readonly tws?: readonly number[];
  readonly polar?: boolean;
  readonly json?: string;
  readonly quiet?: boolean;
}

export function optimumCommand(program: Command): Command {
  return program
    .command('optimum')
    .summary('the boat model alone, over a range of true wind speeds')
    .description('The best course, speed, leeway and sheeting to windward that the boat model knows.')
    .option('--boat <NAME|FILE>', 'built-in boat or boat file (default: single-hander)')
    .option('--tws <FROM:TO:STEP>', 'true wind speeds in knots (default: 4:24:2)', readWinds)
    .option('--polar', 'also the whole polar diagram, close-hauled to dead downwind')
    .option('--json <FILE>', 'for programs; - is standard output')
    .option('--quiet', 'no table')
    .addHelpText('after', EXAMPLE)
    .action(runOptimum);
}

async function runOptimum(flags: OptimumFlags): Promise<void> {
  const { boat = 'single-hander' } = flags;
  const file = (await kindOf(boat)) === 'file' ? { name: forMessages(boat), text: await readText(boat) } : null;
  const table = await optimum(file ?? boat, flags.tws ?? readWinds('4:24:2'), { polar: flags.polar ?? false });
  const { jsonText } = await resultFiles();
  if (flags.json === '-') await print(jsonText(table));
  else if (flags.json !== undefined) await writeWhole(flags.json, jsonText(table));
  if (!flags.quiet && flags.json !== '-') await print(tableText(table));
}

const COLUMNS = [
  ['wind kn', 'tws_kn', 1],
  ['course °', 'gamma_deg', 1],
  ['speed kn', 'speed_kn', 2],
  ['VMG kn', 'vmg_kn', 2],
  ['apparent °', 'beta_deg', 1],
  ['apparent kn', 'aws_kn', 1],
  ['leeway °', 'leeway_deg', 1],
  ['sheeting °', 'sheeting_deg', 1],
  ['incidence °', 'incidence_deg', 1],
  ['heel °', 'heel_deg', 1],
] as const;

function tableText(table: OptimumTable): string {
  const rows = table.rows.map((row) => COLUMNS.map(([, key, decimals]) => row[key].toFixed(decimals)));
  const widths = COLUMNS.map(([head], i) => Math.max(head.length, ...rows.map((row) => row[i].length)));
  const line = (cells: readonly string[]): string => cells.map((cell, i) => cell.padStart(widths[i])).join('  ');
  const lines = [
    outColour.bold(`${table.boat}: best to windward, by the boat model`),
    outColour.dim(line(COLUMNS.map(([head]) => head))),
    ...rows.map(line),
  ];
  if (table.polar) lines.push('', ...polarLines(table.polar));
  return `${lines.join('\n')}\n`;
}

/** Speeds by course (down) and wind (across). */
function polarLines(polar: NonNullable<OptimumTable['polar']>): string[] {
  const winds = [...new Set(polar.map(({ tws_kn }) => tws_kn))];
  const courses = [...new Set(polar.map(({ gamma_deg }) => Math.round(gamma_deg)))].sort((a, b) => a - b);
  const speed = (course: number, wind: number): string =>
    polar.find((p) => p.tws_kn === wind && Math.round(p.gamma_deg) === course)?.speed_kn.toFixed(2) ?? '-';
  return [
    outColour.dim(['course °', ...winds.map((wind) => `${wind} kn`.padStart(6))].join('  ')),
    ...courses.map((c) => [String(c).padStart(8), ...winds.map((wind) => speed(c, wind).padStart(6))].join('  ')),
  ];
}
