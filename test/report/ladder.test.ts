import { describe, expect, test } from 'vitest';
import type { PairLadder } from '../../src/compare.js';
import { ladder, ladderSheet } from '../../src/report/charts/ladder.js';
import { signed } from '../../src/report/format.js';
import { ledgerGaps } from '../../src/report/ledger-gaps.js';
import { comparePage } from '../../src/report/page.js';
import { climbOf, heightOf, shareOnTheRight } from '../../src/report/rungs.js';
import type { BoatResult, Cause, Ledger, LegResult, Q } from '../../src/result/result.js';
import { noWindSpeedSample, renamed, sample } from './sample.js';
import { sampleLadders } from './sample-ladders.js';

const full = sample();
const { result, series } = full;
const pairs = sampleLadders(full);
const climbs = pairs[0].legs.map((leg) => climbOf(leg, [series.boats[0], series.boats[1]], [0, 1]));

const textOf = (page: string, id: string): string => {
  const from = page.indexOf(`<section id="${id}"`);
  return page.slice(from, page.indexOf('</section>', from)).replace(/<[^>]+>/g, '');
};

describe('both boats on the rungs', () => {
  test('both beats of the sample are there', () => {
    expect(climbs.map(({ leg }) => leg.lap)).toEqual([1, 2]);
  });

  test('the difference of their rungs is the lead and what was gained since, at every row', () => {
    for (const { rows, leg } of climbs) {
      for (const { places, gain } of rows) expect(places[0].rung - places[1].rung).toBeCloseTo(leg.lead + gain, 6);
    }
  });

  test('turning the water keeps distances: rung and across are a turn of east and north', () => {
    const [{ rows }] = climbs;
    const [a, b] = series.boats;
    for (const { time, places } of rows) {
      const [i, j] = [time - a.t0, time - b.t0];
      const apart = Math.hypot(a.x[i] - b.x[j], a.y[i] - b.y[j]);
      expect(Math.hypot(places[0].rung - places[1].rung, places[0].across - places[1].across)).toBeCloseTo(apart, 6);
    }
  });

  test('a boat on port tack goes to the right: the wind is over her port side', () => {
    for (const { rows } of climbs) {
      for (let k = 1; k < rows.length; k++) {
        const gamma = series.boats[0].gamma.subarray(rows[k - 1].time - series.boats[0].t0, rows[k].time - series.boats[0].t0 + 1); // prettier-ignore
        const right = rows[k].places[0].across > rows[k - 1].places[0].across;
        if (gamma.every((g) => g < -30)) expect(right).toBe(true);
        if (gamma.every((g) => g > 30)) expect(right).toBe(false);
      }
    }
  });

  test('tacks are those of the two boats within the beat, each onto the tack it was made to', () => {
    for (const { leg, tacks } of climbs) {
      const counted = series.boats.flatMap((boat) =>
        boat.manoeuvres.filter(({ kind, at }) => kind === 'tack' && boat.t0 + at >= leg.from && boat.t0 + at <= leg.to),
      );
      expect(tacks).toHaveLength(counted.length);
      for (const { boat, time, onto } of tacks) {
        const after = series.boats[boat].gamma[time - series.boats[boat].t0 + 12];
        expect(onto).toBe(after > 0 ? 'starboard' : 'port');
      }
    }
  });

  test('the share on the right turns round with the boats', () => {
    const [leg] = sampleLadders({ result: { ...result, boats: [...result.boats].reverse() }, series: { ...series, boats: [...series.boats].reverse() } })[0].legs; // prettier-ignore
    const back = climbOf(leg, [series.boats[1], series.boats[0]], [1, 0]);
    expect(shareOnTheRight(back)).toBeCloseTo(1 - shareOnTheRight(climbs[0]), 9);
  });
});

describe('the picture of a ladder', () => {
  test('holds every place and every gain within its panels', () => {
    for (const climb of climbs) {
      const sheet = ladderSheet(climb);
      for (const row of climb.rows) {
        for (const { rung, across } of row.places) {
          expect(sheet.x0 + across * sheet.scale).toBeGreaterThanOrEqual(sheet.tracks[0]);
          expect(sheet.x0 + across * sheet.scale).toBeLessThanOrEqual(sheet.tracks[1]);
          expect(sheet.y0 - rung * sheet.scale).toBeLessThanOrEqual(sheet.foot);
          expect(sheet.y0 - rung * sheet.scale).toBeGreaterThan(30);
        }
        expect(Math.abs(row.gain)).toBeLessThan(sheet.reach);
        expect(Number.isFinite(heightOf(row))).toBe(true);
      }
    }
  });

  test('says in words what it shows, and breaks off where a track has a gap', () => {
    const [climb] = climbs;
    expect(ladder(climb)).toMatch(/aria-label="Ladder of lap 1, wind from the top.*gained.*by shifts/);
    const hole = { rung: NaN, across: NaN };
    const rows = climb.rows.map((row, k) =>
      k > 40 && k < 60 ? { ...row, gain: NaN, places: [hole, row.places[1]] as const } : row,
    );
    const broken = ladder({ ...climb, rows });
    expect(broken).not.toMatch(/NaN|Infinity|undefined/);
    expect(broken.match(/d="M[^"]*M[^"]*"/g)!.length).toBeGreaterThanOrEqual(2);
  });
});

describe('the page of a comparison', () => {
  const page = comparePage(result, series, pairs);

  test('tells the gain of each beat, shifts apart, as the ladder has it', () => {
    const words = textOf(page, 'ladder');
    for (const { gain, parts } of pairs[0].legs) {
      const name = gain > 0 ? 'Corrie' : 'Linnet';
      expect(words).toContain(`${name} gained ${Math.abs(gain).toFixed(0)}`);
      const given = signed(parts.shifts * Math.sign(gain), 0);
      expect(words.replace(/\s+/g, '')).toContain(`gaveher${given}&nbsp;m`);
    }
    expect(page).toContain('href="#ladder"');
  });

  test('without ladders there is no such section, and no way to it', () => {
    for (const bare of [
      comparePage(result, series),
      comparePage(result, series, [{ boats: ['Corrie', 'Linnet'], legs: [] }]),
    ]) {
      // prettier-ignore
      expect(bare).not.toContain('id="ladder"');
      expect(bare).not.toContain('#ladder"');
    }
  });

  test('a clock that was set right is told where gains hang on it', () => {
    const message = 'The clock of Linnet is 7 s ahead of the others\'. It was set right here.'; // prettier-ignore
    const skewed = { ...result, warnings: [{ code: 'clock-skew', message }] };
    expect(textOf(comparePage(skewed, series, pairs), 'ladder')).toContain('The clock of Linnet is 7 s ahead');
  });

  test('a hostile name stays text in picture, words and tables; without wind speed nothing odd is shown', () => {
    const hostile = renamed(full, '"><img src=x>');
    const evil = comparePage(hostile.result, hostile.series, sampleLadders(hostile));
    expect(evil).toContain('id="ladder"');
    expect(evil).not.toContain('<img');
    const calm = noWindSpeedSample();
    expect(textOf(comparePage(calm.result, calm.series, sampleLadders(calm)), 'ladder')).not.toMatch(/NaN|undefined|Infinity/); // prettier-ignore
  });

  test('a fleet of seven: the first pairs are drawn, each other pair has its row, and the page grows by little', () => {
    const names = Array.from({ length: 7 }, (_, k) => `Boat ${k}`);
    const boats = names.map((name, k) => ({ ...series.boats[k % 2], name }));
    const results = names.map((name, k) => ({ ...result.boats[k % 2], name }));
    const all = names.flatMap((a, i) => names.slice(i + 1).map((b): PairLadder => ({ boats: [a, b], legs: pairs[0].legs }))); // prettier-ignore
    const [race, columns] = [
      { ...result, boats: results, pairs: [] },
      { ...series, boats },
    ];
    const fleet = comparePage(race, columns, all);
    expect(fleet.length - comparePage(race, columns).length).toBeLessThan(300_000);
    expect(fleet.match(/class="ladder"/g)).toHaveLength(6); // three pairs of two beats
    expect(fleet.match(/<bdi>Boat \d<\/bdi> on <bdi>Boat \d<\/bdi>/g)).toHaveLength(18); // 21 pairs less three
  });
});

describe('one ledger less another', () => {
  const q = (value: number, se: number): Q => ({ value, se, basis: 'derived' });
  const leg = (lap: number, entries: readonly (readonly [Cause, number, number])[], reference: Ledger['reference'] = 'best'): LegResult => ({ ...result.boats[0].legs[0], lap, ledger: { reference, available_m: null, made_m: null, lost_m: null, entries: entries.map(([cause, value, se]) => ({ cause, metres: q(value, se) })) } }); // prettier-ignore
  const boat = (name: string, legs: readonly LegResult[]): BoatResult => ({ ...result.boats[0], name, legs });

  test('differences lap by lap, errors in quadrature, shifts apart, sums of what is shown (3-4-5)', () => {
    const a = boat('A', [leg(1, [['manoeuvres', 30, 3], ['high', 0, 0], ['shifts', 5, 3]]), leg(2, [['manoeuvres', 10, 0]])]); // prettier-ignore
    const b = boat('B', [
      leg(1, [
        ['manoeuvres', 10, 4],
        ['high', 0, 0],
        ['shifts', 9, 4],
      ]),
    ]);
    const gaps = ledgerGaps(a, b)!;
    expect(gaps.laps).toEqual([1]);
    expect(gaps.causes.map(({ cause }) => cause)).toEqual(['manoeuvres']);
    expect(gaps.causes[0].together).toEqual(q(20, 5));
    expect(gaps.causes[0].stands).toBe(true);
    expect(gaps.shifts).toMatchObject({ together: q(-4, 5), stands: false });
    expect(gaps.before.together).toEqual(q(20, 5));
  });

  test('of equal boats a cause is told at most one time in twenty', () => {
    // Eight causes with normal errors of known size, by Box and Muller from a seeded generator.
    let state = 12;
    const uniform = (): number => ((state = (1664525 * state + 1013904223) % 2 ** 32) + 1) / (2 ** 32 + 1);
    const normal = (): number => Math.sqrt(-2 * Math.log(uniform())) * Math.cos(2 * Math.PI * uniform());
    const causes: Cause[] = ['manoeuvres', 'start', 'high', 'low', 'speed', 'overstood', 'stopped', 'shifts'];
    const one = (name: string): BoatResult =>
      boat(name, [leg(1, causes.map((c) => [c, 10 + 4 * normal(), 4] as const))]); // prettier-ignore
    const races = 2000;
    let told = 0;
    for (let k = 0; k < races; k++) {
      const { causes: seen, shifts } = ledgerGaps(one('A'), one('B'))!;
      if ([...seen, shifts!].some(({ stands }) => stands)) told++;
    }
    expect(told / races).toBeLessThan(0.05 + 3 * Math.sqrt((0.05 * 0.95) / races));
    expect(told / races).toBeGreaterThan(0.03);
  });

  test('no lap in common, no ledger, or another reference: no table', () => {
    const a = boat('A', [leg(1, [['high', 3, 1]])]);
    expect(ledgerGaps(a, boat('B', [leg(2, [['high', 3, 1]])]))).toBeNull();
    expect(ledgerGaps(a, boat('B', [leg(1, [['high', 3, 1]], 'model')]))).toBeNull();
    expect(ledgerGaps(a, boat('B', [{ ...leg(1, []), ledger: null }]))).toBeNull();
  });
});
