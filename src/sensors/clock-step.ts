/**
 * A clock that is set while it runs: time jumps on, the boat does not. A receiver that merely lost its fix finds the
 * boat further on.
 */
import { shortLine } from '../math/geo.js';
import type { Issue } from '../recording/issues.js';
import type { Recording } from '../recording/recording.js';

/** Shorter jumps cannot be told from a receiver that waits for its fix. [s] */
const SHORTEST = 10;
/** Only a boat with way on before and after shows that no time has passed. [m/s] */
const LEAST_SPEED = 1;
/** The boat is where it was: it has moved no more than it sails in so long. [s] */
const MOMENT = 3;
/** ... and no more than this share of what it would have sailed. */
const MOST_SHARE = 0.25;
/** Speed is taken over so many seconds before and after. [s] */
const REACH = 10;

/**
 * Jumps of a log's clock.
 *
 * @param recording A boat's log.
 * @param file      For the issue.
 * @returns At most one issue, for the first jump, with how many there are.
 */
export function clockSteps(recording: Recording, file: string): Issue[] {
  const { time, channels } = recording;
  const steps: { readonly at: number; readonly seconds: number }[] = [];
  let last = -1;
  for (let row = 0; channels.lat && row < time.length; row++) {
    if (Number.isNaN(channels.lat[row])) continue;
    const hole = last < 0 ? 0 : time[row] - time[last];
    const step = hole < SHORTEST ? NaN : stepOver(recording, last, row);
    if (!Number.isNaN(step)) steps.push({ at: time[last], seconds: step });
    last = row;
  }
  if (steps.length === 0) return [];
  const [{ at, seconds }] = steps;
  const more = steps.length > 1 ? ` (the first of ${steps.length} such jumps)` : '';
  const message =
    `The clock jumps on by about ${Math.round(seconds)} s at ${new Date(at * 1000).toISOString()} while the boat is ` +
    `where it was${more}. What follows may be that much late: give the log twice, with \`to\`, \`from\` and \`clock_s\`.`;
  return [{ code: 'clock-steps', message, file }];
}

/** By how much the clock jumped between two fixes; NaN where the boat has sailed meanwhile, or lay still. [s] */
function stepOver(recording: Recording, before: number, after: number): number {
  const hole = recording.time[after] - recording.time[before];
  const speed = Math.min(speedOver(recording, before, -1), speedOver(recording, after, 1));
  const moved = distanceBetween(recording, before, after);
  const isThere = moved <= MOMENT * speed && moved <= MOST_SHARE * speed * hole;
  return speed >= LEAST_SPEED && isThere ? hole - moved / speed : NaN;
}

/** Mean speed from a fix over the seconds before or after it; NaN where the log has a hole there too. [m/s] */
function speedOver(recording: Recording, row: number, way: 1 | -1): number {
  const { time, channels } = recording;
  let end = row;
  for (let i = row + way; Math.abs(time[i] - time[row]) <= REACH; i += way) {
    if (!Number.isNaN(channels.lat?.[i] ?? NaN)) end = i;
  }
  const seconds = Math.abs(time[end] - time[row]);
  return seconds >= REACH / 2 ? distanceBetween(recording, row, end) / seconds : NaN;
}

function distanceBetween({ channels: { lat, lon } }: Recording, a: number, b: number): number {
  if (!lat || !lon) return NaN;
  return shortLine({ lat: lat[a], lon: lon[a] }, { lat: lat[b], lon: lon[b] }).distance;
}
