import { describe, expect, it } from 'vitest';
import { comparePair, comparePairs, type PairComparison } from '../../src/between/pairs.js';
import { splitDifference } from '../../src/between/blocks.js';
import { halfWidth } from '../../src/between/sampling.js';
import { VERDICT_LEVEL } from '../../src/between/verdicts.js';
import { toKnots } from '../../src/math/units.js';
import { sailBeat, type Beat, type BoatTruth } from './two-boats.js';

type Kind = 'vmg' | 'height' | 'speed';

function compareSeeds(count: number, beat: Omit<Beat, 'seed'>): PairComparison[] {
  return Array.from({ length: count }, (_, k) => {
    const [first, second] = sailBeat({ ...beat, seed: k + 1 });
    return comparePair(first, second);
  });
}

function verdicts(pairs: readonly PairComparison[], kind: Kind, sign?: 1 | -1): number {
  return pairs.filter((pair) => pair[kind].p <= VERDICT_LEVEL[kind] && (!sign || sign * pair[kind].value > 0)).length;
}

function covered(pairs: readonly PairComparison[], kind: Kind, truth: number): number {
  return pairs.filter((pair) => Math.abs(pair[kind].value - truth) <= halfWidth(pair[kind], 1 - VERDICT_LEVEL[kind]))
    .length;
}

const single = (first: BoatTruth, rest: Partial<Beat> = {}): Omit<Beat, 'seed'> => ({
  minutes: 12,
  boats: [first, {}],
  ...rest,
});

describe('the split of a difference in speed made good', () => {
  it('sums exactly, and is cos γ dv and -v sin γ dγ for small differences', () => {
    const [v, γ, dv, dγ] = [2.5, 0.75, 1e-4, 1e-4];
    const split = splitDifference({ v: v + dv / 2, γ: γ - dγ / 2 }, { v: v - dv / 2, γ: γ + dγ / 2 });
    expect(split.height + split.speed).toBe(split.vmg);
    expect(split.vmg).toBeCloseTo((v + dv / 2) * Math.cos(γ - dγ / 2) - (v - dv / 2) * Math.cos(γ + dγ / 2), 14);
    expect(split.speed).toBeCloseTo(Math.cos(γ) * dv, 10);
    expect(split.height).toBeCloseTo(v * Math.sin(γ) * dγ, 10);
  });
});

describe('one beat of 12 minutes, two boats', () => {
  const faster = compareSeeds(60, single({ speed: 1.03 }));
  const higher = compareSeeds(60, single({ higher: 2 }));
  const equal = compareSeeds(60, single({}));

  it('3 % of speed is shown in at least 8 of 10, and never the wrong way', () => {
    expect(verdicts(faster, 'vmg', 1)).toBeGreaterThanOrEqual(48);
    expect(verdicts(faster, 'vmg', -1)).toBe(0);
  });
  it('2 degrees of height are shown in the height part in at least 7 of 10', () => {
    expect(verdicts(higher, 'height', 1)).toBeGreaterThanOrEqual(42);
    expect(verdicts(higher, 'height', -1)).toBe(0);
    // At the best angle height is paid for in speed: next to nothing in speed made good.
    expect(verdicts(higher, 'vmg')).toBeLessThanOrEqual(6);
  });
  it('between equal boats at most 6 false verdicts of each kind in 60', () => {
    for (const kind of ['vmg', 'height', 'speed'] as const) expect(verdicts(equal, kind)).toBeLessThanOrEqual(6);
  });
  it('the difference found is the difference sailed', () => {
    // 3 % of 2.5 m/s at 43 degrees; the mean of 60 beats is within a tenth of it.
    const truth = 0.03 * 2.5 * Math.cos((43 * Math.PI) / 180);
    const mean = faster.reduce((total, pair) => total + pair.vmg.value, 0) / faster.length;
    expect(Math.abs(mean / truth - 1)).toBeLessThan(0.1);
    const angle = higher.reduce((total, pair) => total + pair.gamma.value, 0) / higher.length;
    expect(angle).toBeCloseTo(-2, 0);
  });
});

describe('intervals', () => {
  it('cover the truth in 90 to 99 of 100 beats', () => {
    const equal = compareSeeds(100, single({}));
    for (const kind of ['vmg', 'height', 'speed'] as const) {
      expect(covered(equal, kind, 0)).toBeGreaterThanOrEqual(90);
      expect(covered(equal, kind, 0)).toBeLessThanOrEqual(99);
    }
  });
  it('hold for helms that wander faster and slower', () => {
    for (const memory of [45, 120]) {
      const pairs = compareSeeds(60, single({}, { memory }));
      for (const kind of ['vmg', 'height', 'speed'] as const) expect(verdicts(pairs, kind)).toBeLessThanOrEqual(6);
    }
  });
  it('hold for three beats on end and for half a beat', () => {
    for (const minutes of [6, 36]) {
      const pairs = compareSeeds(60, single({}, { minutes }));
      for (const kind of ['vmg', 'height', 'speed'] as const) expect(verdicts(pairs, kind)).toBeLessThanOrEqual(6);
    }
  });
});

describe('boats far apart, in wind that is another wind after 300 m', () => {
  it('lose power and gain no false verdicts', () => {
    const close = compareSeeds(60, single({ speed: 1.03 }));
    for (const apart of [100, 200, 280]) {
      const rest = { apart, decorrelation: 300 };
      expect(verdicts(compareSeeds(60, single({ speed: 1.03 }, rest)), 'vmg', 1)).toBeLessThan(
        verdicts(close, 'vmg', 1),
      );
      const equal = compareSeeds(60, single({}, rest));
      for (const kind of ['vmg', 'height', 'speed'] as const) expect(verdicts(equal, kind)).toBeLessThanOrEqual(6);
    }
  });
});

describe('a fleet in one report', () => {
  const anyVerdict = (beat: Omit<Beat, 'boats'>): boolean =>
    comparePairs(sailBeat({ ...beat, boats: new Array<BoatTruth>(10).fill({}) })).results.some(
      ({ faster, higher, quicker }) => faster ?? higher ?? quicker,
    );
  it('of 10 equal boats shows any verdict in at most 1 of 20, close together or spread out', () => {
    const seeds = Array.from({ length: 20 }, (_, k) => 500 + k);
    expect(seeds.filter((seed) => anyVerdict({ seed, minutes: 12 })).length).toBeLessThanOrEqual(1);
    expect(
      seeds.filter((seed) => anyVerdict({ seed, minutes: 24, apart: 60, decorrelation: 300 })).length,
    ).toBeLessThanOrEqual(1);
  });
  it('of 10 finds the one that is 3 % faster over three beats', () => {
    const boats = [{ speed: 1.03 }, ...new Array<BoatTruth>(9).fill({})];
    const { results } = comparePairs(sailBeat({ seed: 3, minutes: 36, boats }));
    expect(results).toHaveLength(45);
    const named = results.filter(({ boats: [first] }) => first === 'Boat 1').map(({ faster }) => faster);
    expect(named.filter((name) => name === 'Boat 1').length).toBeGreaterThanOrEqual(7);
    expect(results.filter(({ boats: [first], faster }) => first !== 'Boat 1' && faster !== null)).toEqual([]);
  });
});

describe('a pair result', () => {
  const fleet = sailBeat({ seed: 11, minutes: 12, boats: [{ speed: 1.03 }, {}, {}] });
  const { results } = comparePairs(fleet);

  it('keeps the order of the boats, and parts that sum', () => {
    expect(results.map(({ boats }) => boats)).toEqual([
      ['Boat 1', 'Boat 2'],
      ['Boat 1', 'Boat 3'],
      ['Boat 2', 'Boat 3'],
    ]);
    const [{ vmg_difference_kn, height_part_kn, speed_part_kn, gain_m, settled_s }] = results;
    expect(height_part_kn!.value + speed_part_kn!.value).toBeCloseTo(vmg_difference_kn!.value, 12);
    // Along the mean wind rather than the wind of each second: a swing of 5 degrees changes little.
    expect(toKnots(gain_m!.value / settled_s)).toBeCloseTo(vmg_difference_kn!.value, 1);
  });
  it('turned round changes every sign', () => {
    const [first, second] = fleet;
    const [there] = comparePairs([first, second]).results;
    const [back] = comparePairs([second, first]).results;
    expect(back.blocks).toBe(there.blocks);
    for (const key of ['vmg_difference_kn', 'height_part_kn', 'gamma_difference_deg', 'gain_m'] as const) {
      expect(back[key]!.value).toBeCloseTo(-there[key]!.value, 9);
      expect(back[key]!.se).toBeCloseTo(there[key]!.se!, 9);
    }
    expect(back.faster).toBe(there.faster);
  });
  it('is not moved by an error of the wind that both share', () => {
    const turned = fleet.map((boat) => ({ ...boat, twd: boat.twd.map((twd) => (twd + 4) % 360) }));
    const [was] = comparePairs(fleet.slice(0, 2)).results;
    const [is] = comparePairs(turned.slice(0, 2)).results;
    expect(is.gamma_difference_deg!.value).toBeCloseTo(was.gamma_difference_deg!.value, 6);
    expect(is.speed_part_kn!.value).toBeCloseTo(was.speed_part_kn!.value, 2);
  });
  it('says why there is no verdict', () => {
    const short = fleet.slice(0, 2).map((boat) => ({ ...boat, legs: [{ lap: 1, from: 0, to: 120 }] }));
    const [pair] = comparePairs(short).results;
    expect(pair.blocks).toBeLessThan(5);
    expect(pair.faster).toBeNull();
    expect(pair.notes[0]).toMatch(/too few/);
    const far = [fleet[0], { ...fleet[1], x: fleet[1].x.map((x) => x + 1000) }];
    const [none] = comparePairs(far).results;
    expect(none.blocks).toBe(0);
    expect(none.vmg_difference_kn).toBeNull();
  });
  it('leaves out the last 250 m to the mark, seconds without wind and seconds without a track', () => {
    const [first, second] = fleet;
    const all = comparePair(first, second).seconds;
    const near = { ...first, toMark: first.x.map((_, i) => (i < 400 ? 1000 : 200)) };
    expect(comparePair(near, second).seconds).toBeLessThan(all);
    const calm = fleet.slice(0, 2).map((boat) => ({ ...boat, twd: boat.twd.map(() => NaN) }));
    expect(comparePair(calm[0], calm[1]).blocks).toEqual([]);
    const lost = { ...first, ux: first.ux.map((u, i) => (i > 200 && i < 500 ? NaN : u)) };
    const rest = comparePair(lost, second);
    expect(rest.seconds).toBeLessThan(all);
    expect(rest.vmg.value).not.toBeNaN();
  });
  it('compares only the pairs asked for', () => {
    const only = comparePairs(fleet, { only: ['Boat 3', 'Boat 1'] }).results;
    expect(only.map(({ boats }) => boats)).toEqual([['Boat 1', 'Boat 3']]);
  });
});
