/** The gate: the accuracy runs against the table of tolerances, in the short form, or with LEGWORK_LONG=1 the long one. */
import { beforeAll, describe, expect, it } from 'vitest';
import { TRIALS } from './conditions.js';
import { QUANTITIES, type Measured, type Sample } from './measure.js';
import { runTrial, type Run } from './run.js';
import { f1, summarise, summariseSamples } from './summary.js';
import { GATES, honest, type Tolerance } from './tolerance.js';

const LONG = process.env['LEGWORK_LONG'] === '1';

function samplesOf(m: Measured, quantity: Tolerance['quantity']): { samples: readonly Sample[]; nulls: number } {
  if (quantity === 'wind direction') return { samples: m.direction, nulls: 0 };
  if (quantity in m.corrections) return m.corrections[quantity as keyof Measured['corrections']];
  const leg = quantity as (typeof QUANTITIES)[number];
  return { samples: m.quantities[leg], nulls: m.nulls[leg] };
}

describe.each(GATES)('$condition', (gate) => {
  let run: Run;
  beforeAll(async () => {
    const trial = TRIALS.find((t) => t.condition.name === gate.condition);
    if (!trial) throw new Error(`gate: no condition ${gate.condition}`);
    run = await runTrial(trial, LONG);
  }, 900_000);

  it(`finds the tacks (F1 at least ${gate.tacks}), in the median within ${gate.tackTime} s`, () => {
    expect(f1(run.measured.tacks)).toBeGreaterThanOrEqual(gate.tacks);
    expect(summarise(run.measured.tacks.timeErrors).p50).toBeLessThanOrEqual(gate.tackTime);
  });

  it(`finds every leg and no other, ends within ${gate.legEnds} s on average`, () => {
    const { missed, extra, endErrors, startErrors } = run.measured.legs;
    expect({ missed, extra }).toEqual({ missed: 0, extra: 0 });
    expect(summarise([...startErrors, ...endErrors]).mean).toBeLessThanOrEqual(gate.legEnds);
  });

  it('drops no leg in silence', () => {
    const { quantities, nulls } = run.measured;
    expect(run.failed).toEqual([]);
    for (const quantity of ['gamma', 'speed %', 'vmg %'] as const) {
      expect(quantities[quantity].length + nulls[quantity], quantity).toBe(run.upwindLegs);
      expect(nulls[quantity], `${quantity} without a value`).toBe(0);
    }
  });

  it.each(gate.rows)('$quantity within $mean', (row) => {
    const { samples, nulls } = samplesOf(run.measured, row.quantity);
    expect(samples.length, 'values').toBeGreaterThan(0);
    expect(nulls, 'without a value').toBe(0);
    const { mean, own, ratio, ratioSys } = summariseSamples(samples);
    expect(mean, 'over the true settled seconds').toBeLessThanOrEqual(row.mean);
    expect(own, 'over its own settled seconds').toBeLessThanOrEqual(row.mean);
    if (!row.honest) return;
    const [least, most] = honest(run.races);
    const found = row.withSys ? ratioSys : ratio;
    expect(found, 'error over stated error').toBeGreaterThanOrEqual(least);
    expect(found, 'error over stated error').toBeLessThanOrEqual(most);
  });
});
