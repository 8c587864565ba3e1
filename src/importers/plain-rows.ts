/**
 * The fast way through what most of a table is: rows with as many cells as headers, an ISO or Unix time, and numbers or
 * nothing. Any other row is left to the tolerant reader, which is the reference.
 */
import { inRange, isFill } from './cells.js';
import { readDecimal } from './decimals.js';
import type { TableLayout } from './layout.js';
import { MinuteClock } from './minute-clock.js';
import type { GrowingColumn, LogRows } from './rows.js';
import { readUnix, type TableClock } from './table-clock.js';
import type { Tally } from './tally.js';
import { carriesZone, readIso } from './times.js';

/** Reads one plain row: first `parse`, which changes nothing in the log, then `commit` if that said yes. */
export class PlainRows {
  readonly #layout: TableLayout;
  readonly #clock: TableClock;
  readonly #rows: LogRows;
  readonly #tally: Tally;
  readonly #ends: Int32Array;
  readonly #values: Float64Array;
  readonly #columns: readonly GrowingColumn[];
  readonly #delimiter: number;
  readonly #minute = new MinuteClock();
  readonly #lat: number;
  readonly #lon: number;
  #seconds = NaN;
  #zoned = true;

  constructor(layout: TableLayout, clock: TableClock, rows: LogRows, tally: Tally) {
    this.#layout = layout;
    this.#clock = clock;
    this.#rows = rows;
    this.#tally = tally;
    this.#ends = new Int32Array(layout.headers.length);
    this.#values = new Float64Array(layout.columns.length);
    this.#columns = layout.columns.map(({ channel }) => rows.column(channel));
    this.#delimiter = layout.delimiter.charCodeAt(0);
    this.#lat = layout.columns.findIndex(({ channel }) => channel === 'lat');
    this.#lon = layout.columns.findIndex(({ channel }) => channel === 'lon');
  }

  /** Whether rows of a layout can be plain at all. */
  static fits({ time, awaSide, latSide, lonSide }: TableLayout): boolean {
    return time.date < 0 && Math.max(awaSide, latSide, lonSide) < 0;
  }

  /** Reads the row that stands in [from, to); false when it is not plain. */
  parse(text: string, from: number, to: number): boolean {
    if (text.charCodeAt(from) === 35 || !this.#split(text, from, to) || !this.#time(text, from)) return false;
    const { columns } = this.#layout;
    let present = 0;
    for (let k = 0; k < columns.length; k++) {
      const { index, channel, factor } = columns[k];
      const start = index === 0 ? from : this.#ends[index - 1] + 1;
      const end = this.#ends[index];
      let value = NaN;
      if (end > start) {
        const number = readDecimal(text, start, end);
        value = isFill(number) ? NaN : inRange(channel, number * factor);
        if (Number.isNaN(value)) return false;
        present++;
      }
      this.#values[k] = value;
    }
    return present > 0 && this.#positionFits();
  }

  /** Adds the row parsed last. */
  commit(line: number): void {
    this.#tally.read++;
    const seconds = this.#zoned ? this.#clock.utc(this.#seconds) : this.#clock.local(this.#seconds, line);
    const row = this.#rows.add(seconds, line);
    for (let k = 0; k < this.#columns.length; k++) {
      const value = this.#values[k];
      if (!Number.isNaN(value)) this.#columns[k].set(row, value);
    }
  }

  /** Finds the ends of the cells; false when they are not as many as the headers. */
  #split(text: string, from: number, to: number): boolean {
    const ends = this.#ends;
    let n = 0;
    for (let at = from; at < to; at++) {
      if (text.charCodeAt(at) !== this.#delimiter) continue;
      if (n === ends.length) return false;
      ends[n++] = at;
    }
    if (n !== ends.length - 1) return false;
    ends[n] = to;
    return true;
  }

  #time(text: string, from: number): boolean {
    const { time: index, factor } = this.#layout.time;
    const start = index === 0 ? from : this.#ends[index - 1] + 1;
    const end = this.#ends[index];
    if (this.#minute.readText(text, start, end)) {
      this.#seconds = this.#minute.seconds;
      return (this.#zoned = true);
    }
    this.#seconds = readIso(text, start, end);
    const isUtc = text.charCodeAt(end - 1) === 90;
    this.#zoned = isUtc || carriesZone(text.slice(start, end));
    if (isUtc && !Number.isNaN(this.#seconds)) this.#minute.remember(text, start);
    if (Number.isNaN(this.#seconds)) {
      this.#seconds = readUnix(readDecimal(text, start, end), factor);
      this.#zoned = true;
    }
    return !Number.isNaN(this.#seconds);
  }

  /** No position, or a whole one in range. */
  #positionFits(): boolean {
    if (this.#lat < 0) return true;
    const lat = this.#values[this.#lat];
    const lon = this.#values[this.#lon];
    if (Number.isNaN(lat) && Number.isNaN(lon)) return true;
    if (!(Math.abs(lat) <= 90 && Math.abs(lon) <= 180) || (lat === 0 && lon === 0)) return false;
    if (lon === 180) this.#values[this.#lon] = -180;
    return true;
  }
}
