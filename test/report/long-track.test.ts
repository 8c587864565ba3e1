/** A track of days: no chart hands every second on as an argument of a call. */
import { expect, it } from 'vitest';
import type { BoatSeries } from '../../src/result/series.js';
import { windStrip } from '../../src/report/charts/wind-strip.js';

it('draws the wind of two days and a half, its largest swing and all', () => {
  const n = 216_000;
  const twd = Float64Array.from({ length: n }, (_, i) => 210 + (i === 150_000 ? 25 : 0));
  const svg = windStrip({ name: 'Alder', t0: 1_780_000_000, n, twd } as BoatSeries, []);
  expect(svg).toContain('</svg>');
  // The scale reaches to the swing: 20 degrees above the mean is on it.
  expect(svg).toContain('230');
  expect(svg.length).toBeLessThan(60_000);
});
