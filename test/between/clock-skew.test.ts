import { describe, expect, it } from 'vitest';
import { clockSkew, type ClockSkew } from '../../src/between/clock-skew.js';
import { clockCorrections } from '../../src/between/common-clock.js';
import { impliedSwings } from '../../src/between/implied-wind.js';
import { sailBeat, type Beat } from './two-boats.js';

function skews(count: number, clock: number, rest: Partial<Beat> = {}): ClockSkew[] {
  return Array.from({ length: count }, (_, k) => {
    const [first, second] = sailBeat({ seed: 700 + k, minutes: 40, boats: [{}, {}], clock: [0, clock], ...rest });
    return clockSkew(first, second);
  });
}

describe('clocks that agree', () => {
  it('are never corrected, close together or far apart, over one beat or three', () => {
    for (const minutes of [12, 40])
      for (const apart of [20, 200])
        for (const skew of skews(15, 0, { minutes, apart, decorrelation: 300 }))
          expect(skew).toMatchObject({ sure: false, correction: 0 });
  });
});

describe('clocks 18 s apart over 40 minutes upwind', () => {
  const found = skews(20, 18);
  it('are found in at least 12 of 20, within a few seconds', () => {
    const sure = found.filter((skew) => skew.sure);
    expect(sure.length).toBeGreaterThanOrEqual(12);
    for (const { correction } of sure) expect(Math.abs(correction + 18)).toBeLessThanOrEqual(6);
    expect(sure.filter(({ correction }) => correction === -18).length).toBeGreaterThanOrEqual(sure.length / 2);
  });
  it('with an error that is stated about right', () => {
    const ratio = Math.sqrt(found.reduce((sum, { skew, se }) => sum + ((skew - 18) / se) ** 2, 0) / found.length);
    expect(ratio).toBeGreaterThan(0.4);
    expect(ratio).toBeLessThan(1.5);
  });
  it('cannot be told in wind that is another wind at the other boat, and are left alone', () => {
    for (const { sure, correction } of skews(10, 18, { apart: 290, decorrelation: 150 })) {
      expect(sure).toBe(false);
      expect(correction).toBe(0);
    }
  });
});

describe('clocks an hour apart', () => {
  it('are set right by where the boats were', () => {
    for (const clock of [3600, -7200]) {
      for (const skew of skews(6, clock, { minutes: 25 })) {
        expect(skew.sure).toBe(true);
        expect(Math.abs(skew.correction + clock)).toBeLessThanOrEqual(8);
        expect(Math.abs(skew.skew - clock)).toBeLessThan(12);
      }
    }
  });
  it('are not guessed at when the boats never met', () => {
    const [first, second] = sailBeat({ seed: 1, minutes: 25, boats: [{}, {}], clock: [0, 3600] });
    const elsewhere = { ...second, x: second.x.map((x) => x + 5000) };
    expect(clockSkew(first, elsewhere)).toMatchObject({ sure: false, correction: 0 });
  });
});

describe('swings read from a course', () => {
  it('turn with the wind on both tacks', () => {
    const [boat] = sailBeat({ seed: 2, minutes: 20, boats: [{}] });
    const swings = impliedSwings(boat);
    // The invented wind is about north: the direction it is given in, less the station's own wander of 2 degrees.
    let [n, aa, ab, bb] = [0, 0, 0, 0];
    swings.forEach((swing, i) => {
      if (Number.isNaN(swing)) return;
      const wind = ((boat.twd[i] + 180) % 360) - 180;
      n++;
      [aa, ab, bb] = [aa + swing * swing, ab + swing * wind, bb + wind * wind];
    });
    expect(n).toBeGreaterThan(300);
    expect(ab / Math.sqrt(aa * bb)).toBeGreaterThan(0.6);
  });
});

describe('a fleet on several clocks', () => {
  const fleet = (clock: number[]): [string, number][] =>
    clockCorrections(sailBeat({ seed: 9, minutes: 25, boats: [{}, {}, {}, {}], clock })).map(({ name, correction }) => [
      name,
      Math.round(correction / 60),
    ]);
  it('is put on that of most: the odd one out is corrected, were it the first', () => {
    expect(fleet([0, 0, 0, 0])).toEqual([]);
    expect(fleet([0, 0, 3600, 0])).toEqual([['Boat 3', -60]]);
    expect(fleet([-7200, 0, 0, 0])).toEqual([['Boat 1', 120]]);
    expect(fleet([0, 3600, 0, -3600])).toEqual([
      ['Boat 2', -60],
      ['Boat 4', 60],
    ]);
  });
});
