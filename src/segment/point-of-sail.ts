import { median } from '../math/median.js';
import type { RowRange, Sailing } from './sailing.js';
import type { Thresholds } from './thresholds.js';

export type PointOfSail = 'upwind' | 'reach' | 'run';

/** A stretch sailed on one side of the wind on one point of sail. */
export interface State extends RowRange {
  readonly point: PointOfSail;
  /** +1: wind over the starboard side. */
  readonly side: 1 | -1;
}

const NONE = 0;

/** Code of a second: point of sail x side; 0 = luffing, no steerage way or not known. */
function codeOf(angle: number, thresholds: Thresholds): number {
  const size = Math.abs(angle);
  if (!(size >= thresholds.luffing)) return NONE;
  const side = angle >= 0 ? 1 : -1;
  if (size <= thresholds.closeHauled) return side;
  return size < thresholds.running ? 2 * side : 3 * side;
}

/**
 * The boat's usual speed when sailing close-hauled: the median over the seconds at close-hauled angles that are faster
 * than the median of all, so that waiting about before the gun does not pull it down. [m/s]
 */
export function usualUpwindSpeed(sailing: Sailing, thresholds: Thresholds): number {
  const speeds: number[] = [];
  for (let i = 0; i < sailing.n; i++) {
    const size = Math.abs(sailing.gamma[i]);
    if (size >= thresholds.luffing && size <= thresholds.closeHauled) speeds.push(sailing.speed[i]);
  }
  const half = median(speeds);
  const usual = median(speeds.filter((speed) => speed >= half));
  return Number.isNaN(usual) ? median(Array.from(sailing.speed).filter((speed) => speed > 0.5)) : usual;
}

/**
 * Angle by which the boat is judged each second: the bow's where it is logged, else the course's where the boat has
 * steerage way. Signed, NaN where neither says anything. [deg]
 */
export function steeringAngle(sailing: Sailing, usual: number, thresholds: Thresholds): Float64Array {
  const out = new Float64Array(sailing.n);
  for (let i = 0; i < sailing.n; i++) {
    const bow = sailing.bow ? sailing.bow[i] : NaN;
    const hasWay = sailing.speed[i] >= thresholds.steerage * usual;
    out[i] = !Number.isNaN(bow) ? bow : hasWay ? sailing.gamma[i] : NaN;
  }
  return out;
}

/**
 * Stretches on one point of sail and one side: runs of equal codes, interruptions up to `flicker` bridged, at least
 * `minState` long. In time order, not overlapping; what lies between them is turning, luffing, stopped or unknown.
 */
export function findStates(angle: Float64Array, thresholds: Thresholds): State[] {
  const runs: { code: number; from: number; to: number }[] = [];
  for (let i = 0; i < angle.length; i++) {
    const code = codeOf(angle[i], thresholds);
    if (code === NONE) continue;
    const last = runs.at(-1);
    if (last?.code === code && i - last.to <= thresholds.flicker) last.to = i + 1;
    else runs.push({ code, from: i, to: i + 1 });
  }
  return mergeFlicker(runs, thresholds)
    .filter((run) => run.to - run.from >= thresholds.minState)
    .map(({ code, from, to }) => ({
      from,
      to,
      point: Math.abs(code) === 1 ? 'upwind' : Math.abs(code) === 2 ? 'reach' : 'run',
      side: code > 0 ? 1 : -1,
    }));
}

/** A run no longer than `flicker` between two runs of one code is taken into them. */
function mergeFlicker(
  runs: readonly { code: number; from: number; to: number }[],
  thresholds: Thresholds,
): { code: number; from: number; to: number }[] {
  const out: { code: number; from: number; to: number }[] = [];
  for (const run of runs) {
    const last = out.at(-1);
    const before = out.at(-2);
    if (before && last && before.code === run.code && run.from - before.to <= thresholds.flicker) {
      before.to = run.to;
      out.pop();
    } else if (last?.code === run.code && run.from - last.to <= thresholds.flicker) last.to = run.to;
    else out.push({ ...run });
  }
  return out;
}
