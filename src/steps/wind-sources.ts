import type { Race } from '../files/race-types.js';
import { eastInPlane, northInPlane, toPlane } from '../math/geo.js';
import type { Issue } from '../recording/issues.js';
import { channelValues, countFixes, type Recording } from '../recording/recording.js';
import type { Frame } from '../recording/track.js';
import { withoutMasked } from '../sensors/stuck.js';
import { smoothTrack } from '../smooth/index.js';
import { onBoardSource } from '../wind/on-board.js';
import type { SensorPlace, WindSource } from '../wind/source.js';
import { handSource, stationSource } from '../wind/station.js';
import { checkRecording } from './check-sensors.js';
import type { CleanTracks } from './clean-tracks.js';
import type { ReadLogs, WindLog } from './read-logs.js';
import type { Corrections } from './reconcile-boats.js';

export interface WindSources {
  readonly sources: readonly WindSource[];
  /** True where a wind told by hand is used. */
  readonly handUsed: boolean;
  readonly issues: readonly Issue[];
}

/**
 * Every source of wind of a race: the boats' own, stations and coach boats, hand readings.
 *
 * @param corrections  What the reconciliation found; a corrected vane is better known than an uncorrected one.
 * @param heightFactor From a height [m] to the rig's, as a factor on the speed.
 */
export function windSources(
  race: Race,
  logs: ReadLogs,
  clean: CleanTracks,
  corrections: Corrections | null,
  heightFactor: (height: number) => number,
): WindSources {
  const sources: WindSource[] = [];
  const issues: Issue[] = [];
  clean.boats.forEach((boat, k) => {
    const file = boat.logs.instruments[0]?.file ?? boat.logs.trackFiles[0] ?? '';
    const own = onBoardSource(boat.track, file, k);
    const masthead = corrections?.boats[k].masthead;
    if (own) sources.push(masthead ? { ...own, accuracyDir: TURNED * Math.max(LEAST_VANE, masthead.se) } : own);
  });
  for (const log of logs.winds) {
    const checked = checkRecording(log.recording, log.reference.file, log.reference.at ?? clean.frame);
    const alive = withoutDeadCups(checked.recording, log.reference.file);
    issues.push(...checked.issues, ...alive.issues);
    const source = logSource({ ...log, recording: alive.recording }, clean.frame, heightFactor);
    if (source) sources.push(source);
  }
  const span = {
    from: Math.min(...clean.boats.map((boat) => boat.track.t0)),
    to: Math.max(...clean.boats.map((boat) => boat.track.t0 + boat.track.n)),
  };
  const hands = race.wind.flatMap((wind) => (wind.kind === 'by-hand' ? [handSource(wind.readings, wind, span)] : []));
  const told = withHand(sources, hands);
  return { ...told, issues: [...issues, ...told.issues] };
}

/** Winds told by hand: one stands in where no log tells the wind, or its speed where the logs have none. */
function withHand(logged: readonly WindSource[], hands: readonly WindSource[]): WindSources {
  if (hands.length === 0) return { sources: logged, handUsed: false, issues: [] };
  const handUsed = !logged.some((source) => source.hasSpeed);
  const [hand] = hands;
  const more = hands.length > 1 && handUsed;
  const message = more
    ? 'More than one wind is told by hand: only the first is used. Give `readings` with times for a wind that changed.'
    : 'A wind log is there: the wind told by hand is not used.';
  const issues = more || !handUsed ? [{ code: 'wind-unused', message }] : [];
  if (!handUsed) return { sources: logged, handUsed, issues };
  if (logged.length === 0) return { sources: [hand], handUsed, issues };
  return { sources: logged.map((source) => ({ ...source, ...speedOn(source, hand) })), handUsed, issues };
}

/** The speed told by hand on the seconds of a log without any. */
function speedOn(log: WindSource, hand: WindSource): Pick<WindSource, 'sums' | 'hasSpeed' | 'accuracySpeed'> {
  const of = (sums: Float64Array): Float64Array =>
    Float64Array.from({ length: log.n + 1 }, (_, i) => sums[Math.max(0, Math.min(hand.n, i + log.t0 - hand.t0))]);
  return {
    sums: { ...log.sums, speed: of(hand.sums.speed), speeds: of(hand.sums.speeds) },
    hasSpeed: hand.hasSpeed,
    accuracySpeed: hand.accuracySpeed,
  };
}

/** An error of the vane turns the true wind by about this much more than itself upwind: from the wind triangle. */
const TURNED = 1.4;
/** A vane is not better known than this: its offset changes with heel and sheeting. [deg] Common practice, no source. */
const LEAST_VANE = 0.7;

/** Cups that say less than this from first to last do not turn: boats sailed in that wind. [m/s] */
const STILL = 0.2;
const STILL_READINGS = 60;

/** The log without a wind speed of 0 throughout, whether or not its vane moved. */
function withoutDeadCups(recording: Recording, file: string): { recording: Recording; issues: readonly Issue[] } {
  const speed = channelValues(recording, 'tws').value;
  if (speed.length < STILL_READINGS || speed.some((value) => value >= STILL)) return { recording, issues: [] };
  const mask = new Uint8Array(recording.time.length).fill(1);
  const message = 'The wind speed reads 0 throughout while boats sailed, so the cups do not turn: it is not used.';
  return { recording: withoutMasked(recording, { tws: mask }), issues: [{ code: 'wind-dead', message, file }] };
}

/** A wind log: a moving boat's apparent wind is made true by its own motion, anything else is a station. */
function logSource(log: WindLog, frame: Frame, heightFactor: (height: number) => number): WindSource | null {
  const { reference, recording } = log;
  const { accuracyDir, accuracySpeed, offset, heightM } = reference;
  const mounted = { accuracyDir, accuracySpeed, offset, factor: heightM === undefined ? 1 : heightFactor(heightM) };
  const moving = !!recording.channels.awa && countFixes(recording) > 0;
  if (moving) {
    const { track } = smoothTrack(recording, frame, { file: reference.file });
    const source = onBoardSource(track, reference.file, -1, mounted);
    if (source) return source;
  }
  const place = reference.at ? toPlane(frame, reference.at.lat, reference.at.lon) : loggedPlace(log, frame);
  return stationSource(recording, { ...mounted, file: reference.file, place, clockS: 0 });
}

/** Place a station logged itself, second by second; null when it has none. */
function loggedPlace({ recording }: WindLog, frame: Frame): SensorPlace {
  if (countFixes(recording) === 0) return null;
  const lat = channelValues(recording, 'lat');
  const lon = channelValues(recording, 'lon');
  const direction = channelValues(recording, recording.channels.twd ? 'twd' : 'twdMagnetic');
  const t0 = Math.floor(direction.time[0]);
  const n = Math.ceil(direction.time.at(-1)!) - t0 + 1;
  const xs = new Float64Array(n);
  const ys = new Float64Array(n);
  let k = 0;
  for (let i = 0; i < n; i++) {
    while (k + 1 < lat.time.length && lat.time[k + 1] <= t0 + i) k++;
    xs[i] = eastInPlane(frame, lon.value[k]);
    ys[i] = northInPlane(frame, lat.value[k]);
  }
  return { xs, ys };
}
