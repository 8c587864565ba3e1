import { excesses, type BoatCosts, type Excess } from '../estimate/excess.js';
import type { Hint } from '../result/result.js';
import { bestBoat, type Judgement } from './judge.js';
import type { BoatEstimate } from './estimate-boat.js';
import type { RaceModel } from './boat-models.js';
import type { Sailed } from './sail.js';
import type { BoatTrim } from './trim.js';

export interface HintInput {
  readonly names: readonly string[];
  readonly sailed: readonly Sailed[];
  readonly estimates: readonly BoatEstimate[];
  readonly judgements: readonly Judgement[];
  readonly models: readonly RaceModel[];
  readonly trims: readonly BoatTrim[];
}

/** At most so many hints a boat: more are not read before the next race. */
const MOST = 3;

/** A boat's excesses over another, by its index. */
export interface BoatExcess {
  readonly other: number;
  readonly excesses: readonly Excess[];
}

/** What each boat lost more than the day's best boat, and that boat more than the next best; null with one boat. */
export function boatExcesses(input: HintInput): (BoatExcess | null)[] {
  const best = bestBoat(input.sailed, input.models);
  return input.names.map((_, k) => {
    const other = best < 0 ? -1 : k === best ? nextBest(input, best) : best;
    return other < 0 ? null : { other, excesses: excesses(costsOf(input, k), costsOf(input, other)) };
  });
}

/**
 * Hints: the excesses that stand beyond chance; and a leeway measured well away from the best. None with one boat and
 * nothing measured.
 */
export function hints(input: HintInput, found: readonly (BoatExcess | null)[]): (readonly Hint[])[] {
  return found.map((one, k) => {
    const stands = (one?.excesses ?? []).filter((excess) => excess.stands);
    const told = stands.map((excess) => excessHint(excess, one!, input, k));
    return [...told, ...leewayHint(input, k)].slice(0, MOST);
  });
}

function nextBest(input: HintInput, best: number): number {
  const others = input.sailed.map((one, k) => (k === best ? { ...one, blocks: [] } : one));
  return bestBoat(others, input.models);
}

function costsOf({ judgements, estimates }: HintInput, boat: number): BoatCosts {
  const beats = judgements[boat].legs.flatMap(({ ledger }, index) => {
    const { leg } = estimates[boat].legs[index];
    return ledger ? [{ lap: leg.lap, ledger, seconds: leg.to - leg.from }] : [];
  });
  return { beats, errors: estimates[boat].errors };
}

function excessHint(excess: Excess, { other, excesses: all }: BoatExcess, input: HintInput, boat: number): Hint {
  const { cause, metres, se, sys } = excess;
  const name = input.names[other];
  const more = `about ${metres.toFixed(0)} m more lost than ${name}, ±${Math.max(1, se).toFixed(0)}`;
  const text = ((): string => {
    switch (cause) {
      case 'high':
        return `Sailed${angleWords(input, boat, 'above')} the best course angle: ${more}${bentWords(excess)}${backWords(all)}. Try a little lower and faster.`;
      case 'low':
        return `Sailed${angleWords(input, boat, 'below')} the best course angle: ${more}${bentWords(excess)}${backWords(all)}. Try a little higher.`;
      case 'speed':
        return `Slower at the same angle: ${more}. Speed or trim, the log cannot tell.`;
      case 'trim':
        return `Trim: ${more}.`;
      case 'manoeuvres':
        return `Dearer tacks: ${more}${tackWords(excess)}.`;
      case 'start':
        return `Starts and roundings: ${more}.`;
      case 'overstood':
        return `Tacked for the mark beyond the lay line: ${more}${lengthWords(input, boat)}.`;
      case 'stopped':
        return `Stops and full turns: ${more}.`;
      case 'shifts':
        return `Shifts: ${more}. More of the time on the headed tack.`;
    }
  })();
  return { text, metres: { value: metres, se, ...(sys > 0 ? { sys } : {}), basis: 'inferred' } };
}

/** Two lengths of a dinghy. [m] */
const WORTH_A_WORD = 8;

/** What of it the ledgers show under speed, where that is worth a word. */
function bentWords({ fromSpeed, metres }: Excess): string {
  if (fromSpeed < Math.max(WORTH_A_WORD, 0.25 * metres)) return '';
  return `, ${fromSpeed.toFixed(0)} m of them shown under speed in the ledger, as the boat file may make too little of such an angle`;
}

/** What a boat off the best angle made good of it by more speed than the curve has there. */
function backWords(all: readonly Excess[]): string {
  const speed = all.find(({ cause }) => cause === 'speed')?.metres ?? 0;
  return speed < -WORTH_A_WORD ? `, ${(-speed).toFixed(0)} m of it won back by speed` : '';
}

/** How far beyond the lay line, at the worst. */
function lengthWords({ judgements }: HintInput, boat: number): string {
  const past = judgements[boat].legs.flatMap(({ ledger }) => ledger?.overstood.map((one) => one.past) ?? []);
  return past.length > 0 ? ` (up to ${Math.max(...past).toFixed(0)} m beyond it)` : '';
}

function tackWords({ each }: Excess): string {
  return each ? ` (${each.mine.toFixed(0)} m a tack against ${each.theirs.toFixed(0)})` : '';
}

/** " on average 3 degrees above", where the settled blocks say so. */
function angleWords({ sailed, judgements }: HintInput, boat: number, side: 'above' | 'below'): string {
  const { reference } = judgements[boat];
  const { blocks } = sailed[boat];
  const off = blocks.map((block) => reference.bestGamma(block.tws) - block.gamma).filter((x) => !Number.isNaN(x));
  const mean = off.reduce((sum, x) => sum + x, 0) / off.length;
  const size = side === 'above' ? mean : -mean;
  return size >= 0.75 ? `, on average, ${size.toFixed(0)}° ${side}` : ` ${side}`;
}

/** Leeway this far from the best is worth a word, where sensors measured it beyond two standard errors. [deg] */
const LEEWAY_WORTH = 1;
/** What the model's best leeway is good to. [deg] Common practice, no source. */
const LEEWAY_MODEL = 0.5;
/** The boom moves the leeway by about half of what it moves; from the model near full power. */
const BOOM_PER_LEEWAY = 1.5;

function leewayHint({ trims, judgements }: HintInput, boat: number): Hint[] {
  const rows = trims[boat].legs.flatMap((trim, index) => {
    const leeway = trim?.all.leeway;
    const best = judgements[boat].legs[index].optimum?.leeway;
    return leeway && best && leeway.basis !== 'inferred'
      ? [
          {
            off: leeway.value - best.value,
            se: Math.hypot(leeway.se, LEEWAY_MODEL),
            trim: judgements[boat].legs[index].ledger?.entries.trim,
          },
        ]
      : [];
  });
  if (rows.length === 0) return [];
  const off = rows.reduce((sum, row) => sum + row.off, 0) / rows.length;
  const se = Math.max(...rows.map((row) => row.se));
  if (Math.abs(off) < LEEWAY_WORTH || Math.abs(off) < 2 * se) return [];
  const boom = Math.max(1, Math.round(BOOM_PER_LEEWAY * Math.abs(off)));
  const where = off > 0 ? 'above' : 'below';
  const way = off > 0 ? 'further out' : 'further in';
  const metres = rows.reduce((sum, row) => sum + (row.trim?.value ?? 0), 0);
  const error = Math.hypot(...rows.map((row) => row.trim?.se ?? 0));
  return [
    {
      text:
        `Leeway ${Math.abs(off).toFixed(1)}° ${where} the boat model's best (±${se.toFixed(1)}): ` +
        `try the boom about ${boom}° ${way}, then look again.`,
      metres: metres > 0 ? { value: metres, se: error, basis: 'inferred' } : null,
    },
  ];
}
