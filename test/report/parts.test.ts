import { readFileSync } from 'node:fs';
import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { dayBest, difference, settledMean, tackCost, timeMean, total, upwindLegs } from '../../src/report/figures.js';
import { findingsOf } from '../../src/report/findings.js';
import { duration, errorNote, inline, plain, quantity, signed } from '../../src/report/format.js';
import { html } from '../../src/report/html.js';
import { sanitizeJson } from '../../src/report/json.js';
import { errorSentence } from '../../src/report/notes.js';
import {
  decodePayload,
  encodePayload,
  MOST_ROWS,
  MOST_ROWS_IN_ALL,
  stretches,
  type ColumnName,
} from '../../src/report/payload.js';
import { debriefPage } from '../../src/report/page.js';
import type { BoatResult, Cause, Quantity } from '../../src/result/result.js';
import { buildClient, GENERATED } from './build-client.js';
import { sample } from './sample.js';

const { result, series } = sample();

function q(value: number, se: number | null, basis: Quantity['basis'] = 'derived'): Quantity {
  return { value, se, basis };
}

test('the bundled client is that of the sources', async () => {
  expect((await buildClient()) === readFileSync(GENERATED, 'utf8'), 'run npm run build:client').toBe(true);
});

describe('markup', () => {
  test('whatever text goes in comes out as text', () => {
    fc.assert(
      fc.property(fc.string({ unit: 'grapheme' }), (text) => {
        expect(html`<b title="${text}">${text}</b>`.safe.replace(/&[a-z#0-9]+;/g, '')).toMatch(
          /^<b title="[^<>"]*">[^<>"]*<\/b>$/,
        );
      }),
    );
  });

  test('JSON in a script element reads back the same and cannot end it', () => {
    fc.assert(
      fc.property(fc.jsonValue(), fc.constantFrom('</script>', '<!--', '\u2028', '&lt;'), (value, bad) => {
        const text = sanitizeJson({ value, [bad]: bad });
        expect(text).not.toMatch(/[<>&\u2028\u2029]/);
        expect(JSON.parse(text)).toEqual(JSON.parse(JSON.stringify({ value, [bad]: bad })));
      }),
    );
  });
});

describe('numbers', () => {
  test('a true minus, never a negative zero', () => {
    expect(plain(-0.004, 2)).toBe('0.00');
    expect(plain(-1.25, 1)).toBe('−1.3');
    expect(signed(0.004, 2)).toBe('0.00');
    expect(signed(2, 0)).toBe('+2');
    expect(plain(NaN, 2)).toBe('–');
  });

  test('an error too small for the figures gets one more', () => {
    expect(inline(q(0.953, 0.004), 'percent', { times: 100 }).safe).toContain('>95.3<');
    expect(inline(q(0.953, 0.02), 'percent', { times: 100 }).safe).toContain('>95<');
  });

  test('the note says value, error, calibration and basis', () => {
    const note = errorNote({ ...q(3.456, 0.031), sys: 0.08 }, 'kn');
    expect(note).toBe('±0.03\u00a0kn, ±0.08\u00a0kn by calibration; derived');
    expect(errorSentence('3.46\u00a0kn', note)).toBe(
      '3.46\u00a0kn: ±0.03\u00a0kn (one standard error); a further ±0.08\u00a0kn if the instruments are out by their usual calibration error; worked out from measurements by geometry.',
    );
    expect(errorNote({ ...q(3.456, 0.031), sys: 0.004 }, 'kn')).not.toContain('calibration');
    expect(errorSentence('1', errorNote(q(1, null, 'assumed'), 'm'))).toBe('1: no error could be stated; assumed.');
  });

  test('what is not known is a dash, not a number', () => {
    expect(quantity(null, 'kn').safe).toBe('<span class="none" title="not known">–</span>');
  });

  test('minutes and seconds', () => {
    expect(duration(619)).toBe('10:19');
    expect(duration(59.7)).toBe('1:00');
  });
});

describe('sums and differences', () => {
  test('errors in quadrature, the weakest basis (3-4-5)', () => {
    expect(difference(q(7, 3), q(2, 4, 'inferred'))).toEqual({ value: 5, se: 5, basis: 'inferred' });
    expect(total([q(1, 3), q(2, 4)])).toEqual({ value: 3, se: 5, basis: 'derived' });
    expect(difference(q(1, null), q(1, 1))!.se).toBeNull();
    expect(total([q(1, 1), null])).toBeNull();
  });

  test('a mean by time keeps the shared calibration error whole', () => {
    const mean = timeMean([
      { q: { ...q(3, 0.3), sys: 0.1 }, seconds: 300 },
      { q: { ...q(4, 0.3), sys: 0.1 }, seconds: 100 },
    ])!;
    expect(mean.value).toBeCloseTo(3.25, 12);
    expect(mean.se).toBeCloseTo(0.3 * Math.hypot(0.75, 0.25), 12);
    expect(mean.sys).toBeCloseTo(0.1, 12);
  });

  test('the settled mean is that of the settled seconds themselves', () => {
    for (const [i, boat] of result.boats.entries()) {
      const s = series.boats[i];
      const rows = [...s.settled.keys()].filter((row) => s.settled[row]);
      const knots = rows.reduce((sum, row) => sum + s.vmg[row], 0) / rows.length / (1852 / 3600);
      expect(settledMean(boat, 'vmg_kn')!.value).toBeCloseTo(knots, 6);
    }
  });

  test('the best of the day has no better beside it', () => {
    const best = dayBest(result)!;
    const all = result.boats.flatMap((b) => upwindLegs(b).map(({ leg }) => leg.steady!.vmg_kn!.value));
    expect(best.vmg.value).toBe(Math.max(...all));
  });

  test('findings leave shifts out and fall in size', () => {
    const found = findingsOf(result.boats[1], 3);
    expect(found.some(({ causes }) => causes.has('shifts'))).toBe(false);
    const metres = found.map((one) => one.metres.value);
    expect(metres).toEqual([...metres].sort((a, b) => b - a));
  });

  /** A boat with one beat and such a ledger. */
  function boatWith(entries: Partial<Record<Cause, number>>): BoatResult {
    const [boat] = result.boats;
    const [leg] = boat.legs;
    const made = Object.entries(entries).map(([cause, metres]) => ({ cause: cause as Cause, metres: q(metres, 3) }));
    return { ...boat, legs: [{ ...leg, ledger: { ...leg.ledger!, entries: made } }] };
  }

  test('an angle that speed has paid for is no finding by itself: they are told together, with their parts', () => {
    const low = boatWith({ manoeuvres: 20, high: 0, low: 77, trim: 0, speed: -71, shifts: -40 });
    const found = findingsOf(low, 3);
    expect(found.map(({ words }) => words)).toEqual(['Tacks and turns', 'Angle and speed together']);
    expect(found[1].metres).toEqual({ value: 6, se: 6, basis: 'derived' }); // four errors of 3 in quadrature
    expect(found[1].parts.map(({ cause, metres }) => [cause, metres.value])).toEqual([['low', 77], ['speed', -71]]); // prettier-ignore
    const page = debriefPage({ ...result, boats: [low, result.boats[1]] }, series);
    expect(page).toMatch(
      /Angle and speed together<\/span>.*?sailing low <span class="n">77<\/span>, speed for the angle <span class="n">−71/,
    );
  });

  test('an angle that nothing paid for stays a finding of its own', () => {
    const found = findingsOf(boatWith({ manoeuvres: 20, high: 35, low: 0, speed: 8 }), 3);
    expect(found.map(({ words }) => words)).toEqual(['Sailing high', 'Tacks and turns', 'Speed for the angle']);
  });

  test('nobody is told apart whom the error does not tell apart', () => {
    const [a, b] = result.boats;
    const at = (boat: BoatResult, vmg: number): BoatResult => ({
      ...boat,
      legs: boat.legs.map((leg) => ({ ...leg, vmg_kn: q(vmg, 0.05), steady: leg.steady && { ...leg.steady, vmg_kn: q(vmg, 0.05) } })),
    }); // prettier-ignore
    const leadOf = (first: number, second: number): string => {
      const page = debriefPage({ ...result, boats: [at(a, first), at(b, second)] }, series);
      return page.slice(page.indexOf('<dl class="lead"'), page.indexOf('</dl>'));
    };
    expect(leadOf(3.5, 3.48)).toContain('no difference shown');
    expect(leadOf(3.5, 3.48)).not.toContain('<b><bdi>Corrie</bdi></b> by <span class="nb"><span class="n">0.02');
    expect(leadOf(3.9, 3.48)).toContain('<b><bdi>Corrie</bdi></b> by <span class="nb"><span class="n">0.42');
    expect(leadOf(3.48, 3.9)).toContain('<b><bdi>Linnet</bdi></b> by <span class="nb"><span class="n">0.42');
  });

  test('the cost of a tack is the mean over the tacks of that leg', () => {
    const boat = result.boats[0];
    const leg = boat.legs[0];
    const own = boat.manoeuvres.filter((m) => m.kind === 'tack' && m.time >= leg.start && m.time <= leg.end);
    expect(own).toHaveLength(leg.tacks);
    expect(tackCost(boat, leg)!.value).toBeCloseTo(own.reduce((s, m) => s + m.loss_m!.value, 0) / own.length, 12);
  });
});

describe('the series in the page', () => {
  /** Half a step of what is carried; of what is worked out, what half a step of its parts can make. */
  const TOLERANCE: Readonly<Record<ColumnName, number>> = {
    x: 0.05, y: 0.05, ux: 0.001, uy: 0.001, twd: 0.05, tws: 0.005, heading: 0.05,
    speed: 0.002, vmg: 0.004, gamma: 0.25, beta: 0.25, aws: 0.012,
  }; // prettier-ignore

  test('comes back as it was, to half a step, gaps and all, and so does what is worked out of it', () => {
    const holed = {
      ...series,
      boats: series.boats.map((b) => ({ ...b, tws: b.tws.map((v, i) => (i % 7 ? v : NaN)) })),
    };
    decodePayload(encodePayload(holed)).forEach((columns, k) => {
      for (const name of Object.keys(TOLERANCE) as ColumnName[]) {
        const needsWind = name === 'beta' || name === 'aws';
        const was = holed.boats[k][name];
        expect(columns[name]).toHaveLength(was.length);
        was.forEach((v, i) => {
          const known = !Number.isNaN(v) && !(needsWind && Number.isNaN(holed.boats[k].tws[i]));
          if (!known) expect(columns[name][i]).toBeNaN();
          else expect(Math.abs(columns[name][i] - v), name).toBeLessThanOrEqual(TOLERANCE[name] + 1e-9);
        });
      }
    });
  });

  test('the same series gives the same text', () => {
    expect(encodePayload(series).data).toBe(encodePayload(sample().series).data);
  });

  test('a day at one row a second is thinned, and its times stay true', () => {
    const n = 86400;
    const long = (value: (i: number) => number): Float64Array => Float64Array.from({ length: n }, (_, i) => value(i));
    const b = series.boats[0];
    const flat = long(() => 1);
    const boat = { ...b, n, x: long((i) => i), y: flat, ux: flat, uy: flat, vx: flat, vy: flat, twd: flat, tws: flat, gamma: flat, speed: flat, vmg: flat, beta: flat, aws: flat, heading: flat, settled: new Uint8Array(n) }; // prettier-ignore
    const payload = encodePayload({ ...series, boats: [boat] });
    const [columns] = decodePayload(payload);
    expect(payload.boats[0].rows).toBeLessThanOrEqual(MOST_ROWS);
    expect(columns.x[100]).toBeCloseTo(100 * payload.step, 6);
    const fleet = encodePayload({ ...series, boats: Array.from({ length: 20 }, () => ({ ...boat, n: 7200 })) });
    expect(fleet.step).toBe(5); // 144,000 rows, by hand
    expect(fleet.boats.reduce((sum, one) => sum + one.rows, 0)).toBeLessThanOrEqual(MOST_ROWS_IN_ALL);
  });

  test('stretches of flags', () => {
    expect(stretches(Uint8Array.of(1, 1, 0, 0, 1, 0, 1))).toEqual([[0, 2], [4, 5], [6, 7]]); // prettier-ignore
  });
});
