import { describe, expect, it } from 'vitest';
import { createRecording, type Recording } from '../../src/recording/recording.js';
import { clockSteps } from '../../src/sensors/clock-step.js';
import { beat, record } from '../smooth/synthetic.js';

const logged = record(beat(900, 5), { step: 1, seed: 3 });

/** The log with its clock moved from a row on, rows left out before it. */
function altered(row: number, seconds: number, leftOut = 0): Recording {
  const keep = (_: number, i: number): boolean => i < row - leftOut || i >= row;
  const channels = { lat: logged.channels.lat!.filter(keep), lon: logged.channels.lon!.filter(keep) };
  return createRecording({ time: logged.time.map((t, i) => (i >= row ? t + seconds : t)).filter(keep), channels });
}

describe('clockSteps', () => {
  it('has nothing to say of a clock that runs', () => {
    expect(clockSteps(logged, 'a.gpx')).toEqual([]);
  });
  it.each([12, 37, 3600])('tells a jump of %i s and how far it is', (seconds) => {
    const [issue] = clockSteps(altered(400, seconds), 'a.gpx');
    expect(issue).toMatchObject({ code: 'clock-steps', file: 'a.gpx' });
    const told = Number(/by about (\d+) s/.exec(issue.message)?.[1]);
    // The step itself is one second; noise of the fixes moves it by another.
    expect(Math.abs(told - seconds)).toBeLessThanOrEqual(2);
  });
  it('takes a hole in which the boat sailed on for a hole', () => {
    expect(clockSteps(altered(400, 0, 30), 'a.gpx')).toEqual([]);
    expect(clockSteps(altered(400, 5, 60), 'a.gpx')).toEqual([]);
  });
  it('has nothing to say of a boat that lay still, or of no positions', () => {
    const still = altered(400, 60);
    const [lat] = still.channels.lat!;
    const [lon] = still.channels.lon!;
    const channels = { lat: still.channels.lat!.map(() => lat), lon: still.channels.lon!.map(() => lon) };
    expect(clockSteps(createRecording({ time: still.time, channels }), 'a.gpx')).toEqual([]);
    expect(clockSteps(createRecording({ time: still.time, channels: {} }), 'a.gpx')).toEqual([]);
  });
});
