/** The whole debrief on invented races: what must hold of every result, whatever was sailed. */
import { beforeAll, describe, expect, it } from 'vitest';
import { debrief, type Debrief } from '../../src/debrief.js';
import type { Race } from '../../src/files/race-types.js';
import { angleBetween } from '../../src/math/angles.js';
import { debriefPage } from '../../src/report/page.js';
import { jsonText } from '../../src/result/json.js';
import type { LegResult, Result, TackSide } from '../../src/result/result.js';
import { resultSchema } from '../../src/result/schema.js';
import { condition, generateRace, type GeneratedRace } from '../accuracy/generator/index.js';
import { gpxText, inventedBeat } from '../cli/invented-beat.js';
import { raceOf } from '../steps/sailed-race.js';

const CONDITIONS = [
  condition('station apart', { station: 'away', calibration: true, stationPlaced: false }),
  condition('three boats', { boats: 3, station: 'away', laps: 1 }),
  condition('mastheads', { station: 'none', mastheads: 2 }),
  condition('no wind log', { station: 'none' }),
  condition('current, marks and heel', { current: 0.5, currentTold: true, marksTold: true, mastheads: 1, boats: 1 }),
];

interface Run extends GeneratedRace {
  readonly debriefed: Debrief;
}

async function runOf(generated: GeneratedRace): Promise<Run> {
  return { ...generated, debriefed: await debrief(generated.race, generated.open) };
}

const beats = (result: Result): LegResult[] =>
  result.boats.flatMap(({ legs }) => legs.filter((leg) => leg.kind === 'upwind'));
const sides = ({ steady }: LegResult): TackSide[] =>
  steady ? [steady, steady.port, steady.starboard].filter((side) => side !== null) : [];
const rad = (degrees: number): number => (degrees * Math.PI) / 180;

describe.each(CONDITIONS.map((c) => [c.name, c] as const))('%s', (_, c) => {
  let run: Run;
  let result: Result;
  beforeAll(async () => {
    run = await runOf(generateRace(c, 3));
    result = run.debriefed.result;
  });

  it('has the legs that were sailed', () => {
    expect(beats(result)).toHaveLength(c.boats * c.laps);
  });

  it('is a valid result that JSON gives back as it is', () => {
    expect(resultSchema.safeParse(JSON.parse(jsonText(result))).error?.issues ?? []).toEqual([]);
    expect(JSON.parse(jsonText(result))).toEqual(JSON.parse(JSON.stringify(result)));
  });

  it('has ledgers that sum to a millimetre', () => {
    for (const { ledger } of beats(result)) {
      if (c.station === 'none' && c.mastheads === 0) expect(ledger).toBeNull();
      if (!ledger) continue;
      const sum = ledger.entries.reduce((total, { metres }) => total + (metres?.value ?? 0), 0);
      expect(Math.abs(sum - ledger.lost_m!.value)).toBeLessThan(1e-3);
      expect(Math.abs(ledger.available_m!.value - ledger.made_m!.value - ledger.lost_m!.value)).toBeLessThan(1e-3);
      for (const cause of ['high', 'low', 'trim']) {
        expect(ledger.entries.find((e) => e.cause === cause)!.metres?.value ?? 0).toBeGreaterThanOrEqual(-1e-9);
      }
    }
  });

  it('states drag angles that make up beta', () => {
    for (const side of beats(result).flatMap(sides)) {
      const { aero_drag_angle_deg: aero, hydro_drag_angle_deg: hydro, beta_deg: beta } = side;
      if (aero && hydro) expect(Math.abs(aero.value + hydro.value - beta!.value)).toBeLessThan(1e-6);
      const { sheeting_deg: sheeting, incidence_deg: incidence, leeway_deg: leeway } = side;
      if (!sheeting || !incidence || !leeway) continue;
      expect(Math.abs(incidence.value + sheeting.value + leeway.value - beta!.value)).toBeLessThan(1e-6);
    }
  });

  it('has no VMG above the ceiling of its own beta', () => {
    for (const { steady, ceiling_vmg_kn: ceiling } of beats(result)) {
      if (!ceiling) continue;
      expect(ceiling.value).toBeGreaterThan(steady!.vmg_kn!.value);
      // (1 - sin beta) / (2 sin beta) of the wind; the mean over blocks lies above that of the mean, a few per cent.
      const β = rad(steady!.beta_deg!.value);
      const whole = ((1 - Math.sin(β)) / (2 * Math.sin(β))) * steady!.tws_kn!.value;
      expect(ceiling.value / whole).toBeGreaterThan(0.99);
      expect(ceiling.value / whole).toBeLessThan(1.06);
    }
  });

  it('has triangles that close', () => {
    for (const { gamma_deg, speed_kn, vmg_kn, tws_kn, aws_kn, beta_deg } of beats(result).flatMap(sides)) {
      const γ = rad(gamma_deg!.value);
      // Means over blocks: the mean of a product is not the product of the means, by what the blocks vary.
      expect(Math.abs(vmg_kn!.value / (speed_kn!.value * Math.cos(γ)) - 1)).toBeLessThan(0.015);
      if (!tws_kn) continue;
      const ahead = speed_kn!.value + tws_kn.value * Math.cos(γ);
      const across = tws_kn.value * Math.sin(γ);
      expect(Math.abs(aws_kn!.value / Math.hypot(ahead, across) - 1)).toBeLessThan(0.01);
      expect(Math.abs(beta_deg!.value - (Math.atan2(across, ahead) * 180) / Math.PI)).toBeLessThan(0.3);
    }
  });

  it('counts every record of every log', () => {
    for (const { rows, kept, ignored, rejected } of result.inputs) {
      expect(kept + ignored + rejected.reduce((sum, { count }) => sum + count, 0)).toBe(rows);
    }
  });

  it('has legs and manoeuvres in order, inside the race', () => {
    const { gun, finish } = run.truth;
    for (const boat of result.boats) {
      const times = boat.manoeuvres.map(({ time }) => Date.parse(time));
      expect(times).toEqual([...times].sort((a, b) => a - b));
      boat.legs.forEach(({ start, end }, k) => {
        expect(Date.parse(start) / 1000).toBeGreaterThanOrEqual(gun);
        expect(Date.parse(end) / 1000).toBeLessThanOrEqual(finish + 1);
        if (k > 0) expect(Date.parse(start)).toBeGreaterThanOrEqual(Date.parse(boat.legs[k - 1].end));
      });
    }
  });

  if (c.name === 'no wind log') {
    it('judges nobody without a wind speed, and says why', () => {
      expect(result.wind).toMatchObject({ sources: ['tracks'], tws_kn: { basis: 'inferred' } });
      for (const leg of beats(result)) {
        expect(leg.notes).toContain('wind speed unknown');
        expect(leg).toMatchObject({ optimum: null, ceiling_vmg_kn: null, efficiency: null, share: null, ledger: null });
        const shown = { basis: 'inferred' };
        expect(leg.steady).toMatchObject({ tws_kn: shown, aws_kn: shown, beta_deg: shown, leeway_deg: null });
        expect(leg.steady!.tws_kn!.se! / leg.steady!.tws_kn!.value).toBeGreaterThan(0.05);
        expect(leg.steady!.gamma_deg).toMatchObject({ basis: 'inferred' });
        expect(leg.steady!.gamma_deg!.se).toBeGreaterThanOrEqual(2);
      }
    });
    it('gives the same bytes again: result and page', async () => {
      const again = await debrief(run.race, run.open);
      expect(jsonText(again.result)).toBe(jsonText(result));
      expect(debriefPage(again.result, again.series)).toBe(debriefPage(result, run.debriefed.series));
    });
  }
});

describe('the same race elsewhere', () => {
  // Generated races of one name and seed with the venue given differ in nothing else.
  const at = (venue: readonly [number, number]) =>
    runOf(generateRace(condition('elsewhere', { boats: 1, laps: 1, venue, outliers: false }), 5));

  it('is the same: in the south, and across the date line', async () => {
    const [here, south, line] = [await at([46.9, 9.06]), await at([-46.9, 9.06]), await at([-36.8, 179.9995])];
    const [leg] = beats(here.debriefed.result);
    for (const other of [south, line]) {
      const [same] = beats(other.debriefed.result);
      expect(same.tacks).toBe(leg.tacks);
      for (const key of ['gamma_deg', 'speed_kn', 'vmg_kn'] as const) {
        const [a, b] = [same.steady![key]!.value, leg.steady![key]!.value];
        expect(Math.abs(a / b - 1), key).toBeLessThan(0.01);
      }
      expect(
        angleBetween(other.debriefed.result.wind.twd_deg!.value, here.debriefed.result.wind.twd_deg!.value),
      ).toBeLessThan(0.3);
      // Positions stay together: nobody is thrown round the world.
      const { x } = other.debriefed.series.boats[0];
      expect(Math.max(...x.map(Math.abs).filter((v) => !Number.isNaN(v)))).toBeLessThan(5000);
    }
  });
});

describe('boats of a practice', () => {
  const fixes = inventedBeat();
  const files: Record<string, string> = {
    'ann.gpx': gpxText(fixes),
    // Across the wind from the north all the time.
    'ben.gpx': gpxText(fixes.map((fix, i) => ({ ...fix, lat: 46.9, lon: 9.06 + 3.4e-5 * i }))),
  };
  const open = (file: string) => ({ name: file, chunks: [new TextEncoder().encode(files[file])] });
  const boat = (name: string, file: string) => ({ ...raceOf(file).boats[0], name, boat: 'single-hander' });
  const start = fixes[0].time / 1000;
  const wind: Race['wind'] = [{ kind: 'by-hand', readings: [{ time: null, twd: 0, tws: 5 }], seDir: 5, seSpeed: 0.5 }];
  const practice = (changes: Partial<Race>) =>
    debrief(raceOf('ann.gpx', { wind, boats: [boat('Ann', 'ann.gpx'), boat('Ben', 'ben.gpx')], ...changes }), open);

  it('one without a beat has none, and the other is debriefed', async () => {
    const { result } = await practice({});
    const [ann, ben] = result.boats;
    expect(ann.legs.map(({ kind }) => kind)).toEqual(['upwind']);
    // Four boards of two minutes, 45 degrees off a wind from north, as the track was made.
    expect(ann.legs[0].tacks).toBe(3);
    expect(Math.abs(ann.legs[0].steady!.gamma_deg!.value - 45)).toBeLessThan(0.5);
    expect(ben.legs.filter(({ kind }) => kind === 'upwind')).toEqual([]);
    expect(ben.hints).toEqual([]);
  });

  it('runs that are given are the legs; what is excluded is not judged', async () => {
    const runs = [
      { from: start + 10, to: start + 110 },
      { from: start + 250, to: start + 470 },
    ];
    const { result } = await practice({ runs });
    const span = ({ start: a, end: b }: LegResult) => [Date.parse(a) / 1000 - start, Date.parse(b) / 1000 - start];
    expect(result.boats[0].legs.map(span)).toEqual([
      [10, 110],
      [250, 470],
    ]);
    expect(result.boats[0].legs.map(({ tacks }) => tacks)).toEqual([0, 1]);
    const exclude = [{ from: start + 150, to: start + 220, why: 'a swim' }];
    const without = await practice({ exclude });
    const all = await practice({});
    const seconds = ({ result: r }: Debrief): number => r.boats[0].legs[0].steady!.seconds;
    expect(seconds(without)).toBeLessThan(seconds(all) - 40);
    expect(without.series.boats[0].settled.subarray(150, 220).includes(1)).toBe(false);
  });

  it('a finish ends the last leg, and a mark is where it is given', async () => {
    const finished = await practice({ start, finish: start + 300 });
    expect(Date.parse(finished.result.boats[0].legs[0].end) / 1000).toBeLessThanOrEqual(start + 300);
    const last = fixes[400];
    const marked = await practice({ start, marks: { windward: [{ lat: last.lat, lon: last.lon }] } });
    expect(marked.series.marks).toContainEqual(expect.objectContaining({ role: 'windward', given: true }));
    const gate = [
      { lat: last.lat, lon: last.lon - 1e-4 },
      { lat: last.lat, lon: last.lon + 1e-4 },
    ];
    const through = await practice({ start, marks: { leeward: gate } });
    expect(through.series.marks.find(({ role }) => role === 'leeward')!.places).toHaveLength(2);
  });
});

describe('a wind sensor that freezes', () => {
  const quiet = condition('frozen', { boats: 1, laps: 1, sailHome: false });

  /** The station's log with its vane, or all of it, as it was at `from` for ten minutes. */
  function frozen({ files, truth }: GeneratedRace, both: boolean): Map<string, string> {
    const [header, ...rows] = files.get('station.csv')!.trim().split('\n');
    const from = 300 + Math.round(rows.length / 4);
    const held = rows[from].split(',');
    const changed = rows.map((row, i) => {
      if (i < from || i >= from + 600) return row;
      const cells = row.split(',');
      return [cells[0], held[1], both ? held[2] : cells[2]].join(',');
    });
    expect(truth.station).not.toBeNull();
    return new Map([...files, ['station.csv', [header, ...changed].join('\n')]]);
  }
  const codes = async (race: Race, files: ReadonlyMap<string, string>): Promise<string[]> => {
    const open = (file: string) => ({ name: file, chunks: [new TextEncoder().encode(files.get(file))] });
    return (await debrief(race, open)).result.warnings.map(({ code }) => code);
  };

  it('for ten minutes in mid-race is flagged, vane alone or vane and cups', async () => {
    const race = generateRace(quiet, 2);
    expect(await codes(race.race, frozen(race, false))).toContain('wind-stuck');
    expect(await codes(race.race, frozen(race, true))).toContain('wind-stuck');
  });

  it('is not one that reads a calm steady wind, rounded to whole degrees and half knots', async () => {
    const race = generateRace(
      condition('calm', { ...quiet, name: 'calm', tws: 5, shift: [0, 0.5], trend: [0, 0], gust: 0.02 }),
      2,
    );
    const [header, ...rows] = race.files.get('station.csv')!.trim().split('\n');
    const rounded = rows.map((row) => {
      const [time, twd, tws] = row.split(',');
      return `${time},${Math.round(Number(twd))},${Math.round(2 * Number(tws)) / 2}`;
    });
    const files = new Map([...race.files, ['station.csv', [header, ...rounded].join('\n')]]);
    expect(await codes(race.race, files)).not.toContain('wind-stuck');
  });
});
