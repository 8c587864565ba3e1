/** The recording: what one log holds, as aligned columns. It knows no algorithm and is never changed once made. */

/** Channels a recording may hold, with the unit and sign of each. */
export const CHANNELS = {
  /** Latitude, WGS84, north positive. [deg] */
  lat: 'deg',
  /** Longitude, WGS84, east positive, -180 <= lon < 180. [deg] */
  lon: 'deg',
  /** Speed over ground as logged by the receiver. [m/s] */
  sog: 'm/s',
  /** Course over ground as logged, true. [deg] */
  cog: 'deg',
  /** Heading, true. [deg] */
  heading: 'deg',
  /** Heading, magnetic (deviation already applied where logged). [deg] */
  headingMagnetic: 'deg',
  /** Magnetic variation as logged, east positive. [deg] */
  variation: 'deg',
  /** Speed through the water. [m/s] */
  stw: 'm/s',
  /** Heel, positive to starboard. [deg] */
  heel: 'deg',
  /** Apparent wind angle off the bow, -180..180, positive: wind over the starboard side. [deg] */
  awa: 'deg',
  /** Apparent wind speed. [m/s] */
  aws: 'm/s',
  /** True wind direction, where it blows from. [deg true] */
  twd: 'deg',
  /** True wind direction, where it blows from, magnetic. [deg magnetic] */
  twdMagnetic: 'deg',
  /** True wind speed. [m/s] */
  tws: 'm/s',
  /** True wind angle off the bow as a device computed it, -180..180, positive starboard. Kept for inspection, never used. [deg] */
  twa: 'deg',
} as const;

export type Channel = keyof typeof CHANNELS;

export interface Recording {
  /** Name found inside the log (track name), else empty. */
  readonly name: string;
  /** UTC epoch seconds, finite, strictly increasing. */
  readonly time: Float64Array;
  /** One Float64Array per channel present, all as long as `time`; NaN = not in this row. */
  readonly channels: Readonly<Partial<Record<Channel, Float64Array>>>;
  /** Row indices at which a new piece begins (a new GPX segment, another file): nothing is interpolated across. Sorted, without 0. */
  readonly breaks: readonly number[];
}

/**
 * The only way to make a recording.
 *
 * @throws Error (a programmer's mistake) when lengths differ, times are not finite or not strictly increasing, a
 *   position is half there or out of range, or breaks are out of order.
 */
export function createRecording(parts: {
  name?: string;
  time: Float64Array;
  channels: Partial<Record<Channel, Float64Array>>;
  breaks?: readonly number[];
}): Recording {
  const { time, channels, name = '', breaks = [] } = parts;
  for (let i = 0; i < time.length; i++) {
    if (!Number.isFinite(time[i])) throw new Error(`createRecording: time[${i}] is ${time[i]}`);
    if (i > 0 && !(time[i] > time[i - 1])) {
      throw new Error(`createRecording: time[${i}] ${time[i]} does not follow ${time[i - 1]}`);
    }
  }
  for (const [channel, column] of Object.entries(channels)) {
    if (column && column.length !== time.length) {
      throw new Error(`createRecording: ${time.length} times but ${column.length} of ${channel}`);
    }
  }
  checkPositions(channels.lat, channels.lon);
  let last = 0;
  for (const at of breaks) {
    if (!(at > last && at < time.length)) throw new Error(`createRecording: break at ${at} after ${last}`);
    last = at;
  }
  return { name, time, channels, breaks };
}

function checkPositions(lat: Float64Array | undefined, lon: Float64Array | undefined): void {
  if (!lat && !lon) return;
  if (!lat || !lon) throw new Error('createRecording: latitude without longitude');
  for (let i = 0; i < lat.length; i++) {
    const φ = lat[i];
    const λ = lon[i];
    if (Number.isNaN(φ) && Number.isNaN(λ)) continue;
    if (!(Math.abs(φ) <= 90 && λ >= -180 && λ < 180)) throw new Error(`createRecording: position ${φ}, ${λ} at ${i}`);
  }
}

/** Times and values of the rows in which a channel is present. */
export function channelValues(recording: Recording, channel: Channel): { time: Float64Array; value: Float64Array } {
  const column = recording.channels[channel];
  if (!column) return { time: new Float64Array(0), value: new Float64Array(0) };
  let n = 0;
  for (const value of column) if (!Number.isNaN(value)) n++;
  if (n === column.length) return { time: recording.time, value: column };
  const time = new Float64Array(n);
  const value = new Float64Array(n);
  let k = 0;
  for (let i = 0; i < column.length; i++) {
    if (Number.isNaN(column[i])) continue;
    time[k] = recording.time[i]!;
    value[k++] = column[i]!;
  }
  return { time, value };
}

/** How many rows carry a position. */
export function countFixes(recording: Recording): number {
  const lat = recording.channels.lat;
  if (!lat) return 0;
  let n = 0;
  for (const φ of lat) if (!Number.isNaN(φ)) n++;
  return n;
}
