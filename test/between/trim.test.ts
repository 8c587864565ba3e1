import { describe, expect, it } from 'vitest';
import type { BetweenBoat, TrimForces } from '../../src/between/boat.js';
import { comparePair, comparePairs, type PairComparison } from '../../src/between/pairs.js';
import { leewayMean, sheetingMean } from '../../src/between/trim.js';
import { VERDICT_LEVEL } from '../../src/between/verdicts.js';
import { studentInterval } from '../../src/math/student.js';
import { sailBeat, type Beat, type BoatTruth } from './two-boats.js';

function compareSeeds(count: number, first: BoatTruth, rest: Partial<Beat> = {}): PairComparison[] {
  return Array.from({ length: count }, (_, k) => {
    const beat = { minutes: 12, boats: [first, {}], instruments: true, ...rest, seed: k + 1 };
    const [a, b] = sailBeat(beat);
    return comparePair(a, b);
  });
}

const leeway = ({ trim, blocks }: PairComparison) => leewayMean(trim.leeway, blocks)!;

function verdicts(pairs: readonly PairComparison[], sign?: 1 | -1): number {
  const shown = pairs.map(leeway).filter(({ p }) => p <= VERDICT_LEVEL.leeway);
  return shown.filter(({ mean }) => !sign || sign * mean.value > 0).length;
}

describe('one beat of 12 minutes, two boats with compass and vane', () => {
  const more = compareSeeds(60, { leeway: 2 });
  const alike = compareSeeds(100, {});

  it('2 degrees more leeway are shown in at least 8 of 10, and never the wrong way', () => {
    expect(verdicts(more, 1)).toBeGreaterThanOrEqual(48);
    expect(verdicts(more, -1)).toBe(0);
    const mean = more.reduce((sum, pair) => sum + leeway(pair).mean.value, 0) / more.length;
    expect(mean).toBeGreaterThan(1.85);
    expect(mean).toBeLessThan(2.15);
  });
  it('boats alike are told apart in at most 6 of 100, speed and height being what they may', () => {
    expect(verdicts(alike)).toBeLessThanOrEqual(6);
    expect(verdicts(compareSeeds(40, { speed: 1.03, higher: 2 }))).toBeLessThanOrEqual(3);
  });
  it('95 % intervals cover what was sailed in 90 to 99 of 100', () => {
    const inside = (pairs: readonly PairComparison[], truth: number): number =>
      pairs.map(leeway).filter(({ mean, sys }) => {
        const half = studentInterval(0.95, mean.freedom) * Math.hypot(mean.se, sys);
        return Math.abs(mean.value - truth) <= half;
      }).length;
    const covered = inside(alike, 0) + inside(more, 2);
    expect(covered).toBeGreaterThanOrEqual(144);
    expect(covered).toBeLessThanOrEqual(159);
  });
});

const [first, second] = sailBeat({ seed: 4, minutes: 24, boats: [{ leeway: 2 }, {}], instruments: true });
const turned = (angle: Float64Array, by: number): Float64Array => angle.map((a) => (a + by + 360) % 360);
/** A boat whose heading, and only that, is turned by so much. */
const compassOff = (boat: BetweenBoat, by: number): BetweenBoat => {
  const { heading } = boat.trim!;
  return { ...boat, trim: { heading: { ...heading!, angle: turned(heading!.angle, by) } } };
};
const only = (boat: BetweenBoat, ...keys: ('heading' | 'masthead')[]): BetweenBoat => ({
  ...boat,
  trim: Object.fromEntries(keys.map((key) => [key, boat.trim![key]])),
});

describe('what the two boats share', () => {
  it('a compass turned alike on both, a station a few degrees out, wind a tenth too strong: next to nothing is left', () => {
    const was = leeway(comparePair(only(first, 'heading'), only(second, 'heading'))).mean.value;
    const both = leeway(comparePair(compassOff(first, 3), compassOff(second, 3))).mean.value;
    expect(both).toBeCloseTo(was, 9);
    const vane = [only(first, 'masthead'), only(second, 'masthead')];
    const plain = leeway(comparePair(vane[0], vane[1])).mean.value;
    const [a, b] = vane.map((boat) => ({
      ...boat,
      twd: turned(boat.twd, 4),
      tws: boat.tws.map((tws) => 1.1 * tws),
    }));
    expect(Math.abs(leeway(comparePair(a, b)).mean.value - plain)).toBeLessThan(0.1);
  });
  it('an offset of one compass counts by how unevenly the tacks were sailed', () => {
    const heading = [only(first, 'heading'), only(second, 'heading')] as const;
    const pair = comparePair(...heading);
    const off = comparePair(compassOff(first, 1), heading[1]);
    const seconds = pair.blocks.reduce((sum, { seconds: s }) => sum + s, 0);
    const uneven = pair.blocks.reduce((sum, { tack, seconds: s }) => sum + tack * s, 0) / seconds;
    expect(leeway(off).mean.value - leeway(pair).mean.value).toBeCloseTo(uneven, 9);
    const onStarboard = leewayMean(pair.trim.leeway, pair.blocks, ({ tack }) => tack === 1)!;
    expect(onStarboard.sys).toBeGreaterThan(leeway(pair).sys);
    // Two compasses, 0.3 degrees of offset and 0.2 of noise each.
    expect(onStarboard.sys).toBeCloseTo(Math.hypot(0.3, 0.3, 0.2, 0.2), 9);
  });
});

/** A boat file in which leeway falls by 0.2 degrees a degree of sheeting, with a wide flat prior about 12 degrees. */
function toyForces(changes: Partial<TrimForces> = {}): TrimForces {
  const points = Array.from({ length: 241 }, (_, k) => ({ sheeting: -48 + k / 2, weight: 1 })).map((point) => ({
    ...point,
    weight: Math.exp(-0.5 * ((point.sheeting - 12) / 8) ** 2),
  }));
  return {
    file: 'toy',
    leewayShare: 0,
    leeway: () => ({ value: 4, open: 0.3 }),
    leewayAt: (_, sheeting) => 4 - 0.2 * (sheeting - 12),
    sheetingPrior: () => ({ mean: 12, sd: 8, points }),
    ...changes,
  };
}
const withForces = (boat: BetweenBoat, changes: Partial<TrimForces> = {}): BetweenBoat => ({
  ...boat,
  trim: { ...boat.trim, forces: toyForces(changes) },
});

describe('sheeting', () => {
  const pairOf = (changes: Partial<TrimForces>): PairComparison =>
    comparePair(withForces(first, changes), withForces(second, changes));

  it('is the posterior of two booms, in closed form where all is straight', () => {
    const pair = pairOf({});
    const { mean, sys } = sheetingMean(pair.trim.sheeting, pair.blocks)!;
    const told = leeway(pair);
    // Leeway to sheeting: -5 degrees a degree, error 5 times that of the leeway; normal prior of 8 sqrt 2.
    const [data, prior] = [5 * Math.hypot(told.mean.se, told.sys), 8 * Math.SQRT2];
    const shrunk = prior ** 2 / (prior ** 2 + data ** 2);
    expect(mean.value).toBeCloseTo(-5 * told.mean.value * shrunk, 1);
    expect(Math.hypot(mean.se, sys)).toBeCloseTo(Math.sqrt(shrunk) * data, 1);
    expect(mean.se).toBeCloseTo(5 * shrunk * told.mean.se, 1);
  });
  it('what is wrong with a file that both boats share is less in the difference than with a file each', () => {
    const one = sheetingMean(pairOf({ leewayShare: 0.12 }).trim.sheeting, pairOf({}).blocks)!;
    const two = comparePair(
      withForces(first, { leewayShare: 0.12 }),
      withForces(second, { leewayShare: 0.12, file: 'another' }),
    );
    const each = sheetingMean(two.trim.sheeting, two.blocks)!;
    expect(one.sys).toBeLessThan(0.9 * each.sys);
  });
  it('is not told where leeway says little of it, or none of what the file has', () => {
    const reason = (changes: Partial<TrimForces>): string => pairOf(changes).trim.sheeting.reason;
    expect(reason({ leewayAt: () => 4 })).toMatch(/too little/);
    expect(reason({ leewayAt: (_, sheeting) => 9 - 0.2 * (sheeting - 12) })).toMatch(/boat file/);
    expect(reason({ sheetingPrior: () => null })).toMatch(/wind/);
  });
});

describe('a pair result', () => {
  const resultOf = (a: BetweenBoat, b: BetweenBoat) => comparePairs([a, b]).results[0];

  it('names the boat that makes more leeway, whichever comes first, and whose boom is in', () => {
    const there = resultOf(withForces(first), withForces(second));
    const back = resultOf(withForces(second), withForces(first));
    expect(there.more_leeway).toBe('Boat 1');
    expect(back.more_leeway).toBe('Boat 1');
    expect(back.leeway_difference_deg!.value).toBeCloseTo(-there.leeway_difference_deg!.value, 9);
    expect(there.leeway_difference_deg!.basis).toBe('measured');
    expect(there.leeway_ways!.map(({ way }) => way)).toEqual(['heading', 'masthead']);
    expect(there.leeway_ways!.reduce((sum, { weight }) => sum + weight, 0)).toBeCloseTo(1, 12);
    expect(there.sheeting_difference_deg!.value).toBeLessThan(0);
    expect(there.sheeting_difference_deg!.basis).toBe('inferred');
    expect(there.legs[0].leeway_difference_deg).toEqual(there.leeway_difference_deg);
    expect(there.notes).toEqual([]);
  });
  it('by the forces alone: told, never a verdict', () => {
    const forces = (boat: BetweenBoat, value: number): BetweenBoat => ({
      ...boat,
      trim: { forces: toyForces({ leeway: () => ({ value, open: 0.01 }) }) },
    });
    const pair = resultOf(forces(first, 6), forces(second, 4));
    expect(pair.leeway_difference_deg).toMatchObject({ value: 2, basis: 'inferred' });
    expect(pair.more_leeway).toBeNull();
    expect(pair.sheeting_difference_deg).toBeNull();
    expect(pair.notes.join()).toMatch(/by the forces alone/);
  });
  it('says why nothing is determined', () => {
    const notes = (a: BetweenBoat, b: BetweenBoat): string => resultOf(a, b).notes.join('; ');
    const bare = (boat: BetweenBoat): BetweenBoat => ({ ...boat, trim: {} });
    expect(notes(bare(first), bare(second))).toMatch(/leeway: not determined: neither log/);
    expect(notes(first, bare(second))).toMatch(/the log of Boat 2 does not tell it/);
    expect(notes(only(first, 'heading'), only(second, 'masthead'))).toMatch(/different instruments/);
    const calm = [first, second].map((boat) => ({
      ...boat,
      trim: { forces: toyForces() },
      tws: boat.tws.map(() => NaN),
    }));
    expect(notes(calm[0], calm[1])).toMatch(/wind’s speed/);
    const fast = { ...second, trim: { forces: toyForces({ leeway: () => null }) } };
    expect(notes(withForces(bare(first)), fast)).toMatch(/Boat 2 was faster than its boat file/);
    expect(resultOf(bare(first), bare(second)).leeway_difference_deg).toBeNull();
  });
  it('of six boats alike shows any leeway in at most 1 of 20 reports', () => {
    const any = (seed: number): boolean =>
      comparePairs(
        sailBeat({ seed, minutes: 12, boats: new Array<BoatTruth>(6).fill({}), instruments: true }),
      ).results.some(({ more_leeway }) => more_leeway !== null);
    expect(Array.from({ length: 20 }, (_, k) => 700 + k).filter(any).length).toBeLessThanOrEqual(1);
  });
});
