import { gunzipSync, gzipSync, strFromU8 } from 'fflate';
import { DEG, directionOf, RAD, turn } from '../math/angles.js';
import type { RaceSeries, BoatSeries, ManoeuvreSpan } from '../result/series.js';
import { shiftsOf } from './shifts.js';

/**
 * The series as the page carries it: whole numbers, differences from row to row, seven bits a byte, compressed, as
 * base64. The client takes it apart with the same file, and works out from the carried columns what follows from them
 * by geometry.
 */

/** Columns carried and the steps they are rounded to. */
export const COLUMNS = { x: 0.1, y: 0.1, ux: 0.002, uy: 0.002, twd: 0.1, tws: 0.01, heading: 0.1 } as const;

export type CarriedName = keyof typeof COLUMNS;
/** Carried, and worked out: angles [deg], speeds [m/s], signs as in the series. */
export type ColumnName = CarriedName | 'speed' | 'gamma' | 'vmg' | 'beta' | 'aws';
const NAMES = Object.keys(COLUMNS) as CarriedName[];

/** These run on as they ran: written as the difference from where the last two rows point. */
const RUN_ON: ReadonlySet<CarriedName> = new Set(['x', 'y', 'ux', 'uy']);

export interface BoatHeader {
  readonly name: string;
  readonly t0: number;
  readonly rows: number;
  readonly legs: readonly { readonly index: number; readonly from: number; readonly to: number }[];
  readonly turns: readonly {
    readonly kind: ManoeuvreSpan['kind'];
    readonly to: string;
    readonly at: number;
    readonly entry: number;
    readonly exit: number;
    readonly loss: number | null;
  }[];
  /** Settled stretches. */
  readonly settled: readonly (readonly [number, number])[];
  readonly shifts: readonly { readonly at: number; readonly by: number; readonly twd: number }[];
}

/** All times are UTC seconds. */
export interface Payload {
  readonly step: number;
  readonly zone: string | null;
  readonly boats: readonly BoatHeader[];
  readonly data: string;
}

/** More rows than this a boat, or of all boats, are thinned for display. */
export const MOST_ROWS = 20000;
export const MOST_ROWS_IN_ALL = 30000;

export function encodePayload(series: RaceSeries): Payload {
  const longest = Math.max(1, ...series.boats.map((b) => b.n));
  const all = series.boats.reduce((sum, b) => sum + b.n, 0);
  const step = Math.max(Math.ceil(longest / MOST_ROWS), Math.ceil(all / MOST_ROWS_IN_ALL));
  const bytes: number[] = [];
  for (const boat of series.boats) for (const name of NAMES) pushColumn(bytes, boat[name], name, step);
  const packed = gzipSync(Uint8Array.from(bytes), { level: 9, mtime: 0 });
  return { step, zone: series.zone, boats: series.boats.map((b) => headerOf(b, step)), data: toBase64(packed) };
}

function headerOf(b: BoatSeries, step: number): BoatHeader {
  const at = (row: number): number => b.t0 + row;
  return {
    name: b.name,
    t0: b.t0,
    rows: Math.ceil(b.n / step),
    legs: b.legs.map((l) => ({ index: l.index, from: at(l.from), to: at(l.to) })),
    turns: b.manoeuvres.map((m) => ({
      kind: m.kind, to: m.to, at: at(m.at), entry: at(m.entry), exit: at(m.exit),
      loss: Number.isFinite(m.loss) ? Math.round(m.loss * 100) / 100 : null,
    })),
    settled: stretches(b.settled).map(([from, to]) => [at(from), at(to)] as const),
    shifts: shiftsOf(b.twd).map((s) => ({ at: at(s.row), by: Math.round(s.by), twd: Math.round(s.twd) })),
  }; // prettier-ignore
}

/** Runs of ones as [from, to). */
export function stretches(flags: Uint8Array): [number, number][] {
  const out: [number, number][] = [];
  let begin = -1;
  for (let i = 0; i <= flags.length; i++) {
    if (i < flags.length && flags[i]) begin = begin < 0 ? i : begin;
    else if (begin >= 0) {
      out.push([begin, i]);
      begin = -1;
    }
  }
  return out;
}

/** Zero is "not known"; other numbers are one more than the zigzag of the difference from what was to be expected. */
function pushColumn(bytes: number[], column: Float64Array, name: CarriedName, step: number): void {
  const expected = expectation(name);
  for (let i = 0; i < column.length; i += step) {
    const value = Math.round(column[i] / COLUMNS[name]);
    if (!Number.isFinite(value)) {
      bytes.push(0);
      continue;
    }
    const change = value - expected.next();
    pushNumber(bytes, (change < 0 ? -2 * change - 1 : 2 * change) + 1);
    expected.had(value);
  }
}

/** What a column's next known value is expected to be: the last one, or a step on from it as long as the last step. */
function expectation(name: CarriedName): { next: () => number; had: (value: number) => void } {
  const run = RUN_ON.has(name) ? 1 : 0;
  let last = 0;
  let pace = 0;
  return {
    next: () => last + run * pace,
    had: (value) => {
      pace = value - last;
      last = value;
    },
  };
}

function pushNumber(bytes: number[], value: number): void {
  let rest = value;
  while (rest >= 128) {
    bytes.push((rest % 128) + 128);
    rest = Math.floor(rest / 128);
  }
  bytes.push(rest);
}

export type Columns = Readonly<Record<ColumnName, Float64Array>>;

/** The columns of each boat as they were, rounded. */
export function decodePayload(payload: Payload): Columns[] {
  const bytes = gunzipSync(fromBase64(payload.data));
  let at = 0;
  const next = (): number => {
    let value = 0;
    let weight = 1;
    for (;;) {
      const byte = bytes[at++];
      value += (byte % 128) * weight;
      if (byte < 128) return value;
      weight *= 128;
    }
  };
  return payload.boats.map((boat) => {
    const columns = NAMES.map((name) => [name, pullColumn(next, boat.rows, name)] as const);
    return completed(Object.fromEntries(columns) as Record<CarriedName, Float64Array>);
  });
}

function pullColumn(next: () => number, rows: number, name: CarriedName): Float64Array {
  const out = new Float64Array(rows);
  const expected = expectation(name);
  for (let i = 0; i < rows; i++) {
    const code = next();
    if (code === 0) {
      out[i] = NaN;
      continue;
    }
    const zigzag = code - 1;
    const value = expected.next() + (zigzag % 2 ? -(zigzag + 1) / 2 : zigzag / 2);
    out[i] = value * COLUMNS[name];
    expected.had(value);
  }
  return out;
}

/** The triangle of speeds row by row, as the series has it: course, true wind, and the apparent wind they make. */
function completed(carried: Readonly<Record<CarriedName, Float64Array>>): Columns {
  const { ux, uy, twd, tws } = carried;
  const speed = ux.map((east, i) => Math.hypot(east, uy[i]));
  const gamma = ux.map((east, i) => turn(directionOf(east, uy[i]), twd[i]));
  const vmg = speed.map((v, i) => v * Math.cos(gamma[i] * RAD));
  const across = tws.map((wind, i) => wind * Math.sin(Math.abs(gamma[i]) * RAD));
  const ahead = tws.map((wind, i) => speed[i] + wind * Math.cos(gamma[i] * RAD));
  const beta = across.map((side, i) => DEG * Math.atan2(side, ahead[i]));
  const aws = across.map((side, i) => Math.hypot(side, ahead[i]));
  return { ...carried, speed, gamma, vmg, beta, aws };
}

function toBase64(bytes: Uint8Array): string {
  let text = '';
  for (let i = 0; i < bytes.length; i += 8192) text += strFromU8(bytes.subarray(i, i + 8192), true);
  return btoa(text);
}

function fromBase64(text: string): Uint8Array {
  return Uint8Array.from(atob(text), (c) => c.charCodeAt(0));
}
