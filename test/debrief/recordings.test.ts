/**
 * Real recordings through the whole debrief. What is expected was counted apart from the program: in the raw sentences,
 * here and beforehand, with nothing of the program's.
 */
import { readFileSync } from 'node:fs';
import { beforeAll, describe, expect, it } from 'vitest';
import { debrief, type Debrief } from '../../src/debrief.js';
import { UserError } from '../../src/recording/issues.js';
import { describeRecordings, recording } from '../importers/recordings.js';
import { openRecording, raceOf } from '../steps/sailed-race.js';

const seconds = (iso: string): number => Date.parse(iso) / 1000;

/** A raw NMEA log as a list of what was read under each RMC stamp, by hand and in a few lines. */
interface RawSecond {
  readonly time: number;
  readonly cog: number;
  /** Apparent wind angle, positive over the starboard side; NaN without. [deg] */
  awa: number;
  /** Heading as logged plus its variation; NaN without. [deg] */
  heading: number;
}

function rawSeconds(file: string): RawSecond[] {
  const rows: RawSecond[] = [];
  for (const line of readFileSync(recording(file), 'latin1').split(/\r?\n/)) {
    const f = line.replace(/\*.*/, '').split(',');
    const row = rows.at(-1);
    if (f[0].endsWith('RMC') && f[2] === 'A') {
      const [h, m, s] = [f[1].slice(0, 2), f[1].slice(2, 4), f[1].slice(4)].map(Number);
      const [d, mo, y] = [f[9].slice(0, 2), f[9].slice(2, 4), f[9].slice(4, 6)].map(Number);
      const time = Date.UTC(2000 + y, mo - 1, d, h, m) / 1000 + s;
      rows.push({ time, cog: f[8] === '' ? NaN : Number(f[8]), awa: NaN, heading: NaN });
    } else if (row && f[0].endsWith('VWR')) row.awa = Number(f[1]) * (f[2] === 'R' ? 1 : -1);
    else if (row && f[0].endsWith('MWV') && f[2] === 'R') row.awa = fold(Number(f[1]));
    else if (row && f[0].endsWith('HDG')) row.heading = Number(f[1]) + Number(f[4] || 0) * (f[5] === 'W' ? -1 : 1);
  }
  return rows;
}

const fold = (angle: number): number => ((((angle + 180) % 360) + 360) % 360) - 180;

/** Times at which the vane passes the bow between two stretches of at least `hold` readings on either side of it. */
function passagesOfTheBow(rows: readonly RawSecond[], hold: number): number[] {
  const with_ = rows.filter(({ awa }) => Math.abs(awa) < 90);
  const times: number[] = [];
  let side = 0;
  for (let i = 0; i + hold <= with_.length; i++) {
    const here = Math.sign(with_[i].awa);
    if (here === 0 || here === side) continue;
    if (!with_.slice(i, i + hold).every(({ awa }) => Math.sign(awa) === here)) continue;
    if (side !== 0) times.push(with_[i].time);
    side = here;
  }
  return times;
}

const tacksOf = ({ result }: Debrief, from: number, to: number): number[] =>
  result.boats[0].manoeuvres
    .filter(({ kind, time }) => kind === 'tack' && seconds(time) >= from && seconds(time) <= to)
    .map(({ time }) => seconds(time));

const codes = ({ result }: Debrief): string[] => result.warnings.map(({ code }) => code);
const beatsOf = ({ result }: Debrief) => result.boats[0].legs.filter((leg) => leg.kind === 'upwind');

describeRecordings('two laps of a yacht', () => {
  const file = 'two-laps/two-laps.nmea';
  let laps: Debrief;
  let raw: RawSecond[];
  beforeAll(async () => {
    laps = await debrief(raceOf(file), openRecording);
    raw = rawSeconds(file);
  });
  const day = Date.UTC(2010, 4, 15) / 1000;
  const at = (h: number, m: number): number => day + 3600 * h + 60 * m;

  it('are two beats, with the sailing out and home left out', () => {
    const beats = beatsOf(laps);
    expect(beats).toHaveLength(2);
    for (const [k, from, to] of [
      [0, at(9, 4), at(9, 34)],
      [1, at(10, 35), at(11, 3)],
    ] as const) {
      expect(seconds(beats[k].start)).toBeLessThan(from);
      expect(seconds(beats[k].end)).toBeGreaterThan(to);
      expect(beats[k].tacks).toBeGreaterThanOrEqual(7);
      expect(beats[k].tacks).toBeLessThanOrEqual(8);
    }
  });

  it.each([
    ['first', at(9, 3), at(9, 35)],
    ['second', at(10, 33), at(11, 5)],
  ])('have seven tacks in the %s, when the vane passes the bow', (_, from, to) => {
    const truth = passagesOfTheBow(raw, 15).filter((time) => time >= from && time <= to);
    const found = tacksOf(laps, from, to);
    expect(truth).toHaveLength(7);
    expect(found).toHaveLength(7);
    truth.forEach((time, k) => expect(Math.abs(found[k] - time)).toBeLessThan(8));
  });

  it('have two tacks 24 s apart at 09:33', () => {
    const pair = tacksOf(laps, at(9, 33), at(9, 34));
    expect(pair).toHaveLength(2);
    expect(Math.abs(pair[1] - pair[0] - 24)).toBeLessThan(3);
  });

  it('show the leeway and the compass offset that course less heading shows', () => {
    // Port: leeway + offset, starboard: offset - leeway. Half the sum and half the difference of the two tacks' means
    // over both beats, 40 s after each passage of the bow left out; their errors from the scatter of two-minute means.
    const turns = passagesOfTheBow(raw, 15);
    const spells = new Map<string, { sum: number; n: number }>();
    for (const { time, cog, heading, awa } of raw) {
      const beating = (time > at(9, 0) && time < at(9, 49)) || (time > at(10, 31) && time < at(11, 19));
      const turning = turns.some((turn) => time > turn - 8 && time < turn + 40);
      if (!beating || turning || !(Math.abs(awa) > 15 && Math.abs(awa) < 50) || Number.isNaN(cog + heading)) continue;
      const key = `${awa > 0 ? 'starboard' : 'port'} ${Math.floor(time / 120)}`;
      const spell = spells.get(key) ?? { sum: 0, n: 0 };
      spells.set(key, { sum: spell.sum + fold(cog - heading), n: spell.n + 1 });
    }
    const meanOf = (tack: string): { mean: number; se: number } => {
      const means = [...spells].filter(([key, { n }]) => key.startsWith(tack) && n > 40).map(([, s]) => s.sum / s.n);
      const mean = means.reduce((sum, m) => sum + m, 0) / means.length;
      const variance = means.reduce((sum, m) => sum + (m - mean) ** 2, 0) / (means.length - 1);
      return { mean, se: Math.sqrt(variance / means.length) };
    };
    const [port, starboard] = [meanOf('port'), meanOf('starboard')];
    const offset = (port.mean + starboard.mean) / 2;
    const leeway = (port.mean - starboard.mean) / 2;
    const se = Math.hypot(port.se, starboard.se) / 2;
    // Counted beforehand over less of it: leeway near 6.4, offset or current near 1.5.
    expect(Math.abs(leeway - 6.4)).toBeLessThan(1.5);
    expect(Math.abs(offset - 1.5)).toBeLessThan(1.5);
    const compass = laps.result.boats[0].corrections.compass_offset_deg!;
    expect(Math.abs(compass.value - offset)).toBeLessThan(2 * Math.hypot(compass.se!, se));
    for (const { steady } of beatsOf(laps)) {
      const found = steady!.leeway_deg!;
      expect(Math.abs(found.value - leeway)).toBeLessThan(2 * Math.hypot(found.se!, se));
    }
  });

  it('claim no leeway by the sensors without water speed or current, and say so', () => {
    const told = laps.result.warnings.find(({ code }) => code === 'not-separable')!;
    expect(told.message).toMatch(/leeway by the sensors/);
    for (const { steady } of beatsOf(laps)) expect(steady!.leeway_deg!.basis).toBe('inferred');
  });
});

describeRecordings('a race start in a strong tide', () => {
  const file = 'race-start/race-start.nmea';
  let start: Debrief;
  beforeAll(async () => {
    start = await debrief(raceOf(file), openRecording);
  });
  const at = (h: number, m: number, s: number): number => Date.UTC(2008, 6, 14, h, m, s) / 1000;

  it('has six turns through the wind', () => {
    const truth = [at(19, 45, 30), at(19, 48, 40), at(19, 51, 30), at(19, 57, 30), at(20, 1, 20), at(20, 6, 20)];
    const found = tacksOf(start, 0, Infinity);
    expect(found).toHaveLength(6);
    truth.forEach((time, k) => expect(Math.abs(found[k] - time)).toBeLessThan(15));
    const vane = passagesOfTheBow(rawSeconds(file), 15);
    for (const time of vane) expect(Math.min(...found.map((f) => Math.abs(f - time)))).toBeLessThan(15);
  });

  it('ends in a beat on port tack', () => {
    const beat = beatsOf(start).at(-1)!;
    expect(seconds(beat.start)).toBeLessThan(at(20, 7, 0));
    expect(seconds(beat.end)).toBeGreaterThan(at(20, 18, 0));
    expect(beat.steady!.port!.seconds).toBeGreaterThan(400);
    expect(beat.steady!.port!.seconds).toBeGreaterThan(3 * (beat.steady!.starboard?.seconds ?? 0));
  });

  it('has one jump, left out, and a clock that steps, and both are said', () => {
    expect(codes(start)).toEqual(expect.arrayContaining(['position-jump', 'clock-steps']));
    const jump = start.result.warnings.find(({ code }) => code === 'position-jump')!;
    expect(jump.message).toContain('2008-07-14T20:19:5');
  });

  it('loses no fix for sharing a stamp', () => {
    const [input] = start.result.inputs;
    // RMC sentences that are valid, counted in the text.
    const valid = readFileSync(recording(file), 'latin1').match(/^\$..RMC,[^,]*,A,/gm)!.length;
    for (const { reason } of input.rejected) expect(reason).not.toMatch(/stamp|duplicate|time/);
    const rejected = input.rejected.reduce((sum, { count }) => sum + count, 0);
    expect(rejected).toBeLessThanOrEqual(3);
    // The log ends on a position without its RMC.
    expect(input.fixes + rejected).toBe(valid + 1);
    expect(input.kept + input.ignored + rejected).toBe(input.rows);
  });
});

describeRecordings('a boat under engine', () => {
  const race = (date?: string) =>
    raceOf('motoring/motoring.nmea', {
      boats: [
        {
          ...raceOf('motoring/motoring.nmea').boats[0],
          track: [{ file: 'motoring/motoring.nmea', clockS: 0, ...(date === undefined ? {} : { date }) }],
        },
      ],
    });

  it('is no race: exit code 1, with the engine as the reason', async () => {
    const error = await debrief(race('2020-06-01'), openRecording).catch((e: unknown) => e);
    expect(error).toBeInstanceOf(UserError);
    expect(error).toMatchObject({ exitCode: 1 });
    expect((error as Error).message).toMatch(/no upwind leg[\s\S]*under engine/);
  });

  it('needs a day: exit code 2, with what to give', async () => {
    const error = await debrief(race(), openRecording).catch((e: unknown) => e);
    expect(error).toMatchObject({ exitCode: 2 });
    expect((error as UserError).suggestion).toMatch(/--date/);
  });
});

describeRecordings('cups that do not turn', () => {
  const file = 'port-tack-dead-cups/port-tack.nmea';
  it('are the reason when nothing else tells the wind', async () => {
    const error = await debrief(raceOf(file), openRecording).catch((e: unknown) => e);
    expect(error).toMatchObject({ exitCode: 1 });
    expect((error as Error).message).toMatch(/apparent wind speed reads 0 throughout/);
  });

  it('are flagged and not used where a wind is given by hand', async () => {
    // The boat goes 213 degrees with the vane at about 45 on the port side: a wind from south by west, before its motion.
    const raw = rawSeconds(file).filter(({ cog, awa }) => !Number.isNaN(cog + awa));
    const middle = raw[Math.floor(raw.length / 2)];
    const readings = [{ time: null, twd: (middle.cog - 50 + 360) % 360, tws: 6 }];
    const wind = [{ kind: 'by-hand' as const, readings, seDir: 10, seSpeed: 1 }];
    const given = await debrief(raceOf(file, { wind }), openRecording);
    expect(codes(given)).toContain('wind-dead');
    expect(given.result.wind.sources).not.toContain('on-board');
    for (const { steady } of beatsOf(given)) expect(steady!.starboard).toBeNull();
  });
});

describe.each(['port', 'starboard'] as const)('ten minutes on %s tack', (tack) => {
  describeRecordings('of an instrument system', () => {
    it('are judged on that tack alone', async () => {
      const file = tack === 'port' ? 'port-tack-10hz/instruments.csv' : 'starboard-tack-1hz/instruments.csv';
      const { result } = await debrief(raceOf(file), openRecording);
      const [{ steady }] = result.boats[0].legs;
      expect(steady![tack === 'port' ? 'starboard' : 'port']).toBeNull();
      expect(steady![tack]!.gamma_deg).not.toBeNull();
      expect(steady!.tacking_angle_deg).toBeNull();
      expect(result.boats[0].corrections.compass_offset_deg).toBeNull();
      expect(result.boats[0].manoeuvres.filter(({ kind }) => kind === 'tack')).toEqual([]);
    });
  });
});
