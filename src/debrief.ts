import type { Race } from './files/race-types.js';
import { circularMean } from './math/angles.js';
import { UserError, type Issue } from './recording/issues.js';
import type { Result } from './result/result.js';
import type { RaceSeries } from './result/series.js';
import { THRESHOLDS, type Thresholds } from './segment/thresholds.js';
import { receiverDisplacementSe } from './smooth/index.js';
import { assemble } from './steps/assemble.js';
import { boatFromText, boatModels, modelOf, type RaceModel } from './steps/boat-models.js';
import { checkRecording, clockIssues } from './steps/check-sensors.js';
import { cleanTracks, type CleanTracks } from './steps/clean-tracks.js';
import { currentOf } from './steps/course.js';
import { errorModels } from './steps/error-model.js';
import { estimateBoat, type BoatEstimate } from './steps/estimate-boat.js';
import { boatExcesses, hints } from './steps/hints.js';
import { judge } from './steps/judge.js';
import { polarCurves } from './steps/polar-curves.js';
import { readLogs, type OpenLog, type ReadLogs } from './steps/read-logs.js';
import { correctTracks, reconcileBoats, type Corrections } from './steps/reconcile-boats.js';
import { sailAll, type SailedRace, type SailOptions } from './steps/sail-all.js';
import { boatSeries, placesOf } from './steps/series.js';
import { trimFleet } from './steps/trim-fleet.js';
import { trimIssues } from './steps/trim.js';

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
  const models = await boatModels(race, open);
  const raw = cleanTracks(logs, checkRecording);
  const rigHeight = models[0].spec.rig.centre;
  const reconciled = sailReconciled(race, logs, raw, { thresholds: options.thresholds ?? THRESHOLDS, rigHeight });
  const { clean, corrections, wind, course } = reconciled;
  mustHaveBeat(reconciled, reasonsIn(logs, clean));
  const errors = errorModels(
    clean,
    wind,
    corrections,
    (boat) => (seconds) => receiverDisplacementSe(seconds, boat.noise),
  );
  const estimates = wind.sailed.map((one, k) => estimateBoat(one, errors[k], clean.boats[k].track.awa));
  const trims = trimFleet(wind.sailed, estimates, clean, models, corrections);
  const judgements = judge({
    sailed: wind.sailed,
    estimates,
    trims,
    models,
    reference: await referenceOf(race, options),
    windward: course.windward,
    sharedWind: options.shareWind ? (lap) => meanWindOfLap(estimates, lap) : null,
  });
  const names = race.boats.map((boat) => boat.name);
  const hintInput = { names, sailed: wind.sailed, estimates, judgements, models, trims };
  const found = boatExcesses(hintInput);
  const issues: Issue[] = [
    ...logs.issues,
    ...clockIssues(logs),
    ...clean.issues,
    ...reconciled.issues,
    ...wind.issues,
    ...corrections.issues,
    ...trimIssues(race, trims),
    ...assumptions(race, logs),
  ];
  const result = assemble({
    race,
    version: options.version ?? '0.0.0',
    files: logs.files,
    boats: clean.boats,
    models,
    wind,
    corrections,
    handWind: reconciled.handUsed,
    estimates,
    trims,
    judgements,
    excess: found,
    hints: hints(hintInput, found),
    issues,
  });
  const series: RaceSeries = {
    frame: clean.frame,
    zone: race.zone,
    marks: placesOf(race.marks, course, wind.sailed, clean.frame),
    boats: clean.boats.map(({ track }, k) => ({
      ...boatSeries(track, wind.sailed[k], estimates[k]),
      ...(track.awa && { awa: track.awa }),
    })),
    polars: polarCurves(models, judgements, wind.sailed),
  };
  return { result, series };
}

/** Sails all boats, reconciles their instruments with that, and sails them again with what was found. */
function sailReconciled(
  race: Race,
  logs: ReadLogs,
  raw: CleanTracks,
  options: SailOptions,
): SailedRace & { readonly clean: CleanTracks; readonly corrections: Corrections } {
  let first: SailedRace;
  try {
    first = sailAll(race, logs, raw, null, options);
  } catch (error) {
    throw error instanceof UserError ? withReasons(error, reasonsIn(logs, raw)) : error;
  }
  const corrections = reconcileBoats(raw, first.wind, race.start, currentOf(race));
  const found = corrections.station ?? corrections.current;
  if (!found && corrections.boats.every((boat) => !boat.compass && !boat.masthead)) {
    return { ...first, clean: raw, corrections };
  }
  const clean = correctTracks(raw, corrections);
  return { ...sailAll(race, logs, clean, corrections, options), clean, corrections };
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

/** Trouble with the input that can be why there is nothing to analyse. */
const TELLING = new Set([
  'under-engine',
  'wind-dead',
  'wind-stuck',
  'clock-offset',
  'wind-no-overlap',
  'clock-steps',
  'zone-suspect',
  'zone-assumed',
  'file-truncated',
]);

const reasonsIn = (logs: ReadLogs, clean: CleanTracks): Issue[] => [
  ...logs.issues,
  ...clockIssues(logs),
  ...clean.issues,
];

function mustHaveBeat({ wind, issues }: SailedRace, reasons: readonly Issue[]): void {
  if (wind.sailed.some((one) => one.legs.some((leg) => leg.kind === 'upwind'))) return;
  throw withReasons(
    new UserError('no upwind leg found in any track', {
      exitCode: 1,
      suggestion: 'Check the wind direction, `start` and `finish`; for practice without a course give `runs`.',
    }),
    [...issues, ...reasons],
  );
}

/** The same error with what was seen of the input that can be its reason. */
function withReasons(error: UserError, issues: readonly Issue[]): UserError {
  const reasons = issues
    .filter(({ code }) => TELLING.has(code))
    .map(({ message, file }) => (file === undefined || message.includes(file) ? message : `${file}: ${message}`));
  if (reasons.length === 0 || error.exitCode !== 1) return error;
  const { exitCode, suggestion } = error;
  return new UserError([error.message, ...new Set(reasons)].join('\n  '), {
    exitCode,
    ...(suggestion === undefined ? {} : { suggestion }),
  });
}

function assumptions(race: Race, logs: ReadLogs): Issue[] {
  const issues: Issue[] = [];
  if (race.boatAssumed) {
    issues.push({
      code: 'boat-assumed',
      message: 'No boat was named: the built-in single-hander stands in. Name it with `boat` or --boat.',
    });
  }
  // A log that a boat of the race carried at its masthead is not among these.
  for (const { reference, recording } of logs.winds) {
    const hasSpeed = recording.channels.tws ?? recording.channels.aws;
    if (!hasSpeed || reference.heightM !== undefined) continue;
    issues.push({
      code: 'wind-height-unknown',
      message: 'The height of this wind log is not given: its speed is taken as the wind at the rig.',
      file: reference.file,
    });
  }
  return issues;
}
