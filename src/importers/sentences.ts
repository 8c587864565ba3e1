/**
 * Sentences of NMEA 0183 (IEC 61162-1) and what each says. Field layouts after the sentence tables of gpsd's
 * "NMEA Revealed" (gpsd project, www/NMEA.adoc). Fields are counted from 0 behind the address.
 */
import { wrap180, wrap360 } from '../math/angles.js';
import { fromKnots, KILOMETRE_PER_HOUR, MILE_PER_HOUR } from '../math/units.js';
import type { Channel } from '../recording/recording.js';
import type { Fields } from './fields.js';
import { daysFromCivil } from './times.js';

export interface Position {
  readonly lat: number;
  readonly lon: number;
  /** Decimals of the minutes: the finer of two sentences of one fix is taken. */
  readonly decimals: number;
}

/** What one sentence says. */
export type Reading =
  | {
      readonly is: 'fix';
      readonly clock: number;
      readonly day: number;
      readonly position: Position;
      readonly values: Values;
      readonly simulated: boolean;
    }
  | { readonly is: 'values'; readonly values: Values }
  | { readonly is: 'clock'; readonly clock: number; readonly day: number }
  | { readonly is: 'nothing' }
  | { readonly is: 'fault'; readonly reason: string; readonly day: number };

export type Values = Partial<Record<Channel, number>>;

/** Nothing we use. */
export const NOTHING: Reading = { is: 'nothing' };
const NO_FIX = 'no fix';

const fault = (reason: string, day = NaN): Reading => ({ is: 'fault', reason, day });

/** Seconds of the day from hhmmss.sss; a leap second (60) counts on. NaN when it is not a time. */
export function clockOf(f: Fields, k: number): number {
  if (f.length(k) < 6) return NaN;
  const hour = f.number(k, 0, 2);
  const minute = f.number(k, 2, 4);
  const second = f.number(k, 4);
  return hour >= 0 && hour < 24 && minute >= 0 && minute < 60 && second >= 0 && second < 61
    ? hour * 3600 + minute * 60 + second
    : NaN;
}

/** Days from ddmmyy: GPS began in 1980, so 80 to 99 are of that century. */
function dayOf(f: Fields, k: number): number {
  if (f.length(k) !== 6) return NaN;
  const year = f.number(k, 4, 6);
  return daysFromCivil(year >= 80 ? 1900 + year : 2000 + year, f.number(k, 2, 4), f.number(k, 0, 2));
}

/** Degrees from (d)ddmm.mmm and the hemisphere behind it: the two digits left of the point, and the rest, are minutes. */
function degrees(f: Fields, k: number, positive: string, negative: string, most: number): number {
  const side = f.letters(k + 1);
  const value = f.number(k);
  if (!(value >= 0) || (side !== positive && side !== negative)) return NaN;
  const whole = Math.floor(value / 100);
  const minutes = value - 100 * whole;
  const angle = whole + minutes / 60;
  if (!(minutes < 60 && angle <= most)) return NaN;
  return side === negative ? -angle : angle;
}

function positionOf(f: Fields, k: number): Position | string {
  if (f.length(k) === 0 || f.length(k + 2) === 0) return 'no position';
  const lat = degrees(f, k, 'N', 'S', 90);
  const lon = degrees(f, k + 2, 'E', 'W', 180);
  if (Number.isNaN(lat) || Number.isNaN(lon)) return 'position not understood';
  if (lat === 0 && lon === 0) return 'position 0, 0: no fix';
  return { lat, lon: lon === 180 ? -180 : lon, decimals: f.decimals(k) };
}

/** What a position at field k and a time of day at another field say. */
function fixOf(f: Fields, k: number, clockAt: number, values: Values, simulated: boolean, day = NaN): Reading {
  const position = positionOf(f, k);
  if (typeof position === 'string') return fault(position, day);
  const clock = clockOf(f, clockAt);
  if (Number.isNaN(clock)) {
    if (f.length(clockAt) > 0) return fault('time not understood', day);
    return { is: 'values', values: { ...values, lat: position.lat, lon: position.lon } };
  }
  return { is: 'fix', clock, day, position, values, simulated };
}

/** An angle of 0 to 360 degrees; NaN for all else. */
function angle(f: Fields, k: number): number {
  const value = f.number(k);
  return value >= 0 && value <= 360 ? value : NaN;
}

function course(f: Fields, k: number): number {
  return wrap360(angle(f, k));
}

/** A signed angle from a size and the letter of its side behind it. NaN when the size is there without a side. */
function sided(f: Fields, k: number, positive: string, negative: string): number {
  const value = f.number(k);
  if (!(value >= 0 && value <= 180)) return NaN;
  const letter = f.letters(k + 1);
  return letter === positive ? value : letter === negative ? -value : NaN;
}

/** A speed [m/s] in a unit: K km/h, M m/s, N knots, S statute miles an hour. */
function speed(f: Fields, k: number, unit: string): number {
  const value = f.number(k);
  if (!(value >= 0 && value < 1000)) return NaN;
  if (unit === 'N') return fromKnots(value);
  if (unit === 'M') return value;
  if (unit === 'K') return value * KILOMETRE_PER_HOUR;
  return unit === 'S' ? value * MILE_PER_HOUR : NaN;
}

/** The first speed given among pairs of value and unit that begin at field k. */
function firstSpeed(f: Fields, k: number): number {
  for (let at = k; at + 1 < f.count; at += 2) {
    const value = speed(f, at, f.letters(at + 1));
    if (!Number.isNaN(value)) return value;
  }
  return NaN;
}

/** What is known of some values; nothing when none is. */
function valuesOf(values: Values): Reading {
  for (const channel in values) if (!Number.isNaN(values[channel as Channel])) return { is: 'values', values };
  return NOTHING;
}

const mode = (f: Fields, k: number): string => f.letters(k).trim();

function rmc(f: Fields): Reading {
  const day = dayOf(f, 8);
  const status = f.letters(1);
  if ((status !== 'A' && status !== 'D') || mode(f, 11) === 'N') return fault(NO_FIX, day);
  if (f.length(0) === 0) return fault('no time', day);
  const values = { sog: speed(f, 6, 'N'), cog: course(f, 7), variation: sided(f, 9, 'E', 'W') };
  return fixOf(f, 2, 0, values, mode(f, 11) === 'S', day);
}

function gga(f: Fields): Reading {
  const quality = mode(f, 5);
  if (quality === '0') return fault(NO_FIX);
  if (f.length(0) === 0) return fault('no time');
  return fixOf(f, 1, 0, {}, quality === '8');
}

function gll(f: Fields): Reading {
  if (mode(f, 5) === 'V' || mode(f, 6) === 'N') return fault(NO_FIX);
  return fixOf(f, 0, 4, {}, mode(f, 6) === 'S');
}

function vtg(f: Fields): Reading {
  if (mode(f, 8) === 'N') return fault(NO_FIX);
  const lettered = mode(f, 1) === 'T' || mode(f, 3) === 'M' || mode(f, 5) === 'N' || mode(f, 7) === 'K';
  if (lettered) return valuesOf({ cog: course(f, 0), sog: firstSpeed(f, 4) });
  const kn = speed(f, 2, 'N');
  return valuesOf({ cog: course(f, 0), sog: Number.isNaN(kn) ? speed(f, 3, 'K') : kn });
}

function zda(f: Fields): Reading {
  const clock = clockOf(f, 0);
  if (Number.isNaN(clock)) return f.length(0) === 0 ? NOTHING : fault('time not understood');
  return { is: 'clock', clock, day: daysFromCivil(f.number(3), f.number(2), f.number(1)) };
}

/** Sensor heading with the deviation added where it is logged; variation beside it. */
function hdg(f: Fields): Reading {
  const deviation = sided(f, 1, 'E', 'W');
  return valuesOf({
    headingMagnetic: wrap360(angle(f, 0) + (Number.isNaN(deviation) ? 0 : deviation)),
    variation: sided(f, 3, 'E', 'W'),
  });
}

function vhw(f: Fields): Reading {
  return valuesOf({ heading: course(f, 0), headingMagnetic: course(f, 2), stw: firstSpeed(f, 4) });
}

/** `T` is the true wind off the bow as a device computed it: kept as an angle, its speed not. */
function mwv(f: Fields): Reading {
  if (mode(f, 4) === 'V') return fault('status V: reading not valid');
  const off = wrap180(angle(f, 0));
  if (mode(f, 1) === 'T') return valuesOf({ twa: off });
  return mode(f, 1) === 'R' ? valuesOf({ awa: off, aws: speed(f, 2, f.letters(3)) }) : NOTHING;
}

function mwd(f: Fields): Reading {
  return valuesOf({ twd: course(f, 0), twdMagnetic: course(f, 2), tws: firstSpeed(f, 4) });
}

/** What a sentence says. */
export type Decoder = (fields: Fields) => Reading;

const DECODERS: Readonly<Record<string, Decoder>> = {
  RMC: rmc,
  GGA: gga,
  GLL: gll,
  VTG: vtg,
  ZDA: zda,
  HDG: hdg,
  HDT: (f) => valuesOf({ heading: course(f, 0) }),
  HDM: (f) => valuesOf({ headingMagnetic: course(f, 0) }),
  VHW: vhw,
  MWV: mwv,
  MWD: mwd,
  VWR: (f) => valuesOf({ awa: sided(f, 0, 'R', 'L'), aws: firstSpeed(f, 2) }),
  VWT: (f) => valuesOf({ twa: sided(f, 0, 'R', 'L') }),
};

/** Who sent a sentence and of what kind it is. */
export interface Address {
  readonly talker: string;
  readonly formatter: string;
  /** Reads the fields; undefined when nothing of this kind is of use. */
  readonly decode: Decoder | undefined;
}

/** Talker and formatter of an address such as `GPRMC`; one of a maker's own (`P…`) is a formatter as a whole. */
export function addressOf(text: string): Address {
  const formatter = text.startsWith('P') ? text : text.slice(-3);
  return {
    talker: text.slice(0, 2),
    formatter,
    decode: Object.hasOwn(DECODERS, formatter) ? DECODERS[formatter] : undefined,
  };
}
