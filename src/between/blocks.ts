import { DEG } from '../math/angles.js';
import { rowAt, type BetweenBoat, type UpwindLeg } from './boat.js';
import { meanKnown, trimMeans, type TrimMeans } from './trim-means.js';
import { sharedDirection, WindSum, type UnitVector } from './shared-wind.js';

/** Blocks of settled sailing that two boats share: same second, same tack, close by. */

export interface PairingOptions {
  /** Farther apart than this the wind is not shared. 300 m: gusts resemble each other over a few hundred metres. [m] */
  readonly maxDistance: number;
  /** Nearer to the windward mark than this the boats steer for the mark; on a short beat, a third of it. [m] */
  readonly markClear: number;
  /** Length aimed at, and the least. 30 s: longer than helm and waves, shorter than a tack's sailing. [s] */
  readonly blockSeconds: number;
  readonly minSeconds: number;
  /** Added to the second boat's clock, to set one lap against another. [s] */
  readonly shift: number;
  /** `shared`: one wind for both, the mean of the two. `own`: each its own, where the boats did not sail together. */
  readonly wind: 'shared' | 'own';
}

export const PAIRING: PairingOptions = {
  maxDistance: 300,
  markClear: 250,
  blockSeconds: 30,
  minSeconds: 20,
  shift: 0,
  wind: 'shared',
};

/** Means over one block: values of the first boat less the second. */
export interface PairBlock {
  readonly lap: number;
  /** UTC epoch second it begins (first boat's clock), and its length. [s] */
  readonly time: number;
  readonly seconds: number;
  readonly tack: number;
  /** Speed made good to windward, and its parts by angle and by speed: the parts sum to it. [m/s] */
  readonly vmg: number;
  readonly height: number;
  readonly speed: number;
  /** Course angle to the wind, first less second; negative: the first sailed higher. [deg] */
  readonly gamma: number;
  /** Metres gained to windward of the mean wind. */
  readonly gain: number;
  /** Mean distance between the boats. [m] */
  readonly distance: number;
  /** What the leeway of each boat can be told from. */
  readonly trim: readonly [TrimMeans, TrimMeans];
}

interface Stretch {
  readonly lap: number;
  readonly tack: number;
  /** First row of the first boat, and of the second at the same time. */
  readonly rowFirst: number;
  readonly rowSecond: number;
  readonly seconds: number;
}

/**
 * Cuts what two boats sailed together into blocks.
 *
 * @param first    First boat.
 * @param second   Second boat.
 * @param meanWind Unit vector to where the mean wind of each lap comes from, for the metres gained.
 * @param options  Distances and lengths.
 * @returns Blocks in order of time.
 */
export function pairBlocks(
  first: BetweenBoat,
  second: BetweenBoat,
  meanWind: ReadonlyMap<number, UnitVector>,
  options: PairingOptions = PAIRING,
): PairBlock[] {
  return commonStretches(first, second, options).flatMap((stretch) => {
    const count = Math.max(1, Math.round(stretch.seconds / options.blockSeconds));
    const edges = Array.from({ length: count + 1 }, (_, k) => Math.round((k * stretch.seconds) / count));
    return edges.slice(1).flatMap((edge, k) => {
      const block = measureBlock(first, second, stretch, edges[k], edge, meanWind.get(stretch.lap), options);
      return block ? [block] : [];
    });
  });
}

/** Stretches in which every second counts for both boats, on one tack, at least the least length. */
function commonStretches(first: BetweenBoat, second: BetweenBoat, options: PairingOptions): Stretch[] {
  const stretches: Stretch[] = [];
  for (const leg of first.legs) {
    const { lap, from, to } = leg;
    const other = second.legs.find((leg) => leg.lap === lap);
    if (!other) continue;
    let start = -1;
    for (let row = from; row <= to; row++) {
      const tack = row < to ? sharedTack(first, row, leg, second, other, options) : 0;
      const goesOn = start >= 0 && tack !== 0 && tack === first.tack[start];
      if (goesOn) continue;
      if (start >= 0 && row - start >= options.minSeconds) {
        const rowSecond = first.t0 + start - options.shift - second.t0;
        stretches.push({ lap, tack: first.tack[start], rowFirst: start, rowSecond, seconds: row - start });
      }
      start = tack === 0 ? -1 : row;
    }
  }
  return stretches;
}

/** The tack both are on at the first boat's row, 0 when the second does not count for a comparison. */
function sharedTack(
  first: BetweenBoat,
  row: number,
  own: UpwindLeg,
  second: BetweenBoat,
  leg: UpwindLeg,
  options: PairingOptions,
): number {
  const other = rowAt(second, first.t0 + row - options.shift);
  if (other < leg.from || other >= leg.to || !first.settled[row] || !second.settled[other]) return 0;
  const tack = first.tack[row];
  if (tack !== second.tack[other]) return 0;
  if (nearMark(first, row, own, options) || nearMark(second, other, leg, options)) return 0;
  const distance = Math.hypot(first.x[row] - second.x[other], first.y[row] - second.y[other]);
  const known = !Number.isNaN(first.ux[row]) && !Number.isNaN(second.ux[other]);
  return known && distance <= options.maxDistance ? tack : 0;
}

function nearMark(boat: BetweenBoat, row: number, leg: UpwindLeg, options: PairingOptions): boolean {
  if (!boat.toMark) return false;
  const clear = Math.min(options.markClear, boat.toMark[leg.from] / 3);
  return boat.toMark[row] < (Number.isNaN(clear) ? options.markClear : clear);
}

/** Vector means first, then speed and angle: a mean of angles or speeds would read noise as a loss. */
function measureBlock(
  first: BetweenBoat,
  second: BetweenBoat,
  stretch: Stretch,
  from: number,
  to: number,
  meanWind: UnitVector | undefined,
  options: PairingOptions,
): PairBlock | null {
  const seconds = to - from;
  const sum = { x1: 0, y1: 0, x2: 0, y2: 0, distance: 0 };
  const winds = [new WindSum(), new WindSum()] as const;
  for (let k = from; k < to; k++) {
    const i = stretch.rowFirst + k;
    const j = stretch.rowSecond + k;
    sum.x1 += first.ux[i] / seconds;
    sum.y1 += first.uy[i] / seconds;
    sum.x2 += second.ux[j] / seconds;
    sum.y2 += second.uy[j] / seconds;
    sum.distance += Math.hypot(first.x[i] - second.x[j], first.y[i] - second.y[j]) / seconds;
    const shared = sharedDirection(first, i, second, j);
    winds[0].add(options.wind === 'shared' ? shared : first.twd[i]);
    winds[1].add(options.wind === 'shared' ? shared : second.twd[j]);
  }
  const [wind, otherWind] = [winds[0].mean(), winds[1].mean()];
  if (!wind || !otherWind) return null;
  const a = againstWind(sum.x1, sum.y1, wind);
  const b = againstWind(sum.x2, sum.y2, otherWind);
  const along = meanWind ?? wind;
  const tws = blockWind(first, second, stretch, from, to, options);
  return {
    lap: stretch.lap,
    time: first.t0 + stretch.rowFirst + from,
    seconds,
    tack: stretch.tack,
    ...splitDifference(a, b),
    gain: seconds * ((sum.x1 - sum.x2) * along.east + (sum.y1 - sum.y2) * along.north),
    distance: sum.distance,
    trim: [
      trimMeans(first, stretch.rowFirst + from, seconds, { speed: a.v, gamma: DEG * a.γ, tws: tws[0] }),
      trimMeans(second, stretch.rowSecond + from, seconds, { speed: b.v, gamma: DEG * b.γ, tws: tws[1] }),
    ],
  };
}

/** Wind speed each boat is measured in, like the direction: the mean of what both have, or each its own. [m/s] */
function blockWind(
  first: BetweenBoat,
  second: BetweenBoat,
  { rowFirst, rowSecond }: Stretch,
  from: number,
  to: number,
  { wind }: PairingOptions,
): [number, number] {
  const own = [meanKnown(first.tws, rowFirst + from, to - from), meanKnown(second.tws, rowSecond + from, to - from)];
  const known = own.filter((speed) => !Number.isNaN(speed));
  const shared = known.reduce((sum, speed) => sum + speed, 0) / known.length;
  return wind === 'shared' ? [shared, shared] : [own[0], own[1]];
}

interface SpeedAndAngle {
  readonly v: number;
  /** [rad] */
  readonly γ: number;
}

function againstWind(ux: number, uy: number, wind: UnitVector): SpeedAndAngle {
  const along = ux * wind.east + uy * wind.north;
  const across = ux * wind.north - uy * wind.east;
  return { v: Math.hypot(ux, uy), γ: Math.atan2(Math.abs(across), along) };
}

/**
 * Difference in speed made good, split about the midpoint so that the parts sum to it exactly:
 *   v1 cos γ1 - v2 cos γ2 = (cos γ1 + cos γ2)/2 (v1 - v2) + (v1 + v2)/2 (cos γ1 - cos γ2)
 * for small differences cos γ dv - v sin γ dγ.
 */
export function splitDifference(
  a: SpeedAndAngle,
  b: SpeedAndAngle,
): { vmg: number; height: number; speed: number; gamma: number } {
  const speed = ((Math.cos(a.γ) + Math.cos(b.γ)) / 2) * (a.v - b.v);
  const height = ((a.v + b.v) / 2) * (Math.cos(a.γ) - Math.cos(b.γ));
  return { vmg: speed + height, height, speed, gamma: DEG * (a.γ - b.γ) };
}
