/** The conditions the program is measured under, with their seeds. Short: for the gate. Long: at least 60 upwind legs each. */
import { condition, type Condition } from './generator/index.js';

export interface Trial {
  readonly condition: Condition;
  /** Races in the short form. */
  readonly races: number;
}

const trial = (races: number, name: string, changes: Partial<Condition> = {}): Trial => ({
  condition: condition(name, changes),
  races,
});

export const TRIALS: readonly Trial[] = [
  trial(4, 'station at the boats'),
  trial(4, 'calibration drawn', { calibration: true }),
  trial(4, 'station 400 m off', { station: 'away', calibration: false }),
  trial(4, 'station off, calibration drawn', { station: 'away', calibration: true }),
  trial(3, 'station off, place not told', { station: 'away', stationPlaced: false }),
  trial(4, 'no wind log', { station: 'none' }),
  trial(4, 'station 6 degrees wrong', { stationOff: 6 }),
  trial(4, 'station 40 s late', { stationLate: 40, stationPlaced: false }),
  trial(3, 'mastheads and a station', { calibration: true, mastheads: 2 }),
  trial(3, 'mastheads, no station', { station: 'none', mastheads: 2, logsHeel: false }),
  trial(3, 'nmea mastheads', { station: 'none', mastheads: 2, format: 'nmea', doppler: true, offsets: false }),
  trial(3, 'current told', { current: 0.6, currentTold: true, mastheads: 1 }),
  trial(3, 'current not told', { current: 0.6, mastheads: 2 }),
  trial(3, 'five a second with doppler', { receiver: '5hz', doppler: true, format: 'csv' }),
  trial(3, 'every five seconds', { receiver: '5s' }),
  trial(3, 'thinned', { receiver: 'thinned' }),
  trial(3, 'dropouts', { dropouts: true, doppler: true }),
  trial(3, 'northerly at the date line', { twd: 358, venue: [-36.8, 179.999] }),
  trial(3, 'marks told', { marksTold: true, station: 'away' }),
  trial(3, 'one boat', { boats: 1 }),
  trial(3, 'three boats', { boats: 3, station: 'away' }),
  trial(3, 'light and shifty', { tws: [6, 8], shift: [9, 12] }),
  trial(3, 'fresh and steady', { tws: [15, 18], shift: [3, 5] }),
  trial(3, 'minute rows', { stationEvery: 60, station: 'away' }),
  trial(3, 'short laps', { laps: 3, beat: [450, 600] }),
  ...(
    [
      ['pinching', { pinch: 5 }],
      ['slow', { slow: 0.05 }],
      ['bad tacks', { tackCost: 2 }],
      ['overstanding', { overstand: 60 }],
      ['headed tack', { headed: true }],
      ['sheeting', { sheeting: 6 }],
    ] as const
  ).map(([name, faults]) => trial(2, `fault: ${name}`, { faults, events: false })),
];

/** Upwind legs of one race under a condition. */
export const legsOf = ({ boats, laps }: Condition): number => boats * laps;

const LONG_LEGS = 60;

export function seedsOf({ condition: c, races }: Trial, long: boolean): number[] {
  const n = long ? Math.ceil(LONG_LEGS / legsOf(c)) : races;
  return Array.from({ length: n }, (_, i) => i + 1);
}
