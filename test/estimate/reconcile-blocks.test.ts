import { describe, expect, it } from 'vitest';
import { reconcileBlocks } from '../../src/estimate/reconcile-blocks.js';
import type { Track } from '../../src/recording/track.js';

/** A minute and a half of a boat going north-west at 2.5 m/s with a heading that swings over north. */
function rows(extra: Partial<Track> = {}): Track {
  const n = 90;
  const column = (f: (i: number) => number): Float64Array => Float64Array.from({ length: n }, (_, i) => f(i));
  return {
    name: 'Corrie',
    t0: 1_000_000,
    n,
    x: column((i) => -1.5 * i),
    y: column((i) => 2 * i),
    vx: column(() => -1.5),
    vy: column(() => 2),
    sePosition: column(() => 1),
    seVelocity: column(() => 0.1),
    heading: column((i) => (i % 2 === 0 ? 355 : 5)),
    awa: column((i) => (i % 2 === 0 ? -40 : -20)),
    ...extra,
  };
}

const wind = {
  from: Float64Array.from({ length: 90 }, (_, i) => (i % 2 === 0 ? 350 : 20)),
  speed: new Float64Array(90).fill(6),
};

describe('blocks for the reconciliation', () => {
  it('are 20 s each, within their stretch, with vector means', () => {
    const blocks = reconcileBlocks(rows(), wind, [
      { from: 0, to: 45, tack: 'port', upwind: true },
      { from: 50, to: 90, tack: 'starboard', upwind: false },
    ]);
    expect(blocks.map((block) => [block.spell, block.tack, block.upwind])).toEqual([
      [0, -1, true],
      [0, -1, true],
      [1, 1, false],
      [1, 1, false],
    ]);
    for (const block of blocks) {
      expect([block.east, block.north]).toEqual([-1.5, 2]);
      expect(block.heading % 360).toBeCloseTo(0, 9);
      expect(block.mastheadAngle).toBeCloseTo(-30, 9);
      expect(block.windFrom).toBeCloseTo(5, 9);
      // Two unit vectors 30 degrees apart: the mean is cos 15 degrees long.
      expect(block.windSpeed).toBeCloseTo(6 * Math.cos(Math.PI / 12), 9);
      expect(block.apparentSpeed).toBeNaN();
      expect(block.waterSpeed).toBeNaN();
    }
  });

  it('leave out what is mostly missing', () => {
    const heading = new Float64Array(90).fill(10).fill(NaN, 0, 10);
    const vx = new Float64Array(90).fill(1).fill(NaN, 40, 60);
    const blocks = reconcileBlocks(rows({ heading, vx }), wind, [{ from: 0, to: 60, tack: 'port', upwind: true }]);
    expect(blocks.map((block) => block.heading)).toEqual([NaN, expect.closeTo(10, 9)]);
  });
});
