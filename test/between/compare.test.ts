import { beforeAll, describe, expect, it } from 'vitest';
import { compare, type Comparison } from '../../src/compare.js';
import { comparePair } from '../../src/between/pairs.js';
import { describeRecordings } from '../importers/recordings.js';
import { knotsOf, lapAgainstLap } from './laps.js';
import { condition, generateRace, type Truth } from '../accuracy/generator/index.js';

/** Races of an invented fleet in which every boat sails alike but for what is planted in the first. */
const even = { events: false, skill: 0, laps: 2 };

interface Sailed {
  readonly found: Comparison;
  readonly truth: Truth;
}

async function races(name: string, changes: object, seeds: readonly number[]): Promise<Sailed[]> {
  const out: Sailed[] = [];
  for (const seed of seeds) {
    const race = generateRace(condition(name, { ...even, ...changes }), seed);
    out.push({ found: await compare(race.race, race.open), truth: race.truth });
  }
  return out;
}

/** The first boat's true speed made good less the second's over the very seconds compared. [kn] */
function trueDifference({ found, truth }: Sailed): number {
  const [a, b] = truth.boats;
  let sum = 0;
  let n = 0;
  for (const { time, seconds } of found.comparisons[0].blocks) {
    for (let t = time; t < time + seconds; t++, n++) sum += a.vmg[t - a.t0] - b.vmg[t - b.t0];
  }
  return knotsOf(sum / n);
}

describe('invented races, from logs to verdicts', () => {
  let slow: Sailed[] = [];
  let pinching: Sailed[] = [];
  beforeAll(async () => {
    slow = await races('pairs: slow', { faults: { slow: 0.05 } }, [21, 22, 23]);
    pinching = await races('pairs: pinching', { faults: { pinch: 5 } }, [21, 22, 23]);
  }, 240_000);

  it('a boat 5 % slow is told as slower, not as lower', () => {
    const pairs = slow.map(({ found }) => found.result.pairs![0]);
    for (const { boats, faster, quicker } of pairs) expect([faster, quicker]).not.toContain(boats[0]);
    expect(pairs.filter(({ boats, faster }) => faster === boats[1]).length).toBeGreaterThanOrEqual(2);
    expect(pairs.filter(({ boats, quicker }) => quicker === boats[1]).length).toBeGreaterThanOrEqual(2);
    expect(pairs.filter(({ higher }) => higher !== null).length).toBeLessThanOrEqual(1);
  });
  it('a boat that pinches by 5 degrees is told as higher and slower', () => {
    for (const { found } of pinching) {
      const [pair] = found.result.pairs!;
      expect(pair.higher).toBe(pair.boats[0]);
      expect(pair.quicker).toBe(pair.boats[1]);
      expect(pair.gamma_difference_deg!.value).toBeCloseTo(-5, -0.5);
    }
  });
  it('differences are those of the same seconds in truth, within what is stated', () => {
    for (const sailed of [...slow, ...pinching]) {
      const difference = sailed.found.result.pairs![0].vmg_difference_kn!;
      expect(Math.abs(difference.value - trueDifference(sailed))).toBeLessThan(3 * difference.se! + 0.01);
    }
  });
  it('a ladder a beat, its parts summing, and no clock found wrong', () => {
    for (const { found } of [...slow, ...pinching]) {
      expect(found.result.warnings.filter(({ code }) => code === 'clock-skew')).toEqual([]);
      expect(found.ladders).toHaveLength(1);
      for (const { gain, parts } of found.ladders[0].legs) {
        expect(parts.sailing + parts.manoeuvres + parts.shifts + parts.rest).toBeCloseTo(gain, 9);
        expect(Math.abs(parts.rest)).toBeLessThan(8);
      }
    }
  });
  it('a log an hour off is set right, and the boats compared as if it never were', async () => {
    const { race, open } = generateRace(condition('pairs: slow', { ...even, faults: { slow: 0.05 } }), 21);
    const [first, second] = race.boats;
    const track = second.track.map((log) => ({ ...log, clockS: 3600 }));
    const { result } = await compare({ ...race, boats: [first, { ...second, track }] }, open);
    expect(result.warnings.filter(({ code }) => code === 'clock-skew')).toHaveLength(1);
    expect(result.pairs).toEqual(slow[0].found.result.pairs);
  }, 120_000);
  it('survives JSON unchanged', () => {
    const { result } = slow[0].found;
    expect(JSON.parse(JSON.stringify(result))).toEqual(result);
  });
  it('one boat alone is refused with what to do', async () => {
    const { race, open } = generateRace(condition('alone', { ...even, boats: 1 }), 1);
    await expect(compare(race, open)).rejects.toMatchObject({
      exitCode: 2,
      suggestion: expect.stringMatching(/two/) as string,
    });
  });
});

describeRecordings('two laps of one yacht, lap against lap', () => {
  it('a lap against itself shows no difference at all', async () => {
    const { first } = await lapAgainstLap();
    const pair = comparePair(first, first);
    expect(pair.blocks.length).toBeGreaterThanOrEqual(5);
    expect(pair.vmg.value).toBe(0);
    expect(pair.gain).toBe(0);
  }, 240_000);
  it('one lap against the other: blocks on both tacks, and differences a yacht may show', async () => {
    const { first, second, shift } = await lapAgainstLap();
    // The beats began about 09:04 and 10:35 UTC: an hour and a half apart.
    expect(shift).toBeGreaterThan(80 * 60);
    expect(shift).toBeLessThan(100 * 60);
    const pair = comparePair(first, second, { shift: -shift, wind: 'own', maxDistance: Infinity });
    expect(pair.blocks.length).toBeGreaterThanOrEqual(5);
    expect(new Set(pair.blocks.map(({ tack }) => tack)).size).toBe(2);
    expect(Math.abs(pair.gamma.value)).toBeLessThan(10);
    expect(pair.height.value + pair.speed.value).toBeCloseTo(pair.vmg.value, 9);
  }, 240_000);
});
