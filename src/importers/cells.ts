import { wrap180, wrap360 } from '../math/angles.js';
import type { Channel } from '../recording/recording.js';
import { kindOf, readUnit } from './columns.js';
import { readAngle, readDecimal } from './decimals.js';

/** What a cell holds: a number, nothing, a value that stands for none, or something else. */
export type CellState = 'number' | 'absent' | 'fill' | 'out-of-range' | 'unreadable';

/** Words for an absent value. */
const ABSENT = /^(nan|na|n\/a|null|none|nil|-+|\?+|\*+|m|missing|undefined|inf|-inf|#n\/a|no data|invalid)$/i;
/** Numbers that stand for an absent value: nines to the full width of a field. Common practice, no source. */
const FILLS = new Set([999, 999.9, 999.99, 9999, 9999.9, 9999.99, 99999, 99999.9, 999999, 9999999]);
/** Whether a number stands for an absent value. */
export function isFill(number: number): boolean {
  const size = Math.abs(number);
  return size >= 999 && FILLS.has(size);
}

/** No wind and no boat is faster. [m/s] */
const FASTEST = 150;

/** A cell read for one channel. `value` is in our units, NaN unless the state is `number`. */
export interface Cell {
  state: CellState;
  value: number;
}

/** Reads a cell into `into` (one object for all cells: there are millions). */
export function readCell(text: string | undefined, channel: Channel, factor: number, into: Cell): void {
  into.value = NaN;
  if (text === undefined || text === '') {
    into.state = 'absent';
    return;
  }
  const place = channel === 'lat' || channel === 'lon';
  let number = readDecimal(text);
  let scale = factor;
  if (Number.isNaN(number)) {
    const trimmed = text.trim();
    if (trimmed === '' || ABSENT.test(trimmed)) {
      into.state = 'absent';
      return;
    }
    [number, scale] = readOddCell(trimmed, channel, factor);
  }
  if (Number.isNaN(number)) into.state = 'unreadable';
  else if (isFill(number)) into.state = 'fill';
  else {
    into.value = place ? number * scale : inRange(channel, number * scale);
    into.state = Number.isNaN(into.value) ? 'out-of-range' : 'number';
  }
}

/** A position in degrees and minutes, or a number with its unit behind it. Number and factor. */
function readOddCell(text: string, channel: Channel, factor: number): [number, number] {
  if (channel === 'lat' || channel === 'lon') return [readAngle(text), 1];
  const parts = /^([+-]?\d[\d.,]*)\s*([^\d\s.,][^\d]*)$/.exec(text);
  if (!parts) return [NaN, 1];
  const own = readUnit(parts[2], kindOf(channel));
  return own ? [readDecimal(parts[1]), own.factor] : [NaN, factor];
}

/** The value in the channel's range; NaN when it cannot be one. */
export function inRange(channel: Channel, value: number): number {
  switch (channel) {
    case 'sog':
    case 'stw':
    case 'aws':
    case 'tws':
      return value >= 0 && value <= FASTEST ? value : NaN;
    case 'awa':
    case 'twa':
    case 'variation':
      return Math.abs(value) <= 360 ? wrap180(value) : NaN;
    case 'heel':
      return Math.abs(value) <= 180 ? value : NaN;
    case 'lat':
    case 'lon':
      return value;
    case 'cog':
    case 'heading':
    case 'headingMagnetic':
    case 'twd':
    case 'twdMagnetic':
      return value >= -180 && value <= 360 ? wrap360(value) : NaN;
  }
}
