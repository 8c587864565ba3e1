import type { LatLon, Race } from './files/race-types.js';
import { circularMean, eastOf, northOf } from './math/angles.js';
import { toPlane } from './math/geo.js';
import { median } from './math/median.js';
import { logLawFactor } from './physics/air.js';
import { UserError, type Issue } from './recording/issues.js';
import type { Frame, Track } from './recording/track.js';
import type { Result } from './result/result.js';
import type { RaceSeries } from './result/series.js';
import type { Course, Place } from './segment/legs.js';
import { THRESHOLDS, type Thresholds } from './segment/thresholds.js';
import { receiverDisplacementSe } from './smooth/index.js';
import { assemble } from './steps/assemble.js';
import { boatSeries, placesOf } from './steps/series.js';
import { cleanTracks, type CleanTracks } from './steps/clean-tracks.js';
import { boatFromText, boatModels, modelOf, type RaceModel } from './steps/boat-models.js';
import { estimateBoat, type BoatEstimate } from './steps/estimate-boat.js';
import { judge } from './steps/judge.js';
import { errorModels } from './steps/error-model.js';
import { findWind, type FoundWind } from './steps/find-wind.js';
import { readLogs, type OpenLog, type ReadLogs } from './steps/read-logs.js';
import { sail, type CurrentAt, type Sailed } from './steps/sail.js';
import { windSources } from './steps/wind-sources.js';
import type { WindAtBoat } from './wind/field.js';
import { checkRecording, clockIssues } from './steps/check-sensors.js';
import { engineRows } from './steps/find-engine.js';

export interface DebriefOptions {
  /** Version of the program, for the result. */
  readonly version?: string;
  /** What the ledger is measured against; default: the model for one boat, the day's best sailing for more. */
  readonly reference?: 'model' | 'best' | { readonly file: string; readonly text: string };
  /** Take every boat's metres along one mean wind a lap, as a comparison needs it. */
  readonly shareWind?: boolean;
  /** Thresholds of segmentation, for tests that move them. */
  readonly thresholds?: Thresholds;
}

export interface Debrief {
  readonly result: Result;
  readonly series: RaceSeries;
}

/**
 * The main job: logs of one race in, result and series out.
 *
 *     files -> recordings -> sensors -> tracks -> wind and legs -> estimates -> { result, series }
 *
 * @param race What is to be debriefed: made from a race file or from bare logs.
 * @param open Opens a log by the name it has in `race`.
 * @throws UserError when a log is unusable (exit code 2) or there is nothing to analyse (1).
 */
export async function debrief(race: Race, open: OpenLog, options: DebriefOptions = {}): Promise<Debrief> {
  const logs = await readLogs(race, open);
  const clean = cleanTracks(logs, checkRecording);
  const { wind, course, issues: seen } = sailAll(race, logs, clean, options.thresholds ?? THRESHOLDS);
  mustHaveBeat(wind);
  const errors = errorModels(clean, wind, (boat) => (seconds) => receiverDisplacementSe(seconds, boat.noise));
  const estimates = wind.sailed.map((one, k) => estimateBoat(one, errors[k]!, clean.boats[k]!.track.awa));
  const issues: Issue[] = [
    ...logs.issues,
    ...clockIssues(logs),
    ...clean.issues,
    ...seen,
    ...wind.issues,
    ...assumptions(race),
  ];
  const models = await boatModels(race, open);
  const judgements = judge({
    sailed: wind.sailed,
    estimates,
    models,
    reference: await referenceOf(race, options),
    windward: course.windward,
    sharedWind: options.shareWind ? (lap) => meanWindOfLap(estimates, lap) : null,
  });
  const result = assemble({
    models,
    judgements,
    race,
    version: options.version ?? '0.0.0',
    files: logs.files,
    boats: clean.boats,
    wind,
    handWind: race.wind.some((w) => w.kind === 'by-hand'),
    estimates,
    issues,
  });
  const series: RaceSeries = {
    frame: clean.frame,
    zone: race.zone,
    marks: placesOf(race.marks, course, wind.sailed, clean.frame),
    boats: clean.boats.map((boat, k) => boatSeries(boat.track, wind.sailed[k]!, estimates[k]!)),
  };
  return { result, series };
}

async function referenceOf(race: Race, options: DebriefOptions): Promise<'model' | 'best' | RaceModel> {
  const { reference } = options;
  if (reference === undefined) return race.boats.length > 1 ? 'best' : 'model';
  return typeof reference === 'string' ? reference : modelOf(await boatFromText(reference.text, reference.file));
}

/** Mean direction of the wind over all boats' beats of a lap. [deg] */
function meanWindOfLap(estimates: readonly BoatEstimate[], lap: number): number {
  const beats = estimates.flatMap((boat) => boat.legs.filter((l) => l.leg.kind === 'upwind' && l.leg.lap === lap));
  return circularMean(beats.map((leg) => leg.twd)).mean;
}

/** Wind and sailing of all boats: each needs the other, so they are found together. */
function sailAll(
  race: Race,
  logs: ReadLogs,
  clean: CleanTracks,
  thresholds: Thresholds,
): { wind: FoundWind; course: CoursePlaces; issues: readonly Issue[] } {
  const tracks = clean.boats.map((boat) => boat.track);
  const { sources, issues: windIssues } = windSources(race, logs, clean, (height) => logLawFactor(height, RIG_HEIGHT));
  const engine = engineRows(clean.boats, sources);
  const issues = [...windIssues, ...engine.issues];
  const course = coursePlaces(race, clean.frame);
  const current = currentOf(race);
  const sailIn = (boat: number, at: WindAtBoat, foundLeeward: Place | null): Sailed =>
    sail(
      tracks[boat],
      at,
      current,
      (track) => ({ ...courseFor(race, course, track), foundLeeward }),
      excludedRows(tracks[boat], race.exclude, engine.masks[boat]),
      thresholds,
    );
  const wind = findWind(tracks, sources, (boat, at) => sailIn(boat, at, null));
  const bottom = course.leeward ? null : leewardOf(wind.sailed);
  if (!bottom) return { wind, course, issues };
  return { wind: { ...wind, sailed: wind.atBoats.map((at, boat) => sailIn(boat, at, bottom)) }, course, issues };
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

/** Height at which a dinghy's rig feels the wind, until the boat file says it: common practice, no source. [m] */
const RIG_HEIGHT = 3;

export interface CoursePlaces {
  readonly windward: Place | null;
  readonly leeward: Place | null;
}

/** Marks of the race file in the plane; a gate by its middle. */
function coursePlaces(race: Race, frame: Frame): CoursePlaces {
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

function courseFor(race: Race, places: CoursePlaces, track: Track): Omit<Course, 'foundLeeward'> {
  const row = (time: number | null): number | null => (time === null ? null : time - track.t0);
  return {
    gun: row(race.start),
    finish: row(race.finish),
    runs: race.runs.map((run) => ({ from: run.from - track.t0, to: run.to - track.t0 })),
    ...places,
  };
}

/** The current as told: one for all times, or readings joined by straight lines. null: not known. */
function currentOf(race: Race): CurrentAt | null {
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
    while (k + 1 < vectors.length && vectors[k + 1]!.time <= time) k++;
    const a = vectors[k]!;
    const b = vectors[k + 1];
    if (!b || time <= a.time || a.time === -Infinity) return a;
    const part = (time - a.time) / (b.time - a.time);
    return { east: a.east + part * (b.east - a.east), north: a.north + part * (b.north - a.north) };
  };
}

function mustHaveBeat(wind: FoundWind): void {
  if (wind.sailed.some((one) => one.legs.some((leg) => leg.kind === 'upwind'))) return;
  throw new UserError('no upwind leg found in any track', {
    exitCode: 1,
    suggestion: 'Check the wind direction, `start` and `finish`; for practice without a course give `runs`.',
  });
}

function assumptions(race: Race): Issue[] {
  const issues: Issue[] = [];
  if (race.boatAssumed) {
    issues.push({
      code: 'boat-assumed',
      message: 'No boat was named: the built-in single-hander stands in. Name it with `boat` or --boat.',
    });
  }
  for (const wind of race.wind) {
    if (wind.kind !== 'log' || wind.heightM !== undefined) continue;
    issues.push({
      code: 'wind-height-unknown',
      message: 'The height of this wind log is not given: its speed is taken as the wind at the rig.',
      file: wind.file,
    });
  }
  return issues;
}
