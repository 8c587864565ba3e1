import { describe, expect, it } from 'vitest';
import {
  airViscosity,
  beaufort,
  charnockProfile,
  dryAirDensity,
  logLawFactor,
  logLawSlope,
  moistAirDensity,
  powerLawFactor,
} from '../../src/physics/air.js';
import { frictionCoefficient, frictionResistance, seaWaterDensity, WATER } from '../../src/physics/water.js';

describe('wind over height', () => {
  // 1.5->10, 2->10, 3->10, 4->10, 2->6 m. Roughness classes of WMO-No. 8, Part I, ch. 5; factors worked out apart.
  const heights = [
    [1.5, 10],
    [2, 10],
    [3, 10],
    [4, 10],
    [2, 6],
  ] as const;

  it('follows the log law', () => {
    for (const [z0, ...factors] of [
      [0.0001, 1.197292, 1.162512, 1.116789, 1.08647, 1.110932],
      [0.0002, 1.212618, 1.174743, 1.125208, 1.092522, 1.11928],
      [0.001, 1.25941, 1.211743, 1.150377, 1.110476, 1.144537],
      [0.005, 1.332607, 1.268622, 1.188211, 1.137075, 1.183363],
      [0.03, 1.484946, 1.383226, 1.261439, 1.187271, 1.261593],
    ] as const) {
      heights.forEach(([from, to], i) => expect(logLawFactor(from, to, z0)).toBeCloseTo(factors[i], 5));
    }
  });

  it('follows the power law (Hsu, Meindl & Gilhousen 1994: 0.11 at sea, 0.14 on land)', () => {
    for (const [p, ...factors] of [
      [0.11, 1.232055, 1.193677, 1.141607, 1.106047, 1.128453],
      [0.14, 1.304209, 1.252725, 1.183595, 1.136872, 1.166264],
    ] as const) {
      heights.forEach(([from, to], i) => expect(powerLawFactor(from, to, p)).toBeCloseTo(factors[i], 5));
    }
  });

  it('is undefined at or below the roughness, and its slope is the derivative', () => {
    expect(logLawFactor(0.0001, 10)).toBeNaN();
    const h = 1e-5;
    const difference = (logLawFactor(2, 6, 0.0002 * Math.exp(h)) - logLawFactor(2, 6, 0.0002 * Math.exp(-h))) / (2 * h);
    expect(logLawSlope(2, 6, 0.0002)).toBeCloseTo(difference, 8);
  });

  it("follows Charnock's relation", () => {
    // a = 0.011 with the smooth term; U10, u*, z0, CD10, U2/U10. Solved apart, numerically.
    for (const [u10, friction, z0, cd, at2] of [
      [3, 0.09371, 2.7458e-5, 9.7573e-4, 0.874316],
      [5, 0.160657, 3.9222e-5, 1.0324e-3, 0.870716],
      [8, 0.275764, 9.1283e-5, 1.1882e-3, 0.861305],
      [10, 0.360131, 1.5006e-4, 1.2969e-3, 0.855098],
      [15, 0.591869, 3.9573e-4, 1.5569e-3, 0.841237],
    ] as const) {
      const profile = charnockProfile(u10);
      expect(profile.friction).toBeCloseTo(friction, 5);
      expect(profile.z0 / z0).toBeCloseTo(1, 3);
      expect(profile.cd10 / cd).toBeCloseTo(1, 4);
      expect(logLawFactor(10, 2, profile.z0)).toBeCloseTo(at2, 5);
    }
    // a = 0.0144 (Garratt 1977, from memory), without it.
    const rough = charnockProfile(10, 0.0144, false);
    expect(rough.friction).toBeCloseTo(0.369838, 5);
    expect(rough.z0 / 2.0085e-4).toBeCloseTo(1, 3);
  });
});

describe('Beaufort', () => {
  it('has the bounds of WMO-No. 8, tables 5.1 and 5.2, in knots', () => {
    const upper = [0.4, 3, 6, 10, 16, 21, 27, 33, 40, 47, 55, 63];
    upper.forEach((knots, force) => {
      expect(beaufort(knots)).toBe(force);
      expect(beaufort(Math.floor(knots) + 1)).toBe(force + 1);
    });
    expect(beaufort(100)).toBe(12);
    expect(beaufort(NaN)).toBeNaN();
  });
});

describe('air', () => {
  it('has the density of the standard atmosphere (ISO 2533; constants from memory)', () => {
    for (const [t, p, rho] of [
      [15, 1013.25, 1.225],
      [10, 1013.25, 1.246632],
      [20, 1013.25, 1.204106],
      [25, 1013.25, 1.183913],
      [30, 1013.25, 1.164386],
      [15, 1000, 1.208981],
    ] as const) {
      expect(dryAirDensity(t, p)).toBeCloseTo(rho, 5);
    }
    expect(moistAirDensity(20, 1013.25, 0.7)).toBeCloseTo(1.196772, 4);
    expect(moistAirDensity(25, 1013.25, 0.8)).toBeCloseTo(1.172748, 4);
    expect(airViscosity(15)).toBeCloseTo(1.78938e-5, 9);
    expect(airViscosity(15) / dryAirDensity()).toBeCloseTo(1.460719e-5, 9);
  });
});

describe('water', () => {
  it('has the densities of ITTC 7.5-02-01-03 (2011)', () => {
    for (const [t, rho] of [
      [5, 1027.7225],
      [8, 1027.3214],
      [10, 1027.0],
      [12, 1026.6376],
      [14, 1026.236],
      [16, 1025.7967],
      [18, 1025.321],
      [22, 1024.2656],
      [23, 1023.9808],
      [24, 1023.6881],
      [25, 1023.3873],
      [28, 1022.4389],
      [30, 1021.7694],
    ] as const) {
      expect(Math.abs(seaWaterDensity(t) - rho), `${t} deg C`).toBeLessThan(0.05);
    }
    expect(seaWaterDensity(15)).toBe(WATER.sea15.density);
    expect(seaWaterDensity(20)).toBe(WATER.sea20.density);
    expect(seaWaterDensity(31)).toBeNaN();
    // nu = mu / rho of the same tables.
    expect(WATER.fresh15.viscosity).toBeCloseTo(0.001138 / 999.1026, 9);
    expect(WATER.sea15.viscosity).toBeCloseTo(0.00122 / 1026.021, 9);
  });

  it('rubs as the ITTC 1957 line says', () => {
    // 1e6 = 0.075/16, 1e7 = 0.075/25 and 1e8 = 0.075/36 are exact by hand.
    for (const [re, cf] of [
      [1e5, 8.333333e-3],
      [5e5, 5.481503e-3],
      [1e6, 4.6875e-3],
      [2e6, 4.054304e-3],
      [5e6, 3.39669e-3],
      [1e7, 3.0e-3],
      [1e8, 2.083333e-3],
      [1e9, 1.530612e-3],
    ] as const) {
      expect(frictionCoefficient(re)).toBeCloseTo(cf, 8);
      // An independent turbulent line, Prandtl-Schlichting 0.455/(log10 Re)^2.58, lies within 18 %.
      const other = 0.455 / Math.log10(re) ** 2.58;
      expect(Math.abs(frictionCoefficient(re) / other - 1)).toBeLessThan(0.18);
    }
    expect(frictionCoefficient(100)).toBe(frictionCoefficient(1e5));
  });

  it('drags a square metre of a 3.8 m hull in sea water of 15 deg C by so many newtons', () => {
    for (const [speed, newtons] of [
      [1.0, 1.8962],
      [1.5, 3.9515],
      [2.0, 6.6644],
      [2.5, 10.0055],
      [3.0, 13.9535],
    ] as const) {
      expect(frictionResistance(speed, 3.8, 1, WATER.sea15)).toBeCloseTo(newtons, 3);
    }
  });
});
