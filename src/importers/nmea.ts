/**
 * NMEA 0183 logs (IEC 61162-1), a sentence a line. What one fix says in several sentences (RMC, GGA, GLL and VTG of
 * one receiver under one stamp) is one row; each of these sentences counts as kept. A sentence without a time is a row
 * of its own that waits for its neighbours' times.
 */
import { CHANNELS, type Channel } from '../recording/recording.js';
import { UserError } from '../recording/issues.js';
import type { Bytes } from './bytes.js';
import { DAY, DayCount, readDay } from './days.js';
import { asciiBased } from './encoding.js';
import { eachLine, sentencesOf, stampOf, type Sentence } from './framing.js';
import { GrowingColumn, type LogRows } from './rows.js';
import type { Fields } from './fields.js';
import { PlainSentences } from './plain-sentences.js';
import { addressOf, NOTHING, type Address, type Reading, type Values } from './sentences.js';
import { settle, type Settled } from './settle.js';
import type { Tally } from './tally.js';
import type { ColumnReading, ImportOptions } from './types.js';
import { createZoneClock, type ZoneClock } from './zone.js';

type Fix = Extract<Reading, { is: 'fix' }>;

/** The fix being put together from sentences of one stamp. */
interface OpenFix {
  readonly row: number;
  readonly seconds: number;
  /** Talker that gave each sentence of the fix. */
  readonly given: Map<string, string>;
  rank: number;
  /** No sentence of an instrument has come since. */
  quiet: boolean;
}

/** With equal decimals the position of RMC stands before that of GLL and GGA: its speed and course belong to it. */
const RANK: Readonly<Record<string, number>> = { RMC: 2, GLL: 1, GGA: 0 };

/** Assembles rows from sentences. */
class NmeaLog {
  readonly #rows: LogRows;
  readonly #tally: Tally;
  readonly days = new DayCount();
  readonly #leadDays = new DayCount();
  readonly lead = new GrowingColumn();
  readonly #plain = new PlainSentences();
  readonly #checked = new Set<string>();
  readonly #seen = new Map<string, Set<Channel>>();
  readonly #zone: ZoneClock | null;
  readonly clockRows: number[] = [];
  #fix: OpenFix | null = null;
  #speedInFix = false;
  #leadNow = NaN;
  #leadBefore = -Infinity;
  fixes = 0;
  leads = 0;
  daylessLeads = 0;
  unzonedLeads = 0;

  constructor(rows: LogRows, tally: Tally, zone: ZoneClock | null) {
    this.#rows = rows;
    this.#zone = zone;
    this.#tally = tally;
  }

  line(bytes: Uint8Array, number: number, ended: boolean): void {
    if (bytes.length === 0) return;
    if (bytes[0] === 35) {
      this.#tally.read++;
      this.#tally.ignore('comment');
      return;
    }
    const before = this.#tally.rejections.total;
    for (const sentence of sentencesOf(bytes)) {
      this.#tally.read++;
      if (sentence) this.#sentence(sentence, number);
      else this.#tally.reject('not a sentence', number);
    }
    if (!ended && this.#tally.rejections.total > before) {
      this.#tally.issue('file-truncated', `The file is cut within line ${number}.`, number);
    }
  }

  /** Takes the line that begins at `from` if it is plain; returns where the next one begins, -1 if it is not. */
  plain(bytes: Uint8Array, from: number, end: number, line: number): number {
    const next = this.#plain.read(bytes, from, end);
    if (next < 0) return next;
    const { address, fields } = this.#plain;
    this.#tally.read++;
    this.#checked.add(address.talker);
    this.#leadNow = NaN;
    this.#use(address, address.decode ? address.decode(fields) : NOTHING, fields, line);
    return next;
  }

  #sentence(sentence: Sentence, line: number): void {
    const address = addressOf(sentence.address);
    const { talker, decode } = address;
    if (sentence.check === 'good') this.#checked.add(talker);
    if (sentence.check === 'bad') return this.#tally.reject('bad checksum', line);
    if (sentence.check === 'missing') {
      if (this.#checked.has(talker)) return this.#tally.reject('checksum missing', line);
      this.#tally.notice('checksum-missing', line);
    }
    this.#readLead(sentence.prefix);
    if (!decode) return this.#tally.ignore(address.formatter);
    const fields = sentence.fields();
    this.#use(address, decode(fields), fields, line);
  }

  #use({ formatter, talker }: Address, reading: Reading, fields: Fields, line: number): void {
    switch (reading.is) {
      case 'nothing':
        return this.#tally.ignore(formatter);
      case 'fault':
        this.days.dated('no fix', this.#rows.length, reading.day, this.days.now);
        return this.#tally.reject(`${formatter}: ${reading.reason}`, line);
      case 'clock':
        return this.#clock(reading, line);
      case 'fix':
        return this.#fixSentence(formatter, talker, reading, line);
      case 'values':
        return this.#values(labelOf(formatter, fields), reading.values, line);
    }
  }

  #readLead(prefix: string): void {
    this.#leadNow = NaN;
    if (prefix === '') return;
    const stamp = stampOf(prefix);
    if (Number.isNaN(stamp.seconds)) return;
    this.leads++;
    if (stamp.dayless) this.daylessLeads++;
    if (!stamp.zoned) this.unzonedLeads++;
    const seconds = stamp.dayless ? this.#leadDays.unwrap(stamp.seconds) : stamp.seconds;
    this.#leadNow = stamp.zoned || stamp.dayless || !this.#zone ? seconds : this.#zone.toUtc(seconds, this.#leadBefore);
    this.#leadBefore = this.#leadNow;
  }

  #add(seconds: number, line: number): number {
    const row = this.#rows.add(seconds, line);
    if (!Number.isNaN(this.#leadNow)) this.lead.set(row, this.#leadNow);
    return row;
  }

  #clock({ clock, day }: Extract<Reading, { is: 'clock' }>, line: number): void {
    const seconds = this.days.unwrap(clock);
    this.days.dated('clock', this.#rows.length, day, seconds);
    this.clockRows.push(this.#add(seconds, line));
  }

  #fixSentence(formatter: string, talker: string, reading: Fix, line: number): void {
    const seconds = this.days.unwrap(reading.clock);
    const open = this.#fix?.seconds === seconds ? this.#fix : null;
    const giver = open?.given.get(formatter);
    if (giver !== undefined && giver !== talker) return this.#tally.ignore(`${formatter} of a second receiver`);
    if (reading.simulated) this.#tally.notice('simulated', line);
    const fix = open && giver === undefined ? this.#join(open) : this.#begin(seconds, line);
    fix.given.set(formatter, talker);
    this.days.dated('fix', fix.row, reading.day, seconds);
    if (this.leads > 0 && this.daylessLeads === 0) {
      const base = Math.round((this.#leadNow - seconds) / DAY);
      this.days.dated('logger', fix.row, base + Math.floor(seconds / DAY), seconds);
    }
    const rank = reading.position.decimals * 4 + RANK[formatter];
    if (rank > fix.rank) {
      fix.rank = rank;
      this.#rows.set('lat', fix.row, reading.position.lat);
      this.#rows.set('lon', fix.row, reading.position.lon);
    }
    const seen = this.#seenOf(formatter);
    seen.add('lat').add('lon');
    this.#set(seen, fix.row, reading.values);
    if (!Number.isNaN(reading.values.sog ?? NaN)) this.#speedInFix = true;
  }

  #join(open: OpenFix): OpenFix {
    this.#rows.addRecords(open.row, 1);
    return open;
  }

  #begin(seconds: number, line: number): OpenFix {
    this.fixes++;
    const row = this.#add(seconds, line);
    return (this.#fix = { row, seconds, given: new Map(), rank: -1, quiet: true });
  }

  /** VTG says nothing new where RMC gives the speed; right behind a fix it belongs to it. */
  #values(label: string, values: Values, line: number): void {
    if (label === 'VTG' && this.#fix && (this.#fix.quiet || this.#speedInFix)) {
      const row = this.#join(this.#fix).row;
      if (!this.#speedInFix) this.#set(this.#seenOf(label), row, values);
      return;
    }
    if (this.#fix) this.#fix.quiet = false;
    this.#set(this.#seenOf(label), this.#add(NaN, line), values);
  }

  /** The channels seen under a label so far. */
  #seenOf(label: string): Set<Channel> {
    let seen = this.#seen.get(label);
    if (!seen) this.#seen.set(label, (seen = new Set()));
    return seen;
  }

  #set(seen: Set<Channel>, row: number, values: Values): void {
    for (const channel in values) {
      seen.add(channel as Channel);
      this.#rows.set(channel as Channel, row, values[channel as Channel]!);
    }
  }

  columns(): ColumnReading[] {
    return [...this.#seen].flatMap(([header, channels]) =>
      [...channels].map((means) => ({ header, means, unit: CHANNELS[means] })),
    );
  }
}

/** MWV is two sentences under one name. */
function labelOf(formatter: string, fields: Fields): string {
  return formatter === 'MWV' ? `MWV ${fields.letters(1).trim()}` : formatter;
}

/**
 * Reads an NMEA 0183 log.
 *
 * @param quick Lines that are plain go past the tolerant reader; without it all goes through it, which is the reference.
 */
export async function readNmea(
  bytes: Bytes,
  encoding: string,
  rows: LogRows,
  tally: Tally,
  options: ImportOptions,
  quick = true,
): Promise<{ settled: Settled; columns: ColumnReading[] }> {
  const log = new NmeaLog(rows, tally, options.zone === undefined ? null : createZoneClock(options.zone));
  await eachLine(
    asciiBased(bytes, encoding, tally).bytes,
    (line, number, ended) => log.line(line, number, ended),
    quick ? (piece, from, end, number) => log.plain(piece, from, end, number) : null,
  );
  const date = readDay(options.date);
  const lead = log.leads > 0 ? log.lead : undefined;
  if (log.fixes > 0) dropClockRows(log, rows, tally);
  if (log.fixes > 0 || log.clockRows.length > 0) {
    if (!log.days.apply(rows, date, tally)) throw dateMissing(tally.file);
  } else if (lead) timeByLead(log, lead, rows, date, options, tally);
  tellNmea(tally);
  return { settled: settle(rows, tally, '', lead), columns: log.columns() };
}

/** Where fixes give the time, a clock sentence gave its date and is not needed as a row. */
function dropClockRows(log: NmeaLog, rows: LogRows, tally: Tally): void {
  for (const row of log.clockRows) {
    tally.keptAside += rows.records(row);
    rows.drop(row);
  }
}

/** No sentence has a time: the logger's own stamps are the times. */
function timeByLead(
  log: NmeaLog,
  lead: GrowingColumn,
  rows: LogRows,
  date: number,
  options: ImportOptions,
  tally: Tally,
): void {
  if (log.daylessLeads > 0 && Number.isNaN(date)) throw dateMissing(tally.file);
  const base = log.daylessLeads > 0 ? date * DAY : 0;
  if (log.unzonedLeads > 0 && options.zone === undefined) tally.notice('zone-assumed', 1, log.unzonedLeads);
  for (let row = 0; row < rows.length; row++) rows.setTime(row, lead.get(row) + base);
}

function dateMissing(file: string): UserError {
  return new UserError(`${file}: the sentences carry a time of day but no date.`, {
    exitCode: 2,
    suggestion: 'Give the day it was logged with --date YYYY-MM-DD, or as `date` in the race file.',
  });
}

function tellNmea(tally: Tally): void {
  tally.tell(
    'checksum-missing',
    'checksum-missing',
    (n) => `${n} sentence(s) without a checksum are taken as they are.`,
  );
  tally.tell('simulated', 'simulated-fixes', (n) => `${n} sentence(s) say that the receiver was simulating.`);
  tally.tellZone();
}
