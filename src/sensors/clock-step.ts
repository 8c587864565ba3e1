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
  const rows = fixRows(recording);
  const { time } = recording;
  const steps: { readonly at: number; readonly seconds: number }[] = [];
  for (let k = 1; k < rows.length; k++) {
    const hole = time[rows[k]] - time[rows[k - 1]];
    if (hole < SHORTEST) continue;
    const before = speedOver(recording, rows, k - 1, -1);
    const after = speedOver(recording, rows, k, 1);
    const speed = Math.min(before, after);
    const moved = distanceBetween(recording, rows[k - 1], rows[k]);
    if (!(speed >= LEAST_SPEED) || moved > MOMENT * speed || moved > MOST_SHARE * speed * hole) continue;
    steps.push({ at: time[rows[k - 1]], seconds: hole - moved / speed });
  }
  if (steps.length === 0) return [];
  const [{ at, seconds }] = steps;
  const more = steps.length > 1 ? ` (the first of ${steps.length} such jumps)` : '';
  const message =
    `The clock jumps on by about ${Math.round(seconds)} s at ${new Date(at * 1000).toISOString()} while the boat is ` +
    `where it was${more}. What follows may be that much late: give the log twice, with \`to\`, \`from\` and \`clock_s\`.`;
  return [{ code: 'clock-steps', message, file }];
}

function fixRows({ channels }: Recording): number[] {
  const rows: number[] = [];
  channels.lat?.forEach((value, row) => {
    if (!Number.isNaN(value)) rows.push(row);
  });
  return rows;
}

/** Mean speed from a fix over the seconds before or after it; NaN where the log has a hole there too. [m/s] */
function speedOver(recording: Recording, rows: readonly number[], k: number, way: 1 | -1): number {
  const { time } = recording;
  let end = k;
  while (Math.abs(time[rows[end + way]] - time[rows[k]]) <= REACH) end += way;
  const seconds = Math.abs(time[rows[end]] - time[rows[k]]);
  return seconds >= REACH / 2 ? distanceBetween(recording, rows[k], rows[end]) / seconds : NaN;
}

function distanceBetween({ channels: { lat, lon } }: Recording, a: number, b: number): number {
  if (!lat || !lon) return NaN;
  return shortLine({ lat: lat[a], lon: lon[a] }, { lat: lat[b], lon: lon[b] }).distance;
}
