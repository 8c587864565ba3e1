/**
 * Planted faults: the cause has the largest excess over the other boat, and the first hint names it; of clean pairs at
 * most one in ten is told anything. Short: six races each, so one miss more than the share is let pass; with
 * LEGWORK_LONG=1 thirty others.
 */
import { describe, expect, it } from 'vitest';
import { debrief } from '../../src/debrief.js';
import type { BoatResult, Cause, Result } from '../../src/result/result.js';
import { pointing, signed, sind } from './generator/directions.js';
import { condition, generateRace, type Condition, type Faults, type Truth } from './generator/index.js';
import { trueExcess } from './planted.js';

const LONG = process.env['LEGWORK_LONG'] === '1';
const SEEDS = Array.from({ length: LONG ? 30 : 6 }, (_, k) => (LONG ? 301 : 1) + k);
type LogChunks = ReturnType<ReturnType<typeof generateRace>['open']>['chunks'];
const CALM = { skill: 0, events: false } as const;

/** Two boats alike but for the fault, debriefed. */
async function sailed(changes: Partial<Condition>, seed: number): Promise<{ result: Result; truth: Truth }> {
  const { race, open, truth } = generateRace(condition('hints', { ...CALM, ...changes }), seed);
  return { result: (await debrief(race, open)).result, truth };
}

/** Metres beyond the lay line at which the first boat tacked for the mark, at the worst, by the true wind. */
function beyondLayLine({ boats: [boat], windward }: Truth): number {
  const settled = Array.from(boat.gamma, Math.abs).filter((_, i) => boat.settled[i]);
  const own = settled.reduce((sum, gamma) => sum + gamma, 0) / settled.length;
  const tacks = boat.turns.filter(
    (turn) =>
      turn.kind === 'tack' &&
      boat.legs.some((leg) => leg.kind === 'upwind' && turn.time > leg.start && turn.time < leg.end),
  );
  return Math.max(
    0,
    ...tacks.map((turn) => {
      const i = Math.round(turn.time - boat.t0);
      const [dx, dy] = [windward.x - boat.x[i], windward.y - boat.y[i]];
      const below = (turn.to === 'starboard' ? 1 : -1) * signed(boat.twd[i] - pointing(dx, dy)) - own;
      return below > 0 ? Math.hypot(dx, dy) * sind(Math.min(90, below)) : 0;
    }),
  );
}

interface Planted {
  readonly name: string;
  readonly faults: Faults;
  readonly cause: Cause;
  readonly words: RegExp;
  /** Whether the race gave the fault room: a boat that a shift brought to the mark never came to overstand it. */
  readonly came: (truth: Truth) => boolean;
  /** Least share of the races in which it came that a hint names it: told only beyond some 2.5 se, for so many are looked at. */
  readonly told: number;
}

const always = (): boolean => true;
const PLANTED: readonly Planted[] = [
  {
    name: 'pinching 5 degrees',
    faults: { pinch: 5 },
    cause: 'high',
    words: /above the best course angle/,
    came: always,
    told: 0.9,
  },
  {
    name: '3 % slow',
    faults: { slow: 0.03 },
    cause: 'speed',
    words: /^Slower at the same angle/,
    came: always,
    told: 0.8,
  },
  {
    name: 'tacks of twice the cost',
    faults: { tackCost: 2 },
    cause: 'manoeuvres',
    words: /^Dearer tacks/,
    came: always,
    told: 0.8,
  },
  {
    name: 'overstanding by 60 m',
    faults: { overstand: 60 },
    cause: 'overstood',
    words: /beyond the lay line/,
    came: (truth) => beyondLayLine(truth) > 50 && trueExcess(truth).overstood > 20,
    told: 0.8,
  },
  {
    name: 'the headed tack',
    faults: { headed: true },
    cause: 'shifts',
    words: /^Shifts/,
    came: always,
    told: 0.7,
  },
];

/** Whether a cause has the largest excess (shifts apart), beyond two standard errors. */
function leads({ excess }: BoatResult, cause: Cause): boolean {
  const of = excess!.causes.find((one) => one.cause === cause)!.metres!;
  const first = cause === 'shifts' || excess!.causes[0].cause === cause;
  return first && of.se !== null && of.value > 2 * of.se;
}

/** Excesses of overstanding that stand though the ledgers' own entries have it the other way. */
function contradicted({ boats }: Result): string[] {
  const cost = (name: string): number =>
    boats
      .find((boat) => boat.name === name)!
      .legs.flatMap(({ ledger }) => ledger?.entries ?? [])
      .reduce((sum, { cause, metres }) => sum + (cause === 'overstood' ? metres!.value : 0), 0);
  return boats
    .filter(({ excess }) => excess?.causes.some(({ cause, stands }) => cause === 'overstood' && stands))
    .filter(({ name, excess }) => !(cost(name) > cost(excess!.over)))
    .map(({ name }) => name);
}

const SHARE = 0.9;

describe.each(PLANTED)('$name', ({ faults, cause, words, came, told }) => {
  it('has the largest excess, beyond 2 se, in nine of ten; and is what the first hint names', async () => {
    let n = 0;
    const behind: string[] = [];
    const missed: string[] = [];
    for (const seed of SEEDS) {
      const { result, truth } = await sailed({ faults, station: 'away' }, seed);
      if (!came(truth)) continue;
      n++;
      expect(contradicted(result), `${seed}`).toEqual([]);
      const [boat] = result.boats;
      const texts = boat.hints.map(({ text }) => text);
      const excess = boat.excess!.causes.map((one) => `${one.cause} ${one.metres!.value.toFixed(0)}`).join(' ');
      if (!leads(boat, cause)) behind.push(`${seed}: ${excess}`);
      // Shifts come last: no habit of the boat, but what the day had for it.
      const named = faults.headed ? texts.some((text) => words.test(text)) : words.test(texts[0] ?? '');
      if (!named) missed.push(`${seed}: ${texts.join(' / ')}`);
    }
    expect(n).toBeGreaterThan(SEEDS.length / 3);
    // Of few races one more may fail than of many.
    const slack = LONG ? 0 : 1;
    expect(behind.length, behind.join('\n')).toBeLessThanOrEqual(slack + Math.floor((1 - SHARE) * n + 1e-9));
    expect(missed.length, missed.join('\n')).toBeLessThanOrEqual(slack + Math.floor((1 - told) * n + 1e-9));
  }, 300_000);
});

it('clean pairs are told nothing, one in ten apart, station at the boats or away', async () => {
  const told: string[] = [];
  for (const station of ['away', 'same'] as const) {
    for (const seed of SEEDS) {
      const { result } = await sailed({ station }, seed);
      const texts = result.boats.flatMap((boat) => boat.hints.map(({ text }) => `${seed} ${boat.name}: ${text}`));
      if (texts.length > 0) told.push(texts.join(' / '));
    }
  }
  expect(told.length, told.join('\n')).toBeLessThanOrEqual(Math.floor((2 * SEEDS.length) / 10));
}, 300_000);

describe('the ledgers behind them', () => {
  const differences = (result: Result): Map<string, number> => {
    const [a, b] = result.boats.map((boat) => boat.legs.flatMap((leg) => (leg.ledger ? [leg.ledger] : [])));
    return new Map(
      a.flatMap((ledger, k) =>
        ledger.entries.map((entry, i) => [
          `${k} ${entry.cause}`,
          (entry.metres?.value ?? 0) - (b[k].entries[i].metres?.value ?? 0),
        ]),
      ),
    );
  };

  /** How far 5 % of wind speed moves each entry, boat less boat. [m] */
  async function movedBy(seed: number, station: Condition['station']): Promise<number[]> {
    const { race, open } = generateRace(condition('gauge', { ...CALM, station }), seed);
    const wrong: typeof open = (file) => {
      const log = open(file);
      if (!race.wind.some((wind) => wind.kind === 'log' && wind.file === file)) return log;
      return { ...log, chunks: rewritten(log.chunks, (text) => faster(text, 1.05)) };
    };
    const right = differences((await debrief(race, open)).result);
    const moved = differences((await debrief(race, wrong)).result);
    expect([...moved.keys()]).toEqual([...right.keys()]);
    return [...right].map(([key, value]) => Math.abs(moved.get(key)! - value));
  }

  it.each([
    // A wind just where the model's boat is overpowered may move one of several hundred a little further.
    { station: 'same', races: LONG ? 60 : 4, beyond: 0.003 },
    // The wind comes later from a station away, at wind speed: how much later is had from the boats, to a few seconds. Now
    // and then an end of a leg or a window falls on another second for it, and its metres to another entry.
    { station: 'away', races: LONG ? 24 : 2, beyond: 0.07 },
  ] as const)(
    'are hardly moved, boat less boat, by 5 % of wind speed: by less than a metre; station $station',
    async ({ station, races, beyond }) => {
      const moves: number[] = [];
      for (let seed = 1; seed <= races; seed++) moves.push(...(await movedBy(seed, station)));
      expect(moves).toHaveLength(18 * races);
      moves.sort((a, b) => b - a);
      const told = moves.slice(0, 9).map((by) => by.toFixed(2));
      expect(moves.filter((by) => by > 1).length, told.join(' ')).toBeLessThanOrEqual(
        Math.floor(beyond * moves.length),
      );
      expect(moves[0]).toBeGreaterThan(0.001);
    },
    240_000,
  );

  it('sum to what was lost, to a millimetre', async () => {
    const { result } = await sailed({ faults: { overstand: 60 }, station: 'away' }, 2);
    const ledgers = result.boats.flatMap((boat) => boat.legs.flatMap((leg) => (leg.ledger ? [leg.ledger] : [])));
    expect(ledgers).toHaveLength(4);
    for (const { lost_m, entries } of ledgers) {
      const sum = entries.reduce((total, entry) => total + entry.metres!.value, 0);
      expect(Math.abs(sum - lost_m!.value)).toBeLessThan(1e-3);
    }
  });
});

/** A wind table with its last column, the speed, multiplied. */
function faster(text: string, by: number): string {
  const [head, ...rows] = text.trim().split('\n');
  return [head, ...rows.map((row) => row.replace(/[^,]*$/, (speed) => (by * Number(speed)).toFixed(3)))].join('\n');
}

async function* rewritten(chunks: LogChunks, change: (text: string) => string): AsyncGenerator<Uint8Array> {
  const decoder = new TextDecoder();
  let text = '';
  for await (const chunk of chunks) text += decoder.decode(chunk, { stream: true });
  yield new TextEncoder().encode(change(text + decoder.decode()));
}
