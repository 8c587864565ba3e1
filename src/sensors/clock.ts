/**
 * Logs of one race against each other: a clock in the wrong time zone moves a log by whole quarter hours, a receiver
 * that has missed a turn of its week count by 1024 weeks. Nothing is moved here; the shift that fits is reported.
 */

import { shortLine } from '../math/geo.js';
import type { Issue } from '../recording/issues.js';
import type { Recording } from '../recording/recording.js';

/** Time zones differ by multiples of this (IANA time zone database: Nepal +5:45, Chatham Islands +12:45). [s] */
export const QUARTER_HOUR = 900;
/** Widest difference looked for: zones run from -12 to +14 hours. [s] */
const WIDEST = 14 * 3600;
/** Below this share of the shorter log, two logs do not belong to the same time ... */
const APART = 0.1;
/** ... and above this one they do. */
const TOGETHER = 0.8;
/** Two boats of one race are within so many metres of each other half of the time, wherever the race is. */
const NEAR = 600;
/** A shift counts where it brings the boats so many times nearer than their own clocks do. */
const NEARER = 5;
/** The receivers' week count turns over after ten bits (IS-GPS-200, 20.3.3.3.1.1). [s] */
const ROLLOVER = 1024 * 7 * 86400;
/** Distances between two tracks are looked at so many times. */
const LOOKS = 60;

/** A log by its clock. */
export interface ClockedLog {
  readonly file: string;
  /** Boats are held against boats also by where they are. */
  readonly isTrack: boolean;
  readonly recording: Recording;
}

/** A log that fits the others only when its clock is moved. */
export interface ClockShift {
  readonly file: string;
  /** To be added to its clock. [s] */
  readonly seconds: number;
}

export interface ClockFinding {
  readonly issues: readonly Issue[];
  readonly shifts: readonly ClockShift[];
}

/**
 * Holds the logs of one race against the one that most of them agree with.
 *
 * @param logs Every log of the race, boats and wind.
 * @returns `zone-suspect` with the quarter-hour shift that fits, `clock-offset` where none does.
 */
export function checkClocks(logs: readonly ClockedLog[]): ClockFinding {
  const filled = logs.filter(({ recording }) => recording.time.length > 1);
  const anchor = findAnchor(filled);
  const issues: Issue[] = [];
  const shifts: ClockShift[] = [];
  if (!anchor) return { issues, shifts };
  for (const log of filled) {
    if (log === anchor) continue;
    const { file } = log;
    const shift = quarterHours(anchor, log);
    if (shift !== 0 && Number.isFinite(shift)) {
      shifts.push({ file, seconds: shift });
      issues.push({ code: 'zone-suspect', message: zoneMessage(anchor, shift), file });
    } else if (Number.isNaN(shift)) issues.push({ code: 'clock-offset', message: apartMessage(anchor, log), file });
  }
  return { issues, shifts };
}

/** The track (or, without tracks, the log) that shares most time with all others. */
function findAnchor(logs: readonly ClockedLog[]): ClockedLog | undefined {
  const tracks = logs.filter(({ isTrack }) => isTrack);
  const candidates = tracks.length > 0 ? tracks : logs;
  let best: ClockedLog | undefined;
  let most = -1;
  for (const candidate of candidates) {
    const shared = logs.reduce((sum, log) => sum + (log === candidate ? 0 : overlap(candidate, log, 0)), 0);
    if (shared > most) [best, most] = [candidate, shared];
  }
  return best;
}

/** From when to when a log goes; a few rows with a wrong date at its ends do not count. */
function span({ recording: { time } }: ClockedLog): readonly [number, number] {
  const tail = Math.round(0.005 * (time.length - 1));
  return [time[tail], time[time.length - 1 - tail]];
}

/** Share of the shorter of two logs that lies within the other when `b` is moved by `shift`. */
function overlap(a: ClockedLog, b: ClockedLog, shift: number): number {
  const [a0, a1] = span(a);
  const [b0, b1] = span(b);
  const shared = Math.min(a1, b1 + shift) - Math.max(a0, b0 + shift);
  return Math.max(0, shared) / Math.max(1, Math.min(a1 - a0, b1 - b0));
}

/** Shift to be added to `log`: 0 when it fits as it is, NaN when no quarter hour makes it fit. [s] */
function quarterHours(anchor: ClockedLog, log: ClockedLog): number {
  const tracks = anchor.isTrack && log.isTrack;
  const asIs = overlap(anchor, log, 0);
  if (asIs >= APART && !tracks) return 0;
  const near = tracks ? (shift: number) => medianDistance(anchor.recording, log.recording, shift) : () => NaN;
  const now = near(0);
  if (asIs >= APART && !(now > NEAR)) return 0;
  let best = NaN;
  let bestScore = 0;
  for (const shift of candidates()) {
    const share = overlap(anchor, log, shift);
    // Fleets start a quarter of an hour apart, zones hardly ever differ by one: where the logs overlap, half hours only.
    if (share < TOGETHER) continue;
    if (asIs >= APART && shift % (2 * QUARTER_HOUR) !== 0) continue;
    // Boats: the nearer the better. Otherwise the first, that is the plainest shift, with the whole of it inside.
    const distance = near(shift);
    if (tracks && asIs >= APART && !(distance * NEARER < now && distance < NEAR)) continue;
    const score = Number.isFinite(distance) ? 1 / (1 + distance) : Math.min(share, 0.999);
    if (score > bestScore * 1.001) [best, bestScore] = [shift, score];
  }
  return Number.isNaN(best) && asIs >= APART ? 0 : best;
}

/** Shifts to try, whole hours first, then half hours, then quarters; the smaller ones first. */
function candidates(): number[] {
  const all: number[] = [];
  for (let s = QUARTER_HOUR; s <= WIDEST; s += QUARTER_HOUR) all.push(s, -s);
  const rank = (s: number) => (s % 3600 === 0 ? 0 : s % 1800 === 0 ? 1 : 2);
  return all.sort((a, b) => rank(a) - rank(b) || Math.abs(a) - Math.abs(b));
}

/** Median distance of two boats at the same time, the second's clock moved; NaN with less than ten looks. [m] */
function medianDistance(a: Recording, b: Recording, shift: number): number {
  const from = Math.max(a.time[0], b.time[0] + shift);
  const to = Math.min(a.time[a.time.length - 1], b.time[b.time.length - 1] + shift);
  const distances: number[] = [];
  for (let k = 0; k <= LOOKS; k++) {
    const t = from + ((to - from) * k) / LOOKS;
    const here = placeAt(a, t);
    const there = placeAt(b, t - shift);
    if (here && there) distances.push(shortLine(here, there).distance);
  }
  distances.sort((p, q) => p - q);
  return distances.length < 10 ? NaN : distances[distances.length >> 1];
}

/** The fix nearest to a time, within a minute. */
function placeAt(recording: Recording, t: number): { lat: number; lon: number } | null {
  const { lat, lon } = recording.channels;
  if (!lat || !lon) return null;
  let low = 0;
  let high = recording.time.length;
  while (low < high) {
    const middle = (low + high) >> 1;
    if (recording.time[middle] < t) low = middle + 1;
    else high = middle;
  }
  for (let reach = 0; reach < 200; reach++) {
    for (const i of [low - reach, low + reach]) {
      if (i >= 0 && i < lat.length && !Number.isNaN(lat[i]) && Math.abs(recording.time[i] - t) <= 60) {
        return { lat: lat[i], lon: lon[i] };
      }
    }
  }
  return null;
}

function zoneMessage(anchor: ClockedLog, shift: number): string {
  return (
    `It fits ${anchor.file} only when its clock is moved by ${hours(shift)}. ` +
    `Give its time zone, or add ${shift} s to its clock; nothing was moved.`
  );
}

function apartMessage(anchor: ClockedLog, log: ClockedLog): string {
  const [a0] = span(anchor);
  const [b0] = span(log);
  const turns = Math.round((a0 - b0) / ROLLOVER);
  if (turns !== 0 && Math.abs(a0 - b0 - turns * ROLLOVER) < 86400) {
    const weeks = Math.abs(turns) * 1024;
    return (
      `Its dates lie ${weeks} weeks ${turns > 0 ? 'before' : 'after'} those of ${anchor.file}: ` +
      `the receiver's week count has turned over. Add ${turns * ROLLOVER} s to its clock.`
    );
  }
  const apart = Math.abs(a0 - b0);
  const length = apart > 3 * 86400 ? `${Math.round(apart / 86400)} days` : `${(apart / 3600).toFixed(1)} hours`;
  return `It begins ${length} ${b0 < a0 ? 'before' : 'after'} ${anchor.file}, and no whole quarter hour brings the two together.`;
}

function hours(seconds: number): string {
  const minutes = Math.round(Math.abs(seconds) / 60);
  const clock = `${Math.floor(minutes / 60)}:${String(minutes % 60).padStart(2, '0')} h`;
  return `${seconds < 0 ? '-' : '+'}${clock}`;
}
