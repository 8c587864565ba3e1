import { describe, expect, it } from 'vitest';
import type { BetweenBoat } from '../../src/between/boat.js';
import { ladder } from '../../src/between/ladder.js';
import { sailBeat } from './two-boats.js';

const RAD = Math.PI / 180;

interface Plan {
  readonly speed?: number;
  /** Tack of each second, +1 starboard. */
  readonly tack: (second: number) => number;
  readonly wind: (second: number) => number;
  readonly from?: readonly [number, number];
  readonly tackAt?: number;
}

const SECONDS = 600;

/** A boat that points 45 degrees off the wind, on rails. */
function onRails({ speed = 2, tack, wind, from = [0, 0], tackAt }: Plan): BetweenBoat {
  const seconds = Array.from({ length: SECONDS }, (_, i) => i);
  const course = seconds.map((i) => (wind(i) - tack(i) * 45) * RAD);
  const ux = Float64Array.from(course, (c) => speed * Math.sin(c));
  const uy = Float64Array.from(course, (c) => speed * Math.cos(c));
  const sum = (values: Float64Array, start: number): Float64Array => {
    let place = start;
    return values.map((value) => (place += value) - value);
  };
  return {
    name: 'On rails',
    t0: 1000,
    n: SECONDS,
    x: sum(ux, from[0]),
    y: sum(uy, from[1]),
    ux,
    uy,
    twd: Float64Array.from(seconds, (i) => (wind(i) + 360) % 360),
    tws: new Float64Array(SECONDS).fill(6),
    settled: new Uint8Array(SECONDS).fill(1),
    tack: Int8Array.from(seconds, tack),
    legs: [{ lap: 1, from: 0, to: SECONDS }],
    manoeuvres: tackAt === undefined ? [] : [{ kind: 'tack', from: tackAt - 4, at: tackAt, to: tackAt + 20 }],
  };
}

const steady = (): number => 0;
const starboard = (): number => 1;

describe('the ladder', () => {
  it('a boat 5 % faster on the same course gains 5 % of the way, all of it by sailing', () => {
    const [leg] = ladder(
      onRails({ speed: 2.1, tack: starboard, wind: steady }),
      onRails({ tack: starboard, wind: steady, from: [-20, 5] }),
    );
    const gained = 0.1 * Math.cos(45 * RAD) * (SECONDS - 1);
    expect(leg.lead).toBeCloseTo(-5, 9);
    expect(leg.gain).toBeCloseTo(gained, 9);
    expect(leg.parts.sailing).toBeCloseTo(gained, 9);
    expect(leg.parts.shifts).toBeCloseTo(0, 9);
    expect(leg.rows.at(-1)!.gain).toBeLessThanOrEqual(gained);
    expect(leg.rows[0].gain).toBe(0);
  });
  it('the boat on the lifted tack gains 4 v T sin 45 sin ψ in shifts, nothing by sailing', () => {
    // Wind ψ right of the mean for T, then ψ left of it. One boat sails starboard tack first, the other port.
    const ψ = 8;
    const T = SECONDS / 2;
    const wind = (i: number): number => (i < T ? ψ : -ψ);
    const [leg] = ladder(
      onRails({ tack: (i) => (i < T ? 1 : -1), wind, tackAt: T }),
      onRails({ tack: (i) => (i < T ? -1 : 1), wind, tackAt: T }),
    );
    const gained = 4 * 2 * T * Math.sin(45 * RAD) * Math.sin(ψ * RAD);
    expect(Math.abs(leg.gain / gained - 1)).toBeLessThan(0.005);
    expect(leg.parts.shifts).toBeCloseTo(leg.gain, 6);
    for (const row of leg.rows) expect(row.shifts).toBeCloseTo(row.gain, 6);
    expect(leg.parts.sailing + leg.parts.manoeuvres).toBeCloseTo(0, 9);
    expect(leg.tacks.map(({ boat, time }) => [boat, time])).toEqual([
      [0, 1000 + T],
      [1, 1000 + T],
    ]);
    expect(leg.tacks[0].across).toBeLessThan(0);
    expect(leg.tacks[1].across).toBeGreaterThan(0);
    expect(leg.tacks[0].rung).toBeCloseTo(2 * T * Math.cos((45 - ψ) * RAD), 6);
  });
  it('turned round, every gain changes its sign', () => {
    const [first, second] = sailBeat({ seed: 4, minutes: 12, boats: [{ speed: 1.03 }, {}] });
    const [there] = ladder(first, second);
    const [back] = ladder(second, first);
    expect(back.gain).toBeCloseTo(-there.gain, 9);
    expect(back.parts.shifts).toBeCloseTo(-there.parts.shifts, 9);
  });
  it('parts sum to the gain, and speed is told from shifts on a beat with swings and tacks', () => {
    for (const seed of [1, 2, 3, 4, 5]) {
      const [leg] = ladder(
        ...(sailBeat({ seed, minutes: 12, boats: [{ speed: 1.03 }, {}] }) as [BetweenBoat, BetweenBoat]),
      );
      const { sailing, manoeuvres, shifts, rest } = leg.parts;
      expect(sailing + manoeuvres + shifts + rest).toBeCloseTo(leg.gain, 9);
      // 3 % of 2.5 m/s at 43 degrees for 12 minutes is 39 m; what the receivers make of the ends is 3 m.
      expect(sailing + manoeuvres).toBeGreaterThan(20);
      expect(sailing + manoeuvres).toBeLessThan(60);
      expect(Math.abs(rest)).toBeLessThan(2);
    }
  });
  it('puts a gap into the rest and leaves out a leg sailed apart', () => {
    const whole = onRails({ speed: 2.1, tack: starboard, wind: steady });
    const gap = { ...whole, ux: whole.ux.map((u, i) => (i > 200 && i < 300 ? NaN : u)) };
    const other = onRails({ tack: starboard, wind: steady });
    const [leg] = ladder(gap, other);
    expect(leg.parts.rest).toBeCloseTo(0.1 * Math.cos(45 * RAD) * 99, 6);
    expect(ladder(whole, { ...other, t0: 5000 })).toEqual([]);
    expect(ladder(whole, { ...other, legs: [{ lap: 2, from: 0, to: SECONDS }] })).toEqual([]);
  });
});
