/**
 * Air: density, viscosity, and how the wind grows with height over water.
 */

/** Von Karman's constant as used in the wind profile. */
export const KARMAN = 0.4;
/** Standard acceleration of gravity. [m/s2] (3rd CGPM, 1901) */
export const GRAVITY = 9.80665;
/** Roughness length of open sea with a fetch of 5 km or more. [m] (WMO-No. 8, Part I, chapter 5, class 1) */
export const OPEN_WATER_ROUGHNESS = 0.0002;
/** Specific gas constant of dry air. [J/(kg K)] (ISO 2533) */
const GAS_CONSTANT = 287.05287;

/**
 * Factor that takes a wind speed from one height to another by the logarithmic profile of neutral air.
 *
 *     U2/U1 = ln(z2/z0) / ln(z1/z0)
 *
 * Good to a few per cent within the lowest 20 m in neutral air. Stable air (warm wind over cold water) shears more. z0
 * is uncertain on a lake or in a harbour: 0.0002 m (open water) against 0.005 m changes 2 m -> 6 m by 6 %.
 *
 * @param fromHeight Height the wind was measured at. [m, > z0]
 * @param toHeight   Height wanted. [m, > z0]
 * @param z0         Roughness length. [m]
 * @returns Factor on the speed; NaN for heights at or below z0.
 * @example
 * logLawFactor(3, 3); // => 1
 *
 * [1] WMO-No. 8, Guide to Instruments and Methods of Observation, Part I, chapter 5.
 */
export function logLawFactor(fromHeight: number, toHeight: number, z0 = OPEN_WATER_ROUGHNESS): number {
  if (!(fromHeight > z0 && toHeight > z0 && z0 > 0)) return NaN;
  return Math.log(toHeight / z0) / Math.log(fromHeight / z0);
}

/**
 * Change of the log-law factor for a change of ln z0 by one: to carry the doubt about the roughness into a wind speed.
 *
 * @returns d factor / d ln z0.
 */
export function logLawSlope(fromHeight: number, toHeight: number, z0 = OPEN_WATER_ROUGHNESS): number {
  const from = Math.log(fromHeight / z0);
  const to = Math.log(toHeight / z0);
  return (to - from) / (from * from);
}

/**
 * Factor between heights by the power law, an alternative over the sea in near neutral air.
 *
 *     U2/U1 = (z2/z1)^p
 *
 * @param p Exponent; 0.11 over the sea.
 * @returns Factor on the speed.
 *
 * [1] S. A. Hsu, E. A. Meindl, D. B. Gilhousen, J. Appl. Meteorol. 33(6), 1994, 757-765.
 */
export function powerLawFactor(fromHeight: number, toHeight: number, p = 0.11): number {
  return Math.pow(toHeight / fromHeight, p);
}

export interface SeaProfile {
  /** Friction velocity. [m/s] */
  readonly friction: number;
  /** Roughness length. [m] */
  readonly z0: number;
  /** Drag coefficient of the sea at 10 m. */
  readonly cd10: number;
}

/**
 * Roughness of the sea under a given wind, Charnock's relation with the smooth-flow term.
 *
 *     z0 = a u*^2/g + 0.11 nu/u*        U10 = u* ln(10/z0) / kappa
 *
 * @param u10        Wind speed at 10 m. [m/s, > 0.5]
 * @param charnock   Charnock's constant a; 0.011 up to 10 m/s, near 0.018 at 18 m/s in recent use.
 * @param smoothFlow Keep the viscous term.
 * @returns Friction velocity [m/s], roughness [m], drag coefficient at 10 m.
 *
 * [1] H. Charnock, Wind stress on a water surface, Q. J. R. Meteorol. Soc. 81, 1955, 639-640.
 */
export function charnockProfile(u10: number, charnock = 0.011, smoothFlow = true): SeaProfile {
  const ν = 1.5e-5;
  let friction = 0.035 * u10;
  let z0 = NaN;
  // Fixed-point iteration: each round shrinks the error about tenfold, so 60 leave rounding only.
  for (let round = 0; round < 60; round++) {
    z0 = (charnock * friction * friction) / GRAVITY + (smoothFlow ? (0.11 * ν) / friction : 0);
    friction = (KARMAN * u10) / Math.log(10 / z0);
  }
  return { friction, z0, cd10: (friction / u10) ** 2 };
}

/**
 * Density of dry air.
 *
 *     rho = p / (R T), R = 287.05287 J/(kg K)
 *
 * @param celsius  Temperature. [deg C]
 * @param pressure Pressure. [hPa]
 * @returns Density. [kg/m3]
 *
 * [1] ISO 2533, Standard Atmosphere (constant from memory).
 */
export function dryAirDensity(celsius = 15, pressure = 1013.25): number {
  return (pressure * 100) / (GAS_CONSTANT * (celsius + 273.15));
}

/**
 * Density of moist air: vapour of pressure e is lighter than the dry air it displaces.
 *
 *     rho = (p - e)/(R T) + e/(R_v T), e = humidity x 6.112 exp(17.62 t / (243.12 + t)) hPa, R_v = R/0.62198
 *
 * @param celsius  Temperature. [deg C, -20..50]
 * @param pressure Pressure. [hPa]
 * @param humidity Relative humidity, 0 to 1.
 * @returns Density. [kg/m3]
 *
 * [1] Magnus coefficients of WMO-No. 8, Part I, annex 4.B.
 */
export function moistAirDensity(celsius: number, pressure: number, humidity: number): number {
  const vapour = humidity * 6.112 * Math.exp((17.62 * celsius) / (243.12 + celsius));
  return dryAirDensity(celsius, pressure - (1 - 0.62198) * vapour);
}

/**
 * Dynamic viscosity of air by Sutherland's formula.
 *
 *     mu = 1.458e-6 T^1.5 / (T + 110.4)
 *
 * @param celsius Temperature. [deg C]
 * @returns Viscosity. [Pa s]
 *
 * [1] ISO 2533, Standard Atmosphere (constants from memory).
 */
export function airViscosity(celsius = 15): number {
  const kelvin = celsius + 273.15;
  return (1.458e-6 * Math.pow(kelvin, 1.5)) / (kelvin + 110.4);
}

/** Lower bounds of Beaufort forces 0 to 12. [kn] (WMO-No. 8, table of the Beaufort scale) */
const BEAUFORT_FROM = [0, 1, 4, 7, 11, 17, 22, 28, 34, 41, 48, 56, 64] as const;

/**
 * Beaufort force of a wind at 10 m.
 *
 * @param knots Wind speed, ten-minute mean. Rounded to whole knots first, as the table is in whole knots. [kn]
 * @returns Force, 0 to 12; NaN for NaN.
 * @example
 * beaufort(12); // => 4
 */
export function beaufort(knots: number): number {
  if (Number.isNaN(knots)) return NaN;
  const whole = Math.round(knots);
  let force = 0;
  while (force < 12 && whole >= BEAUFORT_FROM[force + 1]) force++;
  return force;
}
