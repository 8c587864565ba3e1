/**
 * What the gate allows. Every row says by which method the figure is had, what error is left and where it comes from.
 * A commit that changes a formula changes its row, or says why not.
 */
import type { Correction, Quantity } from './measure.js';

export interface Tolerance {
  readonly quantity: Quantity | 'wind direction' | Correction;
  /** Largest mean size of the error over the legs. */
  readonly mean: number;
  /** The row gates rms(error / stated error) too. */
  readonly honest?: boolean;
  /** The stated error includes the calibration's shift. */
  readonly withSys?: boolean;
}

export interface Gate {
  readonly condition: string;
  readonly rows: readonly Tolerance[];
  /** Least F1 of tacks, largest median size of their time errors [s], largest mean size of leg end errors [s]. */
  readonly tacks: number;
  readonly tackTime: number;
  readonly legEnds: number;
}

/**
 * Limits of rms(error / stated error): 0.7 to 1.4, widened by what a few races can tell. Errors within a race are shared
 * (one receiver, one station), so a race counts as one draw; the rms of n draws has a relative standard error of
 * 1 / sqrt(2 n), and 1.6 of it are allowed.
 */
export function honest(races: number): readonly [number, number] {
  const slack = 1.6 / Math.sqrt(2 * races);
  return [0.7 * (1 - slack), 1.4 * (1 + slack)];
}

const usual = { tacks: 0.98, tackTime: 3, legEnds: 8 } as const;

/** Figures in brackets: mean size of the error in the long form when the row was last moved. */
export const GATES: readonly Gate[] = [
  {
    condition: 'station at the boats',
    ...usual,
    rows: [
      // Settled blocks against the station's own wind; left: receiver wander, anemometer noise, and that the debrief
      // and the truth do not call quite the same seconds settled: 0.3 of it is that. (0.35)
      { quantity: 'gamma', mean: 0.5, honest: true },
      // Wind triangle from gamma, speed and wind; left: what gamma leaves, times 0.7. (0.23)
      { quantity: 'beta', mean: 0.35, honest: true },
      // Block displacement over its time; left: 1.5 m of receiver wander over minutes, the seconds chosen. (0.65)
      { quantity: 'vmg %', mean: 1, honest: true },
      // The same; left: mostly the seconds chosen, a fetch is faster than a beat. (0.55; 0.28 over its own seconds)
      { quantity: 'speed %', mean: 0.7 },
      // The station's direction, smoothed; left: anemometer noise, half of an offset that is not there. (0.41)
      { quantity: 'wind direction', mean: 0.6 },
    ],
  },
  {
    condition: 'calibration drawn',
    ...usual,
    rows: [
      // As above with a station off by 2 degrees and 2 %: the offset is opposite on the two tacks and found again;
      // left of it: a share that goes with the time on each tack. (0.29)
      { quantity: 'gamma', mean: 0.6, honest: true, withSys: true },
      // The wind's 2 % moves beta by 0.2 degree. (0.24)
      { quantity: 'beta', mean: 0.5, honest: true, withSys: true },
      // (0.53)
      { quantity: 'vmg %', mean: 1, honest: true, withSys: true },
    ],
  },
  {
    condition: 'station 400 m off',
    ...usual,
    rows: [
      // Carried along the wind from the station; left: its own wander (1.6 degrees in a minute), 5 degrees and 10 %
      // across the course, of which a boat on one side of it for long keeps a part; four races scatter to 1.1. (0.76)
      { quantity: 'gamma', mean: 1.2, honest: true },
      // (0.69)
      { quantity: 'beta', mean: 1.1, honest: true },
      // Gamma's error times tan gamma. (1.30)
      { quantity: 'vmg %', mean: 1.9, honest: true },
      // Does not know the wind; left: the seconds chosen. (0.46)
      { quantity: 'speed %', mean: 1 },
      // By the forces; left: the foils' and the sail's other laws. (0.39)
      { quantity: 'leeway', mean: 0.7, honest: true },
      // VMG over the same model's best in the true wind. (0.01)
      { quantity: 'efficiency', mean: 0.02, honest: true },
      // Ledger; left: where a turn's window begins and ends, a shift in it. (10.8 m of a leg's five or six tacks)
      { quantity: 'manoeuvres m', mean: 16, honest: true },
      // Ledger; left: the station's wander taken across the course. (9.8)
      { quantity: 'shifts m', mean: 16, honest: true },
    ],
  },
  {
    condition: 'station off, calibration drawn',
    ...usual,
    rows: [
      // Both of the above. (0.75)
      { quantity: 'gamma', mean: 1.1, honest: true, withSys: true },
      // (1.30)
      { quantity: 'vmg %', mean: 1.8, honest: true, withSys: true },
    ],
  },
  {
    condition: 'no wind log',
    ...usual,
    rows: [
      // Courses about each tack and gybe, and the other boat's courses; left: what the wind turned in between. (0.8)
      { quantity: 'wind direction', mean: 1.8 },
      // Its mean from the tacking angles, its turning between the tacks from the other boat. (0.9)
      { quantity: 'gamma', mean: 2 },
    ],
  },
  {
    condition: 'station 6 degrees wrong',
    ...usual,
    rows: [
      // Both tacks tell the offset; left: real differences between the tacks, a little of the prior of 2 degrees, whose
      // tails give way. (0.5)
      { quantity: 'wind direction', mean: 1.5 },
      { quantity: 'station direction', mean: 1.5 },
      // Opposite on the two tacks, so mostly gone in the leg's mean. (0.38)
      { quantity: 'gamma', mean: 0.8 },
    ],
  },
  {
    condition: 'station 40 s late',
    ...usual,
    rows: [
      // Least spread of gamma over all settled sailing; left: the helm's own delay of 4 s. (4.7)
      { quantity: 'lag s', mean: 10 },
      // What a lag wrong by 5 s leaves. (0.50)
      { quantity: 'gamma', mean: 0.8 },
    ],
  },
  {
    condition: 'northerly at the date line',
    ...usual,
    // Nothing may change with the quarter of the wind, the hemisphere or the date line. (0.27)
    rows: [{ quantity: 'gamma', mean: 0.5 }],
  },
  {
    condition: 'five a second with doppler',
    ...usual,
    // Speeds as logged: the receiver's wander no longer counts. (0.20; 0.09 over its own seconds)
    rows: [{ quantity: 'gamma', mean: 0.4 }],
  },
  {
    condition: 'every five seconds',
    ...usual,
    // Turns are seen in steps of 5 s: the times of tacks and marks widen a little. (0.32)
    legEnds: 9,
    rows: [{ quantity: 'gamma', mean: 0.6 }],
  },
  {
    condition: 'thinned',
    ...usual,
    // On straight lines one fix in 20 s: the wander of the helm between fixes is lost. (0.29)
    legEnds: 9,
    rows: [{ quantity: 'gamma', mean: 0.6 }],
  },
];
