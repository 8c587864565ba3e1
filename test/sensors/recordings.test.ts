import { readFileSync } from 'node:fs';
import { expect, it } from 'vitest';
import { importLog } from '../../src/importers/index.js';
import type { ImportOptions } from '../../src/importers/types.js';
import { makeFrame, middleOf } from '../../src/math/geo.js';
import { findEngine } from '../../src/sensors/engine.js';
import { trueHeading } from '../../src/sensors/magnetic.js';
import { findStuckWind } from '../../src/sensors/stuck.js';
import { smoothTrack } from '../../src/smooth/index.js';
import { describeRecordings, recording } from '../importers/recordings.js';

// Real recordings. What is expected was seen apart from this program, with short scripts on the raw columns.

async function load(file: string, options: ImportOptions = {}) {
  const log = await importLog({ name: file, chunks: [new Uint8Array(readFileSync(recording(file)))] }, options);
  return log.recording;
}

async function smooth(file: string, options: ImportOptions = {}, without: readonly string[] = []) {
  const whole = await load(file, options);
  const channels = Object.fromEntries(Object.entries(whole.channels).filter(([name]) => !without.includes(name)));
  const log = { ...whole, channels };
  const middle = middleOf(log.channels.lat, log.channels.lon)!;
  return { log, ...smoothTrack(log, makeFrame(middle.lat, middle.lon), { file }) };
}

const SAILING = [
  'two-laps/two-laps.nmea',
  'race-start/race-start.nmea',
  'port-tack-dead-cups/port-tack.nmea',
  'port-tack-10hz/instruments.csv',
  'starboard-tack-1hz/instruments.csv',
];
const OWN_WIND = ['awa', 'aws', 'stw', 'tws', 'twd', 'twa'];

describeRecordings('sensors on real recordings', () => {
  it('dead cups are told from a log whose apparent wind speed is 0.0 throughout', async () => {
    const { issues, masks } = findStuckWind(await load('port-tack-dead-cups/port-tack.nmea'));
    expect(issues.map(({ code }) => code)).toEqual(['wind-dead']);
    expect(Object.keys(masks)).toContain('tws');
    expect(masks.awa).toBeUndefined();
  });

  it.each([
    ['two-laps/two-laps.nmea', {}],
    ['race-start/race-start.nmea', {}],
    ['port-tack-10hz/instruments.csv', {}],
    ['starboard-tack-1hz/instruments.csv', {}],
    ['two-laps/dock-wind-1hz.csv', {}],
    ['station-sonic/wind-1hz.csv', { zone: 'America/Denver' }],
    ['station-1min/midc-wind-1min.csv', { zone: 'Etc/GMT+7' }],
    ['station-1min/surfrad-wind-1min.csv', {}],
  ] as const)('nothing is stuck in %s', async (file, options) => {
    expect(findStuckWind(await load(file, options)).issues).toEqual([]);
  });

  it.each([
    ['with its wind', []],
    ['with its wind but no speeds logged', ['sog', 'cog']],
    ['from the track alone', OWN_WIND],
    ['from positions alone', [...OWN_WIND, 'sog', 'cog']],
  ] as const)('an engine is told %s', async (_, without) => {
    const { track } = await smooth('motoring/motoring.nmea', { date: '2020-06-01' }, without);
    const { issues, mask } = findEngine(track);
    expect(issues.map(({ code }) => code)).toEqual(['under-engine']);
    // The first hour goes at one speed.
    expect(mask.slice(300, 3000).reduce((sum, m) => sum + m, 0)).toBeGreaterThan(2200);
  });

  it.each(SAILING)('no engine in %s, with or without its wind and speeds', async (file) => {
    for (const without of [[], OWN_WIND, [...OWN_WIND, 'sog', 'cog']]) {
      const { track } = await smooth(file, {}, without);
      const { mask, issues } = findEngine(track);
      expect(issues).toEqual([]);
      expect(mask.reduce((sum, m) => sum + m, 0)).toBe(0);
    }
  });

  it("takes the log's own variation before the model begins, and the model's after", async () => {
    // 6 E in every sentence, 2010; 15.0 E in every sentence, 2008.
    expect(trueHeading(await load('two-laps/two-laps.nmea'))).toMatchObject({ source: 'log-alone' });
    expect(trueHeading(await load('two-laps/two-laps.nmea')).variation).toBeCloseTo(6, 6);
    expect(trueHeading(await load('race-start/race-start.nmea')).variation).toBeCloseTo(15, 6);
    // 0.9 and 1.0 E, 2016, within 2 degrees of the model at 52.5 N 5.3 E.
    expect(trueHeading(await load('port-tack-dead-cups/port-tack.nmea'))).toMatchObject({ source: 'log' });
  });
});

describeRecordings('clean tracks of real recordings', () => {
  it('a jump of 213 m at the end of a race start is found', async () => {
    const { issues, track } = await smooth('race-start/race-start.nmea');
    const jump = issues.find(({ code }) => code === 'position-jump')!;
    // Between two sentences under the stamp 20:19:50 the latitude drops by 0.115 minutes: 213 m.
    expect(jump.message).toMatch(/jumps once, by up to 2[012]\d m, first at 2008-07-14T20:19:5/);
    const fastest = Math.max(...track.vx.map((v, i) => Math.hypot(v, track.vy[i])).filter((v) => !Number.isNaN(v)));
    // The jump is 107 m/s from one fix to the next; two fixes before it the receiver wanders off by 17 m within 2 s.
    expect(fastest).toBeLessThan(9);
  });

  it('the damped speed of one display lags by some seconds, the others hardly', async () => {
    // Least squared difference of logged velocity to chords of the fixes: 4 to 5 s there, 0 to 1 s in the others.
    expect((await smooth('race-start/race-start.nmea')).noise.dopplerLag).toBeGreaterThanOrEqual(3);
    expect((await smooth('two-laps/two-laps.nmea')).noise.dopplerLag).toBeLessThanOrEqual(1);
    expect((await smooth('port-tack-dead-cups/port-tack.nmea')).noise.dopplerLag).toBe(0);
  });

  it('keeps every tack of two laps: nothing rejected while sailing, velocities as logged', async () => {
    const { log, track, rejected, gaps } = await smooth('two-laps/two-laps.nmea');
    const noon = Date.UTC(2010, 4, 15, 11, 50) / 1000;
    for (const { firstTime } of rejected) expect(firstTime).toBeGreaterThan(noon);
    for (const { from } of gaps) expect(from).toBeGreaterThan(noon);
    // Against the receiver's own velocity, of which only the lag and the rounding to 0.1 kn and 0.1 degree are not ours.
    const { sog, cog } = log.channels;
    let square = 0;
    let n = 0;
    for (let i = 0; i < log.time.length; i++) {
      const row = log.time[i] - track.t0;
      if (!(sog[i] > 1.5) || !(cog[i] >= 0) || !Number.isInteger(row) || Number.isNaN(track.vx[row])) continue;
      const east = sog[i] * Math.sin((cog[i] * Math.PI) / 180) - track.vx[row];
      const north = sog[i] * Math.cos((cog[i] * Math.PI) / 180) - track.vy[row];
      square += east * east + north * north;
      n += 2;
    }
    expect(n).toBeGreaterThan(20000);
    expect(Math.sqrt(square / n)).toBeLessThan(0.1);
  });

  it('positions alone give the velocity the receiver measured, within the stated error', async () => {
    for (const file of [
      'two-laps/two-laps.nmea',
      'port-tack-dead-cups/port-tack.nmea',
      'port-tack-10hz/instruments.csv',
    ]) {
      const both = await smooth(file);
      const positions = await smooth(file, {}, ['sog', 'cog']);
      let normalised = 0;
      let n = 0;
      for (let i = 0; i < both.track.n; i++) {
        const [a, b] = [both.track, positions.track];
        const e2 = (a.vx[i] - b.vx[i]) ** 2 + (a.vy[i] - b.vy[i]) ** 2;
        if (Number.isNaN(e2)) continue;
        normalised += e2 / (a.seVelocity[i] ** 2 + b.seVelocity[i] ** 2);
        n += 2;
      }
      expect(Math.sqrt(normalised / n)).toBeLessThan(1.2);
      expect(Math.sqrt(normalised / n)).toBeGreaterThan(0.3);
    }
  });
});
