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
  const issues = found.flatMap((one) => one.issues);
  if (boats.every(({ track }, k) => sailedSeconds(track, masks[k]) < 0.1 * sailedSeconds(track, null))) {
    const reason = issues[0]?.message ?? 'The boat was under engine.';
    throw new UserError(`${boats[0].logs.trackFiles[0] ?? ''}: under engine, nothing here was sailed. ${reason}`, {
      exitCode: 1,
      suggestion: 'Give a log of sailing; a wind log with --wind helps to tell the two apart.',
    });
  }
  return { masks, issues };
}

/** Seconds a boat moved, those under engine left out. */
function sailedSeconds(track: Track, mask: Uint8Array | null): number {
  let seconds = 0;
  for (let i = 0; i < track.n; i++) {
    if (Math.hypot(track.vx[i], track.vy[i]) > MOVING && !mask?.[i]) seconds++;
  }
  return seconds;
}
