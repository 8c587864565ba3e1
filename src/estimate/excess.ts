import { LABEL } from '../segment/spells.js';
import { studentInterval } from '../math/student.js';
import type { Cause, LedgerFigures } from './ledger.js';

/** One boat's beats, for setting two boats side by side. */
export interface BeatCosts {
  readonly lap: number;
  readonly ledger: LedgerFigures;
  /** Seconds of the leg. */
  readonly seconds: number;
}

export interface Excess {
  readonly cause: Cause;
  /** Metres that the boat lost more than the other, over the laps both sailed. */
  readonly metres: number;
  /** Sampling error: from the spread between blocks, between manoeuvres, between starts. [m] */
  readonly se: number;
  /** Whether it is beyond what chance makes of so many causes. */
  readonly stands: boolean;
}

/** Causes that are ranked; shifts are shown apart. */
const RANKED: readonly Cause[] = ['manoeuvres', 'start', 'high', 'low', 'trim', 'speed', 'overstood', 'stopped'];
/** A start or rounding, a lay line or a stop is read off to about this: common practice, no source. [m] */
const EVENT_ERROR = 4;
/** An excess smaller than this is nothing to tell a sailor. [m] */
const LEAST = 5;
/** Two standard errors, widened for small samples and for looking at so many causes at once (Bonferroni, 5 % one-sided). */
const LEVEL = 1 - (2 * 0.05) / RANKED.length;
const LEAST_FACTOR = 2;

/** What `boat` lost more than `other`, cause by cause, over the laps both have, largest first. */
export function excesses(boat: readonly BeatCosts[], other: readonly BeatCosts[]): Excess[] {
  const laps = boat.filter((beat) => other.some(({ lap }) => lap === beat.lap)).map(({ lap }) => lap);
  const mine = boat.filter(({ lap }) => laps.includes(lap));
  const theirs = other.filter(({ lap }) => laps.includes(lap));
  if (laps.length === 0) return [];
  return RANKED.map((cause): Excess => {
    const metres = total(mine, cause) - total(theirs, cause);
    const a = samplingError(mine, cause);
    const b = samplingError(theirs, cause);
    const se = Math.hypot(a.se, b.se);
    const factor = Math.max(LEAST_FACTOR, studentInterval(LEVEL, Math.max(2, a.n + b.n - 2)));
    return { cause, metres, se, stands: metres > factor * se && metres > LEAST };
  }).sort((a, b) => b.metres - a.metres);
}

function total(beats: readonly BeatCosts[], cause: Cause): number {
  return beats.reduce((sum, { ledger }) => sum + ledger.entries[cause].value, 0);
}

/** Error of a cause's total as a habit, and how many independent pieces it rests on. [m] */
function samplingError(beats: readonly BeatCosts[], cause: Cause): { se: number; n: number } {
  if (cause === 'high' || cause === 'low' || cause === 'speed') {
    const seconds = beats.reduce((sum, beat) => sum + beat.seconds, 0);
    const rates = beats.flatMap(({ ledger }) =>
      ledger.pieces.flatMap((p) => (p.label === LABEL.settled ? [p.metres[cause] / p.seconds] : [])),
    );
    // Neighbouring blocks share the helm's mood and the wind: about two of three count.
    const n = (2 / 3) * rates.length;
    return { se: n > 1 ? (seconds * deviation(rates)) / Math.sqrt(n) : Infinity, n };
  }
  if (cause === 'manoeuvres') {
    const costs = beats.flatMap(({ ledger }) =>
      ledger.pieces.flatMap((p) => (p.metres.manoeuvres !== 0 ? [p.metres.manoeuvres] : [])),
    );
    return { se: Math.sqrt(Math.max(1, costs.length)) * Math.max(1.5, deviation(costs)), n: costs.length };
  }
  if (cause === 'trim') {
    return { se: Math.hypot(...beats.map(({ ledger }) => ledger.entries.trim.se)), n: 30 };
  }
  return { se: EVENT_ERROR * Math.sqrt(beats.length), n: 30 };
}

function deviation(values: readonly number[]): number {
  if (values.length < 2) return 0;
  const mean = values.reduce((sum, value) => sum + value, 0) / values.length;
  return Math.sqrt(values.reduce((sum, value) => sum + (value - mean) ** 2, 0) / (values.length - 1));
}
