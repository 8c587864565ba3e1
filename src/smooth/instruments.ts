import { eastOf, northOf, turn, wrap180, wrap360, directionOf } from '../math/angles.js';
import { channelValues, type Channel, type Recording } from '../recording/recording.js';
import type { Track } from '../recording/track.js';

/** Instruments of the boat a track can carry, and how their values are averaged. */
const INSTRUMENTS = { heading: 'compass', awa: 'signed', aws: 'scalar', stw: 'scalar', heel: 'scalar' } as const;

export type Instrument = keyof typeof INSTRUMENTS;
type Kind = (typeof INSTRUMENTS)[Instrument];

/** Values farther than this from a second say nothing about it: a dinghy can tack within it. [s] */
export const REACH = 3;

export interface ResampleOptions {
  /** Added to the instrument's clock. [s] */
  readonly clockS?: number;
}

/**
 * A channel on whole seconds: the mean of what falls within half a second, else the line between the values around it
 * where both lie within 3 s of each other's middle, else NaN. Angles go the short way round.
 *
 * @param recording Holds the channel.
 * @param channel   Which.
 * @param t0        First second. [s]
 * @param n         How many.
 * @returns n values in the channel's unit, or null where the recording has none.
 */
export function resampleChannel(
  recording: Recording,
  channel: Channel,
  kind: Kind,
  t0: number,
  n: number,
  options: ResampleOptions = {},
): Float64Array | null {
  const { time, value } = channelValues(recording, channel);
  if (time.length === 0) return null;
  const clock = options.clockS ?? 0;
  const breaks = recording.breaks.map((row) => recording.time[row] + clock);
  const out = new Float64Array(n);
  let low = 0;
  let nextBreak = 0;
  for (let i = 0; i < n; i++) {
    const t = t0 + i;
    while (low < time.length && time[low] + clock < t - 0.5) low++;
    let high = low;
    while (high < time.length && time[high] + clock < t + 0.5) high++;
    if (high > low) {
      out[i] = meanOf(value, low, high, kind);
      continue;
    }
    while (nextBreak < breaks.length && breaks[nextBreak] <= t) nextBreak++;
    const before = low - 1;
    const startsLater = nextBreak < breaks.length && low < time.length && breaks[nextBreak] <= time[low] + clock;
    const began = nextBreak > 0 && before >= 0 && time[before] + clock < breaks[nextBreak - 1];
    out[i] = startsLater || began ? NaN : between(time, value, before, low, t - clock, kind);
  }
  return out;
}

function meanOf(value: Float64Array, from: number, to: number, kind: Kind): number {
  if (to === from + 1) return kind === 'compass' ? wrap360(value[from]) : value[from];
  let a = 0;
  let b = 0;
  for (let k = from; k < to; k++) {
    if (kind === 'scalar') a += value[k];
    else {
      a += eastOf(value[k]);
      b += northOf(value[k]);
    }
  }
  if (kind === 'scalar') return a / (to - from);
  const direction = directionOf(a, b);
  return kind === 'compass' ? direction : wrap180(direction);
}

/** The line between two values at time t, when neither is out of reach. */
function between(
  time: Float64Array,
  value: Float64Array,
  before: number,
  after: number,
  t: number,
  kind: Kind,
): number {
  if (before < 0 || after >= time.length) return NaN;
  const span = time[after] - time[before];
  if (span > 2 * REACH) return NaN;
  const share = (t - time[before]) / span;
  const from = value[before];
  if (kind === 'scalar') return from + share * (value[after] - from);
  const angle = from + share * turn(from, value[after]);
  return kind === 'compass' ? wrap360(angle) : wrap180(angle);
}

/**
 * The boat's own instruments on a track's seconds. A second recording (the mast's logger) fills in what the track's
 * own lacks, second by second where both have the channel.
 *
 * @param track     The smoothed track.
 * @param recording Holds heading (true), apparent wind, water speed, heel: any of them.
 * @param options   `clockS` is added to the recording's clock.
 * @returns A new track; angles [deg], speeds [m/s], NaN where nothing lies within 3 s.
 */
export function attachInstruments(track: Track, recording: Recording, options: ResampleOptions = {}): Track {
  const added: Partial<Record<Instrument, Float64Array>> = {};
  for (const [name, kind] of Object.entries(INSTRUMENTS) as [Instrument, Kind][]) {
    const values = resampleChannel(recording, name, kind, track.t0, track.n, options);
    if (!values) continue;
    const own = track[name];
    added[name] = own ? own.map((v, i) => (Number.isNaN(v) ? values[i] : v)) : values;
  }
  return { ...track, ...added };
}
