/**
 * What the gate allows. Every row says by which method the figure is had, what error is left and where it comes from.
 * A commit that changes a formula changes its row, or says why not.
 */
import type { Correction, Quantity } from './measure.js';

export interface Tolerance {
  readonly quantity: Quantity | 'wind direction' | Correction;
  /** Largest mean size of the error over the legs of the short form. */
  readonly mean: number;
  /** Limits of rms(error / stated error), where the row gates honesty too. */
  readonly ratio?: readonly [number, number];
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

/** A dozen legs tell the ratio to about a fifth, so the short form allows more than the 0.7 to 1.4 of the long one. */
const HONEST: readonly [number, number] = [0.55, 1.7];

const usual = { tacks: 0.98, tackTime: 3, legEnds: 8 } as const;

export const GATES: readonly Gate[] = [
  {
    condition: 'station at the boats',
    ...usual,
    rows: [
      // Settled blocks against the station's own wind; left: receiver wander, anemometer noise, where settled begins.
      { quantity: 'gamma', mean: 0.5, ratio: HONEST },
      // Wind triangle from gamma, speed and wind; left: what gamma leaves (times 0.7), and the wind speed's noise.
      { quantity: 'beta', mean: 0.35, ratio: HONEST },
      // Block displacement over its time; left: the receiver's wander, 1.5 m over minutes against 1.5 km a leg.
      { quantity: 'vmg %', mean: 1, ratio: HONEST },
      // The same; left: seconds on the edge of settled sailing.
      { quantity: 'speed %', mean: 0.7 },
      // The station's direction, smoothed; left: anemometer noise.
      { quantity: 'wind direction', mean: 0.5 },
    ],
  },
  {
    condition: 'calibration drawn',
    ...usual,
    rows: [
      // As above with a station off by 2 degrees and 2 %: opposite on the two tacks, so half of it is found again.
      { quantity: 'gamma', mean: 1, ratio: HONEST, withSys: true },
      { quantity: 'beta', mean: 0.7, ratio: HONEST, withSys: true },
      { quantity: 'vmg %', mean: 1.5, ratio: HONEST, withSys: true },
    ],
  },
  {
    condition: 'station 400 m off',
    ...usual,
    rows: [
      // Carried along the wind from the station; left: its own wander (1.6 degrees in a minute), 5 degrees across.
      { quantity: 'gamma', mean: 1, ratio: HONEST },
      { quantity: 'beta', mean: 0.7, ratio: HONEST },
      { quantity: 'vmg %', mean: 1.5, ratio: HONEST },
      { quantity: 'speed %', mean: 1 },
    ],
  },
  {
    condition: 'no wind log',
    ...usual,
    rows: [
      // Courses before and after each tack; left: what the wind turned in between, and boats that tack on shifts.
      { quantity: 'wind direction', mean: 3 },
    ],
  },
  {
    condition: 'station 6 degrees wrong',
    ...usual,
    rows: [
      // Both tacks tell the offset; left: real differences between the tacks. Nearer the truth than the station's 6.
      { quantity: 'wind direction', mean: 3 },
      { quantity: 'station direction', mean: 3 },
    ],
  },
  {
    condition: 'station 40 s late',
    ...usual,
    rows: [
      // Least spread of gamma over all settled sailing; left: the helm's own delay (4 s) and slow swings.
      { quantity: 'lag s', mean: 10 },
      { quantity: 'gamma', mean: 0.7 },
    ],
  },
  {
    condition: 'northerly at the date line',
    ...usual,
    // Nothing may change with the quarter of the wind, the hemisphere or the date line.
    rows: [{ quantity: 'gamma', mean: 0.5 }],
  },
  {
    condition: 'five a second with doppler',
    ...usual,
    rows: [{ quantity: 'gamma', mean: 0.5 }],
  },
  {
    condition: 'every five seconds',
    ...usual,
    // Turns are seen in steps of 5 s: the times of tacks and marks widen a little.
    legEnds: 9,
    rows: [{ quantity: 'gamma', mean: 0.6 }],
  },
  {
    condition: 'thinned',
    ...usual,
    // On straight lines one fix in 20 s: the wander of the helm between fixes is lost.
    legEnds: 10,
    rows: [{ quantity: 'gamma', mean: 0.7 }],
  },
];
