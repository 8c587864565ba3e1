import { describe, expect, it } from 'vitest';
import { apparentBy, windBySpeed } from '../../src/estimate/wind-by-speed.js';
import { builtInBoat } from '../../src/physics/built-in.js';
import { modelOf } from '../../src/steps/boat-models.js';

const { curve } = modelOf(builtInBoat('single-hander')!);
const exact = (value: number): { value: number; se: number; sys: number } => ({ value, se: 0, sys: 0 });
const inverted = (tws: number, share: number) => windBySpeed(curve, exact(curve.speed(46, tws)), exact(46), share)!;

describe('the wind by the boat’s speed', () => {
  it.each([2.5, 3.5, 4.5])('is the wind %d m/s where the model is right and speed grows with the wind', (tws) => {
    const { value, se } = inverted(tws, 0.01);
    expect(Math.abs(value - tws)).toBeLessThan(0.15);
    expect(se).toBeLessThan(0.2);
    expect(se).toBeGreaterThan(0.01);
  });

  it('is as unsure as the model: twice the error, twice the doubt', () => {
    expect(inverted(3, 0.04).se / inverted(3, 0.02).se).toBeCloseTo(2, 0);
  });

  it('is doubtful where the boat is overpowered, and says so', () => {
    const { value, se } = inverted(9, 0.08);
    expect(se).toBeGreaterThan(1);
    expect(Math.abs(value - 9)).toBeLessThan(3 * se);
  });

  it('counts an unsure course angle', () => {
    const speed = exact(curve.speed(46, 3.5));
    const sure = windBySpeed(curve, speed, exact(46), 0.02)!;
    expect(windBySpeed(curve, speed, { value: 46, se: 2, sys: 0 }, 0.02)!.se).toBeGreaterThan(1.2 * sure.se);
  });

  it('makes a triangle that closes, as unsure as the wind', () => {
    const wind = { value: 5, se: 1, sys: 0 };
    const { aws, beta } = apparentBy(wind, { speed: exact(2.5), gamma: exact(45) });
    // By hand: 5 sin 45 = 3.5355 across, 2.5 + 3.5355 ahead.
    expect(aws.value).toBeCloseTo(6.9952, 3);
    expect(beta.value).toBeCloseTo(30.361, 2);
    expect(aws.se).toBeCloseTo(0.965, 2);
    expect(beta.se).toBeGreaterThan(1);
  });

  it('is none for a speed that no wind gives', () => {
    expect(windBySpeed(curve, exact(9), exact(46), 0.02)).toBeNull();
    expect(windBySpeed(curve, exact(NaN), exact(46), 0.02)).toBeNull();
  });
});
