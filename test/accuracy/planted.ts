/**
 * Planted faults: where the first boat of a race loses more than the others, in truth and by the debrief's ledger.
 * Metres are excesses over the mean of the other boats, so that what all share (and the reference chosen) drops out.
 */
import type { Cause, Result } from '../../src/result/result.js';
import { performanceOf, SINGLE_HANDER } from './generator/boat.js';
import { cosd } from './generator/directions.js';
import { PHASES, type Faults, type TrueBoat, type TrueLeg, type Truth } from './generator/index.js';
import { trueManoeuvreLoss, trueShifts } from './true-ledger.js';

export const CAUSES = ['high', 'low', 'speed', 'manoeuvres', 'overstood', 'shifts'] as const satisfies readonly Cause[];
export type PlantedCause = (typeof CAUSES)[number];

/** The ledger's entries in which a fault may rightly show. */
export const SHOWS_IN: Readonly<Record<keyof Faults, readonly Cause[]>> = {
  pinch: ['high'],
  slow: ['speed'],
  tackCost: ['manoeuvres'],
  overstand: ['overstood', 'low'],
  headed: ['shifts'],
  sheeting: ['trim', 'speed'],
  leeway: ['trim', 'speed'],
};

const BLOCK_S = 30;
const FETCH = PHASES.indexOf('fetch');

/** Metres of a leg by cause, against the invented boat itself sailed without fault. */
export function trueLedger(boat: TrueBoat, leg: TrueLeg): Record<PlantedCause, number> {
  const clean = performanceOf(SINGLE_HANDER, 0);
  const metres = {
    high: 0,
    low: 0,
    speed: 0,
    manoeuvres: trueManoeuvreLoss(boat, leg),
    overstood: 0,
    shifts: trueShifts(boat, leg),
  };
  let block: number[] = [];
  const close = (): void => {
    if (block.length >= BLOCK_S / 2) {
      const mean = (column: Float64Array): number =>
        block.reduce((sum, i) => sum + Math.abs(column[i]), 0) / block.length;
      const tws = mean(boat.tws);
      const gamma = mean(boat.gamma);
      const best = clean.bestUp(tws);
      const able = clean.speed(tws, gamma) * cosd(gamma);
      metres[gamma < best ? 'high' : 'low'] += block.length * (clean.speed(tws, best) * cosd(best) - able);
      metres.speed += block.length * (able - mean(boat.vmg));
    }
    block = [];
  };
  for (let i = leg.start - boat.t0; i < leg.end - boat.t0; i++) {
    if (boat.phase[i] === FETCH) metres.overstood += boat.bestVmg[i] - boat.vmg[i];
    if (!boat.settled[i]) close();
    else if (block.push(i) >= BLOCK_S) close();
  }
  close();
  return metres;
}

/** First boat less the mean of the others, over all upwind legs. */
function excess(per: readonly Record<PlantedCause, number>[]): Record<PlantedCause, number> {
  const [first, ...others] = per;
  const of = (cause: PlantedCause): number =>
    first[cause] - others.reduce((sum, other) => sum + other[cause], 0) / Math.max(1, others.length);
  return Object.fromEntries(CAUSES.map((cause) => [cause, of(cause)])) as Record<PlantedCause, number>;
}

export function trueExcess(truth: Truth): Record<PlantedCause, number> {
  return excess(
    truth.boats.map((boat) => {
      const legs = boat.legs.filter((leg) => leg.kind === 'upwind').map((leg) => trueLedger(boat, leg));
      const total = (cause: PlantedCause): number => legs.reduce((sum, leg) => sum + leg[cause], 0);
      return Object.fromEntries(CAUSES.map((cause) => [cause, total(cause)])) as Record<PlantedCause, number>;
    }),
  );
}

/** The same by the debrief; null when a boat has no ledger. */
export function statedExcess(result: Result): Record<PlantedCause, number> | null {
  const per = result.boats.map((boat) => {
    const ledgers = boat.legs.flatMap((leg) => (leg.kind === 'upwind' && leg.ledger ? [leg.ledger] : []));
    const total = (cause: PlantedCause): number =>
      ledgers.reduce((sum, { entries }) => sum + (entries.find((e) => e.cause === cause)?.metres?.value ?? 0), 0);
    return { empty: ledgers.length === 0, ...Object.fromEntries(CAUSES.map((c) => [c, total(c)])) } as {
      empty: boolean;
    } & Record<PlantedCause, number>;
  });
  return per.some((boat) => boat.empty) ? null : excess(per);
}
