/**
 * Prints how accurate the program is, as Markdown tables: `npm run accuracy -- [--long] [--only NAME]`; `--only`
 * takes a part of a condition's name and may be repeated. bias to max: over the truth's own settled seconds; own: mean
 * size over the seconds the debrief called settled; err/se: root mean square of that error over the stated one.
 */
import { TRIALS } from './conditions.js';
import { CORRECTIONS, QUANTITIES, type Measured } from './measure.js';
import { meanExcess, runTrial, type Run } from './run.js';
import { f1, summarise, summariseSamples, type Summary } from './summary.js';

const HEAD = ['quantity', 'n', 'null', 'bias', 'mean', 'p50', 'p90', 'max', 'own', 'err/se', 'with sys'];

function table(rows: readonly (readonly string[])[]): string {
  const width = HEAD.map((head, k) => Math.max(head.length, ...rows.map((row) => row[k].length)));
  const line = (cells: readonly string[]): string =>
    `| ${cells.map((cell, k) => (k === 0 ? cell.padEnd(width[k]) : cell.padStart(width[k]))).join(' | ')} |`;
  const rule = `| ${width.map((w, k) => (k === 0 ? '-'.repeat(w) : `${'-'.repeat(w - 1)}:`)).join(' | ')} |`;
  return [line(HEAD), rule, ...rows.map(line)].join('\n');
}

const figure = (x: number): string => (Number.isFinite(x) ? x.toFixed(2) : '-');

function row(name: string, s: Summary & { own?: number }, nulls: number): string[] {
  const figures = [s.bias, s.mean, s.p50, s.p90, s.max, s.own ?? NaN, s.ratio, s.ratioSys].map(figure);
  return [name, String(s.n), String(nulls), ...figures];
}

function rowsOf(m: Measured): string[][] {
  const rows = QUANTITIES.map((q) => row(q, summariseSamples(m.quantities[q]), m.nulls[q]));
  rows.push(row('wind direction', summariseSamples(m.direction), 0));
  for (const c of CORRECTIONS) {
    const { samples, nulls } = m.corrections[c];
    if (samples.length + nulls > 0) rows.push(row(c, summariseSamples(samples), nulls));
  }
  rows.push(row('tack time s', summarise(m.tacks.timeErrors), m.tacks.missed));
  rows.push(row('tack loss m', summariseSamples(m.tacks.losses), m.tacks.hits - m.tacks.losses.length));
  rows.push(row('leg start s', summarise(m.legs.startErrors), m.legs.missed));
  rows.push(row('leg end s', summarise(m.legs.endErrors), m.legs.missed));
  return rows;
}

/** Where the faulty boat loses more than the others. [m a race] */
function excessLines(run: Run): string {
  const lines = meanExcess(run).map(
    ({ cause, truth, stated, n }) =>
      `| ${cause.padEnd(10)} | ${truth.toFixed(0).padStart(5)} | ${(n > 0 ? stated.toFixed(0) : '-').padStart(6)} |`,
  );
  return ['| m more     | truth | stated |', '| ---------- | ----: | -----: |', ...lines].join('\n');
}

async function main(args: readonly string[]): Promise<void> {
  const long = args.includes('--long');
  const only = args.filter((_, i) => args[i - 1] === '--only');
  for (const trial of TRIALS) {
    const { name } = trial.condition;
    if (only.length > 0 && !only.some((part) => name.includes(part))) continue;
    const run = await runTrial(trial, long);
    const { measured, races, upwindLegs, seconds } = run;
    const { tacks, legs } = measured;
    console.log(`\n### ${name}\n`);
    console.log(
      `${races} races, ${upwindLegs} upwind legs, ${seconds.toFixed(1)} s; tacks F1 ${f1(tacks).toFixed(3)} ` +
        `(${tacks.hits} found, ${tacks.missed} missed, ${tacks.extra} extra); ` +
        `legs ${legs.found} found, ${legs.missed} missed, ${legs.extra} extra\n`,
    );
    for (const line of run.failed) console.log(`FAILED ${line}\n`);
    console.log(table(rowsOf(measured)));
    if (Object.keys(trial.condition.faults).length > 0) console.log(`\n${excessLines(run)}`);
  }
}

await main(process.argv.slice(2));
