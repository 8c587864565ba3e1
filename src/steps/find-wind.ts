import { median } from '../math/median.js';
import type { Issue } from '../recording/issues.js';
import { UserError } from '../recording/issues.js';
import type { Track } from '../recording/track.js';
import { tackSign } from '../segment/sailing.js';
import {
  estimateCarry,
  estimateLag,
  estimateOffset,
  type CourseBlock,
  type LagEstimate,
  type OffsetEstimate,
} from '../wind/align.js';
import { uncorrected, windAtBoat, type CorrectedSource, type WindAtBoat } from '../wind/field.js';
import type { WindSource } from '../wind/source.js';
import type { Sailed } from './sail.js';
import { windFromTracks } from './wind-from-tracks.js';

export interface FoundWind {
  readonly sources: readonly CorrectedSource[];
  /** Wind at each boat. */
  readonly atBoats: readonly WindAtBoat[];
  readonly sailed: readonly Sailed[];
  /** Offset of each source, null where not to be had. */
  readonly offsets: readonly (OffsetEstimate | null)[];
  readonly lags: readonly (LagEstimate | null)[];
  /** True where the direction rests on the tracks alone. */
  readonly directionInferred: boolean;
  readonly issues: readonly Issue[];
}

/** Divides one boat's sailing in a given wind. */
export type SailBoat = (boat: number, wind: WindAtBoat) => Sailed;

/** Rounds of correcting sources and dividing again; the second changes little, the third nothing that counts. */
const ROUNDS = 2;

/**
 * Wind at every boat, with the slow corrections of the sources.
 *
 * First the sources as they are; then each round finds lags and offsets from the settled sailing they gave. Without a
 * direction from any instrument the tracks give it: a first guess from the turns, then the bisectors of the tacks.
 *
 * @param stationOffset The stations' direction offset where the boats' instruments told it; else it is found from tacks.
 */
export function findWind(
  tracks: readonly Track[],
  sources: readonly WindSource[],
  sailBoat: SailBoat,
  stationOffset: { readonly value: number; readonly se: number } | null = null,
): FoundWind {
  const measured = sources.filter((source) => source.kind !== 'by-hand');
  if (measured.length === 0) return windFromTracks(tracks, sources, sailBoat);
  checkOverlap(tracks, measured);
  let corrected: CorrectedSource[] = measured.map((source) => uncorrected(source));
  let offsets: (OffsetEstimate | null)[] = measured.map(() => null);
  let lags: (LagEstimate | null)[] = measured.map(() => null);
  let atBoats = tracks.map((track, boat) => windAtBoat(boat, track, corrected));
  let sailed = atBoats.map((wind, boat) => sailBoat(boat, wind));
  let before = corrected;
  for (let round = 0; round < ROUNDS; round++) {
    lags = corrected.map(({ source }) => (source.kind === 'station' && !source.place ? lagOf(source, sailed) : null));
    const lagged = measured.map((source, k) => delayed(source, lags[k], sailed));
    const unmoved = lagged.every((one, k) => isSame(one, before[k]));
    if (round > 0 && unmoved) break;
    // Sailed in this very wind already, where it is the only one and nothing of it was moved.
    const again = round === 0 && unmoved && measured.length === 1 ? sailed : null;
    offsets = lagged.map((one, k) =>
      stationOffset && one.source.kind === 'station'
        ? { offset: stationOffset.value, se: stationOffset.se }
        : offsetOf(one, k, tracks, measured, again ? (boat) => again[boat] : sailBoat),
    );
    before = lagged;
    corrected = lagged.map((one, k) => ({ ...one, offset: offsets[k]?.offset ?? 0 }));
    atBoats = tracks.map((track, boat) => windAtBoat(boat, track, corrected));
    sailed = atBoats.map((wind, boat) => sailBoat(boat, wind));
  }
  return {
    sources: corrected,
    atBoats,
    sailed,
    offsets,
    lags,
    directionInferred: false,
    issues: lagIssues(measured, lags),
  };
}

function isSame(a: CorrectedSource, b: CorrectedSource): boolean {
  const moved = a.lag !== b.lag || a.carry !== b.carry || a.offset !== b.offset;
  return !moved && a.middle.x === b.middle.x && a.middle.y === b.middle.y;
}

/** A source with its delay: by its place, or by the lag that was found where that is clear. */
function delayed(source: WindSource, lag: LagEstimate | null, sailed: readonly Sailed[]): CorrectedSource {
  const plain = uncorrected(source);
  if (source.kind !== 'station') return plain;
  if (source.place) return { ...plain, carry: estimateCarry(source, courseBlocks(sailed)) };
  return lag?.used ? { ...plain, lag: lag.lag, carry: lag.carry, middle: lag.middle } : plain;
}

function lagIssues(sources: readonly WindSource[], lags: readonly (LagEstimate | null)[]): Issue[] {
  return sources.flatMap((source, k) => {
    const lag = lags[k];
    if (!lag?.used) return [];
    const when = lag.lag >= 0 ? 'after' : 'before';
    const size = `${Math.abs(lag.lag).toFixed(0)} s (standard error ${lag.se.toFixed(0)} s)`;
    return [
      {
        code: 'wind-lag',
        message: `The wind reached the boats ${size} ${when} it reached the station; the log was moved by that much.`,
        file: source.file,
      },
    ];
  });
}

/** Wind and tracks must share some time. */
function checkOverlap(tracks: readonly Track[], sources: readonly WindSource[]): void {
  const overlaps = sources.some((source) =>
    tracks.some((track) => source.t0 < track.t0 + track.n && source.t0 + source.n > track.t0),
  );
  if (overlaps) return;
  const [source] = sources;
  const [track] = tracks;
  const iso = (time: number): string => new Date(time * 1000).toISOString();
  throw new UserError(
    `${source.file}: the wind log (${iso(source.t0)} to ${iso(source.t0 + source.n)}) and the tracks ` +
      `(${iso(track.t0)} to ${iso(track.t0 + track.n)}) do not overlap`,
    { exitCode: 1, suggestion: 'Check the date and the time zone of the wind log (`zone`, `--zone`, `clock_s`).' },
  );
}

function lagOf(source: WindSource, sailed: readonly Sailed[]): LagEstimate | null {
  return estimateLag(source, courseBlocks(sailed));
}

function courseBlocks(sailed: readonly Sailed[]): CourseBlock[] {
  return sailed.flatMap((one, boat) =>
    one.blocks.map((block) => ({
      boat,
      leg: block.leg,
      tack: tackSign(block.tack),
      time: block.time,
      seconds: block.seconds,
      course: block.course,
      x: block.x,
      y: block.y,
    })),
  );
}

/** Direction error of one source from the two tacks of the boats that use it, in its own uncorrected wind. */
function offsetOf(
  one: CorrectedSource,
  index: number,
  tracks: readonly Track[],
  sources: readonly WindSource[],
  sailBoat: SailBoat,
): OffsetEstimate | null {
  const gammas = tracks.flatMap((track, boat) => {
    if (!usesSource(boat, index, sources)) return [];
    const wind = windAtBoat(boat, track, [one]);
    const again = sailBoat(boat, wind);
    return tackDifferences(again, boat);
  });
  return estimateOffset(gammas, one.source.accuracyDir);
}

/** A boat's own wind is judged by that boat; a station by the boats without their own. */
function usesSource(boat: number, index: number, sources: readonly WindSource[]): boolean {
  const source = sources[index];
  if (source.boat >= 0) return source.boat === boat;
  return !sources.some((other) => other.boat === boat) || sources.every((other) => other.boat >= 0 || other === source);
}

/** Mean course angle on each tack of every leg that has at least a minute of both. */
function tackDifferences(one: Sailed, boat: number): { boat: number; starboard: number; port: number }[] {
  return one.legs.flatMap((_, leg) => {
    const side = (tack: string) => one.blocks.filter((block) => block.leg === leg && block.tack === tack);
    const mean = (blocks: readonly { gamma: number; seconds: number }[]): number => {
      const seconds = blocks.reduce((sum, b) => sum + b.seconds, 0);
      return seconds >= 60 ? blocks.reduce((sum, b) => sum + b.gamma * b.seconds, 0) / seconds : NaN;
    };
    const starboard = mean(side('starboard'));
    const port = mean(side('port'));
    return Number.isNaN(starboard + port) ? [] : [{ boat, starboard, port }];
  });
}

/** Typical distance of the boats from the nearest sensor. [m] */
export function typicalDistance(atBoats: readonly WindAtBoat[]): number {
  return median(atBoats.map((wind) => median(wind.distance)));
}
