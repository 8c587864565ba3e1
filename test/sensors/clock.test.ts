import { describe, expect, it } from 'vitest';
import { fromPlane } from '../../src/math/geo.js';
import { createRecording, type Recording } from '../../src/recording/recording.js';
import { checkClocks, type ClockedLog } from '../../src/sensors/clock.js';
import { beat, FRAME, record, T0 } from '../smooth/synthetic.js';

const path = beat(2400, 3);

/** A boat of the fleet, its clock moved by `shift`. */
function boat(file: string, shift = 0, east = 0): ClockedLog {
  const { time, channels } = record(path, { step: 2, seed: file.length + 1 });
  const offset = fromPlane(FRAME, east, 0).lon - FRAME.lon;
  const moved = { lat: channels.lat!, lon: channels.lon!.map((v) => v + offset) };
  return { file, isTrack: true, recording: createRecording({ time: time.map((t) => t + shift), channels: moved }) };
}

/** A station log of so many seconds, beginning at a time after the boats. */
function station(file: string, begin: number, seconds: number): ClockedLog {
  const time = Float64Array.from({ length: seconds }, (_, i) => T0 + begin + i);
  const recording: Recording = createRecording({ time, channels: { twd: new Float64Array(seconds).fill(200) } });
  return { file, isTrack: false, recording };
}

describe('checkClocks', () => {
  it('has nothing to say of logs that agree', () => {
    const logs = [boat('a.gpx'), boat('b.gpx', 0, 50), station('wind.csv', -600, 3000)];
    expect(checkClocks(logs)).toEqual({ issues: [], shifts: [] });
    expect(checkClocks([])).toEqual({ issues: [], shifts: [] });
    // A station switched on late is late, not in another zone.
    expect(checkClocks([boat('a.gpx'), station('wind.csv', 1500, 3000)]).issues).toEqual([]);
  });

  it.each([
    [2, 7200],
    [-5.5, -19800],
    [5.75, 20700],
    [12.75, 45900],
  ])('finds a station log %s hours off', (_, seconds) => {
    const { issues, shifts } = checkClocks([boat('a.gpx'), boat('b.gpx', 0, 80), station('wind.csv', seconds, 2401)]);
    expect(shifts).toEqual([{ file: 'wind.csv', seconds: -seconds }]);
    expect(issues).toMatchObject([{ code: 'zone-suspect', file: 'wind.csv' }]);
  });

  it('prefers the plainest shift where several fit', () => {
    // Two hours of wind beginning 3 h late hold the race for shifts of 3, 3.25 ... 4.25 h: the whole hour is meant.
    const { shifts } = checkClocks([boat('a.gpx'), station('wind.csv', 3 * 3600 - 600, 7200)]);
    expect(shifts).toEqual([{ file: 'wind.csv', seconds: -3 * 3600 }]);
  });

  it('finds the boat whose clock is off, by where the others were', () => {
    const { shifts, issues } = checkClocks([boat('a.gpx'), boat('b.gpx', 0, 60), boat('c.gpx', -3600, 30)]);
    expect(shifts).toEqual([{ file: 'c.gpx', seconds: 3600 }]);
    expect(issues[0].message).toContain('+1:00 h');
    // Half an hour off still overlaps; the boats are then never near each other.
    const overlapping = checkClocks([boat('a.gpx'), boat('b.gpx', 0, 60), boat('c.gpx', 1800, 30)]);
    expect(overlapping.shifts).toEqual([{ file: 'c.gpx', seconds: -1800 }]);
  });

  it('tells another day and a week count that has turned over', () => {
    const day = checkClocks([boat('a.gpx'), station('wind.csv', 5 * 86400, 2401)]);
    expect(day.issues).toMatchObject([{ code: 'clock-offset', file: 'wind.csv' }]);
    expect(day.issues[0].message).toContain('5 days after');
    // IS-GPS-200: the week number has ten bits; 1024 weeks are 619315200 s.
    const weeks = checkClocks([boat('a.gpx'), boat('b.gpx', 0, 50), boat('c.gpx', -619315200, 20)]);
    expect(weeks.issues).toMatchObject([{ code: 'clock-offset', file: 'c.gpx' }]);
    expect(weeks.issues[0].message).toContain('619315200');
  });
});
