/** Scores whose turns are known as written, over noise levels: counts, times, and none made up. */
import { describe, expect, it } from 'vitest';
import { findManoeuvres, type Manoeuvre } from '../../src/segment/manoeuvres.js';
import { THRESHOLDS } from '../../src/segment/thresholds.js';
import { synth, type Noise, type Played } from './score.js';

/** Course noise of a smoothed track: a calm lake, usual, a chop, a poor receiver in a chop. [deg] */
const NOISES = [0, 2, 4, 6];
const SEEDS = [1, 2, 3, 4, 5];

const found = ({ sailing }: Played): readonly Manoeuvre[] => findManoeuvres(sailing, THRESHOLDS).list;
const of = (list: readonly Manoeuvre[], kind: string): Manoeuvre[] => list.filter((m) => m.kind === kind);

/** Every noise and seed, with and without a logged bow. */
function every(check: (options: Noise) => void): void {
  for (const noise of NOISES) {
    for (const seed of SEEDS) for (const heading of [false, true]) check({ noise, seed, heading });
  }
}

/** The found turns of a kind are as many as were played, each within `within` seconds. */
function expectTurns(played: Played, kind: 'tack' | 'gybe' | 'full-turn', within: number, about: object): void {
  const times = of(found(played), kind).map((m) => m.time);
  const truth = played.events.filter((e) => e.kind === kind).map((e) => e.time);
  expect(times.length, `${kind}s, ${JSON.stringify(about)}`).toBe(truth.length);
  truth.forEach((time, k) => {
    expect(Math.abs(times[k] - time), `${kind} ${k}, ${JSON.stringify(about)}`).toBeLessThanOrEqual(within);
  });
}

describe('tacks', () => {
  it.each([
    ['a beat of six', 'P60 t S45 t P90 t S30 t P45 t S60 t P60'],
    ['two 20 s apart', 'P60 t S12 t P60'],
    ['with a gap on a straight line after', 'P60 t S45 t P30 gap10 P20'],
    ['with gaps on straight lines', 'S40 gap8 S40 t P40 gap25 P40 t S60'],
    ['after a run', 'P60 R120 g R120 S60 t P60 t S60'],
    ['to a reach and up again', 'P60 t S60 B30 S60 t P60'],
    ['with a stop in between', 'P60 t S40 i25 S40 t P60'],
  ])('%s', (_, score) => {
    every((options) => expectTurns(synth(score, options), 'tack', 3, options));
  });

  it.each([
    ['from the north', 0],
    ['from just west of north', 359],
    ['from the south', 180],
  ])('are the same with the wind %s', (_, twd) => {
    const here = of(found(synth('P60 t S45 t P60', { noise: 3, twd: 90 })), 'tack');
    const there = of(found(synth('P60 t S45 t P60', { noise: 3, twd })), 'tack');
    expect(there.map(({ at, entry, exit }) => [at, entry, exit])).toEqual(
      here.map(({ at, entry, exit }) => [at, entry, exit]),
    );
  });

  it('say which side was left and which taken', () => {
    const tacks = of(found(synth('P60 t S45 t P60', { noise: 2 })), 'tack');
    expect(tacks.map(({ from, to }) => [from, to])).toEqual([
      ['port', 'starboard'],
      ['starboard', 'port'],
    ]);
  });

  it.each([38, 42, 50, 55])('are found by a boat that points at %d', (angle) => {
    for (const seed of SEEDS) expectTurns(synth('P60 t S60 t P60', { noise: 3, seed, angle }), 'tack', 3, { angle });
  });

  it('inside a gap: counted once, placed where the courses before and after meet', () => {
    for (const seed of SEEDS) {
      expectTurns(synth('P60 tgap20 S60 t P60', { noise: 0, seed }), 'tack', 4, { seed });
      expectTurns(synth('P60 tgap20 S60 t P60', { noise: 3, seed }), 'tack', 8, { seed });
    }
  });

  it('in a hole longer than any tack is not claimed', () => {
    const played = synth('P60 tgap90 S60', { noise: 2 });
    expect(of(found(played), 'tack')).toEqual([]);
  });
});

describe('no tack', () => {
  it.each([
    ['on a straight wandering course', 'P600'],
    ['on a straight course with gaps', 'S120 gap10 S120 gap30 S120'],
    ['when it was aborted', 'P60 a P60'],
    ['when the boat luffed and went on', 'S60 l15 S60'],
    ['in a full turn', 'P60 f P60'],
    ['in a full turn by way of starboard', 'S60 f S60'],
    ['in bearing away and rounding up', 'P90 R90 P90'],
    ['in a gybe', 'P60 R60 g R60'],
    ['lying stopped', 'P60 i60 P60'],
  ])('%s', (_, score) => {
    every((options) => expect(of(found(synth(score, options)), 'tack'), JSON.stringify(options)).toEqual([]));
  });

  it('on a straight course with ten degrees of wander', () => {
    for (const seed of SEEDS) expect(of(found(synth('P600', { noise: 10, seed })), 'tack')).toEqual([]);
  });
});

describe('other turns', () => {
  it.each([
    ['gybe', 'P60 R60 g R60 g R60 S60'],
    ['gybe', 'S60 B60 g B60'],
    ['full-turn', 'P60 f P60'],
    ['full-turn', 'S60 f S30 f S60'],
  ] as const)('%s: %s', (kind, score) => {
    every((options) => expectTurns(synth(score, options), kind, 3, options));
  });

  it('bearing away and rounding up are told, once each', () => {
    every((options) => {
      const list = found(synth('P90 R90 P90', options));
      expect(
        list.map(({ kind }) => kind),
        JSON.stringify(options),
      ).toEqual(['bear-away', 'round-up']);
      expect(list.every(({ from, to }) => from === 'port' && to === 'port')).toBe(true);
    });
  });

  it('nothing at all happens on a straight course', () => {
    every((options) => expect(found(synth('S600', options))).toEqual([]));
  });
});

describe('the window of a tack', () => {
  it('opens before the turn and closes 20 to 40 s after it, never across the next', () => {
    every((options) => {
      const played = synth('P60 t S60 t P12 t S60', options);
      const tacks = of(found(played), 'tack');
      tacks.forEach((tack, k) => {
        expect(tack.entry).toBeLessThan(tack.at - 3);
        expect(tack.entry).toBeGreaterThan(tack.at - 20);
        expect(tack.exit).toBeLessThanOrEqual(tacks[k + 1]?.entry ?? Infinity);
        expect(tack.exit - tack.at).toBeLessThanOrEqual(THRESHOLDS.settleMax);
      });
      expect(tacks[0].exit - tacks[0].at).toBeGreaterThanOrEqual(THRESHOLDS.settleMin);
      // Within 3 % of full speed after 6 s x ln(0.65 / 0.03) = 18 s on the new tack, as played.
      expect(tacks[0].exit - tacks[0].at).toBeLessThanOrEqual(30);
    });
  });
});

describe('usual speed', () => {
  it('is the speed close-hauled, whatever else was sailed', () => {
    const { usual } = findManoeuvres(synth('P120 t S120 R300 i60 S120', { noise: 2 }).sailing, THRESHOLDS);
    // 2.6 m/s is what the score plays.
    expect(usual).toBeGreaterThan(2.5);
    expect(usual).toBeLessThan(2.7);
  });
});
