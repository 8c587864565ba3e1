import { directionOf } from '../math/angles.js';
import { fromPlane } from '../math/geo.js';
import { toKnots } from '../math/units.js';
import type { Result } from '../result/result.js';
import type { BoatSeries, RaceSeries } from '../result/series.js';
import { legColumns } from './columns.js';

/**
 * Tables as RFC 4180 text: comma, CRLF, quotes doubled, UTF-8 without a byte-order mark. Text that a spreadsheet would
 * run as a formula gets an apostrophe in front.
 */
export function legsCsv(result: Result): string {
  const columns = legColumns(result);
  const rows = Array.from({ length: columns[0].values.length }, (_, i) => columns.map((column) => column.values[i]!));
  return csvText([columns.map((column) => column.name), ...rows]);
}

const SECONDS = [
  'boat',
  'time',
  'lat',
  'lon',
  'sog_kn',
  'cog_deg',
  'speed_kn',
  'course_deg',
  'heading_deg',
  'twd_deg',
  'tws_kn',
  'gamma_deg',
  'vmg_kn',
  'beta_deg',
  'aws_kn',
  'leg',
  'settled',
  'manoeuvre',
];

/** Every second of every boat that has a position; `speed_kn` and `course_deg` are through the water. */
export function secondsCsv(series: RaceSeries): string {
  const parts = [csvText([SECONDS])];
  for (const boat of series.boats) parts.push(csvText(secondRows(boat, series)));
  return parts.join('');
}

function secondRows(boat: BoatSeries, series: RaceSeries): Cell[][] {
  const legs = rowsOf(boat.n, boat.legs, (leg) => [leg.from, leg.to, leg.index + 1]);
  const turns = rowsOf(boat.n, boat.manoeuvres, (turn) => [turn.entry, turn.exit, turn.kind]);
  const rows: Cell[][] = [];
  for (let i = 0; i < boat.n; i++) {
    if (Number.isNaN(boat.x[i])) continue;
    const { lat, lon } = fromPlane(series.frame, boat.x[i], boat.y[i]);
    rows.push([
      boat.name,
      new Date((boat.t0 + i) * 1000).toISOString(),
      rounded(lat, 7),
      rounded(lon, 7),
      rounded(toKnots(Math.hypot(boat.vx[i], boat.vy[i])), 3),
      rounded(directionOf(boat.vx[i], boat.vy[i]), 2),
      rounded(toKnots(boat.speed[i]), 3),
      rounded(directionOf(boat.ux[i], boat.uy[i]), 2),
      rounded(boat.heading[i], 2),
      rounded(boat.twd[i], 2),
      rounded(toKnots(boat.tws[i]), 3),
      rounded(boat.gamma[i], 2),
      rounded(toKnots(boat.vmg[i]), 3),
      rounded(boat.beta[i], 2),
      rounded(toKnots(boat.aws[i]), 3),
      legs[i] ?? null,
      boat.settled[i],
      turns[i] ?? null,
    ]);
  }
  return rows;
}

/** What covers each row; of two that overlap, the later. */
function rowsOf<S, V>(
  n: number,
  spans: readonly S[],
  read: (span: S) => readonly [number, number, V],
): (V | undefined)[] {
  const rows: (V | undefined)[] = new Array<V | undefined>(n).fill(undefined);
  for (const span of spans) {
    const [from, to, value] = read(span);
    rows.fill(value, Math.max(0, from), Math.min(n, to));
  }
  return rows;
}

type Cell = string | number | null;

function csvText(rows: readonly (readonly Cell[])[]): string {
  return rows.map((row) => `${row.map(cell).join(',')}\r\n`).join('');
}

function cell(value: Cell): string {
  if (value === null) return '';
  if (typeof value === 'number') return Number.isFinite(value) ? String(value + 0) : '';
  const safe = /^[\s]*[=+\-@]|^[\t\r\n]/.test(value) ? `'${value}` : value;
  return /[",\r\n]|^\s|\s$/.test(safe) ? `"${safe.replaceAll('"', '""')}"` : safe;
}

/** Rounded for a table; not a number stays so and becomes an empty cell. */
function rounded(value: number, decimals: number): number {
  const unit = 10 ** decimals;
  return Math.round(value * unit) / unit;
}
