/**
 * Water: density and viscosity, and the friction of a plate in it.
 */

export interface Fluid {
  /** Density. [kg/m3] */
  readonly density: number;
  /** Kinematic viscosity. [m2/s] */
  readonly viscosity: number;
}

/**
 * Water by temperature, [deg C]: density [kg/m3] and kinematic viscosity [m2/s].
 * ITTC Recommended Procedure 7.5-02-01-03 (2011), tables 1 and 3; sea water of absolute salinity 35.16504 g/kg.
 */
export const WATER = {
  fresh15: { density: 999.1026, viscosity: 1.1386e-6 },
  fresh20: { density: 998.2072, viscosity: 1.0034e-6 },
  sea15: { density: 1026.021, viscosity: 1.1892e-6 },
  sea20: { density: 1024.8103, viscosity: 1.0508e-6 },
} as const satisfies Record<string, Fluid>;

export type WaterKind = keyof typeof WATER;

/** Density of sea water by temperature, every 5 deg C from 5. [kg/m3] The table named above. */
const SEA_DENSITY = [1027.7225, 1027.0, 1026.021, 1024.8103, 1023.3873, 1021.7694] as const;

/**
 * Density of sea water.
 *
 * @param celsius Temperature. [deg C, 5 to 30; NaN outside]
 * @returns Density, good to 0.05 kg/m3 between the table's rows (parabola through the nearest three). [kg/m3]
 *
 * [1] ITTC Recommended Procedure 7.5-02-01-03, 2011, table 3.
 */
export function seaWaterDensity(celsius: number): number {
  if (!(celsius >= 5 && celsius <= 30)) return NaN;
  const i = Math.min(Math.max(Math.round((celsius - 5) / 5), 1), SEA_DENSITY.length - 2);
  const t = (celsius - 5) / 5 - i;
  const [below, here, above] = [SEA_DENSITY[i - 1], SEA_DENSITY[i], SEA_DENSITY[i + 1]];
  return here + (t * (above - below)) / 2 + (t * t * (above - 2 * here + below)) / 2;
}

/** Below this Reynolds number the correlation line is held constant: it is singular at 100 and meant for ships. */
const LEAST_REYNOLDS = 1e5;

/**
 * Friction coefficient of the ITTC 1957 correlation line.
 *
 *     C_F = 0.075 / (log10 Re - 2)^2
 *
 * @param reynolds Reynolds number on the wetted length; below 1e5 the value at 1e5 is used.
 * @returns Friction per wetted area and dynamic pressure.
 * @example
 * frictionCoefficient(1e7); // => 0.003
 *
 * [1] 8th International Towing Tank Conference, Madrid 1957; ITTC Recommended Procedure 7.5-02-02-01.
 */
export function frictionCoefficient(reynolds: number): number {
  const logRe = Math.log10(Math.max(reynolds, LEAST_REYNOLDS));
  return 0.075 / (logRe - 2) ** 2;
}

/**
 * Friction of a smooth surface in turbulent flow.
 *
 *     R_F = 1/2 rho V^2 S C_F(V L / nu)
 *
 * @param speed  Speed through the water. [m/s]
 * @param length Wetted length. [m]
 * @param area   Wetted area. [m2]
 * @returns Resistance. [N]
 */
export function frictionResistance(speed: number, length: number, area: number, water: Fluid): number {
  const pressure = 0.5 * water.density * speed * speed;
  return pressure * area * frictionCoefficient((speed * length) / water.viscosity);
}
