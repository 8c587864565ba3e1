/** A boat's whole day: sail out, milling, the race, waiting, the sail home. Decides once a second where to steer. */
import type { Condition } from './condition.js';
import { cosd, pointing, signed, sind } from './directions.js';
import { advance, perform, RATE, sideOf, type Act, type Boat } from './hull.js';
import type { Chance } from './random.js';
import type { Phase, TrueLeg, TrueWindow } from './truth.js';

export interface Place {
  readonly x: number;
  readonly y: number;
}

export interface Course {
  readonly gun: number;
  readonly windward: Place;
  readonly leeward: Place;
  readonly laps: number;
  /** Direction the wind comes from, as the race committee saw it. [deg] */
  readonly axis: number;
}

/** Where the sailor is in the day, besides the boat's own state. */
interface Watch {
  readonly boat: Boat;
  readonly course: Course;
  readonly condition: Condition;
  readonly chance: Chance;
  meanWind: number;
  waypoint: Place;
  lastDistance: number;
  legStart: number;
  legs: TrueLeg[];
  plan: { at: number; kind: 'double' | 'aborted' | 'turn' | 'capsize' }[];
  finished: number;
}

export interface Voyage {
  readonly boat: Boat;
  readonly legs: readonly TrueLeg[];
  readonly finish: number;
  /** Waits until `until`, then sails home for `seconds`. */
  readonly goHome: (until: number, seconds: number) => void;
  /** Parts of the day so far. */
  readonly windows: () => TrueWindow[];
}

const TOO_LONG = 2400;

export function sailRace(boat: Boat, course: Course, condition: Condition, chance: Chance): Voyage {
  const watch: Watch = {
    boat,
    course,
    condition,
    chance,
    meanWind: boat.felt,
    waypoint: { x: 0, y: 0 },
    lastDistance: Infinity,
    legStart: course.gun,
    legs: [],
    plan: [],
    finished: NaN,
  };
  const armed = course.gun - (condition.sailOut ? 600 : 300);
  runUntil(watch, armed, () => sailUp(watch, 'sail-out'));
  nextWaypoint(watch);
  runUntil(watch, course.gun - 90, () => mill(watch));
  watch.waypoint = nearLine(watch, chance.between(-50, 50), -chance.between(35, 60));
  runUntil(watch, course.gun - 24, () => steerFor(watch, watch.waypoint, 'approach'));
  runUntil(watch, course.gun, () => closeHauled(watch));
  race(watch);
  const windows: TrueWindow[] = [
    { what: 'sail-out', from: boat.log.t0, to: armed },
    { what: 'milling', from: armed, to: course.gun },
    { what: 'race', from: course.gun, to: watch.finished },
  ];
  return {
    boat,
    windows: () => windows,
    legs: closeLegs(watch),
    finish: watch.finished,
    goHome: (until, seconds) => {
      boat.racing = false;
      boat.settleFrom = Infinity;
      nextWaypoint(watch);
      stop(watch, 'waiting', chance.between(15, 40));
      runUntil(watch, until, () => idleAbout(watch));
      runUntil(watch, until + seconds, () => sailUp(watch, 'sail-home'));
      windows.push(
        { what: 'waiting', from: watch.finished, to: until },
        { what: 'sail-home', from: until, to: until + seconds },
      );
    },
  };
}

/** Steps until a time, or until `decide` (asked once a second, unless a turn is on) says it is done. */
function run(watch: Watch, until: number, decide: () => boolean): boolean {
  const { boat } = watch;
  while (boat.t < until - 1e-9) {
    if (boat.step % RATE === 0) {
      watch.meanWind += signed(boat.felt - watch.meanWind) / 250;
      if (boat.acts.length === 0 && decide()) return true;
    }
    advance(boat);
  }
  return false;
}

/** For stretches that only the clock ends. */
function runUntil(watch: Watch, until: number, steer: () => void): void {
  run(watch, until, () => {
    steer();
    return false;
  });
}

/** Best angle of this crew in the wind it feels. [deg] */
function closeAngle(watch: Watch): number {
  const { crew, feltSpeed } = watch.boat;
  return crew.performance.bestUp(feltSpeed) + crew.angle;
}

function steerAt(watch: Watch, gamma: number, phase: Phase): void {
  const { boat } = watch;
  boat.phase = phase;
  const limited = Math.min(166, Math.abs(gamma)) * (gamma >= 0 ? 1 : -1);
  if (limited >= 0 === boat.order >= 0) {
    const most = 6;
    boat.order += Math.max(-most, Math.min(most, limited - boat.order));
  } else if (Math.abs(limited) + Math.abs(boat.order) < 180) tack(watch, limited);
  else gybe(watch, limited);
}

function tackAct(watch: Watch, to: number): Act {
  const { chance, boat } = watch;
  const [dropLow, dropHigh] = boat.crew.drop;
  return {
    phase: 'tack',
    seconds: chance.between(6, 10),
    to,
    drop: chance.between(dropLow, dropHigh),
    recover: chance.between(...boat.crew.recover),
  };
}

function tack(watch: Watch, to: number): void {
  perform(watch.boat, tackAct(watch, to));
}

function gybe(watch: Watch, to: number): void {
  const { boat, chance } = watch;
  const path = to < 0 ? 360 + to : to - 360;
  perform(boat, {
    phase: 'gybe',
    seconds: chance.between(4, 8),
    to: path,
    drop: chance.between(0.1, 0.3),
    recover: 10,
  });
}

/** Ground course when sailing at a signed angle to the felt wind. [deg] */
function groundCourse(watch: Watch, gamma: number): number {
  const { boat } = watch;
  const course = boat.felt - gamma;
  const speed = boat.crew.performance.speed(boat.feltSpeed, Math.abs(gamma)) * boat.crew.speed;
  return pointing(speed * sind(course) + boat.current.east, speed * cosd(course) + boat.current.north);
}

const towards = (boat: Boat, place: Place): { bearing: number; distance: number } => ({
  bearing: pointing(place.x - boat.x, place.y - boat.y),
  distance: Math.hypot(place.x - boat.x, place.y - boat.y),
});

/** Straight for a place, or beating to it when it lies to windward; no tactics. */
function steerFor(watch: Watch, place: Place, phase: Phase): void {
  const { boat } = watch;
  const { bearing } = towards(boat, place);
  const needed = signed(boat.felt - bearing);
  const side = sideOf(boat);
  const close = 52;
  if (Math.abs(needed) >= close) {
    const stay = Math.abs(needed) > 150 ? side * Math.abs(needed) : needed;
    steerAt(watch, stay, phase);
  } else if (boat.t - boat.lastTurn > 35 && needed * side < -25) steerAt(watch, -side * close, phase);
  else steerAt(watch, side * close, phase);
}

function nearLine(watch: Watch, across: number, along: number): Place {
  const { axis } = watch.course;
  return { x: across * cosd(axis) + along * sind(axis), y: -across * sind(axis) + along * cosd(axis) };
}

function nextWaypoint(watch: Watch): void {
  const { chance } = watch;
  watch.waypoint = nearLine(watch, chance.between(-140, 140), -chance.between(20, 150));
}

/** Back and forth behind the line; now and then a stop head to wind. */
function mill(watch: Watch): void {
  const { boat, chance } = watch;
  const { distance } = towards(boat, watch.waypoint);
  if (distance < 20 || chance.happens(1 / 60)) nextWaypoint(watch);
  if (chance.happens(1 / 90) && boat.t < watch.course.gun - 160) stop(watch, 'stopped', chance.between(20, 45));
  else steerFor(watch, watch.waypoint, 'milling');
}

function idleAbout(watch: Watch): void {
  const { distance } = towards(watch.boat, watch.waypoint);
  if (distance < 20) nextWaypoint(watch);
  if (watch.chance.happens(1 / 40)) stop(watch, 'waiting', 25);
  else steerFor(watch, watch.waypoint, 'waiting');
}

function stop(watch: Watch, phase: Phase, seconds: number): void {
  const side = sideOf(watch.boat);
  const quiet = { drop: 0, recover: 12 };
  perform(
    watch.boat,
    { phase, seconds: 5, to: side * 12, ...quiet },
    { phase, seconds, to: side * 9, idle: true, ...quiet },
    { phase, seconds: 6, to: side * 70, ...quiet },
  );
}

/** A plain upwind sail without a mark: tacks on shifts or when bored. */
function sailUp(watch: Watch, phase: Phase): void {
  const side = sideOf(watch.boat);
  const held = watch.boat.t - watch.boat.lastTurn;
  if (held > 240 || wantsShiftTack(watch, side, held)) tack(watch, -side * closeAngle(watch));
  else steerAt(watch, side * closeAngle(watch), phase);
}

function closeHauled(watch: Watch): void {
  steerAt(watch, closeAngle(watch), 'approach');
}

function wantsShiftTack(watch: Watch, side: number, held: number): boolean {
  const { crew } = watch.boat;
  const lift = side * signed(watch.boat.felt - watch.meanWind);
  const wrong = crew.faults.headed ? lift > crew.shift : lift < -crew.shift;
  return held > crew.hold[0] && wrong && watch.chance.happens(crew.alert / 8);
}

function race(watch: Watch): void {
  const { boat, course } = watch;
  boat.racing = true;
  boat.settleFrom = course.gun + 20;
  for (let leg = 0; leg < 2 * course.laps; leg++) {
    const upwind = leg % 2 === 0;
    watch.plan = upwind ? planEvents(watch) : [];
    watch.lastDistance = Infinity;
    const done = run(watch, boat.t + TOO_LONG, () => (upwind ? beat(watch) : downwind(watch)));
    if (!done) throw new Error(`race: ${boat.crew.name} never reached the mark of leg ${leg}`);
    const end = Math.round(boat.t);
    watch.legs.push({ kind: upwind ? 'upwind' : 'downwind', lap: 1 + Math.floor(leg / 2), start: watch.legStart, end });
    watch.legStart = end;
    boat.settleFrom = Infinity;
    if (leg < 2 * course.laps - 1) round(watch, upwind);
  }
  watch.finished = Math.round(boat.t);
}

/** Legs end where the boat was nearest the mark itself, a little into the turn: found when the turn has been sailed. */
function closeLegs(watch: Watch): TrueLeg[] {
  const { course, boat } = watch;
  let start = course.gun;
  return watch.legs.map((leg, k) => {
    const last = k === watch.legs.length - 1;
    const end = last ? leg.end : nearest(boat, leg.kind === 'upwind' ? course.windward : course.leeward, leg.end);
    const closed = { ...leg, start, end };
    start = end;
    return closed;
  });
}

function nearest(boat: Boat, mark: Place, around: number): number {
  const { x, y } = boat.log.columns;
  let best = around;
  let least = Infinity;
  for (let t = around - 10; t < around + 15; t++) {
    const i = t - boat.log.t0;
    const distance = Math.hypot(x[i] - mark.x, y[i] - mark.y);
    if (distance < least) [best, least] = [t, distance];
  }
  return best;
}

/** Room left between boat and mark. [m] */
const ROOM = 6;

/** The place steered for: a little to the right of the mark as the boat comes at it, which leaves it to port. */
function besideMark(mark: Place, axis: number, windward: boolean): Place {
  const right = windward ? ROOM : -ROOM;
  return { x: mark.x + right * cosd(axis), y: mark.y - right * sind(axis) };
}

function planEvents(watch: Watch): Watch['plan'] {
  const { chance, boat } = watch;
  if (!watch.condition.events) return [];
  const plan: Watch['plan'] = [];
  const add = (p: number, kind: Watch['plan'][number]['kind']): void => {
    if (chance.happens(p)) plan.push({ at: boat.t + chance.between(60, 420), kind });
  };
  add(0.25, 'aborted');
  add(0.2, 'double');
  add(0.12, 'turn');
  add(0.06, 'capsize');
  return plan.sort((a, b) => a.at - b.at);
}

/** Turns away from the mark just reached, which is left to port, and begins the next leg. */
function round(watch: Watch, windward: boolean): void {
  const { boat, chance } = watch;
  const gamma = signed(boat.felt - boat.course);
  const down = Math.min(165, boat.crew.performance.bestDown(boat.feltSpeed));
  const up = closeAngle(watch) + 4;
  // Turning left, the angle to the wind grows: from close-hauled on starboard to running, from running to port tack.
  const to = windward ? down : gamma < 0 ? -up : 360 - up;
  perform(boat, {
    phase: windward ? 'bear-away' : 'round-up',
    seconds: chance.between(8, 15),
    to,
    drop: 0,
    recover: 10,
    atMark: true,
  });
}

/** True when the mark is reached: very near, or passed at its level and drawing away. */
function reached(watch: Watch, distance: number, beyond: boolean): boolean {
  const passed = distance > watch.lastDistance && distance < 45 && beyond;
  watch.lastDistance = distance;
  return distance < 8 || passed;
}

/** How far ahead of the mark's level, along the committee's axis; positive: to windward of it. [m] */
function above(watch: Watch, mark: Place): number {
  const { boat, course } = watch;
  return (boat.x - mark.x) * sind(course.axis) + (boat.y - mark.y) * cosd(course.axis);
}

function beat(watch: Watch): boolean {
  const { boat, course } = watch;
  const mark = besideMark(course.windward, course.axis, true);
  const { bearing, distance } = towards(boat, mark);
  if (reached(watch, distance, above(watch, mark) > -5)) return true;
  const close = closeAngle(watch);
  const side = sideOf(boat);
  const held = boat.t - boat.lastTurn;
  // Positive: the mark lies to leeward of the close-hauled course made good on this tack (on the other tack).
  const below = -side * signed(bearing - groundCourse(watch, side * close));
  const belowOther = side * signed(bearing - groundCourse(watch, -side * close));
  if (below >= 0 && below < 170) {
    const needed = Math.abs(signed(boat.felt - bearing));
    const fetching = below > (boat.phase === 'fetch' ? 0.3 : 1.5);
    steerAt(watch, side * Math.max(close, Math.min(needed, close + below)), fetching ? 'fetch' : 'beat');
    return false;
  }
  if (happening(watch, distance)) return false;
  if (shouldTack(watch, side, held, distance, belowOther)) tack(watch, -side * close);
  else steerAt(watch, side * close, 'beat');
  return false;
}

function shouldTack(watch: Watch, side: number, held: number, distance: number, belowOther: number): boolean {
  const { crew } = watch.boat;
  const room = distance * sind(belowOther);
  const fetches = belowOther >= 0 && belowOther < 170;
  if (fetches) return (room >= crew.overstand || belowOther > 60) && held > 12;
  if (distance < 60 || held < 25) return false;
  // A mark left to port is best come at on starboard: leave the left corner early.
  if (side > 0 && belowOther > -90 && -room < crew.corner && distance > 200) return true;
  return wantsShiftTack(watch, side, held) || held > crew.hold[1];
}

/** Starts the next planned slip when its time has come. */
function happening(watch: Watch, distance: number): boolean {
  const { boat, chance } = watch;
  const next = watch.plan[0];
  if (!next || boat.t < next.at || distance < 150 || boat.t - boat.lastTurn < 40) return false;
  watch.plan.shift();
  const side = sideOf(boat);
  const close = closeAngle(watch);
  if (next.kind === 'double') {
    const first = tackAct(watch, -side * close);
    const pause: Act = { phase: 'beat', seconds: 20 - first.seconds, to: -side * close, drop: 0, recover: 0 };
    perform(boat, first, pause, tackAct(watch, side * close));
  } else if (next.kind === 'aborted') {
    const luff: Act = { phase: 'aborted-tack', seconds: 4, to: side * chance.between(5, 12), drop: 0.25, recover: 0 };
    perform(boat, luff, { phase: 'bear-away', seconds: 5, to: side * close, drop: 0.1, recover: 16 });
  } else if (next.kind === 'turn') {
    const path = side * (close - 360);
    perform(boat, { phase: 'full-turn', seconds: chance.between(14, 18), to: path, drop: 0.5, recover: 18 });
  } else {
    const over: Act = { phase: 'capsize', seconds: 90, to: side * 60, drop: 0, recover: 0, idle: true };
    perform(boat, over, { phase: 'bear-away', seconds: 8, to: side * close, drop: 0, recover: 24 });
  }
  return true;
}

function downwind(watch: Watch): boolean {
  const { boat, course } = watch;
  const mark = besideMark(course.leeward, course.axis, false);
  const { bearing, distance } = towards(boat, mark);
  if (reached(watch, distance, above(watch, mark) < 5)) return true;
  const needed = signed(boat.felt - bearing);
  const best = Math.min(165, boat.crew.performance.bestDown(boat.feltSpeed));
  const side = sideOf(boat);
  const held = boat.t - boat.lastTurn;
  if (Math.abs(needed) < best && (needed * side > 0 || held < 20)) {
    steerAt(watch, needed * side > 0 ? needed : side * best, 'run');
  } else if (Math.abs(needed) < best && needed * side < 0) gybe(watch, needed);
  else if (held > 200 && distance > 150) gybe(watch, -side * best);
  else steerAt(watch, side * best, 'run');
  return false;
}
