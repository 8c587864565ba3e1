/** Blocks for the reconciliation of a boat's instruments, out of its one-second rows. */
import { circularMean, directionOf, eastOf, northOf, wrap180 } from '../math/angles.js';
import type { Track } from '../recording/track.js';
import type { ReconcileBlock } from './reconcile.js';

/** A stretch of steady sailing between manoeuvres, rows [from, to). */
export interface Stretch {
  readonly from: number;
  readonly to: number;
  readonly tack: 'port' | 'starboard';
  readonly upwind: boolean;
}

/** Length of a block. Long enough for the log's noise, short against the swing of the wind. [s] */
const BLOCK = 20;
/** Share of a block's rows that must have a channel for its mean to count. */
const LEAST_SHARE = 0.7;

/**
 * Cuts stretches into blocks of 20 s (the rest of a stretch is left out) and takes vector means: of velocities as such,
 * of angles as unit vectors, so that noise in an angle does not turn its mean.
 *
 * @param track     Rows, one a second; heading true, masthead angle signed. [m/s], [deg]
 * @param wind      Wind over ground at the boat on the same rows: where from [deg], speed [m/s].
 * @param stretches Steady sailing, upwind and downwind, without manoeuvres and without the time before the gun.
 * @returns Blocks, NaN where a channel is not logged.
 */
export function reconcileBlocks(
  track: Track,
  wind: { readonly from: Float64Array; readonly speed: Float64Array },
  stretches: readonly Stretch[],
): ReconcileBlock[] {
  return stretches.flatMap((stretch, spell) => {
    const blocks: ReconcileBlock[] = [];
    for (let at = stretch.from; at + BLOCK <= stretch.to; at += BLOCK)
      blocks.push(block(track, wind, stretch, spell, at));
    return blocks.filter((one) => Number.isFinite(one.east + one.north));
  });
}

function block(
  track: Track,
  wind: { readonly from: Float64Array; readonly speed: Float64Array },
  { tack, upwind }: Stretch,
  spell: number,
  at: number,
): ReconcileBlock {
  const over = (column: Float64Array | undefined): Float64Array | null => column?.subarray(at, at + BLOCK) ?? null;
  const station = windMean(over(wind.from)!, over(wind.speed)!);
  return {
    tack: tack === 'starboard' ? 1 : -1,
    upwind,
    spell,
    east: mean(over(track.vx)),
    north: mean(over(track.vy)),
    heading: meanDirection(over(track.heading)),
    mastheadAngle: wrap180(meanDirection(over(track.awa))),
    apparentSpeed: mean(over(track.aws)),
    waterSpeed: mean(over(track.stw)),
    windFrom: station.from,
    windSpeed: station.speed,
  };
}

/** Mean of what is there; NaN where too little is. */
function mean(values: Float64Array | null): number {
  let [sum, n] = [0, 0];
  for (const value of values ?? []) {
    if (Number.isNaN(value)) continue;
    sum += value;
    n++;
  }
  return n >= LEAST_SHARE * BLOCK ? sum / n : NaN;
}

function meanDirection(values: Float64Array | null): number {
  if (!values) return NaN;
  const { mean: direction, n } = circularMean(values);
  return n >= LEAST_SHARE * BLOCK ? direction : NaN;
}

/** Vector mean of the wind; its speed NaN, its direction by unit vectors, where speeds are not known. */
function windMean(from: Float64Array, speed: Float64Array): { from: number; speed: number } {
  const east = mean(from.map((direction, i) => speed[i] * eastOf(direction)));
  const north = mean(from.map((direction, i) => speed[i] * northOf(direction)));
  if (Number.isNaN(east + north)) return { from: meanDirection(from), speed: NaN };
  return { from: directionOf(east, north), speed: Math.hypot(east, north) };
}
