import { UserError, type Issue } from '../recording/issues.js';
import type { Track } from '../recording/track.js';
import { findEngine } from '../sensors/engine.js';
import { uncorrected, windAtBoat } from '../wind/field.js';
import type { WindSource } from '../wind/source.js';
import type { CleanBoat } from './clean-tracks.js';

/** Rows in which a boat counts as moving. [m/s] */
const MOVING = 0.5;

/**
 * Rows of each boat under engine: they are nobody's sailing.
 *
 * @throws UserError (exit code 1) when every boat was under engine all the time it moved.
 */
export function engineRows(
  boats: readonly CleanBoat[],
  sources: readonly WindSource[],
): { masks: readonly Uint8Array[]; issues: readonly Issue[] } {
  const stations = sources.filter((source) => source.kind === 'station');
  const corrected = stations.map((source) => uncorrected(source, 0));
  const found = boats.map(({ track, logs }) => {
    const wind = stations.length > 0 ? windAtBoat(-1, track, corrected) : undefined;
    return findEngine(track, wind, logs.trackFiles[0]);
  });
  const masks = found.map((one) => one.mask);
  const motored = boats.map(({ track }, k) => sailedSeconds(track, masks[k]) < 0.1 * sailedSeconds(track, null));
  const issues = found.flatMap((one, k) => {
    const { reference, trackFiles } = boats[k].logs;
    if (one.issues.length > 0 || !motored[k]) return one.issues;
    return [underEngine(reference.name, trackFiles[0])];
  });
  if (motored.every(Boolean)) {
    throw new UserError(`${boats[0].logs.trackFiles[0] ?? ''}: nothing here was sailed. ${issues[0].message}`, {
      exitCode: 1,
      suggestion: 'Give a log of sailing; a wind log with --wind helps to tell the two apart.',
    });
  }
  return { masks, issues };
}

/** Said of a log too short to be worth a word elsewhere: here it is all of it. */
function underEngine(name: string, file: string | undefined): Issue {
  return {
    code: 'under-engine',
    message: `All the time ${name} moved it looks to be under engine (nearer to the wind than a sail draws): it is left out.`,
    ...(file === undefined ? {} : { file }),
  };
}

/** Seconds a boat moved, those under engine left out. */
function sailedSeconds(track: Track, mask: Uint8Array | null): number {
  let seconds = 0;
  for (let i = 0; i < track.n; i++) {
    if (Math.hypot(track.vx[i], track.vy[i]) > MOVING && !mask?.[i]) seconds++;
  }
  return seconds;
}
