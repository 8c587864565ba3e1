import { directionOf, eastOf, northOf } from '../math/angles.js';
import { median } from '../math/median.js';
import type { Track } from '../recording/track.js';
import { estimateBlock, type BlockEstimate } from '../estimate/blocks.js';
import { findLegs, type Course, type Leg } from '../segment/legs.js';
import { findManoeuvres, type Manoeuvre, type Manoeuvres } from '../segment/manoeuvres.js';
import { makeSailing, type Sailing } from '../segment/sailing.js';
import { divideBeat, type LegRows } from '../segment/spells.js';
import type { Thresholds } from '../segment/thresholds.js';
import type { WindAtBoat } from '../wind/field.js';

/** One boat's sailing, divided. */
export interface Sailed {
  readonly sailing: Sailing;
  /** Wind speed at the boat, relative to the water where the current is known. [m/s] */
  readonly tws: Float64Array;
  readonly manoeuvres: readonly Manoeuvre[];
  readonly states: Manoeuvres['states'];
  readonly usual: number;
  readonly legs: readonly Leg[];
  /** For each leg; null where it is not a beat. */
  readonly rows: readonly (LegRows | null)[];
  readonly blocks: readonly BlockEstimate[];
  /** The boat's own close-hauled angle: the median of its blocks; NaN without any. [deg] */
  readonly own: number;
}

/** Where the water flows to, east and north, at a time. [m/s] */
export type CurrentAt = (time: number) => { readonly east: number; readonly north: number };

/**
 * Divides a boat's track into manoeuvres, legs, settled spells and blocks in a given wind.
 *
 * @param current  null: not known, velocities over ground stand for those through the water.
 * @param excluded 1 on rows that are not to be judged.
 */
export function sail(
  track: Track,
  wind: WindAtBoat,
  current: CurrentAt | null,
  courseOf: (track: Track) => Course,
  excluded: Uint8Array,
  thresholds: Thresholds,
): Sailed {
  const { ux, uy } = throughWater(track, current, excluded);
  const { twd, tws } = relativeToWater(track, wind, current);
  const heading = track.heading ? { heading: track.heading } : {};
  const sailing = makeSailing({ t0: track.t0, x: track.x, y: track.y, ux, uy, twd, ...heading });
  const { list, states, usual } = findManoeuvres(sailing, thresholds);
  const legs = findLegs(sailing, courseOf(track), usual, thresholds);
  const divide = (own: number): (LegRows | null)[] =>
    legs.map((leg) => (leg.kind === 'upwind' ? divideBeat(sailing, leg, list, usual, own, thresholds) : null));
  const blocksOf = (rows: readonly (LegRows | null)[]): BlockEstimate[] =>
    rows.flatMap((row, leg) => (row ? row.blocks.map((block) => estimateBlock(sailing, tws, block, leg)) : []));
  const own = median(blocksOf(divide(NaN)).map((block) => block.gamma));
  const rows = divide(own);
  const blocks = blocksOf(rows);
  return { sailing, tws, manoeuvres: list, states, usual, legs, rows, blocks, own };
}

/** Velocity through the water; NaN on excluded rows. */
function throughWater(
  track: Track,
  current: CurrentAt | null,
  excluded: Uint8Array,
): { ux: Float64Array; uy: Float64Array } {
  const ux = Float64Array.from(track.vx);
  const uy = Float64Array.from(track.vy);
  for (let i = 0; i < track.n; i++) {
    const time = track.t0 + i;
    if (excluded[i]) ux[i] = uy[i] = NaN;
    if (!current) continue;
    const { east, north } = current(time);
    ux[i] = ux[i] - east;
    uy[i] = uy[i] - north;
  }
  return { ux, uy };
}

/** Wind over the ground as wind over the water: the current is taken off the air's velocity. */
function relativeToWater(
  track: Track,
  wind: WindAtBoat,
  current: CurrentAt | null,
): { twd: Float64Array; tws: Float64Array } {
  if (!current) return wind;
  const twd = Float64Array.from(wind.twd);
  const tws = Float64Array.from(wind.tws);
  for (let i = 0; i < track.n; i++) {
    const { east, north } = current(track.t0 + i);
    const speed = wind.tws[i];
    if (Number.isNaN(speed)) continue;
    const e = speed * eastOf(wind.twd[i]) + east;
    const n = speed * northOf(wind.twd[i]) + north;
    twd[i] = directionOf(e, n);
    tws[i] = Math.hypot(e, n);
  }
  return { twd, tws };
}
