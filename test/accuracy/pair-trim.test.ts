/**
 * Leeway and sheeting of pairs against planted truth, from logs with their own offsets to the verdict. Long: races that
 * no constant of the program was looked at on.
 */
import { beforeAll, describe, expect, it } from 'vitest';
import { compare, type Comparison } from '../../src/compare.js';
import { condition, generateRace, type Faults, type Truth } from './generator/index.js';

const LONG = process.env['LEGWORK_LONG'] === '1';
const SEEDS = Array.from({ length: LONG ? 20 : 3 }, (_, k) => (LONG ? 201 : 1) + k);

interface Sailed {
  readonly found: Comparison;
  readonly truth: Truth;
}

async function races(faults: Faults, mastheads: number): Promise<Sailed[]> {
  const out: Sailed[] = [];
  for (const seed of SEEDS) {
    const made = generateRace(condition('pair trim', { mastheads, skill: 0, events: false, faults }), seed);
    out.push({ found: await compare(made.race, made.open), truth: made.truth });
  }
  return out;
}

const pairOf = ({ found }: Sailed) => found.result.pairs![0];

/** The first boat's true leeway less the second's over the very seconds compared. [deg] */
function trueLeeway({ found, truth }: Sailed): number {
  const [a, b] = truth.boats;
  let sum = 0;
  let n = 0;
  for (const { time, seconds } of found.comparisons[0].blocks) {
    for (let t = time; t < time + seconds; t++, n++) sum += Math.abs(a.leeway[t - a.t0]) - Math.abs(b.leeway[t - b.t0]);
  }
  return sum / n;
}

/** Error over stated error, of leeway and, where it is told, of sheeting. */
function shares(sailed: readonly Sailed[]): { leeway: number[]; sheeting: number[] } {
  const told = sailed.flatMap((one) => {
    const { sheeting_difference_deg: q } = pairOf(one);
    const [a, b] = one.truth.boats;
    return q ? [(q.value - (a.habit.sheeting - b.habit.sheeting)) / Math.hypot(q.se!, q.sys!)] : [];
  });
  // Now and then two boats never come near each other settled on one tack, or for one block alone.
  const met = sailed.filter((one) => pairOf(one).blocks > 1);
  const leeway = met.map((one) => {
    const q = pairOf(one).leeway_difference_deg!;
    return (q.value - trueLeeway(one)) / Math.hypot(q.se!, q.sys!);
  });
  return { leeway, sheeting: told };
}

describe('two boats with compass and vane, each with its own offsets', () => {
  let even: Sailed[] = [];
  let sliding: Sailed[] = [];
  beforeAll(async () => {
    even = await races({}, 2);
    sliding = await races({ leeway: 1.4 }, 2);
  }, 400_000);

  it('half as much leeway again is told, and of the boat that has it', () => {
    const named = sliding.map((one) => pairOf(one).more_leeway);
    expect(named).not.toContain('Bracken');
    expect(named.filter((name) => name === 'Alder').length).toBeGreaterThanOrEqual(Math.ceil(0.6 * SEEDS.length));
    for (const one of sliding) expect(['measured', undefined]).toContain(pairOf(one).leeway_difference_deg?.basis);
  });
  it('of boats alike none is said to slide more or to be sheeted wider', () => {
    const claims = even.filter((one) => (pairOf(one).more_leeway ?? pairOf(one).sheeted_wider) !== null);
    expect(claims.length).toBeLessThanOrEqual(Math.floor(0.1 * SEEDS.length));
  });
  it('the truth is within what is stated: 2.5 standard errors, sampling and instruments', () => {
    const all = [...even, ...sliding];
    const { leeway, sheeting } = shares(all);
    expect(leeway.length).toBeGreaterThanOrEqual(0.9 * all.length);
    for (const share of [...leeway, ...sheeting]) expect(Math.abs(share)).toBeLessThan(2.5);
  });
});

describe('two boats without instruments', () => {
  it('leeway by the forces, wide enough for the truth, and no verdict; sheeting not determined', async () => {
    const bare = await races({ sheeting: 6 }, 0);
    for (const share of shares(bare).leeway) expect(Math.abs(share)).toBeLessThan(2.5);
    for (const one of bare) {
      const pair = pairOf(one);
      if (pair.blocks > 0) expect(pair.leeway_ways!.map(({ way }) => way)).toEqual(['forces']);
      expect(pair.more_leeway).toBeNull();
      expect(pair.sheeting_difference_deg).toBeNull();
      expect(pair.notes.join('; ')).toMatch(/sheeting: not determined|nothing to compare/);
    }
  }, 400_000);
});
