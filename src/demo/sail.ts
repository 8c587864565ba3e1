/** Sails one boat through the afternoon, second by second: what is planned, what the wind does, where the marks are. */
import { leewayAt, steadySpeed } from './boat.js';
import { apart, bearingOf, cosine, dice, lengthOf, sine } from './exact.js';
import { WIND_FROM, type Breeze, type WindAt } from './wind.js';

const KNOT = 1852 / 3600;

export interface Place {
  readonly x: number;
  readonly y: number;
}

/** What is told of one beat, beside the sailor's habits. */
export interface BeatStory {
  /** The tack (counted from 1) that goes wrong. */
  readonly badTack?: number;
  /** Sails on through a header from this second of the beat to that. */
  readonly blind?: readonly [number, number];
  /** Sails this far past the lay line. [m] */
  readonly overstand?: number;
}

export interface Sailor {
  readonly seed: number;
  /** Close-hauled angle to the wind [deg] and speed as a share of the table's. */
  readonly angle: number;
  readonly speed: number;
  /** Tacks when headed by this [deg], but not sooner than this after the last turn. [s] */
  readonly shift: number;
  readonly hold: number;
  /** Where it is at the gun. */
  readonly atGun: Place;
  /** Before the gun: how long at which angle to the wind (signed: positive on starboard tack). */
  readonly before: readonly (readonly [number, number])[];
  readonly beats: readonly BeatStory[];
}

export interface Moment {
  readonly x: number;
  readonly y: number;
  /** Velocity, east and north. [m/s] */
  readonly vx: number;
  readonly vy: number;
  /** Direction of the bow. [deg] */
  readonly heading: number;
  /** Angle to the true wind, signed, and speed. [deg, kn] */
  readonly angle: number;
  readonly speed: number;
  readonly wind: Breeze;
}

/** A turn under way: the angle to the wind goes from one value to another. */
interface Turn {
  readonly from: number;
  readonly to: number;
  readonly begun: number;
  readonly seconds: number;
  readonly drop: number;
  readonly speed: number;
  readonly recover: number;
}

interface State {
  readonly sailor: Sailor;
  readonly windAt: WindAt;
  readonly moments: Moment[];
  second: number;
  x: number;
  y: number;
  /** Ordered angle to the wind, signed. */
  angle: number;
  speed: number;
  felt: number;
  usual: number;
  turn: Turn | null;
  slowUntil: number;
  slowFor: number;
  lastTurn: number;
  tacks: number;
  beatBegun: number;
  hand: number;
  readonly lot: ReturnType<typeof dice>;
}

export interface Course {
  readonly gun: number;
  readonly windward: Place;
  readonly leeward: Place;
}

/** The whole afternoon of one boat; ends three minutes after its finish. */
export function sailAfternoon(sailor: Sailor, windAt: WindAt, course: Course): { moments: Moment[]; finish: number } {
  // The way to the line is sailed once to see where it ends, then again from where it ends at the line.
  let start = { x: 0, y: 0 };
  for (let i = 0; i < 3; i++) {
    const trial = begin(sailor, windAt, start);
    sailBefore(trial);
    start = { x: start.x + sailor.atGun.x - trial.x, y: start.y + sailor.atGun.y - trial.y };
  }
  const state = begin(sailor, windAt, start);
  sailBefore(state);
  for (const story of sailor.beats) {
    state.beatBegun = state.second;
    state.tacks = 0;
    state.lastTurn = state.second;
    sailTo(state, course.windward, () => beat(state, course.windward, story));
    turnTo(state, 160, 10, 0, 8);
    sailTo(state, course.leeward, () => run(state, course.leeward));
    if (story !== sailor.beats.at(-1)) turnTo(state, state.angle < 0 ? -sailor.angle : 360 - sailor.angle, 10, 0, 10);
  }
  const finish = state.second;
  goHome(state);
  return { moments: state.moments, finish };
}

function begin(sailor: Sailor, windAt: WindAt, place: Place): State {
  const wind = windAt(place.x, place.y, 0);
  return {
    sailor,
    windAt,
    moments: [],
    second: 0,
    x: place.x,
    y: place.y,
    angle: sailor.before[0][1],
    speed: 3,
    felt: wind.direction,
    usual: WIND_FROM,
    turn: null,
    slowUntil: 0,
    slowFor: 5,
    lastTurn: 0,
    tacks: 0,
    beatBegun: 0,
    hand: 0,
    lot: dice(sailor.seed),
  };
}

function sailBefore(state: State): void {
  for (const [seconds, angle] of state.sailor.before) {
    const until = state.second + seconds;
    order(state, angle);
    while (state.second < until) step(state);
  }
}

function goHome(state: State): void {
  const finish = state.second;
  order(state, 75);
  while (state.second < finish + 60) step(state);
  order(state, 48);
  while (state.second < finish + 150) step(state);
  order(state, -48);
  while (state.second < finish + 240) step(state);
}

/** Steers to an angle, through the wind or the gybe when it lies on the other side. */
function order(state: State, angle: number): void {
  if (angle > 0 === state.angle > 0) state.angle = angle;
  else if (Math.abs(angle) + Math.abs(state.angle) < 180) turnTo(state, angle, 8, 0.42, 20);
  else turnTo(state, angle < 0 ? 360 + angle : angle - 360, 6, 0.2, 10);
}

function turnTo(state: State, to: number, seconds: number, drop: number, recover: number): void {
  const { angle: from, second: begun, speed } = state;
  state.turn = { from, to, begun, seconds, drop, speed, recover };
}

function sailTo(state: State, mark: Place, decide: () => void): void {
  let last = Infinity;
  for (let guard = 0; guard < 1800; guard++) {
    const distance = lengthOf(mark.x - state.x, mark.y - state.y);
    if (distance < 7 || (distance < 40 && distance > last && !state.turn && levelWith(state, mark))) return;
    last = distance;
    if (!state.turn) decide();
    step(state);
  }
  throw new Error(`sailTo: mark at ${mark.x}, ${mark.y} not reached`);
}

/** Within 15 m of the mark's level, measured along the mean wind. */
function levelWith(state: State, mark: Place): boolean {
  return Math.abs((mark.x - state.x) * sine(WIND_FROM) + (mark.y - state.y) * cosine(WIND_FROM)) < 15;
}

function beat(state: State, mark: Place, story: BeatStory): void {
  const { sailor } = state;
  const bearing = bearingOf(mark.x - state.x, mark.y - state.y);
  const distance = lengthOf(mark.x - state.x, mark.y - state.y);
  const side = state.angle > 0 ? 1 : -1;
  const close = sailor.angle;
  const below = -side * apart(state.felt - side * close, bearing);
  if (below >= 0) {
    state.angle = side * (close + Math.min(60, below));
    return;
  }
  state.angle = side * close;
  const held = state.second - state.lastTurn;
  const room = distance * sine(side * apart(state.felt + side * close, bearing));
  const fetches = room >= (story.overstand ?? 3) && side * apart(state.felt + side * close, bearing) < 150;
  const corner = side > 0 && room > -60 && distance > 150 && held > 30 && room < 0;
  const headed = side * apart(state.usual, state.felt) < -sailor.shift && held > sailor.hold && !isBlind(state, story);
  if ((fetches && held > 12) || corner || (headed && distance > 80)) tackNow(state, side, story);
}

function isBlind(state: State, story: BeatStory): boolean {
  const into = state.second - state.beatBegun;
  return story.blind !== undefined && into >= story.blind[0] && into <= story.blind[1];
}

function tackNow(state: State, side: number, story: BeatStory): void {
  state.tacks += 1;
  const bad = state.tacks === story.badTack;
  const drop = bad ? 0.78 : 0.38 + 0.1 * state.lot.throw();
  turnTo(state, -side * state.sailor.angle, bad ? 11 : 7 + 2 * state.lot.throw(), drop, bad ? 34 : 19);
}

function run(state: State, mark: Place): void {
  const needed = apart(bearingOf(mark.x - state.x, mark.y - state.y), state.felt);
  const side = state.angle > 0 ? 1 : -1;
  const best = 162;
  const held = state.second - state.lastTurn;
  const distance = lengthOf(mark.x - state.x, mark.y - state.y);
  if (Math.abs(needed) < best && needed * side > 0) order(state, needed);
  else if (Math.abs(needed) < best && held > 15) order(state, needed);
  else if (held > 150 && distance > 120) order(state, -side * best);
  else order(state, side * best);
}

const soft = (p: number): number => p * p * (3 - 2 * p);

/** One second. */
function step(state: State): void {
  const { sailor, lot } = state;
  const wind = state.windAt(state.x, state.y, state.second);
  state.felt += apart(state.felt, wind.direction) / 4;
  state.usual += apart(state.usual, state.felt) / 260;
  state.hand += -state.hand / 6 + 0.45 * lot.bell();
  const weave = 1.1 * sine((360 / 13.7) * state.second + sailor.seed) + state.hand * 0.6;
  let angle = apart(0, state.angle) + weave + apart(state.felt, wind.direction);
  const { turn } = state;
  if (turn) {
    const p = Math.min(1, (state.second - turn.begun) / turn.seconds);
    angle = turn.from + (turn.to - turn.from) * soft(p);
    if (turn.drop > 0) state.speed = turn.speed * (1 - turn.drop * soft(p));
    if (p >= 1) endTurn(state, turn);
  }
  angle = apart(0, angle);
  const steady = steadySpeed(wind.speed, Math.abs(angle)) * sailor.speed;
  const tau = state.second < state.slowUntil ? state.slowFor / 3 : 5;
  if (!turn || turn.drop === 0) state.speed += (steady - state.speed) / tau;
  const surged = state.speed * (1 + 0.02 * sine((360 / 4.6) * state.second) + 0.004 * lot.bell());
  const course = wind.direction - angle;
  const leeway = leewayAt(wind.speed, Math.abs(angle), state.speed) * (angle >= 0 ? 1 : -1);
  const vx = surged * KNOT * sine(course);
  const vy = surged * KNOT * cosine(course);
  state.moments.push({ x: state.x, y: state.y, vx, vy, heading: course + leeway, angle, speed: surged, wind });
  state.x += vx;
  state.y += vy;
  state.second += 1;
}

function endTurn(state: State, turn: Turn): void {
  state.angle = apart(0, turn.to);
  state.turn = null;
  state.lastTurn = state.second;
  state.slowUntil = state.second + turn.recover;
  state.slowFor = turn.recover;
}
