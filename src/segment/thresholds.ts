/**
 * Every threshold of segmentation, named, with its reason. They are passed in, never read from here by a detector, so
 * that a test can move each by a third and see that the result holds.
 */
export interface Thresholds {
  /** Closer to the wind than this is luffing, not sailing: a yacht's bow, leeway taken off its course, lies at 25. [deg] */
  readonly luffing: number;
  /** Lower than this is not close-hauled: best angles lie at 38 to 48, a bad exit from a tack reaches 65. [deg] */
  readonly closeHauled: number;
  /** Lower than this is running; between the two is reaching. [deg] */
  readonly running: number;
  /** A state shorter than this is a flicker (a wave, a wind shift in a turn), not a tack sailed on. [s] */
  readonly minState: number;
  /** Interruptions of a state up to this long do not end it. [s] */
  readonly flicker: number;
  /** A tack takes 5 to 12 s; one with a stop in irons up to this. Longer: a stop, then a new start. [s] */
  readonly maxTurn: number;
  /** Slower than this share of the boat's usual upwind speed the course says nothing about the bow. */
  readonly steerage: number;
  /** Going about by more than this through 180 is a gybe; less is rolling about dead downwind. [deg] */
  readonly gybeTurn: number;
  /** Turning further than this without the other tack being sailed on is a full turn. [deg] */
  readonly fullTurn: number;
  /** Before helm-down: the boat bears away or waits for a wave. [s] */
  readonly beforeTack: number;
  /** Settled again after a tack: never sooner and never later than these after the wind's eye. [s] */
  readonly settleMin: number;
  readonly settleMax: number;
  /** Shortest stretch of settled sailing worth a figure. [s] */
  readonly minSettled: number;
  /** Length of a settled block: averages helm wander (8 to 20 s) and waves, keeps shifts (minutes). [s] */
  readonly block: number;
  /** Along-wind distance a boat must fall back before a leg is over, in seconds of its usual speed. [s] */
  readonly legTurn: number;
  /** Shortest leg. [s] */
  readonly minLeg: number;
  /** Shortest reach that is a leg of its own. [s] */
  readonly minReach: number;
  /** Slower than this share of settled speed is stopped. */
  readonly stopped: number;
  /** For at least this long. [s] */
  readonly minStop: number;
  /** Lower than the boat's own close-hauled angle by more than this, at the end of a beat, is fetching the mark. [deg] */
  readonly fetching: number;
  /** Last seconds at the windward mark: the approach is steered to the mark, not to the wind. [s] */
  readonly rounding: number;
}

export const THRESHOLDS: Thresholds = {
  luffing: 19,
  closeHauled: 72,
  running: 110,
  minState: 7,
  flicker: 3,
  maxTurn: 30,
  steerage: 0.25,
  gybeTurn: 18,
  fullTurn: 290,
  beforeTack: 3,
  settleMin: 20,
  settleMax: 40,
  minSettled: 15,
  block: 30,
  legTurn: 25,
  minLeg: 60,
  minReach: 60,
  stopped: 0.33,
  minStop: 10,
  fetching: 7,
  rounding: 12,
};
