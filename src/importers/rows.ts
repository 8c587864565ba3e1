import { CHANNELS, type Channel } from '../recording/recording.js';

/** Rows a block: a column grows by blocks, so that it is never copied while the log is read. */
const BLOCK = 1 << 15;

/** A block in which nothing was set. */
const NO_VALUES = new Float64Array(BLOCK).fill(NaN);

/** A column of numbers that grows at its end. What was never set is NaN. */
export class GrowingColumn {
  readonly #blocks: Float64Array[] = [];
  set(row: number, value: number): void {
    const block = row >>> 15;
    while (this.#blocks.length <= block) this.#blocks.push(new Float64Array(BLOCK).fill(NaN));
    this.#blocks[block][row & (BLOCK - 1)] = value;
  }

  /** The values of some rows, in their order. */
  pick(rows: Uint32Array): Float64Array {
    const blocks = this.#blocks;
    const values = new Float64Array(rows.length);
    let at = -1;
    let block: Float64Array = NO_VALUES;
    for (let i = 0; i < rows.length; i++) {
      const row = rows[i];
      if (row >>> 15 !== at) block = blocks[(at = row >>> 15)] ?? NO_VALUES;
      values[i] = block[row & (BLOCK - 1)];
    }
    return values;
  }

  /** Marks those of some rows (all, if undefined) that hold a value; returns how many do. */
  mark(marks: Uint8Array, rows: Uint32Array | undefined): number {
    const blocks = this.#blocks;
    let present = 0;
    for (let i = 0; i < marks.length; i++) {
      const row = rows ? rows[i] : i;
      const block = blocks[row >>> 15];
      if (!block) continue;
      const value = block[row & (BLOCK - 1)];
      if (value !== value) continue;
      marks[i] = 1;
      present++;
    }
    return present;
  }

  /** The first `length` values. */
  all(length: number): Float64Array {
    const values = new Float64Array(length).fill(NaN, Math.min(length, this.#blocks.length * BLOCK));
    this.#blocks.forEach((block, k) => {
      if (k * BLOCK < length) values.set(block.subarray(0, length - k * BLOCK), k * BLOCK);
    });
    return values;
  }

  clear(): void {
    this.#blocks.length = 0;
  }

  get(row: number): number {
    const block = this.#blocks[row >>> 15];
    return block ? block[row & (BLOCK - 1)] : NaN;
  }
}

/** A column of whole numbers from 0 on that grows at its end; what was never set is `fill`. */
export class GrowingCounts {
  readonly #blocks: Uint32Array[] = [];
  readonly #fill: number;

  constructor(fill: number) {
    this.#fill = fill;
  }

  set(row: number, value: number): void {
    const block = row >>> 15;
    while (this.#blocks.length <= block) this.#blocks.push(new Uint32Array(BLOCK).fill(this.#fill));
    this.#blocks[block][row & (BLOCK - 1)] = value;
  }

  clear(): void {
    this.#blocks.length = 0;
  }

  get(row: number): number {
    const block = this.#blocks[row >>> 15];
    return block ? block[row & (BLOCK - 1)] : this.#fill;
  }
}

/**
 * What a reader has read so far, in the order it stood in the log: a row has a time (NaN where the record carried
 * none), the line it came from, how many records it stands for, and values. Nothing is judged here.
 */
export class LogRows {
  readonly #time = new GrowingColumn();
  readonly #line = new GrowingCounts(0);
  readonly #records = new GrowingCounts(1);
  readonly #columns = new Map<Channel, GrowingColumn>();
  readonly #pieces: number[] = [];
  #length = 0;
  /** Rows were added without a time. */
  untimed = 0;

  get length(): number {
    return this.#length;
  }

  /** Adds a row that stands for one record. */
  add(time: number, line: number): number {
    const row = this.#length++;
    if (Number.isNaN(time)) this.untimed++;
    this.#time.set(row, time);
    this.#line.set(row, line);
    return row;
  }

  /** The next row begins a new piece: nothing is interpolated from the rows before it. */
  startPiece(): void {
    if (this.#length > (this.#pieces.at(-1) ?? 0)) this.#pieces.push(this.#length);
  }

  /** First rows of the pieces after the first. */
  get pieces(): readonly number[] {
    return this.#pieces.at(-1) === this.#length ? this.#pieces.slice(0, -1) : this.#pieces;
  }

  set(channel: Channel, row: number, value: number): void {
    if (Number.isNaN(value)) return;
    this.column(channel).set(row, value);
  }

  blank(channel: Channel, row: number): void {
    this.#columns.get(channel)?.set(row, NaN);
  }

  get(channel: Channel, row: number): number {
    return this.#columns.get(channel)?.get(row) ?? NaN;
  }

  /** The column of a channel, made when first asked for. */
  column(channel: Channel): GrowingColumn {
    let column = this.#columns.get(channel);
    if (!column) this.#columns.set(channel, (column = new GrowingColumn()));
    return column;
  }

  /** Channels that hold a column, in the order of CHANNELS. */
  get channels(): Channel[] {
    return (Object.keys(CHANNELS) as Channel[]).filter((channel) => this.#columns.has(channel));
  }

  /** Lets go of a column that has been copied. */
  release(channel: Channel): void {
    this.#columns.delete(channel);
  }

  time(row: number): number {
    return this.#time.get(row);
  }

  /** Times of some rows in their order, or of all. */
  times(rows?: Uint32Array): Float64Array {
    return rows ? this.#time.pick(rows) : this.#time.all(this.#length);
  }

  /** Values of a channel of some rows in their order, or of all. */
  values(channel: Channel, rows?: Uint32Array): Float64Array {
    return rows ? this.column(channel).pick(rows) : this.column(channel).all(this.#length);
  }

  /** Lets go of the times, once copied, and of the line numbers. */
  releaseTimes(): void {
    this.#time.clear();
    this.#line.clear();
  }

  /** Whether every row has a time and each is later than the one before. */
  get isOrdered(): boolean {
    if (this.untimed > 0) return false;
    let before = -Infinity;
    for (let row = 0; row < this.#length; row++) {
      const time = this.#time.get(row);
      if (!(time > before)) return false;
      before = time;
    }
    return true;
  }

  setTime(row: number, time: number): void {
    this.#time.set(row, time);
  }

  line(row: number): number {
    return this.#line.get(row);
  }

  records(row: number): number {
    return this.#records.get(row);
  }

  /** Leaves a row out: it stands for nothing any more. */
  drop(row: number): void {
    this.#time.set(row, NaN);
    this.#records.set(row, 0);
  }

  addRecords(row: number, count: number): void {
    this.#records.set(row, this.#records.get(row) + count);
  }
}
