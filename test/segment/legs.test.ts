/** Legs and settled sailing of scores: where they begin and end, and what is left out. */
import { describe, expect, it } from 'vitest';
import { findLegs, type Course, type Leg } from '../../src/segment/legs.js';
import { findManoeuvres } from '../../src/segment/manoeuvres.js';
import { cutBlocks, divideBeat, LABEL } from '../../src/segment/spells.js';
import { THRESHOLDS } from '../../src/segment/thresholds.js';
import { synth, type Noise } from './score.js';

const OPEN: Course = {
  gun: null,
  finish: null,
  runs: [],
  windward: null,
  leeward: null,
  foundLeeward: null,
  foundWindward: null,
};

function legsOf(score: string, course: Partial<Course> = {}, options: Noise = {}): readonly Leg[] {
  const { sailing } = synth(score, options);
  const { usual } = findManoeuvres(sailing, THRESHOLDS);
  return findLegs(sailing, { ...OPEN, ...course }, usual, THRESHOLDS);
}

const kinds = (legs: readonly Leg[]): string[] => legs.map(({ kind, lap }) => `${kind} ${lap}`);
const BEAT = 'P90 t S90 t P90 t S90';
/** 360 s of 2.6 m/s at 45 degrees up, 250 s of 2.8 m/s at 160 degrees down: back where the beat began. */
const DOWN = 'R130 g R112';
const TWO_LAPS = `${BEAT} ${DOWN} ${BEAT} ${DOWN}`;
const ONE_AND_A_HALF = `${BEAT} ${DOWN} ${BEAT}`;

describe('legs', () => {
  it.each([0, 2, 4, 6])('of two laps are four, with %d degrees of noise', (noise) => {
    for (const seed of [1, 2, 3]) {
      const legs = legsOf(TWO_LAPS, { gun: 0 }, { noise, seed });
      expect(kinds(legs)).toEqual(['upwind 1', 'downwind 1', 'upwind 2', 'downwind 2']);
      // 360 s of beat and three tacks of 8 s; a run of 242 s, its bearing away (10 s) and its gybe (3 s).
      const [a, b, c] = legs;
      expect(a.from).toBe(0);
      expect(Math.abs(a.to - 384)).toBeLessThanOrEqual(8);
      expect(Math.abs(b.to - (384 + 255))).toBeLessThanOrEqual(12);
      expect(c.from).toBe(b.to);
    }
  });

  it('do not overlap, are in order, and lie within the log', () => {
    const { sailing } = synth(TWO_LAPS, { noise: 4 });
    const legs = legsOf(TWO_LAPS, {}, { noise: 4 });
    legs.forEach((leg, k) => {
      expect(leg.to).toBeGreaterThan(leg.from);
      expect(leg.to).toBeLessThanOrEqual(sailing.n);
      if (k > 0) expect(leg.from).toBeGreaterThanOrEqual(legs[k - 1].to);
    });
  });

  it('begin at the gun, with the waiting before it left out', () => {
    // Waiting: 60 s stopped, reaching up and down.
    const legs = legsOf(`P20 i60 B40 g B40 P30 ${TWO_LAPS}`, { gun: 220 });
    expect(legs[0]).toMatchObject({ kind: 'upwind', from: 220 });
    expect(kinds(legs)).toEqual(['upwind 1', 'downwind 1', 'upwind 2', 'downwind 2']);
  });

  it('without a gun begin where the first sustained beat does', () => {
    const legs = legsOf(`P8 B60 g B60 i30 R60 ${ONE_AND_A_HALF}`);
    expect(kinds(legs).slice(0, 3)).toEqual(['upwind 1', 'downwind 1', 'upwind 2']);
    // 8 + 60 + 15 + 60 + 30 + 60 s and the turns between: the beat is played from about 240 s on.
    expect(legs[0].from).toBeGreaterThan(225);
    expect(legs[0].from).toBeLessThan(270);
  });

  it('end at the finish', () => {
    const legs = legsOf(TWO_LAPS, { gun: 0, finish: 1200 });
    expect(Math.max(...legs.map((leg) => leg.to))).toBeLessThanOrEqual(1200);
  });

  it('reach from a mark that is given to the next', () => {
    const { sailing } = synth(TWO_LAPS);
    const windward = { x: sailing.x[380], y: sailing.y[380] };
    const legs = legsOf(TWO_LAPS, { gun: 0, windward });
    expect(legs[0].to).toBe(380);
    expect(legs[1].from).toBe(380);
  });

  it('leave out the sail out and the sail home', () => {
    // Home is half the way up again, no mark there; out is a run.
    const legs = legsOf(`P10 R240 ${TWO_LAPS} i60 P60 t S60`);
    expect(legs.filter((leg) => leg.kind === 'upwind')).toHaveLength(2);
  });

  it('of a practice run are the run, of the kind mostly sailed', () => {
    const runs = [
      { from: 10, to: 150 },
      { from: 400, to: 560 },
    ];
    const legs = legsOf(TWO_LAPS, { runs });
    expect(legs).toEqual([
      { kind: 'upwind', lap: 1, from: 10, to: 150 },
      { kind: 'downwind', lap: 1, from: 400, to: 560 },
    ]);
  });

  it('across the wind are reaches', () => {
    const legs = legsOf(`${BEAT} R60 B150 R120 ${BEAT}`, { gun: 0 });
    expect(legs.map(({ kind }) => kind)).toContain('reach');
    expect(legs[0].kind).toBe('upwind');
  });

  it('are none where nobody beats', () => {
    expect(legsOf('P8 R600 g R300').filter((leg) => leg.kind === 'upwind')).toEqual([]);
    expect(legsOf('P8 B600 g B300').filter((leg) => leg.kind === 'upwind')).toEqual([]);
    expect(legsOf('P8 i600').filter((leg) => leg.kind === 'upwind')).toEqual([]);
  });

  it('of which half was not seen say nothing', () => {
    const legs = legsOf(`P90 t S60 gap200 t P20 ${DOWN}`, { gun: 0 });
    expect(legs.filter((leg) => leg.kind === 'upwind')).toEqual([]);
  });
});

describe('settled sailing', () => {
  function divided(score: string, options: Noise = {}) {
    const { sailing } = synth(score, options);
    const { list, usual } = findManoeuvres(sailing, THRESHOLDS);
    const leg = findLegs(sailing, { ...OPEN, gun: 0 }, usual, THRESHOLDS)[0];
    return { leg, list, sailing, rows: divideBeat(sailing, leg, list, usual, 45, THRESHOLDS) };
  }
  const count = (labels: Uint8Array, label: number): number => labels.reduce((n, l) => n + (l === label ? 1 : 0), 0);

  it('gives every second of the leg one label', () => {
    const { leg, rows } = divided(TWO_LAPS, { noise: 3 });
    expect(rows.labels).toHaveLength(leg.to - leg.from);
    expect(Math.max(...rows.labels)).toBeLessThanOrEqual(LABEL.gap);
  });

  it.each([0, 2, 4])('lies outside every window, on one tack, 15 s at least, with %d degrees of noise', (noise) => {
    const { leg, list, sailing, rows } = divided(TWO_LAPS, { noise });
    expect(rows.spells).toHaveLength(4);
    for (const spell of rows.spells) {
      expect(spell.to - spell.from).toBeGreaterThanOrEqual(THRESHOLDS.minSettled);
      expect(spell.to).toBeLessThanOrEqual(leg.to - THRESHOLDS.rounding);
      for (const { kind, entry, exit } of list) {
        if (kind === 'tack') expect(spell.to <= entry || spell.from >= exit).toBe(true);
      }
      const sides = new Set(Array.from(sailing.gamma.subarray(spell.from, spell.to), Math.sign));
      expect([...sides]).toEqual([spell.tack === 'starboard' ? 1 : -1]);
    }
  });

  it('leaves out a stop and what it takes to get going again', () => {
    const { rows } = divided(`P60 i30 P90 t S90 ${DOWN} ${BEAT}`);
    expect(count(rows.labels, LABEL.stopped)).toBeGreaterThanOrEqual(30);
    for (const { from, to } of rows.spells) expect(to <= 60 || from >= 110).toBe(true);
  });

  it('counts falling off into a stop and heading up out of it as the stop, a tack elsewhere not', () => {
    const { rows, list } = divided(`P90 B14 i30 B14 P90 t S90 ${DOWN} ${BEAT}`);
    expect(list.map(({ kind }) => kind)).toEqual(expect.arrayContaining(['bear-away', 'round-up', 'tack']));
    expect(count(rows.labels, LABEL.stopped)).toBeGreaterThanOrEqual(55);
    const [tack] = list.filter(({ kind }) => kind === 'tack');
    expect(count(rows.labels, LABEL.manoeuvre)).toBeLessThanOrEqual(Math.ceil(tack.exit - tack.entry) + 1);
  });

  it('leaves out a full turn as a stop', () => {
    const { rows } = divided(`P90 f P90 t S90 ${DOWN} ${BEAT}`);
    expect(count(rows.labels, LABEL.stopped)).toBeGreaterThanOrEqual(30);
  });

  it('calls a gap a gap', () => {
    const { rows } = divided(`P60 gap12 P60 t S90 t P90 ${DOWN} ${BEAT}`);
    expect(count(rows.labels, LABEL.gap)).toBe(12);
    for (const { from, to } of rows.spells) expect(to <= 60 || from >= 72).toBe(true);
  });

  it('is cut into blocks nearest to 30 s that make up each spell', () => {
    for (const length of [15, 29, 44, 46, 59, 75, 76, 200, 301]) {
      const blocks = cutBlocks([{ from: 7, to: 7 + length, tack: 'port' }], THRESHOLDS);
      expect(blocks[0].from).toBe(7);
      expect(blocks.at(-1)!.to).toBe(7 + length);
      blocks.slice(1).forEach((block, k) => expect(block.from).toBe(blocks[k].to));
      for (const { from, to } of blocks) {
        if (length >= 20) expect(to - from).toBeGreaterThanOrEqual(20);
        expect(to - from).toBeLessThanOrEqual(45);
      }
    }
  });
});
