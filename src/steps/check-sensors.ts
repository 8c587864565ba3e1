import type { LatLon } from '../files/race-types.js';
import type { Issue } from '../recording/issues.js';
import type { Recording } from '../recording/recording.js';
import { checkClocks, type ClockedLog } from '../sensors/clock.js';
import { clockSteps } from '../sensors/clock-step.js';
import { trueHeading } from '../sensors/magnetic.js';
import { findStuckWind, withoutMasked } from '../sensors/stuck.js';
import type { ReadLogs } from './read-logs.js';

/**
 * A recording as it may be used: magnetic directions made true, frozen or dead wind instruments taken out.
 *
 * @param place Where it was, for a log without positions of its own.
 */
export function checkRecording(
  recording: Recording,
  file: string,
  place: LatLon | null,
): { recording: Recording; issues: readonly Issue[] } {
  const magnetic = trueHeading(recording, { file, place });
  const stuck = findStuckWind(magnetic.recording, file);
  return {
    recording: withoutMasked(magnetic.recording, stuck.masks),
    issues: [...magnetic.issues, ...stuck.issues],
  };
}

/** What the clocks of a race's logs say of each other. */
export function clockIssues(logs: ReadLogs): readonly Issue[] {
  const clocked: ClockedLog[] = [
    ...logs.boats.map((boat) => ({ file: boat.trackFiles[0] ?? '', isTrack: true, recording: boat.track })),
    ...logs.boats.flatMap((boat) => boat.instruments.map((own) => ({ ...own, isTrack: false }))),
    ...logs.winds.map((wind) => ({ file: wind.reference.file, isTrack: false, recording: wind.recording })),
  ];
  const steps = clocked.filter(({ isTrack }) => isTrack).flatMap(({ recording, file }) => clockSteps(recording, file));
  return [...checkClocks(clocked).issues, ...steps];
}
