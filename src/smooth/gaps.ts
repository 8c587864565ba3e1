import type { Observations } from './kalman.js';

/** Rows [from, to) that hang together: nothing is interpolated from one stretch to the next. */
export interface Stretch {
  readonly from: number;
  readonly to: number;
}

/** A hole in a log. */
export interface Gap {
  /** Last fix before it, UTC epoch seconds. */
  readonly from: number;
  readonly seconds: number;
}

/** A hole is a gap from 5 s on: a boat can begin and end a tack's turn within it. */
export const SHORTEST_GAP = 5;
/** ... or from five of the recording's own steps on: slow loggers skip one or two now and then. */
export const GAP_STEPS = 5;
/** ... and always beyond this: whatever the logger's step, nobody knows what the boat did meanwhile. [s] */
const LONGEST_HOLE = 600;
/** A logger that leaves out points on straight lines writes one at least this often. [s] */
export const LONGEST_BRIDGE = 30;
/** A step is irregular when it differs from the median by more than this share of it. */
const IRREGULAR_STEP = 0.3;
/** From this share of irregular steps on, the logger chooses its points; jitter and single losses stay below it. */
const IRREGULAR_SHARE = 0.15;
/** Steps looked at. */
const SAMPLED_STEPS = 20000;
/** Velocities before, across and after a hole agree within this share of the speed, plus 0.3 m/s of receiver noise. */
const AGREE_SHARE = 0.25;
const AGREE_FLOOR = 0.3;
/** Out of a tack a boat gains half its speed on the new course; a tack within the hole would differ by 0.7 of it. */
const AGREE_ONE_SIDE = 0.45;

/** Steps between fixes. */
export interface Stepping {
  readonly median: number;
  /** Whether the logger chose its points by the shape of the track. */
  readonly irregular: boolean;
  /** The longest it leaves out as a habit: one step in twenty is as long. */
  readonly habit: number;
}

/**
 * Rows that hold a position.
 *
 * @param room As long as the log; what is returned lies in it, so that a long log is not asked for memory again.
 */
export function fixRows(observations: Observations, room: Int32Array): Int32Array {
  const { x } = observations;
  let k = 0;
  for (let i = 0; i < x.length; i++) if (x[i] === x[i]) room[k++] = i;
  return room.subarray(0, k);
}

/** How the fixes follow each other. */
export function stepping(time: Float64Array, rows: Int32Array): Stepping {
  if (rows.length < 2) return { median: 1, irregular: false, habit: 1 };
  // A sample of the steps, evenly spread, says as much as all of them.
  const stride = Math.max(1, Math.floor(rows.length / SAMPLED_STEPS));
  const steps = new Float64Array(Math.ceil((rows.length - 1) / stride));
  for (let k = 1, i = 0; k < rows.length; k += stride) steps[i++] = time[rows[k]] - time[rows[k - 1]];
  const sorted = steps.slice().sort();
  const median = sorted[sorted.length >> 1];
  let odd = 0;
  for (const step of steps) if (Math.abs(step - median) > IRREGULAR_STEP * median && step > 0.5) odd++;
  return { median, irregular: odd > IRREGULAR_SHARE * steps.length, habit: sorted[Math.floor(0.95 * steps.length)] };
}

/**
 * Cuts a recording where nothing may be interpolated: at holes longer than max(5 s, five median steps), at breaks of
 * the recording and at `cuts`. A hole up to 30 s in a thinned recording is bridged when the boat went straight on.
 *
 * @param observations Positions; NaN where none.
 * @param breaks       Rows at which a new piece begins.
 * @param room         As long as the log, to work in.
 */
export function findStretches(
  observations: Observations,
  breaks: readonly number[],
  room: Int32Array,
): { stretches: Stretch[]; gaps: Gap[]; step: Stepping } {
  const rows = fixRows(observations, room);
  const step = stepping(observations.time, rows);
  const limit = Math.min(LONGEST_HOLE, Math.max(SHORTEST_GAP, GAP_STEPS * step.median));
  const stretches: Stretch[] = [];
  const gaps: Gap[] = [];
  let from = 0;
  let nextBreak = 0;
  for (let k = 1; k <= rows.length; k++) {
    if (k === rows.length) {
      stretches.push({ from: rows[from], to: rows[k - 1] + 1 });
      break;
    }
    while (nextBreak < breaks.length && breaks[nextBreak] <= rows[k - 1]) nextBreak++;
    const broken = nextBreak < breaks.length && breaks[nextBreak] <= rows[k];
    const hole = observations.time[rows[k]] - observations.time[rows[k - 1]];
    const bridged =
      step.irregular && hole <= LONGEST_BRIDGE && goesStraightOn(observations, rows, k, hole <= step.habit);
    if (!broken && (hole <= limit || bridged)) continue;
    stretches.push({ from: rows[from], to: rows[k - 1] + 1 });
    gaps.push({ from: observations.time[rows[k - 1]], seconds: hole });
    from = k;
  }
  return { stretches: rows.length > 0 ? stretches : [], gaps, step };
}

/**
 * Whether velocity before, across and after the hole before the k-th fix is the same. Where a hole is `usual` for the
 * logger one side is enough: it ends, or begins, at a turn.
 */
function goesStraightOn(o: Observations, rows: Int32Array, k: number, usual: boolean): boolean {
  const across = velocityInto(o, rows, k);
  const speed = Math.hypot(across.x, across.y);
  const agrees = (j: number, tolerance: number) => {
    if (j < 1 || j >= rows.length) return false;
    const v = velocityInto(o, rows, j);
    return Math.hypot(v.x - across.x, v.y - across.y) <= AGREE_FLOOR + tolerance * speed;
  };
  if (usual) return agrees(k - 1, AGREE_ONE_SIDE) || agrees(k + 1, AGREE_ONE_SIDE);
  return agrees(k - 1, AGREE_SHARE) && agrees(k + 1, AGREE_SHARE);
}

/** Velocity from the fix before to the k-th. */
function velocityInto(o: Observations, rows: Int32Array, k: number): { x: number; y: number } {
  const [from, to] = [rows[k - 1], rows[k]];
  const dt = o.time[to] - o.time[from];
  return { x: (o.x[to] - o.x[from]) / dt, y: (o.y[to] - o.y[from]) / dt };
}
