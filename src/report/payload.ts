import { gunzipSync, gzipSync, strFromU8 } from 'fflate';
import type { RaceSeries, BoatSeries, ManoeuvreSpan } from '../result/series.js';
import { shiftsOf } from './shifts.js';

/**
 * The series as the page carries it: whole numbers, differences from row to row, seven bits a byte, compressed, as
 * base64. The client takes it apart with the same file.
 */

/** Columns carried and the steps they are rounded to. */
export const COLUMNS = {
  x: 0.1, y: 0.1, ux: 0.005, uy: 0.005, twd: 0.1, tws: 0.01, gamma: 0.1, speed: 0.005, vmg: 0.005, beta: 0.1, aws: 0.01, heading: 0.1,
} as const; // prettier-ignore

export type ColumnName = keyof typeof COLUMNS;
const NAMES = Object.keys(COLUMNS) as ColumnName[];

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

/** More rows than this a boat are thinned for display. */
export const MOST_ROWS = 20000;

export function encodePayload(series: RaceSeries): Payload {
  const longest = Math.max(1, ...series.boats.map((b) => b.n));
  const step = Math.ceil(longest / MOST_ROWS);
  const bytes: number[] = [];
  for (const boat of series.boats) for (const name of NAMES) pushColumn(bytes, boat[name], COLUMNS[name], step);
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

/** Zero is "not known"; other numbers are one more than the zigzag of the difference from the last known one. */
function pushColumn(bytes: number[], column: Float64Array, unit: number, step: number): void {
  let last = 0;
  for (let i = 0; i < column.length; i += step) {
    const value = Math.round(column[i] / unit);
    if (!Number.isFinite(value)) {
      bytes.push(0);
      continue;
    }
    const change = value - last;
    pushNumber(bytes, (change < 0 ? -2 * change - 1 : 2 * change) + 1);
    last = value;
  }
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
    const columns = NAMES.map((name) => [name, pullColumn(next, boat.rows, COLUMNS[name])] as const);
    return Object.fromEntries(columns) as Record<ColumnName, Float64Array>;
  });
}

function pullColumn(next: () => number, rows: number, unit: number): Float64Array {
  const out = new Float64Array(rows);
  let last = 0;
  for (let i = 0; i < rows; i++) {
    const code = next();
    if (code === 0) {
      out[i] = NaN;
      continue;
    }
    const zigzag = code - 1;
    last += zigzag % 2 ? -(zigzag + 1) / 2 : zigzag / 2;
    out[i] = last * unit;
  }
  return out;
}

function toBase64(bytes: Uint8Array): string {
  let text = '';
  for (let i = 0; i < bytes.length; i += 8192) text += strFromU8(bytes.subarray(i, i + 8192), true);
  return btoa(text);
}

function fromBase64(text: string): Uint8Array {
  return Uint8Array.from(atob(text), (c) => c.charCodeAt(0));
}
