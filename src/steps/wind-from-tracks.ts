import { circularMean, directionOf, turn } from '../math/angles.js';
import { median } from '../math/median.js';
import { UserError } from '../recording/issues.js';
import type { Track } from '../recording/track.js';
import type { Manoeuvre } from '../segment/manoeuvres.js';
import { tackSign } from '../segment/sailing.js';
import { uncorrected, windAtBoat } from '../wind/field.js';
import { bisectorOf, guessWindDirection, windFromLooks, type DirectionLook } from '../wind/from-tracks.js';
import { readWind, windSums, type WindSource } from '../wind/source.js';
import type { FoundWind, SailBoat } from './find-wind.js';
import type { Sailed } from './sail.js';

/** Rounds of finding turns in a wind and the wind from the turns. */
const ROUNDS = 3;

/** One tack's bisector is off by helm wander and by what a sailor's two tacks differ: common practice, no source. [deg] */
const BISECTOR_SE = 2.5;
/** The two gybes of a boat differ more: it sails the run to the mark, not to the wind. [deg] */
const GYBE_SE = 7;
/**
 * Courses before helm-down and after the turn that a bisector takes. Near enough that the wind has no time to go on
 * turning (boats tack while it heads them: 20 s before and 12 to 35 s after read the angle 3 degrees too small on
 * invented races, these 0.1), far enough after for the helm to be steady again. [s]
 */
const BEFORE = 12;
const AFTER = [9, 21] as const;
/** Another boat's course tells the wind here but for its helm and for what the wind differs between the two. [deg] */
const OTHER_BOAT_SE = 4;
/** No wind lies further off its line between two tacks than this, on average. [deg] */
const MOST_BUMP = 6;
/** The same of where a boat's own blocks are moved to: as little as leaves the others and the tacks their say. [deg] */
const BUMP_SE = 4;

/**
 * Wind direction from the courses of the boats alone (and a wind by hand, where there is one).
 *
 * Looks at the wind are the bisectors of all boats' tacks and gybes, and for each boat the courses of the others: half
 * its tacking angle, the mean of its tacks, away from each. A boat's own course enters the wind used for itself only
 * through its tacks and one number: boats sail the tack that is lifted, so between two tacks the wind lies further to
 * that side than a line between them; by how much, on average, half the tacking angle says.
 */
export function windFromTracks(tracks: readonly Track[], hand: readonly WindSource[], sailBoat: SailBoat): FoundWind {
  const span = { from: Math.min(...tracks.map((t) => t.t0)), to: Math.max(...tracks.map((t) => t.t0 + t.n)) };
  const [byHand] = hand;
  const guess = byHand ? NaN : guessWindDirection(tracks);
  if (!byHand && Number.isNaN(guess)) {
    throw new UserError('no wind log, and too few tacks to find the wind direction from the tracks', {
      exitCode: 1,
      suggestion: 'Give a wind log with --wind FILE, or a wind by hand with --wind DIRECTION@KNOTS.',
    });
  }
  const first = byHand ?? constantSource(guess, span);
  let sources: WindSource[] = tracks.map(() => first);
  const bumps = new Float64Array(tracks.length);
  const sailAgain = (): Found => {
    const atBoats = tracks.map((track, boat) => windAtBoat(boat, track, [uncorrected(sources[boat])]));
    return { atBoats, sailed: atBoats.map((wind, boat) => sailBoat(boat, wind)) };
  };
  let found = sailAgain();
  for (let round = 0; round < ROUNDS; round++) {
    const own = found.sailed.map(halfTackingAngle);
    const turns = found.sailed.flatMap((one) => turnLooks(one));
    if (byHand) turns.push(handLook(byHand, span));
    const next = tracks.map((_, boat) => {
      const shared = [...turns, ...courseLooks(found.sailed, own, boat)];
      const bump = bumps[boat] + moreBump(found.sailed[boat], own[boat]);
      bumps[boat] = Math.max(-MOST_BUMP, Math.min(MOST_BUMP, bump));
      return withBump(shared, found.sailed[boat], bumps[boat], span);
    });
    if (next.some((source) => source === null)) break;
    sources = next.map((source) => (byHand ? { ...source!, ...speedOf(byHand, source!) } : source!));
    found = sailAgain();
  }
  return {
    sources: sources.map((source) => uncorrected(source)),
    ...found,
    offsets: sources.map(() => null),
    lags: sources.map(() => null),
    directionInferred: true,
    issues: [],
  };
}

type Found = Pick<FoundWind, 'atBoats' | 'sailed'>;
interface Span {
  readonly from: number;
  readonly to: number;
}

/** Looks joined, and the wind at the boat's own blocks moved to the side that lifts it. null without any look. */
function withBump(looks: readonly DirectionLook[], one: Sailed, bump: number, span: Span): WindSource | null {
  const base = windFromLooks(looks, span)?.source;
  if (!base || bump === 0) return base ?? null;
  const moved = one.blocks.map(({ time, tack }): DirectionLook => {
    const { direction } = readWind(base, time, 1);
    return { time, direction: direction + tackSign(tack) * bump, se: BUMP_SE };
  });
  return windFromLooks([...looks, ...moved], span)!.source;
}

/** What the boat's blocks still lie below half its tacking angle, on average. [deg] */
function moreBump({ blocks }: Sailed, half: number): number {
  const seconds = blocks.reduce((sum, b) => sum + b.seconds, 0);
  if (seconds < 60 || Number.isNaN(half)) return 0;
  return half - blocks.reduce((sum, b) => sum + b.gamma * b.seconds, 0) / seconds;
}

/** The wind as the other boats' settled blocks have it. */
function courseLooks(sailed: readonly Sailed[], own: readonly number[], boat: number): DirectionLook[] {
  return sailed.flatMap((one, k) =>
    k === boat || Number.isNaN(own[k])
      ? []
      : one.blocks.map(({ time, course, tack }) => ({
          time,
          direction: course + tackSign(tack) * own[k],
          se: OTHER_BOAT_SE,
        })),
  );
}

/** Fewest tacks whose median says how a boat points. */
const FEWEST_TACKS = 3;

/** Half the angle between a boat's courses before and after its tacks on the beats: the median. NaN for too few. [deg] */
function halfTackingAngle(one: Sailed): number {
  const halves = one.manoeuvres.flatMap((manoeuvre) => {
    const { kind, entry, exit } = manoeuvre;
    const onBeat = one.legs.some((leg) => leg.kind === 'upwind' && entry >= leg.from && exit <= leg.to);
    if (kind !== 'tack' || !onBeat) return [];
    const half = Math.abs(turn(...coursesAbout(one, manoeuvre))) / 2;
    return Number.isNaN(half) ? [] : [half];
  });
  return halves.length >= FEWEST_TACKS ? median(halves) : NaN;
}

/** Bisectors of the courses before and after each tack of a boat; those of gybes are where the wind goes to. */
function turnLooks(one: Sailed): DirectionLook[] {
  return one.manoeuvres.flatMap((manoeuvre) => {
    const { kind, time } = manoeuvre;
    if (kind !== 'tack' && kind !== 'gybe') return [];
    const [before, after] = coursesAbout(one, manoeuvre);
    if (Number.isNaN(before + after)) return [];
    const bisector = bisectorOf(before, after);
    return kind === 'tack'
      ? [{ time, direction: bisector, se: BISECTOR_SE }]
      : [{ time, direction: bisector + 180, se: GYBE_SE }];
  });
}

function coursesAbout(one: Sailed, { entry, at }: Manoeuvre): [before: number, after: number] {
  return [
    steadyCourse(one, Math.max(0, entry - BEFORE), entry),
    steadyCourse(one, at + AFTER[0], Math.min(one.sailing.n, at + AFTER[1])),
  ];
}

/** Mean course over rows with way on; NaN when fewer than six, or when it is not steady. [deg] */
function steadyCourse(one: Sailed, from: number, to: number): number {
  const { ux, uy, speed, n } = one.sailing;
  const courses: number[] = [];
  for (let i = from; i < Math.min(to, n); i++) {
    if (speed[i] > 0.6 * one.usual) courses.push(directionOf(ux[i], uy[i]));
  }
  if (courses.length < 6) return NaN;
  const { mean, resultant } = circularMean(courses);
  return resultant > 0.96 ? mean : NaN;
}

/** Speed of the hand wind on the rows of the direction found from tracks. */
function speedOf(hand: WindSource, tracks: WindSource): Pick<WindSource, 'sums' | 'hasSpeed' | 'accuracySpeed'> {
  const shift = tracks.t0 - hand.t0;
  const at = (sums: Float64Array, i: number): number => sums[Math.max(0, Math.min(hand.n, i + shift))];
  const n = tracks.n + 1;
  const speed = Float64Array.from({ length: n }, (_, i) => at(hand.sums.speed, i) - at(hand.sums.speed, 0));
  const speeds = Float64Array.from({ length: n }, (_, i) => at(hand.sums.speeds, i) - at(hand.sums.speeds, 0));
  return {
    sums: { ...tracks.sums, speed, speeds },
    hasSpeed: hand.hasSpeed,
    accuracySpeed: hand.accuracySpeed,
  };
}

function handLook(hand: WindSource, span: Span): DirectionLook {
  const middle = (span.from + span.to) / 2;
  const i = Math.max(0, Math.min(hand.n - 1, Math.round(middle - hand.t0)));
  const { east, north } = hand.sums;
  const direction = directionOf(east[i + 1] - east[i], north[i + 1] - north[i]);
  return { time: middle, direction, se: Math.max(3, hand.accuracyDir) };
}

function constantSource(direction: number, span: Span): WindSource {
  const n = Math.ceil(span.to - span.from) + 1;
  return {
    kind: 'tracks',
    file: '',
    boat: -1,
    t0: Math.floor(span.from),
    n,
    place: null,
    accuracyDir: 10,
    accuracySpeed: 1,
    hasSpeed: false,
    window: 1,
    sums: windSums(new Float64Array(n).fill(direction), new Float64Array(n).fill(NaN)),
  };
}
