/**
 * Instruments reconciled over a whole race, against the planted truth. A few races here; with LEGWORK_LONG=1 ten of each.
 * Limits are of the mean size of the errors.
 */
import { beforeAll, describe, expect, it } from 'vitest';
import { debrief, type Debrief } from '../../src/debrief.js';
import { condition, generateRace, type Condition, type Truth } from '../accuracy/generator/index.js';

const LONG = process.env['LEGWORK_LONG'] === '1';
const seeds = (short: number): number[] => Array.from({ length: LONG ? 10 : short }, (_, i) => i + 1);

interface Run {
  readonly truth: Truth;
  readonly debriefed: Debrief;
}
async function runs(changes: Partial<Condition>, short: number): Promise<Run[]> {
  const all: Run[] = [];
  for (const seed of seeds(short)) {
    const { race, open, truth } = generateRace(condition('sensors', { boats: 1, mastheads: 1, ...changes }), seed);
    all.push({ truth, debriefed: await debrief(race, open) });
  }
  return all;
}

const beats = ({ debriefed }: Run) => debriefed.result.boats[0].legs.filter((leg) => leg.kind === 'upwind');
const size = (errors: readonly number[]): number =>
  errors.reduce((sum, error) => sum + Math.abs(error), 0) / errors.length;

/** Leeway of each beat less the truth over its settled seconds, with the stated error. [deg] */
function leeways(run: Run): { error: number; se: number; basis: string }[] {
  const [boat] = run.truth.boats;
  return beats(run).flatMap(({ start, end, steady }) => {
    const q = steady?.leeway_deg;
    if (!q) return [];
    let [sum, n] = [0, 0];
    for (let i = Date.parse(start) / 1000 - boat.t0; i < Date.parse(end) / 1000 - boat.t0; i++) {
      if (!boat.settled[i]) continue;
      sum += boat.leeway[i];
      n++;
    }
    return n > 0 ? [{ error: q.value - sum / n, se: q.se!, basis: q.basis }] : [];
  });
}

describe('with the current given and all courses sailed', () => {
  let all: Run[];
  beforeAll(async () => {
    all = await runs({ station: 'same', current: 0.6, currentTold: true }, 2);
  });

  it('compass, masthead, wind direction and leeway are found', () => {
    const of = (pick: (run: Run) => number): number => size(all.map(pick));
    const own = (run: Run) => run.debriefed.result.boats[0].corrections;
    expect(of((run) => own(run).compass_offset_deg!.value + run.truth.boats[0].compassError!)).toBeLessThan(0.4);
    expect(of((run) => own(run).awa_offset_deg!.value + run.truth.boats[0].mastheadError!)).toBeLessThan(0.7);
    const station = (run: Run): number =>
      run.debriefed.result.corrections.twd_offset_deg!.value + run.truth.station!.direction;
    expect(of(station)).toBeLessThan(0.7);
    const found = all.flatMap(leeways);
    expect(found.length).toBeGreaterThanOrEqual(2 * all.length);
    expect(size(found.map(({ error }) => error))).toBeLessThan(0.25);
    for (const { basis } of found) expect(basis).toBe('measured');
  });
});

describe('with 0.4 knots of current that nobody told', () => {
  it('the current is found or warned of, never leeway in silence', async () => {
    const all = [
      ...(await runs({ station: 'same', current: 0.4, logsWaterSpeed: true }, 1)),
      ...(await runs({ station: 'same', current: 0.4, logsWaterSpeed: false }, 1)),
    ];
    for (const run of all) {
      const { current } = run.debriefed.result.corrections;
      const warned = run.debriefed.result.warnings.some(({ code }) => /current|not-separable/.test(code));
      expect(current !== null || warned).toBe(true);
      const east = current ? current.drift_kn!.value * Math.sin((current.set_deg!.value * Math.PI) / 180) : NaN;
      const north = current ? current.drift_kn!.value * Math.cos((current.set_deg!.value * Math.PI) / 180) : NaN;
      const knots = (speed: number): number => (speed * 3600) / 1852;
      if (current) {
        const off = Math.hypot(east - knots(run.truth.current.east), north - knots(run.truth.current.north));
        expect(off).toBeLessThan(0.25);
      }
    }
    const found = all.flatMap(leeways);
    expect(size(found.map(({ error }) => error))).toBeLessThan(1);
    // Inside two of its own errors, but for the one in twenty that may lie outside.
    const outside = found.filter(({ error, se }) => Math.abs(error) > 2 * se + 0.1);
    expect(outside.length / found.length).toBeLessThanOrEqual(0.1);
  });
});
