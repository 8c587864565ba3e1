import type { Race } from '../files/race-types.js';
import { median } from '../math/median.js';
import { logLawFactor } from '../physics/air.js';
import type { Issue } from '../recording/issues.js';
import type { Track } from '../recording/track.js';
import type { Place } from '../segment/legs.js';
import type { Thresholds } from '../segment/thresholds.js';
import type { WindAtBoat } from '../wind/field.js';
import type { CleanTracks } from './clean-tracks.js';
import { courseFor, coursePlaces, currentOf, type CoursePlaces } from './course.js';
import { engineRows } from './find-engine.js';
import { findWind, type FoundWind } from './find-wind.js';
import type { ReadLogs } from './read-logs.js';
import type { Corrections } from './reconcile-boats.js';
import { sail, type CurrentAt, type Sailed } from './sail.js';
import { windGaps } from './wind-gaps.js';
import { windSources } from './wind-sources.js';

export interface SailedRace {
  readonly wind: FoundWind;
  readonly course: CoursePlaces;
  /** True where a wind told by hand is used. */
  readonly handUsed: boolean;
  readonly issues: readonly Issue[];
}

export interface SailOptions {
  readonly thresholds: Thresholds;
  /** Height of the rigs' centre of effort above the water, to which station winds are brought. [m] */
  readonly rigHeight: number;
}

/**
 * Wind and sailing of all boats: each needs the other, so they are found together.
 *
 * @param corrections What the reconciliation of the instruments found; null before it.
 */
export function sailAll(
  race: Race,
  logs: ReadLogs,
  clean: CleanTracks,
  corrections: Corrections | null,
  { thresholds, rigHeight }: SailOptions,
): SailedRace {
  const tracks = clean.boats.map((boat) => boat.track);
  const {
    sources,
    handUsed,
    issues: windIssues,
  } = windSources(race, logs, clean, corrections, (height) => logLawFactor(height, rigHeight));
  const engine = engineRows(clean.boats, sources);
  const course = coursePlaces(race, clean.frame);
  const current = currentOf(race) ?? foundCurrent(corrections);
  const excluded = tracks.map((track, k) => excludedRows(track, race.exclude, engine.masks[k]));
  const sailIn = (boat: number, at: WindAtBoat, foundLeeward: Place | null): Sailed =>
    sail(
      tracks[boat],
      at,
      current,
      (track) => ({ ...courseFor(race, course, track), foundLeeward }),
      excluded[boat],
      thresholds,
    );
  const wind = findWind(tracks, sources, (boat, at) => sailIn(boat, at, null), corrections?.station ?? null);
  const bottom = course.leeward ? null : leewardOf(wind.sailed);
  const sailed = bottom ? wind.atBoats.map((at, boat) => sailIn(boat, at, bottom)) : wind.sailed;
  const sailors = clean.boats.map(({ track, logs: { reference, trackFiles } }) => ({
    name: reference.name,
    file: trackFiles[0] ?? '',
    track,
  }));
  const gaps = windGaps(sailors, sources, wind.atBoats);
  return { wind: { ...wind, sailed }, course, handUsed, issues: [...windIssues, ...engine.issues, ...gaps] };
}

function foundCurrent(corrections: Corrections | null): CurrentAt | null {
  const current = corrections?.current;
  if (!current) return null;
  const found = { east: current.east.value, north: current.north.value };
  return () => found;
}

/** Rows that are not to be judged: excluded by the race file, or under engine. */
function excludedRows(track: Track, spans: Race['exclude'], engine: Uint8Array): Uint8Array {
  return engine.map((motoring, i) => {
    const time = track.t0 + i;
    return motoring || spans.some((span) => time >= span.from && time <= span.to) ? 1 : 0;
  });
}

/** Where the boats rounded at the bottom: the middle of the ends of all downwind legs that a beat follows. */
function leewardOf(sailed: readonly Sailed[]): Place | null {
  const ends = sailed.flatMap((one) =>
    one.legs.slice(0, -1).flatMap((leg, k) => {
      const rounds = leg.kind === 'downwind' && one.legs[k + 1].kind === 'upwind';
      return rounds ? [{ x: one.sailing.x[leg.to], y: one.sailing.y[leg.to] }] : [];
    }),
  );
  const place = { x: median(ends.map((end) => end.x)), y: median(ends.map((end) => end.y)) };
  return Number.isNaN(place.x) ? null : place;
}
