/**
 * Sentences of NMEA 0183 (IEC 61162-1) and what each says. Field layouts after the sentence tables of gpsd's
 * "NMEA Revealed" (gpsd project, www/NMEA.adoc). Fields are counted from 0 behind the address.
 */
import { wrap180, wrap360 } from '../math/angles.js';
import { fromKnots, KILOMETRE_PER_HOUR, MILE_PER_HOUR } from '../math/units.js';
import type { Channel } from '../recording/recording.js';
import { readDecimal } from './decimals.js';
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

const NOTHING: Reading = { is: 'nothing' };
const NO_FIX = 'no fix';

const fault = (reason: string, day = NaN): Reading => ({ is: 'fault', reason, day });

/** Seconds of the day from hhmmss.sss; a leap second (60) counts on. NaN when it is not a time. */
export function clockOf(field: string): number {
  if (field.length < 6) return NaN;
  const hour = readDecimal(field, 0, 2);
  const minute = readDecimal(field, 2, 4);
  const second = readDecimal(field, 4);
  return hour >= 0 && hour < 24 && minute >= 0 && minute < 60 && second >= 0 && second < 61
    ? hour * 3600 + minute * 60 + second
    : NaN;
}

/** Days from ddmmyy: GPS began in 1980, so 80 to 99 are of that century. */
function dayOf(field: string): number {
  if (field.length !== 6) return NaN;
  const year = readDecimal(field, 4, 6);
  return daysFromCivil(year >= 80 ? 1900 + year : 2000 + year, readDecimal(field, 2, 4), readDecimal(field, 0, 2));
}

/** Degrees from (d)ddmm.mmm: the two digits left of the point, and what follows, are minutes. */
function degrees(field: string, hemisphere: string, positive: string, negative: string, most: number): number {
  const side = hemisphere.toUpperCase();
  const value = readDecimal(field);
  if (!(value >= 0) || (side !== positive && side !== negative)) return NaN;
  const whole = Math.floor(value / 100);
  const minutes = value - 100 * whole;
  const angle = whole + minutes / 60;
  if (!(minutes < 60 && angle <= most)) return NaN;
  return side === negative ? -angle : angle;
}

function positionOf(f: readonly string[], at: number): Position | string {
  const [latText = '', ns = '', lonText = '', ew = ''] = f.slice(at, at + 4);
  if (latText === '' || lonText === '') return 'no position';
  const lat = degrees(latText, ns, 'N', 'S', 90);
  const lon = degrees(lonText, ew, 'E', 'W', 180);
  if (Number.isNaN(lat) || Number.isNaN(lon)) return 'position not understood';
  if (lat === 0 && lon === 0) return 'position 0, 0: no fix';
  const point = latText.indexOf('.');
  return { lat, lon: lon === 180 ? -180 : lon, decimals: point < 0 ? 0 : latText.length - point - 1 };
}

function fixOf(
  f: readonly string[],
  at: number,
  clockField: string,
  values: Values,
  simulated: boolean,
  day = NaN,
): Reading {
  const position = positionOf(f, at);
  if (typeof position === 'string') return fault(position, day);
  const clock = clockOf(clockField);
  if (Number.isNaN(clock)) {
    if (clockField !== '') return fault('time not understood', day);
    return { is: 'values', values: { ...values, lat: position.lat, lon: position.lon } };
  }
  return { is: 'fix', clock, day, position, values, simulated };
}

/** An angle of 0 to 360 degrees; NaN for all else. */
function angle(field: string | undefined): number {
  const value = readDecimal(field ?? '');
  return value >= 0 && value <= 360 ? value : NaN;
}

function course(field: string | undefined): number {
  return wrap360(angle(field));
}

/** A signed angle from a size and the letter of its side. NaN when the size is there without a side. */
function sided(field: string | undefined, side: string | undefined, positive: string, negative: string): number {
  const letter = (side ?? '').toUpperCase();
  const value = readDecimal(field ?? '');
  if (!(value >= 0 && value <= 180)) return NaN;
  return letter === positive ? value : letter === negative ? -value : NaN;
}

/** A speed [m/s] with the letter of its unit: K km/h, M m/s, N knots, S statute miles an hour. */
function speed(field: string | undefined, unit: string | undefined): number {
  const value = readDecimal(field ?? '');
  if (!(value >= 0 && value < 1000)) return NaN;
  const letter = (unit ?? '').toUpperCase();
  if (letter === 'N') return fromKnots(value);
  if (letter === 'M') return value;
  if (letter === 'K') return value * KILOMETRE_PER_HOUR;
  return letter === 'S' ? value * MILE_PER_HOUR : NaN;
}

/** The first speed given among pairs of value and unit that begin at `at`. */
function firstSpeed(f: readonly string[], at: number): number {
  for (let k = at; k + 1 < f.length; k += 2) {
    const value = speed(f[k], f[k + 1]);
    if (!Number.isNaN(value)) return value;
  }
  return NaN;
}

/** What is known of some values; nothing when none is. */
function valuesOf(values: Values): Reading {
  for (const value of Object.values(values)) if (!Number.isNaN(value)) return { is: 'values', values };
  return NOTHING;
}

const mode = (f: readonly string[], at: number): string => (f[at] ?? '').trim().toUpperCase();

function rmc(f: readonly string[]): Reading {
  const day = dayOf(f[8] ?? '');
  if (!/^[AD]$/i.test(f[1] ?? '') || mode(f, 11) === 'N') return fault(NO_FIX, day);
  if ((f[0] ?? '') === '') return fault('no time', day);
  const values = {
    sog: speed(f[6], 'N'),
    cog: course(f[7]),
    variation: sided(f[9], f[10], 'E', 'W'),
  };
  return fixOf(f, 2, f[0], values, mode(f, 11) === 'S', day);
}

function gga(f: readonly string[]): Reading {
  const quality = mode(f, 5);
  if (quality === '0') return fault(NO_FIX);
  if ((f[0] ?? '') === '') return fault('no time');
  return fixOf(f, 1, f[0], {}, quality === '8');
}

function gll(f: readonly string[]): Reading {
  if (mode(f, 5) === 'V' || mode(f, 6) === 'N') return fault(NO_FIX);
  return fixOf(f, 0, f[4] ?? '', {}, mode(f, 6) === 'S');
}

function vtg(f: readonly string[]): Reading {
  if (mode(f, 8) === 'N') return fault(NO_FIX);
  const lettered = mode(f, 1) === 'T' || mode(f, 3) === 'M' || mode(f, 5) === 'N' || mode(f, 7) === 'K';
  if (lettered) return valuesOf({ cog: course(f[0]), sog: firstSpeed(f, 4) });
  const kn = speed(f[2], 'N');
  return valuesOf({ cog: course(f[0]), sog: Number.isNaN(kn) ? speed(f[3], 'K') : kn });
}

function zda(f: readonly string[]): Reading {
  const clock = clockOf(f[0] ?? '');
  if (Number.isNaN(clock)) return (f[0] ?? '') === '' ? NOTHING : fault('time not understood');
  return {
    is: 'clock',
    clock,
    day: daysFromCivil(readDecimal(f[3] ?? ''), readDecimal(f[2] ?? ''), readDecimal(f[1] ?? '')),
  };
}

/** Sensor heading with the deviation added where it is logged; variation beside it. */
function hdg(f: readonly string[]): Reading {
  const deviation = sided(f[1], f[2], 'E', 'W');
  return valuesOf({
    headingMagnetic: wrap360(angle(f[0]) + (Number.isNaN(deviation) ? 0 : deviation)),
    variation: sided(f[3], f[4], 'E', 'W'),
  });
}

function vhw(f: readonly string[]): Reading {
  return valuesOf({ heading: course(f[0]), headingMagnetic: course(f[2]), stw: firstSpeed(f, 4) });
}

/** `T` is the true wind off the bow as a device computed it: kept as an angle, its speed not. */
function mwv(f: readonly string[]): Reading {
  if (mode(f, 4) === 'V') return fault('status V: reading not valid');
  const off = wrap180(angle(f[0]));
  if (mode(f, 1) === 'T') return valuesOf({ twa: off });
  return mode(f, 1) === 'R' ? valuesOf({ awa: off, aws: speed(f[2], f[3]) }) : NOTHING;
}

function mwd(f: readonly string[]): Reading {
  return valuesOf({ twd: course(f[0]), twdMagnetic: course(f[2]), tws: firstSpeed(f, 4) });
}

const DECODERS: Readonly<Record<string, (fields: readonly string[]) => Reading>> = {
  RMC: rmc,
  GGA: gga,
  GLL: gll,
  VTG: vtg,
  ZDA: zda,
  HDG: hdg,
  HDT: (f) => valuesOf({ heading: course(f[0]) }),
  HDM: (f) => valuesOf({ headingMagnetic: course(f[0]) }),
  VHW: vhw,
  MWV: mwv,
  MWD: mwd,
  VWR: (f) => valuesOf({ awa: sided(f[0], f[1], 'R', 'L'), aws: firstSpeed(f, 2) }),
  VWT: (f) => valuesOf({ twa: sided(f[0], f[1], 'R', 'L') }),
};

/** What the sentence of a formatter says; nothing when we do not read that one. */
export function decode(formatter: string, fields: () => readonly string[]): Reading {
  return Object.hasOwn(DECODERS, formatter) ? DECODERS[formatter](fields()) : NOTHING;
}
