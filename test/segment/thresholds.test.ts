/** No threshold is a knife's edge: each moved by 30 % either way, the tacks stay the same. */
import { beforeAll, describe, expect, it } from 'vitest';
import { findLegs } from '../../src/segment/legs.js';
import { findManoeuvres } from '../../src/segment/manoeuvres.js';
import type { Sailing } from '../../src/segment/sailing.js';
import { THRESHOLDS, type Thresholds } from '../../src/segment/thresholds.js';
import { condition, generateRace } from '../accuracy/generator/index.js';
import { describeRecordings } from '../importers/recordings.js';
import { openRecording, prepare, raceOf } from '../steps/sailed-race.js';

const LONG = process.env['LEGWORK_LONG'] === '1';
const MOVED = (Object.keys(THRESHOLDS) as (keyof Thresholds)[]).flatMap((name) =>
  [0.7, 1.3].map((factor) => [name, factor] as const),
);
const moved = (name: keyof Thresholds, factor: number): Thresholds => ({
  ...THRESHOLDS,
  [name]: THRESHOLDS[name] * factor,
});

/** A boat as segmentation saw it, and the tacks that count. */
interface Seen {
  readonly sailing: Sailing;
  readonly gun: number;
  readonly finish: number;
  /** UTC seconds of the tacks to be found; turns at a mark count neither way. */
  readonly tacks: readonly number[];
  readonly aside: readonly number[];
}

/** Harmonic mean of precision and recall, a tack found within 10 s of a real one. */
function f1(real: readonly number[], claimed: readonly number[], aside: readonly number[]): number {
  const left = new Set(claimed);
  let hits = 0;
  for (const time of real) {
    const nearest = [...left]
      .filter((c) => Math.abs(c - time) <= 10)
      .sort((a, b) => Math.abs(a - time) - Math.abs(b - time))[0];
    if (nearest === undefined) continue;
    left.delete(nearest);
    hits += 1;
  }
  const extra = [...left].filter((c) => !aside.some((time) => Math.abs(time - c) < 12)).length;
  return (2 * hits) / (hits + real.length + extra);
}

function tacksOf({ sailing, gun, finish }: Seen, thresholds: Thresholds): number[] {
  return findManoeuvres(sailing, thresholds)
    .list.filter(({ kind, time }) => kind === 'tack' && time >= gun && time < finish)
    .map(({ time }) => time);
}

const CONDITIONS = [
  condition('station at the boats'),
  condition('light and shifty', { tws: [6, 8], shift: [9, 12], station: 'away' }),
  condition('mastheads', { station: 'none', mastheads: 2, logsHeel: false }),
  condition('thinned', { receiver: 'thinned' }),
  condition('short laps with dropouts', { laps: 3, beat: [450, 600], dropouts: true }),
];

async function seenOf(seeds: readonly number[]): Promise<Seen[]> {
  const all: Seen[] = [];
  for (const one of CONDITIONS) {
    for (const seed of seeds) {
      const { race, open, truth } = generateRace(one, seed);
      const { sailed } = (await prepare(race, open)).sail().wind;
      truth.boats.forEach((boat, k) => {
        const tacks = boat.turns.filter((t) => t.racing && t.kind === 'tack' && !t.atMark).map((t) => t.time);
        const aside = [...boat.legs.map((leg) => leg.end), ...boat.turns.filter((t) => t.atMark).map((t) => t.time)];
        const finish = boat.legs.at(-1)!.end;
        all.push({ sailing: sailed[k].sailing, gun: truth.gun, finish, tacks, aside });
      });
    }
  }
  return all;
}

describe('thresholds over invented races', () => {
  let seen: Seen[];
  beforeAll(async () => {
    seen = await seenOf(LONG ? [1, 2, 3, 4, 5, 6] : [1]);
  });

  it('as they are find the tacks of every boat', () => {
    expect(seen.length).toBeGreaterThanOrEqual(10);
    for (const one of seen) {
      expect(one.tacks.length).toBeGreaterThanOrEqual(4);
      expect(f1(one.tacks, tacksOf(one, THRESHOLDS), one.aside)).toBeGreaterThanOrEqual(0.95);
    }
  });

  it.each(MOVED)('%s x %d', (name, factor) => {
    const thresholds = moved(name, factor);
    let [hits, all] = [0, 0];
    for (const one of seen) {
      const score = f1(one.tacks, tacksOf(one, thresholds), one.aside);
      hits += score * one.tacks.length;
      all += one.tacks.length;
    }
    expect(hits / all).toBeGreaterThanOrEqual(0.95);
  });

  it.each(MOVED)('%s x %d: as many beats', (name, factor) => {
    for (const { sailing, gun, finish } of seen) {
      const legs = (thresholds: Thresholds): number => {
        const { usual } = findManoeuvres(sailing, thresholds);
        const course = { gun: gun - sailing.t0, finish: finish - sailing.t0, runs: [], windward: null, leeward: null };
        const found = findLegs(sailing, { ...course, foundLeeward: null, foundWindward: null }, usual, thresholds);
        return found.filter((leg) => leg.kind === 'upwind').length;
      };
      expect(legs(moved(name, factor))).toBe(legs(THRESHOLDS));
    }
  });
});

describeRecordings('thresholds over two laps of a yacht', () => {
  let seen: Seen;
  beforeAll(async () => {
    const { sailed } = (await prepare(raceOf('two-laps/two-laps.nmea'), openRecording)).sail().wind;
    const { sailing, legs } = sailed[0];
    const beats = legs.filter((leg) => leg.kind === 'upwind');
    const [gun, finish] = [sailing.t0 + beats[0].from, sailing.t0 + beats.at(-1)!.to];
    const whole = { sailing, gun, finish, tacks: [], aside: [] };
    seen = { ...whole, tacks: tacksOf(whole, THRESHOLDS) };
  });

  it.each(MOVED)('%s x %d', (name, factor) => {
    expect(f1(seen.tacks, tacksOf(seen, moved(name, factor)), [])).toBeGreaterThanOrEqual(0.95);
  });
});
