import type { BoatResult, LegResult, PairResult, Q, Result } from '../index.js';
import type { PlainJob } from './races.js';
import { outColour } from './terminal.js';

/** Most lines of a summary, the paths after it not counted. */
const MOST_LINES = 26;
/** Longest line of a warning or a hint. */
const WIDTH = 110;

/** A race in at most 26 lines. */
export function debriefSummary(result: Result, job: PlainJob): string[] {
  const legs = legTable(result, job.race.zone);
  const hints = hintLines(result);
  const warnings = warningLines(result);
  const head = [...titleLines(result, job), ''];
  const tail = [...(hints.length > 0 ? ['', ...hints] : []), ...(warnings.length > 0 ? ['', ...warnings] : [])];
  const room = MOST_LINES - head.length - tail.length;
  return [...head, ...shortened(legs, Math.max(4, room)), ...tail].slice(0, MOST_LINES).concat('');
}

/** A race of a batch: its name and, of each boat, how near its best it sailed its beats. */
export function oneLine(result: Result, job: PlainJob): string {
  const boats = result.boats.map((boat) => {
    const shares = boat.legs.flatMap((leg) => (leg.kind === 'upwind' && leg.efficiency ? [leg.efficiency.value] : []));
    const mean = shares.reduce((sum, share) => sum + share, 0) / shares.length;
    return shares.length === 0 ? boat.name : `${boat.name} ${Math.round(100 * mean)} %`;
  });
  const shown = boats.length > 4 ? `${boats.length} boats` : boats.join(', ');
  return `${titleOf(result, job)}: ${shown}`;
}

/** Pairs of boats in at most 26 lines. */
export function compareSummary(result: Result, job: PlainJob): string[] {
  const pairs = (result.pairs ?? []).flatMap(pairLines);
  const warnings = warningLines(result);
  const head = [...titleLines(result, job), ''];
  const tail = warnings.length > 0 ? ['', ...warnings] : [];
  return [...head, ...shortened(pairs, MOST_LINES - head.length - tail.length), ...tail, ''];
}

function titleOf(result: Result, job: PlainJob): string {
  const { name } = result.race;
  return job.day === null || name.startsWith(job.day) ? name : `${name}, ${job.day}`;
}

function titleLines(result: Result, job: PlainJob): string[] {
  const { twd_deg, tws_kn, sources } = result.wind;
  const known = tws_kn && `${tws_kn.basis === 'inferred' ? ', by the boats’ speed about' : ''} ${text(tws_kn, 1)} kn`;
  const speed = known ?? ', speed unknown';
  const wind = twd_deg ? `Wind ${text(twd_deg, 0)}°${speed} (${sources.join(', ')})` : 'Wind unknown';
  return [outColour.bold(titleOf(result, job)), wind];
}

const HEAD = ['boat', 'beat', 'start', 'min', 'tacks', 'angle °', 'speed kn', 'VMG kn', 'of model', 'lost m'];

/** Beats of all boats, one line each. */
function legTable(result: Result, zone: string | null): string[] {
  const rows = result.boats.flatMap((boat) =>
    boat.legs.filter((leg) => leg.kind === 'upwind').map((leg) => legRow(boat, leg, zone)),
  );
  if (rows.length === 0) return ['No beat.'];
  const heads = HEAD.map((head) => (head === 'start' && zone === null ? 'start UTC' : head));
  const widths = heads.map((head, i) => Math.max(head.length, ...rows.map((row) => row[i].length)));
  const line = (cells: readonly string[]): string =>
    cells.map((cell, i) => (i === 0 ? cell.padEnd(widths[i]) : cell.padStart(widths[i]))).join('  ');
  return [outColour.dim(line(heads)), ...rows.map(line)];
}

function legRow(boat: BoatResult, leg: LegResult, zone: string | null): string[] {
  const minutes = (Date.parse(leg.end) - Date.parse(leg.start)) / 60_000;
  const { steady } = leg;
  const best = leg.efficiency ? `${Math.round(leg.efficiency.value * 100)} %` : '-';
  return [
    boat.name.slice(0, 24),
    String(leg.lap),
    clock(leg.start, zone),
    minutes.toFixed(1),
    String(leg.tacks),
    text(steady?.gamma_deg ?? null, 1),
    text(steady?.speed_kn ?? null, 2),
    text(steady?.vmg_kn ?? null, 2),
    best,
    text(leg.ledger?.lost_m ?? null, 0),
  ];
}

function hintLines(result: Result): string[] {
  const several = result.boats.length > 1;
  const perBoat = several ? 1 : 3;
  const all = result.boats.flatMap((boat) =>
    boat.hints.slice(0, perBoat).map((hint) => clipped(several ? `${boat.name}: ${hint.text}` : hint.text)),
  );
  return shortened(all, 6);
}

function warningLines(result: Result): string[] {
  const lines = result.warnings.map(({ message, file }) => {
    const named = file === undefined || message.startsWith(file) ? message : `${file}: ${message}`;
    return outColour.yellow(clipped(`! ${named}`));
  });
  return shortened([...new Set(lines)], 6);
}

function pairLines(pair: PairResult): string[] {
  const [a, b] = pair.boats;
  const verdict = (who: string | null, word: string): string => (who === null ? `neither ${word}` : `${who} ${word}`);
  const verdicts = [verdict(pair.faster, 'faster'), verdict(pair.higher, 'higher'), verdict(pair.quicker, 'quicker')];
  return [
    `${outColour.bold(`${a} against ${b}`)}: VMG ${difference(pair.vmg_difference_kn, 2, 'kn')}, of it height ` +
      `${difference(pair.height_part_kn, 2, 'kn')}, speed ${difference(pair.speed_part_kn, 2, 'kn')}; ` +
      `gain ${difference(pair.gain_m, 0, 'm')}`,
    `  ${verdicts.join(', ')} (${pair.blocks} blocks, ${Math.round(pair.settled_s / 60)} min together)`,
    ...pair.notes.map((note) => clipped(`  ${note}`)),
  ];
}

function difference(q: Q, decimals: number, unit: string): string {
  if (!q) return '-';
  const sign = q.value > 0 ? '+' : '';
  const error = q.se === null ? '' : ` ± ${q.se.toFixed(decimals)}`;
  return `${sign}${plain(q.value, decimals)}${error} ${unit}`;
}

/** "42.3 ± 0.6"; "-" where there is nothing. */
function text(q: Q, decimals: number): string {
  if (!q) return '-';
  return q.se === null ? plain(q.value, decimals) : `${plain(q.value, decimals)} ± ${q.se.toFixed(decimals)}`;
}

/** Never "-0". */
function plain(value: number, decimals: number): string {
  const shown = value.toFixed(decimals);
  return /^-0(\.0*)?$/.test(shown) ? shown.slice(1) : shown;
}

function clock(iso: string, zone: string | null): string {
  const format = new Intl.DateTimeFormat('en-GB', { timeStyle: 'medium', timeZone: zone ?? 'UTC' });
  return format.format(new Date(iso));
}

const clipped = (line: string): string => (line.length > WIDTH ? `${line.slice(0, WIDTH - 1)}…` : line);

/** The first lines, and how many more there are. */
function shortened(lines: readonly string[], most: number): string[] {
  if (lines.length <= most) return [...lines];
  const kept = lines.slice(0, Math.max(1, most - 1));
  return [...kept, `… and ${lines.length - kept.length} more in the report`];
}
