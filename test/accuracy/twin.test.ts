/**
 * Stated errors of a ledger: the race as logged against the same race logged without receiver noise. What differs is the
 * error of the logs, for the boats, the wind and its log, and the method are the same.
 */
import { beforeAll, describe, expect, it } from 'vitest';
import { debrief } from '../../src/debrief.js';
import type { LegResult, Q } from '../../src/result/result.js';
import { condition, generateRace, type Condition } from './generator/index.js';
import { honest } from './tolerance.js';

const LONG = process.env['LEGWORK_LONG'] === '1';
const RACES = LONG ? 15 : 4;
const PERFECT: Partial<Condition> = { positionNoise: [0, 0], outliers: false };

const FIGURES: Readonly<Record<string, (leg: LegResult) => Q>> = {
  share: (leg) => leg.share,
  lost: (leg) => leg.ledger!.lost_m,
  speed: (leg) => leg.ledger!.entries.find(({ cause }) => cause === 'speed')!.metres,
  manoeuvres: (leg) => leg.ledger!.entries.find(({ cause }) => cause === 'manoeuvres')!.metres,
};

/** Error over stated error, figure by figure, of every beat. */
const ratios = new Map<string, number[]>(Object.keys(FIGURES).map((name) => [name, []]));

async function beats(changes: Partial<Condition>, seed: number): Promise<LegResult[]> {
  const { race, open } = generateRace(condition('twin', changes), seed);
  const { result } = await debrief(race, open);
  return result.boats.flatMap((boat) => boat.legs.filter(({ kind }) => kind === 'upwind'));
}

beforeAll(async () => {
  for (let seed = 1; seed <= RACES; seed++) {
    const [logged, perfect] = [await beats({}, seed), await beats(PERFECT, seed)];
    expect(perfect.length).toBe(logged.length);
    logged.forEach((leg, k) => {
      for (const [name, of] of Object.entries(FIGURES)) {
        const [is, was] = [of(leg)!, of(perfect[k])!];
        ratios.get(name)!.push((is.value - was.value) / is.se!);
      }
    });
  }
}, 300_000);

describe('errors over stated errors', () => {
  it.each(Object.keys(FIGURES))('of %s are what is stated', (name) => {
    const found = ratios.get(name)!;
    expect(found.length).toBe(4 * RACES);
    const rms = Math.sqrt(found.reduce((sum, ratio) => sum + ratio * ratio, 0) / found.length);
    const [least, most] = honest(RACES);
    expect(rms).toBeGreaterThan(least);
    expect(rms).toBeLessThan(most);
  });
});
