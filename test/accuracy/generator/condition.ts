/** What an invented race is made of. Every field has a calm default; a condition names only what it changes. */

export interface Faults {
  /** Sails this much closer than its best angle. [deg] */
  readonly pinch?: number;
  /** Slower by this fraction, upwind. */
  readonly slow?: number;
  /** Tacks cost about this many times the usual. */
  readonly tackCost?: number;
  /** Sails this far past the lay line before tacking for the mark. [m] */
  readonly overstand?: number;
  /** Tacks on lifts and stays on headers. */
  readonly headed?: boolean;
  /** Habitual sheeting error, eased positive. [deg] */
  readonly sheeting?: number;
  /** Foils that hold less: leeway is this many times the usual, speed as ever. */
  readonly leeway?: number;
}

export interface Condition {
  readonly name: string;
  /** Mean wind [kn], or limits to draw from. */
  readonly tws: number | readonly [number, number];
  /** Mean direction the wind comes from [deg], or null: any quarter. */
  readonly twd: number | null;
  /** Half height of the oscillation [deg], limits to draw from. */
  readonly shift: readonly [number, number];
  /** Turn of the mean wind over the race [deg], limits. */
  readonly trend: readonly [number, number];
  /** Standard deviation of gusts as a fraction of the wind. */
  readonly gust: number;
  /** Latitude and longitude of the venue [deg], or null: drawn. */
  readonly venue: readonly [number, number] | null;

  /** `same`: the station reads exactly what the boats have. `away`: a frozen field, its own wander, a linear difference. */
  readonly station: 'none' | 'same' | 'away';
  /** How far from the middle of the course it stands. [m] */
  readonly stationDistance: number;
  /** Its place is told in the race file. */
  readonly stationPlaced: boolean;
  /** Draw mounting (2 deg) and calibration (2 %) errors. */
  readonly calibration: boolean;
  /** Fixed error added to its direction. [deg] */
  readonly stationOff: number;
  /** Its stamps are late by this much. [s] */
  readonly stationLate: number;
  /** Seconds between its rows. */
  readonly stationEvery: number;

  /** How many boats carry a masthead log. */
  readonly mastheads: number;
  /** Planted compass and masthead offsets are drawn (sd 3 deg each), else zero. */
  readonly offsets: boolean;
  readonly logsHeel: boolean;
  readonly logsWaterSpeed: boolean;

  /** Drift [kn]; set is drawn. */
  readonly current: number;
  readonly currentTold: boolean;

  readonly boats: number;
  readonly laps: number;
  /** Length of a beat [m], limits. */
  readonly beat: readonly [number, number];
  readonly marksTold: boolean;
  readonly sailOut: boolean;
  readonly sailHome: boolean;
  /** Double tacks, aborted tacks, penalty turns, capsizes happen. */
  readonly events: boolean;
  /** Spread of skill between the boats: 0 none, 1 usual. */
  readonly skill: number;
  /** Amplitude of the helm's wander [deg] and of surging (fraction). */
  readonly helm: number;
  readonly surge: number;
  /** Faults of the first boat; the others sail clean. */
  readonly faults: Faults;

  readonly receiver: '1hz' | '5hz' | '5s' | 'thinned';
  readonly doppler: boolean;
  /** Correlated and white position error, per axis. [m] */
  readonly positionNoise: readonly [number, number];
  readonly outliers: boolean;
  readonly dropouts: boolean;
  readonly format: 'gpx' | 'csv' | 'nmea';
}

export const USUAL: Condition = {
  name: 'usual',
  tws: [7, 18],
  twd: null,
  shift: [5, 12],
  trend: [-8, 8],
  gust: 0.08,
  venue: null,
  station: 'same',
  stationDistance: 400,
  stationPlaced: true,
  calibration: false,
  stationOff: 0,
  stationLate: 0,
  stationEvery: 1,
  mastheads: 0,
  offsets: true,
  logsHeel: true,
  logsWaterSpeed: true,
  current: 0,
  currentTold: false,
  boats: 2,
  laps: 2,
  beat: [800, 1300],
  marksTold: false,
  sailOut: true,
  sailHome: true,
  events: true,
  skill: 1,
  helm: 2,
  surge: 0.03,
  faults: {},
  receiver: '1hz',
  doppler: false,
  positionNoise: [1.5, 0.15],
  outliers: true,
  dropouts: false,
  format: 'gpx',
};

/** A named condition: the usual race with some things changed. */
export function condition(name: string, changes: Partial<Condition> = {}): Condition {
  return { ...USUAL, ...changes, name };
}
