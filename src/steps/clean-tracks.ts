import { makeFrame, middleOf } from '../math/geo.js';
import type { LatLon } from '../files/race-types.js';
import type { Issue } from '../recording/issues.js';
import type { Recording } from '../recording/recording.js';
import type { Frame, Track } from '../recording/track.js';
import { attachInstruments, smoothTrack, type FixRejection, type TrackNoise } from '../smooth/index.js';
import type { BoatLogs, ReadLogs } from './read-logs.js';

export interface CleanBoat {
  readonly logs: BoatLogs;
  readonly track: Track;
  readonly noise: TrackNoise;
  readonly rejected: readonly FixRejection[];
  readonly gaps: readonly { readonly from: number; readonly seconds: number }[];
}

export interface CleanTracks {
  readonly frame: Frame;
  readonly boats: readonly CleanBoat[];
  readonly issues: readonly Issue[];
}

/** What the sensors' checks do to a recording before it is used. */
export type CheckRecording = (
  recording: Recording,
  file: string,
  place: LatLon | null,
) => { recording: Recording; issues: readonly Issue[] };

/** Smooths every boat's track onto whole seconds in one local plane and puts its instruments on the same rows. */
export function cleanTracks(logs: ReadLogs, check: CheckRecording): CleanTracks {
  const frame = frameOf(logs.boats.map((boat) => boat.track));
  const issues: Issue[] = [];
  const boats = logs.boats.map((boat): CleanBoat => {
    const file = boat.trackFiles[0] ?? '';
    const checked = check(boat.track, file, frame);
    issues.push(...checked.issues);
    const smooth = smoothTrack(checked.recording, frame, { file });
    issues.push(...smooth.issues);
    let track = smooth.track;
    for (const own of boat.instruments) {
      const instruments = check(own.recording, own.file, frame);
      issues.push(...instruments.issues);
      track = attachInstruments(track, instruments.recording);
    }
    return {
      logs: boat,
      track: { ...track, name: boat.reference.name },
      noise: smooth.noise,
      rejected: smooth.rejected,
      gaps: smooth.gaps,
    };
  });
  return { frame, boats, issues };
}

/** A plane about the middle of all the boats' positions. */
function frameOf(recordings: readonly Recording[]): Frame {
  const lat: number[] = [];
  const lon: number[] = [];
  for (const recording of recordings) {
    const { lat: φ, lon: λ } = recording.channels;
    if (!φ || !λ) continue;
    const middle = middleOf(φ, λ);
    if (middle) {
      lat.push(middle.lat);
      lon.push(middle.lon);
    }
  }
  const middle = middleOf(lat, lon);
  if (!middle) throw new Error('frameOf: no positions');
  return makeFrame(middle.lat, middle.lon);
}
