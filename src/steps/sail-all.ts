import type { Race } from '../files/race-types.js';
import { median } from '../math/median.js';
import { logLawFactor } from '../physics/air.js';
import type { Issue } from '../recording/issues.js';
import type { Track } from '../recording/track.js';
import type { Course, Place } from '../segment/legs.js';
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
  const sailIn = (boat: number, at: WindAtBoat, found: FoundMarks): Sailed =>
    sail(
      tracks[boat],
      at,
      current,
      (track) => ({ ...courseFor(race, course, track), ...found }),
      excluded[boat],
      thresholds,
    );
  const wind = findWind(tracks, sources, (boat, at) => sailIn(boat, at, NOT_LOOKED_FOR), corrections?.station ?? null);
  const found = {
    foundLeeward: course.leeward ? null : rounded(wind.sailed, 'downwind'),
    foundWindward: course.windward ? null : rounded(wind.sailed, 'upwind'),
  };
  const looked = found.foundLeeward ?? found.foundWindward;
  const sailed = looked ? wind.atBoats.map((at, boat) => sailIn(boat, at, found)) : wind.sailed;
  const sailors = clean.boats.map(({ track, logs: { reference, trackFiles } }) => ({
    name: reference.name,
    file: trackFiles[0] ?? '',
    track,
  }));
  const gaps = windGaps(sailors, sources, wind.atBoats);
  return { wind: { ...wind, sailed }, course, handUsed, issues: [...windIssues, ...engine.issues, ...gaps] };
}

type FoundMarks = Pick<Course, 'foundLeeward' | 'foundWindward'>;
const NOT_LOOKED_FOR: FoundMarks = { foundLeeward: null, foundWindward: null };

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

/** A rounding further from a place than this was not there, however far. [m] */
const NOT_THERE = 200;
/** A mark is looked for so long before and after a leg's end. [s] */
const AROUND = 90;
/** A boat that came this close has rounded there. [m] */
const ROUNDED = 40;

/**
 * Where the boats rounded: of the ends of all legs of a kind that another kind follows, the place that all those boats
 * together came closest to about then; in the middle of their closest points. null where no boat rounded.
 */
function rounded(sailed: readonly Sailed[], kind: 'upwind' | 'downwind'): Place | null {
  const ends = sailed.flatMap(({ legs, sailing }) =>
    legs.slice(0, -1).flatMap((leg, k) => {
      const rounds = leg.kind === kind && (legs[k + 1].kind === 'upwind') !== (kind === 'upwind');
      return rounds && Number.isFinite(sailing.x[leg.to]) ? [{ sailing, row: leg.to }] : [];
    }),
  );
  const passed = ends.map(({ sailing, row }) => {
    const mark = { x: sailing.x[row], y: sailing.y[row] };
    return ends.map((end) => closestTo(mark, end.sailing, end.row));
  });
  const sums = passed.map((near) => near.reduce((sum, { away }) => sum + Math.min(away, NOT_THERE), 0));
  const best = passed.at(sums.indexOf(Math.min(...sums)));
  if (!best) return null;
  const there = best.filter(({ away }) => away <= ROUNDED);
  return { x: median(there.map(({ x }) => x)), y: median(there.map(({ y }) => y)) };
}

/** The point of a track closest to a place about a row. */
function closestTo(place: Place, { x, y, n }: Sailed['sailing'], row: number): Place & { readonly away: number } {
  let best = { x: NaN, y: NaN, away: Infinity };
  for (let i = Math.max(0, row - AROUND); i < Math.min(n, row + AROUND); i++) {
    const away = Math.hypot(x[i] - place.x, y[i] - place.y);
    if (away < best.away) best = { x: x[i], y: y[i], away };
  }
  return best;
}
