import type { LatLon, Race } from '../files/race-types.js';
import { eastOf, northOf } from '../math/angles.js';
import { toPlane } from '../math/geo.js';
import type { Frame, Track } from '../recording/track.js';
import type { Course, Place } from '../segment/legs.js';
import type { CurrentAt } from './sail.js';

export interface CoursePlaces {
  readonly windward: Place | null;
  readonly leeward: Place | null;
}

/** Marks of the race file in the plane; a gate by its middle. */
export function coursePlaces(race: Race, frame: Frame): CoursePlaces {
  const place = (given: readonly LatLon[] | undefined): Place | null => {
    if (!given || given.length === 0) return null;
    const places = given.map((at) => toPlane(frame, at.lat, at.lon));
    return {
      x: places.reduce((sum, p) => sum + p.x, 0) / places.length,
      y: places.reduce((sum, p) => sum + p.y, 0) / places.length,
    };
  };
  return { windward: place(race.marks.windward), leeward: place(race.marks.leeward) };
}

/** What the race file says of the course, in rows of one boat's track. */
export function courseFor(
  race: Race,
  places: CoursePlaces,
  track: Track,
): Omit<Course, 'foundLeeward' | 'foundWindward'> {
  const row = (time: number | null): number | null => (time === null ? null : time - track.t0);
  return {
    gun: row(race.start),
    finish: row(race.finish),
    runs: race.runs.map((run) => ({ from: run.from - track.t0, to: run.to - track.t0 })),
    ...places,
  };
}

/** The current as told: one for all times, or readings joined by straight lines. null: not known. */
export function currentOf(race: Race): CurrentAt | null {
  const readings = race.current;
  if (!readings || readings.length === 0) return null;
  const vectors = [...readings]
    .sort((a, b) => (a.time ?? -Infinity) - (b.time ?? -Infinity))
    .map(({ time, set, drift }) => ({
      time: time ?? -Infinity,
      east: drift * eastOf(set),
      north: drift * northOf(set),
    }));
  return (time) => {
    let k = 0;
    while (k + 1 < vectors.length && vectors[k + 1].time <= time) k++;
    const a = vectors[k];
    const b = vectors.at(k + 1);
    if (!b || time <= a.time || a.time === -Infinity) return a;
    const part = (time - a.time) / (b.time - a.time);
    return { east: a.east + part * (b.east - a.east), north: a.north + part * (b.north - a.north) };
  };
}
