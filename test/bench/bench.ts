/**
 * `npm run bench`: each stage and the whole on data of stated size, against general tools on the same work in the same
 * run. Prints a table; the same as JSON with `--json FILE`. Ends with 1 when a result differs from the rival's, and
 * with `--check` also when a target is missed.
 *
 *     npm run bench -- --mb 100 --rounds 3 --long
 */
import { existsSync, readFileSync, writeFileSync } from 'node:fs';
import { loadavg } from 'node:os';
import { join } from 'node:path';
import { parseArgs } from 'node:util';
import { builtInBoat, DEFAULT_BOAT } from '../../src/physics/built-in.js';
import { makeModel } from '../../src/physics/model.js';
import { bestUpwind } from '../../src/physics/optimum.js';
import { checksum, columnsOf, meanSpeed, sumsText } from './columns.js';
import { ROOT, scratch, sentences, table, track, whichGenerator } from './data.js';
import { inTurn, measure, runCommand, SAYS_COST, type Cost, type Measured } from './measure.js';
import { bestByGrid, gpxBySaxes, TABLE_BY_PANDAS, tableByPapaparse } from './rivals.js';
import { ceiling, gain, processors, type Processors } from './processors.js';
import { reportRows, reportText } from './report.js';
import { seasonRows, seasonText, seasonVerdict } from './season.js';
import { read, readTolerantly, stages } from './stages.js';

const PROGRAM = join(ROOT, 'dist/cli/legwork.js');
const BASELINE = process.env['LEGWORK_BENCH_BASELINE'] ?? join(ROOT, '../shared/bench/baseline.py');
const PYTHON = process.env['LEGWORK_BENCH_PYTHON'] ?? '/usr/bin/python3';
const KNOT = 1852 / 3600;

interface Row {
  readonly what: string;
  readonly size: string;
  readonly rival: string;
  readonly ours: Cost;
  readonly theirs: Cost;
  /** Most of the rival's time that ours may take; null: told only. */
  readonly most: number | null;
  /** Most seconds of one processor that ours may take. */
  readonly within?: number;
  /** What both came to. */
  readonly check: readonly [string, string];
}

/** Most memory for logs of up to so many megabytes. [MB] */
const MEMORY = [
  { log: 100, most: 250 },
  { log: 450, most: 350 },
] as const;

function memoryVerdict(megabytes: number, { memory }: Cost): string {
  const limit = MEMORY.find(({ log }) => megabytes <= log);
  if (!limit || Number.isNaN(memory)) return '';
  return memory <= limit.most ? `at most ${limit.most}: met` : `at most ${limit.most}: missed`;
}

const { values: flags } = parseArgs({
  options: {
    mb: { type: 'string', default: '100' },
    rounds: { type: 'string', default: '3' },
    long: { type: 'boolean', default: false },
    check: { type: 'boolean', default: false },
    json: { type: 'string' },
  },
});
const MB = Number(flags.mb);
const ROUNDS = Number(flags.rounds);
const say = (line = ''): void => void process.stdout.write(`${line}\n`);
const load = (): string => loadavg()[0].toFixed(1);

/** Whether Python has some packages. */
async function pythonHas(...packages: readonly string[]): Promise<boolean> {
  return runCommand(PYTHON, ['-c', `import ${packages.join(', ')}`]).then(
    () => true,
    () => false,
  );
}

async function readingGpx(path: string): Promise<Row> {
  const [ours, theirs] = await inTurn<[string, string]>(ROUNDS, [
    () => measure(async () => checksum(columnsOf((await read(path)).recording))),
    () => measure(async () => checksum(await gpxBySaxes(path))),
  ]);
  return row('GPX to columns', `${MB} MB`, 'saxes alone', ours, theirs, 0.5);
}

async function readingTable(path: string): Promise<Row[]> {
  const rivals: (() => Promise<Measured<string>>)[] = [
    () => measure(async () => checksum(columnsOf((await read(path)).recording))),
    () => measure(async () => checksum(await tableByPapaparse(path))),
  ];
  const pandas = await pythonHas('pandas');
  if (pandas) rivals.push(() => runCommand(PYTHON, ['-c', TABLE_BY_PANDAS, path]));
  else say('skipped: pandas is not present');
  const [ours, papaparse, panda] = await inTurn(ROUNDS, rivals);
  const rows = [row('table to columns', `${MB} MB`, 'papaparse alone', ours, papaparse, null)];
  if (pandas) {
    const sums = JSON.parse(panda.value) as Parameters<typeof sumsText>[0];
    rows.push(row('table to columns', `${MB} MB`, 'pandas', ours, { ...panda, value: sumsText(sums) }, 0.7));
  }
  return rows;
}

async function readingSentences(path: string): Promise<Row> {
  const [ours, theirs] = await inTurn<[string, string]>(ROUNDS, [
    () => measure(async () => checksum(columnsOf((await read(path)).recording))),
    () => measure(async () => checksum(columnsOf(await readTolerantly(path)))),
  ]);
  return row('NMEA to columns', `${MB} MB`, 'own tolerant reader', ours, theirs, 0.6);
}

function row(
  what: string,
  size: string,
  rival: string,
  ours: Measured<string>,
  theirs: Measured<string>,
  most: number | null,
): Row {
  return { what, size, rival, ours, theirs, most, check: [ours.value, theirs.value] };
}

/** The command line from the log to the report and the result file. */
async function wholeRun(gpx: string, wind: string): Promise<Measured<string>> {
  const result = scratch('result.json');
  const args = [
    '--import',
    SAYS_COST,
    PROGRAM,
    'debrief',
    gpx,
    '--wind',
    wind,
    '--json',
    result,
    '--out',
    scratch('report.html'),
    '--quiet',
  ];
  return { ...(await runCommand(process.execPath, args)), value: result };
}

interface BaselineSays {
  readonly fixes: number;
  readonly sog_raw: number;
  readonly rss_mb: number;
}

async function wholes(): Promise<Row[]> {
  const { gpx, wind } = track(MB);
  if (!existsSync(BASELINE)) say('skipped: the Python baseline is not present');
  else if (!(await pythonHas('numpy', 'pandas', 'scipy'))) say('skipped: numpy, pandas, scipy are not present');
  else return [await wholeAgainst(gpx, wind, 'expat', ROUNDS, 0.6), ...(await againstGpxpy(gpx, wind))];
  const alone = await wholeRun(gpx, wind);
  const none = { wall: NaN, cpu: NaN, memory: NaN };
  return [
    { what: 'whole debrief', size: `${MB} MB`, rival: '-', ours: alone, theirs: none, most: null, check: ['', ''] },
  ];
}

async function againstGpxpy(gpx: string, wind: string): Promise<Row[]> {
  if (await pythonHas('gpxpy')) return [await wholeAgainst(gpx, wind, 'gpxpy', 1, 0.06)];
  say('skipped: gpxpy is not present');
  return [];
}

/** Python reads, resamples and computes the triangle; we do everything. The positions read must be the same. */
async function wholeAgainst(gpx: string, wind: string, reader: string, rounds: number, most: number): Promise<Row> {
  const [ours, theirs] = await inTurn<[string, string]>(rounds, [
    () => wholeRun(gpx, wind),
    () => runCommand(PYTHON, [BASELINE, gpx, wind, '--reader', reader]),
  ]);
  const says = JSON.parse(theirs.value) as BaselineSays;
  const { recording, fixes } = await read(gpx);
  const python = { ...theirs, memory: says.rss_mb };
  const result = JSON.parse(readFileSync(ours.value, 'utf8')) as { inputs: { fixes: number }[] };
  const check = [
    `${result.inputs[0].fixes} ${meanSpeed(columnsOf(recording)).toFixed(4)}`,
    `${says.fixes} ${says.sog_raw.toFixed(4)}`,
  ] as const;
  if (fixes !== result.inputs[0].fixes) throw new Error('the program and its importer differ in fixes');
  return { what: 'whole debrief', size: `${MB} MB`, rival: `Python, ${reader}`, ours, theirs: python, most, check };
}

async function optimumTable(): Promise<Row> {
  const model = makeModel(builtInBoat(DEFAULT_BOAT)!);
  const winds = Array.from({ length: 20 }, (_, k) => (4 + k) * KNOT);
  const text = (vmgs: readonly number[]): string => vmgs.map((vmg) => (vmg / KNOT).toFixed(3)).join(' ');
  const [ours, theirs] = await inTurn<[string, string]>(ROUNDS, [
    () => measure(() => text(winds.map((tws) => bestUpwind(model, tws).vmg))),
    () => measure(() => text(winds.map((tws) => bestByGrid(model, tws).vmg))),
  ]);
  return { ...row('optimum table', '20 winds', 'grid of 0.05°', ours, theirs, null), within: 0.1 };
}

async function startUp(): Promise<Row> {
  const version = (JSON.parse(readFileSync(join(ROOT, 'package.json'), 'utf8')) as { version: string }).version;
  const [ours, theirs] = await inTurn<[string, string]>(15, [
    () => runCommand(process.execPath, [PROGRAM, '--version']),
    () => runCommand(process.execPath, ['-e', '0']),
  ]);
  return {
    what: 'legwork --version',
    size: '-',
    rival: 'node -e 0',
    ours,
    theirs,
    most: 1.5,
    check: [ours.value.trim(), version],
  };
}

interface Grown {
  readonly fixes: number;
  readonly megabytes: number;
  readonly cost: Cost;
}

/** The whole at other sizes. */
async function growth(): Promise<Grown[]> {
  const grown: Grown[] = [];
  for (const megabytes of [2, 6, 20, 100, 200, ...(flags.long ? [450, 2000] : [])]) {
    const { gpx, wind } = track(megabytes);
    const cost = await wholeRun(gpx, wind);
    const result = JSON.parse(readFileSync(cost.value, 'utf8')) as { inputs: { fixes: number }[] };
    grown.push({ fixes: result.inputs[0].fixes, megabytes, cost });
  }
  return grown;
}

/** cost = start + each x fixes by least squares of the relative errors, and the largest of these. */
function straightLine(grown: readonly Grown[]): { start: number; each: number; worst: number } {
  const points = grown.map(({ fixes, cost }) => ({ x: fixes / cost.cpu, y: 1 / cost.cpu, fixes, cpu: cost.cpu }));
  const sum = (of: (p: (typeof points)[number]) => number): number => points.reduce((all, p) => all + of(p), 0);
  const [xx, xy, yy, x, y] = [
    sum((p) => p.x * p.x),
    sum((p) => p.x * p.y),
    sum((p) => p.y * p.y),
    sum((p) => p.x),
    sum((p) => p.y),
  ];
  const determinant = xx * yy - xy * xy;
  const start = (xx * y - xy * x) / determinant;
  const each = (yy * x - xy * y) / determinant;
  const worst = Math.max(...points.map((p) => Math.abs((start + each * p.fixes) / p.cpu - 1)));
  return { start, each, worst };
}

const digits = (value: number, places = 2): string => (Number.isNaN(value) ? '-' : value.toFixed(places));

function tableText(head: readonly string[], rows: readonly (readonly string[])[]): string {
  const all = [head, ...rows];
  const widths = head.map((_, k) => Math.max(...all.map((cells) => cells[k].length)));
  return all
    .map((cells) =>
      cells
        .map((cell, k) => (k < 3 ? cell.padEnd(widths[k]) : cell.padStart(widths[k])))
        .join('  ')
        .trimEnd(),
    )
    .join('\n');
}

function verdict({ ours, theirs, most, within, check }: Row): string {
  if (check[0] !== check[1]) return 'DIFFERS';
  if (within !== undefined) return ours.cpu <= within ? `within ${within} s: met` : `within ${within} s: missed`;
  if (most === null || Number.isNaN(theirs.wall)) return '';
  return ours.wall <= most * theirs.wall ? 'met' : 'missed';
}

function sayRows(rows: readonly Row[]): void {
  const head = ['what', 'size', 'against', 's', 'their s', 'ratio', 'at most', 'cpu ratio', 'MB', 'their MB', ''];
  const cells = rows.map((one) => [
    one.what,
    one.size,
    one.rival,
    digits(one.ours.wall),
    digits(one.theirs.wall),
    digits(one.ours.wall / one.theirs.wall),
    one.most === null ? '' : String(one.most),
    digits(one.ours.cpu / one.theirs.cpu),
    digits(one.ours.memory, 0),
    digits(one.theirs.memory, 0),
    verdict(one),
  ]);
  say(tableText(head, cells));
  for (const one of rows) {
    if (one.check[0] === '') continue;
    say(`  ${one.what}, ${one.rival}: ${one.check[0]}${one.check[0] === one.check[1] ? '' : `  <>  ${one.check[1]}`}`);
  }
}

function sayProcessors(rows: readonly Processors[]): void {
  const head = ['processors', '', '', 'one, s', 'two, s', 'times as fast', 'two programs at once', ''];
  const cells = rows.map((one) => [
    one.what,
    '',
    '',
    digits(one.one),
    digits(one.two),
    digits(gain(one)),
    digits(ceiling(one)),
    one.check[0] === one.check[1] ? 'same bytes' : 'DIFFERS',
  ]);
  say(tableText(head, cells));
}

async function main(): Promise<void> {
  say(`${whichGenerator()}; Node ${process.version}; load ${load()}`);
  const { gpx, wind } = track(MB);
  const csv = table(MB);
  const rows = [
    await startUp(),
    await readingGpx(gpx),
    ...(await readingTable(csv)),
    await readingSentences(sentences(MB)),
    await optimumTable(),
    ...(await wholes()),
  ];
  say();
  sayRows(rows);
  const each = await stages({ gpx, wind });
  say();
  const stageCells = each.map((one) => [
    one.name,
    '',
    '',
    digits(one.cpu),
    `${digits(one.size / one.cpu / 1000, 0)} k${one.unit}/s`,
  ]);
  say(tableText(['stage, in one process', '', '', 'cpu s', 'pace'], stageCells));
  const grown = await growth();
  say();
  const grownCells = grown.map(({ fixes, megabytes, cost }) => [
    'whole debrief',
    `${megabytes} MB`,
    `${fixes} fixes`,
    digits(cost.wall),
    digits(cost.cpu),
    digits((cost.cpu / fixes) * 1e6),
    digits(cost.memory, 0),
    memoryVerdict(megabytes, cost),
  ]);
  say(tableText(['growth', 'size', '', 's', 'cpu s', 'cpu µs/fix', 'MB', ''], grownCells));
  const { start, each: fix, worst } = straightLine(grown);
  say(`cpu = ${digits(start)} s + ${digits(fix * 1e6)} µs a fix, off by at most ${digits(100 * worst, 0)} %`);
  const several = await processors(ROUNDS);
  say();
  sayProcessors(several);
  const pages = await reportRows();
  say();
  say(pages.length > 0 ? reportText(pages) : 'skipped: no browser is present');
  const seasons = await seasonRows(ROUNDS);
  say(seasonText(seasons));
  say(`load ${load()}`);
  if (flags.json)
    writeFileSync(
      flags.json,
      `${JSON.stringify({ node: process.version, load: load(), rows, stages: each, growth: grown, pages, seasons }, null, 2)}\n`,
    );
  const verdicts = [
    ...rows.map(verdict),
    ...grown.map(({ megabytes, cost }) => memoryVerdict(megabytes, cost)),
    seasonVerdict(seasons),
  ];
  const missed = verdicts.some((one) => one.endsWith('missed'));
  const differs = several.some(({ check }) => check[0] !== check[1]) || verdicts.includes('DIFFERS');
  const failed = differs || (flags.check && missed);
  process.exitCode = failed ? 1 : 0;
}

await main();
