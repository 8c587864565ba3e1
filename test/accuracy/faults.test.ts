/** Planted faults are found: the faulty boat's excess over the others lies where it was planted, and is of its size. */
import { beforeAll, describe, expect, it } from 'vitest';
import { TRIALS } from './conditions.js';
import { SHOWS_IN, type PlantedCause } from './planted.js';
import { meanExcess, runTrial, type Run } from './run.js';

const faulty = TRIALS.filter((t) => Object.keys(t.condition.faults).length > 0);

/**
 * Stated over true metres. Wide, because the debrief measures against the best boat of the day by its own model, and
 * the truth against the invented boat; and because it leaves out the seconds it cannot call settled.
 */
const SIZE = [0.3, 2.5] as const;

describe.each(faulty.map((t) => [t.condition.name, t] as const))('%s', (_, trial) => {
  let run: Run;
  beforeAll(async () => {
    run = await runTrial(trial);
  });

  it('shows in its own entry of the ledger, with its size', () => {
    const fault = Object.keys(trial.condition.faults)[0] as keyof typeof SHOWS_IN;
    const rows = meanExcess(run).filter((row) => SHOWS_IN[fault].includes(row.cause));
    const total = (pick: 'truth' | 'stated'): number => rows.reduce((sum, row) => sum + row[pick], 0);
    expect(run.failed).toEqual([]);
    expect(rows.every((row) => row.n === run.races)).toBe(true);
    expect(total('stated') / total('truth')).toBeGreaterThan(SIZE[0]);
    expect(total('stated') / total('truth')).toBeLessThan(SIZE[1]);
  });

  it('is the largest excess but for shifts, which no habit makes', () => {
    const fault = Object.keys(trial.condition.faults)[0] as keyof typeof SHOWS_IN;
    const skip: PlantedCause[] = fault === 'headed' ? [] : ['shifts'];
    const ranked = meanExcess(run)
      .filter((row) => !skip.includes(row.cause))
      .sort((a, b) => b.stated - a.stated);
    expect(SHOWS_IN[fault]).toContain(ranked[0].cause);
  });
});
