import { describe, expect, it } from 'vitest';
import { isTaken, liftedShare } from '../../src/report/shifts-taken.js';
import type { BoatSeries } from '../../src/result/series.js';

/** A minute on starboard tack, half a minute on port, then a run; rows are seconds from 1000. */
const gamma = Float64Array.from({ length: 150 }, (_, i) => (i < 60 ? 44 : i < 90 ? -44 : 160));
const boat = { t0: 1000, n: 150, gamma } as BoatSeries;
const beats = [{ index: 0, from: 0, to: 90 }];

describe('shifts taken', () => {
  it('count the beat to the next shift on the lifted tack: starboard when the wind veers, port when it backs', () => {
    expect(liftedShare(boat, beats, [1000, 1090], 6)).toBeCloseTo(2 / 3, 12);
    expect(liftedShare(boat, beats, [1000, 1090], -6)).toBeCloseTo(1 / 3, 12);
    expect(liftedShare(boat, beats, [1050, 1090], -6)).toBeCloseTo(3 / 4, 12);
    expect(isTaken(2 / 3)).toBe(true);
    expect(isTaken(1 / 3)).toBe(false);
  });

  it('say nothing of the run, or of a few seconds', () => {
    expect(liftedShare(boat, beats, [1090, 1150], 6)).toBeNaN();
    expect(liftedShare(boat, beats, [1075, 1150], 6)).toBeNaN();
    expect(isTaken(NaN)).toBeNull();
  });
});
