/**
 * Vanes and cups that freeze. A reading that repeats is no proof: in a calm, or where the instrument rounds coarsely,
 * good readings repeat for minutes. So a run of equal readings is held against how often this log repeats otherwise,
 * and against its own other runs.
 */

import { circularMean } from '../math/angles.js';
import { KNOT } from '../math/units.js';
import type { Issue } from '../recording/issues.js';
import { createRecording, type Channel, type Recording } from '../recording/recording.js';

/** A freeze shorter than this does no harm to means over half a minute that it could be told from. [s] */
export const SHORTEST_FREEZE = 60;
/** Natural logarithm of the odds against a run by chance: less than one in 10^8 logs of this length. */
export const EVIDENCE = 18;
/** A freeze is at least so many times longer than the longest run that is not one: calms come in clusters of runs. */
export const STANDS_OUT = 4;
/** Freezes in one channel of one log: more are a habit of the instrument, not a fault. */
const MOST_FREEZES = 4;
/** Cups start at about 0.5 m/s, vanes at 0.5 to 1 m/s (makers' usual figures; common practice, no source). [m/s] */
const CALM = 1;
/** Cups are dead when they say less than this ... [m/s] */
const NOTHING = 0.05;
/** ... in this share of at least so many readings ... */
const DEAD_SHARE = 0.98;
const DEAD_READINGS = 60;
/** ... while the vane moves by this much, one standard deviation: in a calm it would rest. [deg] */
const VANE_MOVES = 2;
/** Logged true wind derives from dead cups when its speed is the boat's own within this. [m/s] */
const OWN_SPEED = 0.25;
/** A channel that never changes over so many readings and seconds is said, though not masked. */
const CONSTANT_READINGS = 60;
const CONSTANT_SECONDS = 600;

/** Readings not to be used: 1 where the channel's row is bad. */
export type Masks = Partial<Record<Channel, Uint8Array>>;

export interface StuckFinding {
  readonly issues: readonly Issue[];
  readonly masks: Masks;
}

/** Equal readings in a row: rows of the recording [first, last], count, and seconds from first to last. */
export interface Run {
  readonly first: number;
  readonly last: number;
  readonly readings: number;
  readonly seconds: number;
  readonly value: number;
}

/** Runs of equal readings of a column, one after another: most logs have one a reading. NaN rows are stepped over. */
export function* runsOf(time: Float64Array, column: Float64Array): Generator<Run> {
  let first = -1;
  let last = -1;
  let readings = 0;
  const run = (): Run => ({ first, last, readings, seconds: time[last] - time[first], value: column[first] });
  for (let i = 0; i < column.length; i++) {
    const value = column[i];
    if (Number.isNaN(value)) continue;
    if (first >= 0 && value === column[first]) {
      last = i;
      readings++;
      continue;
    }
    if (first >= 0) yield run();
    first = last = i;
    readings = 1;
  }
  if (first >= 0) yield run();
}

/** Puts a run among the longest, longest first, in order of time among equals; the shortest of too many goes. */
function keepLongest(longest: Run[], run: Run): void {
  const place = longest.findIndex((other) => other.readings < run.readings);
  if (place >= 0) longest.splice(place, 0, run);
  else longest.push(run);
  if (longest.length > MOST_FREEZES + 1) longest.pop();
}

/**
 * Runs too long to be chance. Of n steps between readings outside the run a share p repeats; a run of L readings
 * among them has odds n p^(L-1), and must also stand out from the next longest.
 *
 * @param time   Times of the rows. [s]
 * @param column Readings, NaN where none.
 * @returns The freezes, longest first.
 */
export function findFreezes(time: Float64Array, column: Float64Array): Run[] {
  const longest: Run[] = [];
  let runs = 0;
  let readings = 0;
  for (const run of runsOf(time, column)) {
    runs++;
    readings += run.readings;
    keepLongest(longest, run);
  }
  if (runs < 3) return [];
  let count = 0;
  for (let k = 0; k + 1 < longest.length; k++) {
    if (longest[k].readings >= STANDS_OUT * longest[k + 1].readings) count = k + 1;
  }
  const steps = readings - 1;
  const frozen = longest.slice(0, count);
  const inside = frozen.reduce((sum, run) => sum + run.readings - 1, 0);
  const changes = runs - 1;
  const repeats = steps - changes - inside;
  const p = (repeats + 1) / (repeats + changes + 2);
  return frozen.filter(
    (run) => run.seconds >= SHORTEST_FREEZE && (run.readings - 1) * -Math.log(p) - Math.log(steps) > EVIDENCE,
  );
}

const DIRECTIONS = ['awa', 'twd', 'twdMagnetic'] as const;
const SPEEDS = ['aws', 'tws'] as const;
const NAMES: Partial<Record<Channel, string>> = {
  awa: 'apparent wind angle',
  aws: 'apparent wind speed',
  twd: 'wind direction',
  twdMagnetic: 'wind direction',
  tws: 'wind speed',
};

/**
 * Looks for frozen vanes and cups (`wind-stuck`) and dead cups (`wind-dead`) in a log.
 *
 * @param recording A wind log or a boat's own.
 * @param file      For the issues.
 * @returns Issues, and the rows of each channel that are not to be used.
 */
export function findStuckWind(recording: Recording, file?: string): StuckFinding {
  const issues: Issue[] = [];
  const masks: Masks = {};
  const say = (code: string, message: string) =>
    issues.push({ code, message, ...(file === undefined ? {} : { file }) });
  const dead = findDeadCups(recording);
  for (const channel of dead) masks[channel] = new Uint8Array(recording.time.length).fill(1);
  if (dead.length > 0) say('wind-dead', deadMessage(dead));
  for (const channel of [...DIRECTIONS, ...SPEEDS]) {
    const column = recording.channels[channel];
    if (!column || masks[channel]) continue;
    const freezes = findFreezes(recording.time, column).filter((run) => !isCalm(recording, channel, run));
    if (freezes.length > 0) {
      masks[channel] = maskRuns(recording.time.length, freezes);
      say('wind-stuck', stuckMessage(recording, channel, freezes));
    } else if (neverChanges(recording.time, column)) {
      say('wind-stuck', `The ${NAMES[channel]} never changes from first to last: it is used as it is.`);
    }
  }
  return { issues, masks };
}

function maskRuns(n: number, runs: readonly Run[]): Uint8Array {
  const mask = new Uint8Array(n);
  // The first reading of a freeze was still a reading.
  for (const { first, last } of runs) mask.fill(1, first + 1, last + 1);
  return mask;
}

/** In a calm a vane rests and cups stand, and both are right. */
function isCalm(recording: Recording, channel: Channel, run: Run): boolean {
  const apparent = channel === 'awa' || channel === 'aws';
  const speed = recording.channels[apparent ? 'aws' : 'tws'];
  if (!speed) return false;
  if (channel === 'aws' || channel === 'tws') return run.value < CALM && around(speed, run) < 2 * CALM;
  let sum = 0;
  let n = 0;
  for (let i = run.first; i <= run.last; i++) {
    if (Number.isNaN(speed[i])) continue;
    sum += speed[i];
    n++;
  }
  return n > 0 && sum / n < CALM;
}

/** Mean of the ten readings before and the ten after a run. */
function around(column: Float64Array, run: Run): number {
  const values: number[] = [];
  for (let i = run.first - 1, k = 0; i >= 0 && k < 10; i--) if (!Number.isNaN(column[i])) k = values.push(column[i]);
  const before = values.length;
  for (let i = run.last + 1; i < column.length && values.length < before + 10; i++) {
    if (!Number.isNaN(column[i])) values.push(column[i]);
  }
  return values.reduce((a, b) => a + b, 0) / values.length;
}

function neverChanges(time: Float64Array, column: Float64Array): boolean {
  const [run, another] = runsOf(time, column);
  return !!run && !another && run.readings >= CONSTANT_READINGS && run.seconds >= CONSTANT_SECONDS;
}

/** Channels that are worthless because the cups do not turn: the speed, and a true wind derived from it. */
function findDeadCups(recording: Recording): Channel[] {
  const dead: Channel[] = [];
  const { aws, awa, tws, twd, twdMagnetic } = recording.channels;
  if (aws && isDead(aws, awa ?? twd ?? twdMagnetic)) {
    dead.push('aws');
    if (tws && isOwnSpeed(recording, tws)) {
      for (const channel of ['tws', 'twd', 'twdMagnetic', 'twa'] as const) {
        if (recording.channels[channel]) dead.push(channel);
      }
    }
  }
  if (tws && !dead.includes('tws') && isDead(tws, twd ?? twdMagnetic ?? awa)) dead.push('tws');
  return dead;
}

function isDead(speed: Float64Array, vane: Float64Array | undefined): boolean {
  let n = 0;
  let nothing = 0;
  for (const value of speed) {
    if (Number.isNaN(value)) continue;
    n++;
    if (Math.abs(value) < NOTHING) nothing++;
  }
  if (n < DEAD_READINGS || nothing < DEAD_SHARE * n || !vane) return false;
  const { resultant } = circularMean(vane);
  // Standard deviation of a direction from its resultant length: Mardia and Jupp 2000, eq. 2.3.14.
  return (180 / Math.PI) * Math.sqrt(-2 * Math.log(resultant)) > VANE_MOVES;
}

/** With no apparent wind, the "true" wind a display computes is the boat's own speed from dead ahead. */
function isOwnSpeed(recording: Recording, tws: Float64Array): boolean {
  const own = [recording.channels.stw, recording.channels.sog];
  return own.some((speed) => {
    if (!speed) return false;
    const differences = differencesOf(recording.time, tws, speed);
    if (differences.length < DEAD_READINGS) return false;
    differences.sort((a, b) => a - b);
    return differences[differences.length >> 1] < OWN_SPEED;
  });
}

/** Absolute differences of each reading of `a` to the latest of `b` not older than 3 s. */
function differencesOf(time: Float64Array, a: Float64Array, b: Float64Array): number[] {
  const out: number[] = [];
  let latest = -1;
  for (let i = 0; i < a.length; i++) {
    if (!Number.isNaN(b[i])) latest = i;
    if (latest >= 0 && !Number.isNaN(a[i]) && time[i] - time[latest] <= 3) out.push(Math.abs(a[i] - b[latest]));
  }
  return out;
}

function deadMessage(dead: readonly Channel[]): string {
  const derived = dead.includes('tws') && dead.includes('aws');
  const what = dead[0] === 'aws' ? 'apparent wind speed' : 'wind speed';
  const rest = derived ? ', and the true wind in this log was computed from it: neither is used' : ': it is not used';
  return `The ${what} reads 0 throughout while the vane moves, so the cups do not turn${rest}.`;
}

function stuckMessage(recording: Recording, channel: Channel, freezes: readonly Run[]): string {
  const seconds = freezes.reduce((sum, run) => sum + run.seconds, 0);
  const longest = freezes[0];
  const value =
    channel === 'aws' || channel === 'tws'
      ? `${(longest.value / KNOT).toFixed(1)} kn`
      : `${longest.value.toFixed(0)} degrees`;
  const when = new Date(Math.round(recording.time[longest.first]) * 1000).toISOString().slice(0, 19) + 'Z';
  const times = freezes.length > 1 ? ` (${freezes.length} times)` : '';
  return (
    `The ${NAMES[channel]} stays at exactly ${value} for ${Math.round(longest.seconds)} s from ${when}${times}: ` +
    `${Math.round(seconds)} s of it are not used.`
  );
}

/** The recording without the masked readings. */
export function withoutMasked(recording: Recording, masks: Masks): Recording {
  const channels = { ...recording.channels };
  let changed = false;
  for (const [channel, mask] of Object.entries(masks) as [Channel, Uint8Array][]) {
    const column = channels[channel];
    if (!column) continue;
    channels[channel] = column.map((value, i) => (mask[i] ? NaN : value));
    changed = true;
  }
  if (!changed) return recording;
  const { name, time, breaks } = recording;
  return createRecording({ name, time, channels, breaks });
}
