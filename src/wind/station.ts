import { directionOf, eastOf, northOf, wrap360 } from '../math/angles.js';
import { median } from '../math/median.js';
import type { Recording } from '../recording/recording.js';
import { channelValues } from '../recording/recording.js';
import type { Mounting } from './on-board.js';
import { windSums, type SensorPlace, type WindSource } from './source.js';

/** Readings further apart than this many median steps, and than this time, leave a gap. [s] */
const HOLE_STEPS = 5;
const HOLE_SECONDS = 90;
/** A station averages at least this long: less is turbulence that never reaches the boat. [s] */
export const STATION_WINDOW = 20;

export interface StationOptions extends Mounting {
  readonly file: string;
  readonly place: SensorPlace;
  /** Added to its clock. [s] */
  readonly clockS: number;
}

/** A fixed station's log of true wind as a source. null when it holds no direction. */
export function stationSource(recording: Recording, options: StationOptions): WindSource | null {
  const direction = channelValues(recording, 'twd');
  if (direction.time.length === 0) return null;
  const speed = channelValues(recording, 'tws');
  const t0 = Math.floor(direction.time[0] + options.clockS);
  const n = Math.ceil(direction.time.at(-1)! + options.clockS) - t0 + 1;
  const east = toSeconds(
    direction.time,
    Float64Array.from(direction.value, (d) => eastOf(d + options.offset)),
    t0,
    n,
    options,
  );
  const north = toSeconds(
    direction.time,
    Float64Array.from(direction.value, (d) => northOf(d + options.offset)),
    t0,
    n,
    options,
  );
  const dirs = Float64Array.from(east, (e, i) => (Number.isNaN(e) ? NaN : wrap360(directionOf(e, north[i]))));
  const speeds = toSeconds(
    speed.time,
    Float64Array.from(speed.value, (s) => s * options.factor),
    t0,
    n,
    options,
  );
  return {
    kind: 'station',
    file: options.file,
    boat: -1,
    t0,
    n,
    place: options.place,
    accuracyDir: options.accuracyDir,
    accuracySpeed: options.accuracySpeed,
    hasSpeed: speeds.some((s) => !Number.isNaN(s)),
    window: STATION_WINDOW,
    sums: windSums(dirs, speeds),
  };
}

/** Values on whole seconds: the mean of a second's values where there are any, else a line between neighbours. */
function toSeconds(
  time: Float64Array,
  value: Float64Array,
  t0: number,
  n: number,
  options: { clockS: number },
): Float64Array {
  const out = new Float64Array(n).fill(NaN);
  if (time.length === 0) return out;
  const hole = Math.max(HOLE_SECONDS, HOLE_STEPS * medianStep(time));
  const count = new Float64Array(n);
  for (let k = 0; k < time.length; k++) {
    const i = Math.round(time[k] + options.clockS - t0);
    if (i < 0 || i >= n) continue;
    out[i] = (count[i] > 0 ? out[i] : 0) + value[k];
    count[i]++;
  }
  let last = -1;
  for (let i = 0; i < n; i++) {
    if (count[i] === 0) continue;
    out[i] = out[i] / count[i];
    if (last >= 0 && i - last > 1 && i - last <= hole) {
      for (let j = last + 1; j < i; j++) out[j] = out[last] + ((out[i] - out[last]) * (j - last)) / (i - last);
    }
    last = i;
  }
  return out;
}

function medianStep(time: Float64Array): number {
  if (time.length < 2) return 1;
  const steps = new Float64Array(time.length - 1);
  for (let k = 1; k < time.length; k++) steps[k - 1] = time[k] - time[k - 1];
  return median(steps);
}

/** Readings by hand, joined by straight lines, the first and last held to the ends of [from, to]. */
export function handSource(
  readings: readonly { readonly time: number | null; readonly twd: number; readonly tws: number }[],
  errors: { readonly seDir: number; readonly seSpeed: number },
  span: { readonly from: number; readonly to: number },
): WindSource {
  const t0 = Math.floor(span.from);
  const n = Math.ceil(span.to) - t0 + 1;
  const sorted = [...readings].sort((a, b) => (a.time ?? -Infinity) - (b.time ?? -Infinity));
  const east = lineBetween(sorted, (r) => eastOf(r.twd), t0, n);
  const north = lineBetween(sorted, (r) => northOf(r.twd), t0, n);
  const speed = lineBetween(sorted, (r) => r.tws, t0, n);
  const direction = Float64Array.from(east, (e, i) => directionOf(e, north[i]));
  const mean = sorted.reduce((sum, r) => sum + r.tws, 0) / Math.max(1, sorted.length);
  return {
    kind: 'by-hand',
    file: '',
    boat: -1,
    t0,
    n,
    place: null,
    accuracyDir: errors.seDir,
    accuracySpeed: mean > 0 ? errors.seSpeed / mean : 1,
    hasSpeed: mean > 0,
    window: 1,
    sums: windSums(direction, speed),
  };
}

type HandReading = { readonly time: number | null; readonly twd: number; readonly tws: number };

function lineBetween(
  readings: readonly HandReading[],
  pick: (reading: HandReading) => number,
  t0: number,
  n: number,
): Float64Array {
  const out = new Float64Array(n);
  let k = 0;
  for (let i = 0; i < n; i++) {
    const time = t0 + i;
    while (k + 1 < readings.length && (readings[k + 1].time ?? -Infinity) <= time) k++;
    const a = readings[k];
    const b = readings[k + 1];
    if (!b || a.time === null || b.time === null || time <= a.time) out[i] = pick(a);
    else out[i] = pick(a) + ((pick(b) - pick(a)) * (time - a.time)) / (b.time - a.time);
  }
  return out;
}
