/**
 * Magnetic directions become true ones. The declination comes from the World Magnetic Model of the date and place, or
 * from the log where it says one that agrees with the model or where the model does not reach.
 */

import geomagnetism from 'geomagnetism';
import { angleBetween, circularMean, wrap180, wrap360 } from '../math/angles.js';
import { middleOf } from '../math/geo.js';
import type { Issue } from '../recording/issues.js';
import { channelValues, createRecording, type Channel, type Recording } from '../recording/recording.js';

/** Dates the coefficients at hand cover, UTC epoch seconds: from the 2015 model to the end of the 2025 one. */
export const MODEL_SPAN = {
  from: Date.UTC(2014, 11, 15, 12) / 1000,
  to: Date.UTC(2029, 10, 13) / 1000,
} as const;

const YEAR = 365.25 * 86400;
/** Secular change a year away from the model's dates, as a standard error: 0.05 to 0.2 degree a year at sea. [deg/a] */
export const SE_PER_YEAR = 0.15;
/** A log's own variation this near to the model is taken: a chart's rose or a receiver's table; farther is a setting. */
export const LOG_WITHIN = 2;
/** A variation from a log where no model checks it: rounded to a degree, often set by hand years ago. [deg] */
const SE_LOG_ALONE = 0.5;

export interface Declination {
  /** East positive. [deg] */
  readonly value: number;
  /** One standard error. [deg] */
  readonly se: number;
  /** Years between the date and the model's nearest; 0 within its dates. */
  readonly yearsOff: number;
}

/**
 * Magnetic declination.
 *
 *     se² = 0.26² + (5417/H)²  [deg, H the horizontal field in nT; 1, error model]  + (0.15 x years off)²
 *
 * @param lat  Latitude. [deg]
 * @param lon  Longitude. [deg]
 * @param time UTC epoch. [s]
 * @param altitude Height above the ellipsoid; 0 for boats. [km]
 * @returns Declination, east positive, its standard error and how far the date lies outside the model. [deg]
 *
 * Dates outside the model take the value of its nearest date. Accuracy is poor where H < 2000 nT, near the magnetic
 * poles.
 *
 * [1] The US/UK World Magnetic Model for 2025-2030, NOAA/NCEI and BGS, 2024.
 */
export function declination(lat: number, lon: number, time: number, altitude = 0): Declination {
  const within = Math.min(MODEL_SPAN.to, Math.max(MODEL_SPAN.from, time));
  const point = geomagnetism.model(new Date(within * 1000)).point([lat, wrap180(lon), altitude]);
  const yearsOff = Math.abs(time - within) / YEAR;
  const se = Math.hypot(0.26, 5417 / point.h, SE_PER_YEAR * yearsOff);
  return { value: point.decl, se, yearsOff };
}

/** Where the variation used came from. */
export type VariationSource = 'log' | 'model' | 'log-alone' | 'nearest-year' | 'none';

export interface TrueDirections {
  /** With `heading` and `twd` (both true) filled in from the magnetic ones. */
  readonly recording: Recording;
  /** What was added to magnetic directions, east positive; NaN where none was needed or to be had. [deg] */
  readonly variation: number;
  /** One standard error of it. [deg] */
  readonly se: number;
  readonly source: VariationSource;
  readonly issues: readonly Issue[];
}

const PAIRS: readonly (readonly [Channel, Channel])[] = [
  ['headingMagnetic', 'heading'],
  ['twdMagnetic', 'twd'],
];

/**
 * Makes a log's magnetic directions true. A true heading in the log is kept where it is.
 *
 * @param recording Log with any of headingMagnetic, twdMagnetic, variation, lat, lon.
 * @param options   `place`: where it was, for a log without positions; `file` for the issues.
 * @returns The recording with true directions, the variation used and where it came from.
 */
export function trueHeading(
  recording: Recording,
  options: { readonly place?: { readonly lat: number; readonly lon: number } | null; readonly file?: string } = {},
): TrueDirections {
  const needed = PAIRS.filter(([magnetic]) => recording.channels[magnetic]);
  if (needed.length === 0 || recording.time.length === 0) {
    return { recording, variation: NaN, se: NaN, source: 'none', issues: [] };
  }
  const { lat, lon } = recording.channels;
  const place = (lat && lon ? middleOf(lat, lon) : null) ?? options.place ?? null;
  const middle = (recording.time[0] + recording.time[recording.time.length - 1]) / 2;
  const model = place ? declination(place.lat, place.lon, middle) : null;
  const chosen = chooseVariation(logged(recording), model);
  const issues = chosen.message
    ? [{ code: chosen.code, message: chosen.message, ...(options.file === undefined ? {} : { file: options.file }) }]
    : [];
  if (Number.isNaN(chosen.variation)) return { recording, ...pick(chosen), issues };
  const channels = { ...recording.channels };
  for (const [magnetic, true_] of needed) {
    channels[true_] = fillTrue(recording.channels[true_], recording.channels[magnetic]!, chosen.variation);
  }
  const { name, time, breaks } = recording;
  return { recording: createRecording({ name, time, channels, breaks }), ...pick(chosen), issues };
}

function pick(chosen: Chosen): Pick<TrueDirections, 'variation' | 'se' | 'source'> {
  return { variation: chosen.variation, se: chosen.se, source: chosen.source };
}

interface Chosen {
  readonly variation: number;
  readonly se: number;
  readonly source: VariationSource;
  readonly code: string;
  readonly message: string;
}

/** The log's own variation: the mean of what it says, NaN when it says none. [deg] */
function logged(recording: Recording): number {
  const { value } = channelValues(recording, 'variation');
  return value.length > 0 ? wrap180(circularMean(value).mean) : NaN;
}

/** The rule: the log within 2 degrees of the model, else the model; outside its dates the log; else the nearest year. */
export function chooseVariation(log: number, model: Declination | null): Chosen {
  const hasLog = Number.isFinite(log);
  const quiet = { code: 'variation', message: '' };
  if (!model || model.yearsOff > 0) {
    if (hasLog) return { variation: log, se: SE_LOG_ALONE, source: 'log-alone', ...quiet };
    if (!model) {
      const message = 'The heading is magnetic and neither a variation nor a place is known: it is not used as true.';
      return { variation: NaN, se: NaN, source: 'none', code: 'variation-unknown', message };
    }
    const message =
      `The log names no variation and its date lies ${model.yearsOff.toFixed(1)} years outside the magnetic model: ` +
      `the nearest year's ${degrees(model.value)} is used, good to ${model.se.toFixed(1)} degrees.`;
    return { variation: model.value, se: model.se, source: 'nearest-year', code: 'variation-extrapolated', message };
  }
  if (hasLog && angleBetween(log, model.value) <= LOG_WITHIN) {
    return { variation: log, se: model.se, source: 'log', ...quiet };
  }
  const message = hasLog
    ? `The log's variation ${degrees(log)} differs from the magnetic model's ${degrees(model.value)}: the model is used.`
    : '';
  return { variation: model.value, se: model.se, source: 'model', code: 'variation-mismatch', message };
}

function degrees(variation: number): string {
  return `${Math.abs(variation).toFixed(1)} degrees ${variation < 0 ? 'W' : 'E'}`;
}

function fillTrue(own: Float64Array | undefined, magnetic: Float64Array, variation: number): Float64Array {
  return magnetic.map((value, i) => (own && !Number.isNaN(own[i]) ? own[i] : wrap360(value + variation)));
}
