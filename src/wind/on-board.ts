import { directionOf, eastOf, northOf } from '../math/angles.js';
import { lengthOf } from '../math/length.js';
import type { Track } from '../recording/track.js';
import { windSums, type WindSource } from './source.js';

/** Averaging of a masthead wind: long enough for rolling and the vane's noise, short enough for a tack. [s] */
const ON_BOARD_WINDOW = 12;
/** Mounting of a vane on a boat, before anything corrects it: common practice, no source. [deg], [fraction] */
const ACCURACY_DIR = 4;
const ACCURACY_SPEED = 0.05;

/** How a wind sensor is mounted and calibrated. */
export interface Mounting {
  /** One standard deviation of mounting [deg] and of calibration [fraction of the speed]. */
  readonly accuracyDir: number;
  readonly accuracySpeed: number;
  /** Added to the angle it reads. [deg] */
  readonly offset: number;
  /** Multiplies the speed of the true wind: from its height to the rig's. */
  readonly factor: number;
}

const AS_USUAL: Mounting = { accuracyDir: ACCURACY_DIR, accuracySpeed: ACCURACY_SPEED, offset: 0, factor: 1 };

/** Leeway taken where only the course is logged: a dinghy's 3 to 5 degrees, common practice, no source. [deg] */
export const ASSUMED_LEEWAY = 4;

/**
 * A boat's own apparent wind made true by its own motion.
 *
 * The apparent wind over the ground-moving boat is wind minus velocity; its direction is bow + angle, so the wind is
 * apparent + velocity over ground. Leeway and current do not enter where heading is logged; where it is not, the bow is
 * taken `ASSUMED_LEEWAY` to windward of the course.
 *
 * @param boat    Index of the boat; -1 for a coach boat.
 * @param mounted How its sensor is mounted, where that is told.
 * @returns null when there is no apparent wind angle and speed.
 */
export function onBoardSource(
  track: Track,
  file: string,
  boat: number,
  mounted: Mounting = AS_USUAL,
): WindSource | null {
  const { awa, aws, heading } = track;
  if (!awa || !aws) return null;
  const direction = new Float64Array(track.n).fill(NaN);
  const speed = new Float64Array(track.n).fill(NaN);
  let any = false;
  for (let i = 0; i < track.n; i++) {
    const course = directionOf(track.vx[i], track.vy[i]);
    const leeway = boat >= 0 ? Math.sign(awa[i]) * ASSUMED_LEEWAY : 0;
    const bow = heading && !Number.isNaN(heading[i]) ? heading[i] : course + leeway;
    const from = bow + awa[i] + mounted.offset;
    const east = aws[i] * eastOf(from) - track.vx[i];
    const north = aws[i] * northOf(from) - track.vy[i];
    if (Number.isNaN(east)) continue;
    direction[i] = directionOf(east, north);
    speed[i] = mounted.factor * lengthOf(east, north);
    any = true;
  }
  if (!any) return null;
  return {
    kind: 'on-board',
    file,
    boat,
    t0: track.t0,
    n: track.n,
    place: { xs: track.x, ys: track.y },
    accuracyDir: mounted.accuracyDir,
    accuracySpeed: mounted.accuracySpeed,
    hasSpeed: true,
    window: ON_BOARD_WINDOW,
    sums: windSums(direction, speed),
  };
}
