/** One boat under way: its state, and one step of time. Knows no course, only what it is told to steer. */
import type { Crew } from './crew.js';
import { cosd, pointing, signed, sind } from './directions.js';
import { PHASES, type Phase, type TrueTurn, type TurnKind } from './truth.js';
import type { Wind } from './wind.js';

/** Steps a second of the simulation. */
export const RATE = 5;
const DT = 1 / RATE;

/** A planned turn: the angle to the wind goes from the present one to `to` (not wrapped) within `seconds`. */
export interface Act {
  readonly phase: Phase;
  readonly seconds: number;
  readonly to: number;
  /** Part of the speed lost by its end, and seconds until it is back. */
  readonly drop: number;
  readonly recover: number;
  /** Sails empty: the boat stops and drifts. */
  readonly idle?: boolean;
  readonly atMark?: boolean;
}

export interface Log {
  readonly t0: number;
  n: number;
  readonly columns: Record<Column, Float64Array>;
  readonly phase: Uint8Array;
  readonly settled: Uint8Array;
  /** Every step (RATE a second): place and velocity over ground, for quick receivers. */
  readonly fine: Float64Array;
  readonly turns: TrueTurn[];
}

// prettier-ignore
const COLUMNS = [
  'x', 'y', 'vx', 'vy', 'ux', 'uy', 'gamma', 'beta', 'speed', 'vmg',
  'twd', 'tws', 'groundTwd', 'groundTws', 'leeway', 'heading', 'heel', 'bestVmg',
] as const;
export type Column = (typeof COLUMNS)[number];

interface OpenTurn {
  kind: Phase;
  start: number;
  crossed: number;
  from: number;
  gamma: number;
  atMark: boolean;
}

export interface Boat {
  readonly crew: Crew;
  readonly wind: Wind;
  readonly current: { readonly east: number; readonly north: number };
  readonly log: Log;
  step: number;
  t: number;
  x: number;
  y: number;
  /** Course aimed at (not wrapped) and speed along it; drift on top of it while stopped. */
  course: number;
  speed: number;
  driftX: number;
  driftY: number;
  /** Signed: positive when wind over the starboard side. */
  leeway: number;
  /** Wind as the helm feels it (water-relative, delayed; direction not wrapped). */
  felt: number;
  feltSpeed: number;
  /** Signed angle to the wind that is ordered when no act runs. */
  order: number;
  overshoot: number;
  phase: Phase;
  acts: Act[];
  actFrom: number;
  actStart: number;
  actSpeed: number;
  open: OpenTurn | null;
  recoverUntil: number;
  recoverTau: number;
  settleFrom: number;
  racing: boolean;
  lastTurn: number;
}

const out = new Float64Array(2);

export function launch(crew: Crew, wind: Wind, current: Boat['current'], t: number, place: [number, number]): Boat {
  const room = 4 * 3600;
  wind.at(place[0], place[1], t, out);
  const columns = Object.fromEntries(COLUMNS.map((c) => [c, new Float64Array(room)])) as Log['columns'];
  return {
    crew,
    wind,
    current,
    log: {
      t0: t,
      n: 0,
      columns,
      phase: new Uint8Array(room),
      settled: new Uint8Array(room),
      fine: new Float64Array(room * RATE * 4),
      turns: [],
    },
    step: 0,
    t,
    x: place[0],
    y: place[1],
    course: out[0] - 46,
    speed: 1.5,
    driftX: 0,
    driftY: 0,
    leeway: 3,
    felt: out[0],
    feltSpeed: out[1],
    order: 46,
    overshoot: 0,
    phase: 'sail-out',
    acts: [],
    actFrom: 0,
    actStart: 0,
    actSpeed: 0,
    open: null,
    recoverUntil: 0,
    recoverTau: 5,
    settleFrom: Infinity,
    racing: false,
    lastTurn: t,
  };
}

const ease = (p: number): number => p * p * (3 - 2 * p);

/** +1 on starboard tack, -1 on port. */
export const sideOf = (boat: Boat): 1 | -1 => (boat.order >= 0 ? 1 : -1);

/** Begins an act now; further acts follow it. */
export function perform(boat: Boat, ...acts: Act[]): void {
  boat.acts = acts;
  begin(boat);
}

function begin(boat: Boat): void {
  const act = boat.acts[0];
  const gamma = signed(boat.felt - boat.course);
  boat.actFrom = gamma;
  boat.actStart = boat.t;
  boat.actSpeed = boat.speed;
  boat.phase = act.phase;
  boat.open = { kind: act.phase, start: boat.t, crossed: NaN, from: boat.order, gamma, atMark: act.atMark ?? false };
  const i = boat.log.n;
  for (let k = Math.max(0, i - 3); k < i; k++) boat.log.settled[k] = 0;
}

const COUNTED: ReadonlySet<Phase> = new Set<Phase>(['tack', 'gybe', 'full-turn', 'aborted-tack', 'capsize']);

function finish(boat: Boat): void {
  const act = boat.acts.shift()!;
  boat.order = signed(act.to);
  if (act.recover > 0) {
    boat.recoverUntil = boat.t + act.recover;
    boat.recoverTau = act.recover / 3;
  }
  boat.settleFrom = Math.max(
    boat.settleFrom === Infinity ? 0 : boat.settleFrom,
    boat.t + 1.2 * Math.max(act.recover, 8),
  );
  if (act.phase === 'tack') boat.overshoot = 5;
  const { open } = boat;
  if (open && (COUNTED.has(open.kind) || !Number.isNaN(open.crossed))) boat.log.turns.push(closed(boat, act, open));
  boat.open = null;
  boat.lastTurn = boat.t;
  if (boat.acts.length > 0) begin(boat);
}

function closed(boat: Boat, act: Act, open: OpenTurn): TrueTurn {
  const counted = COUNTED.has(open.kind);
  const through = Math.abs(open.gamma) < 90 || open.kind === 'full-turn' || open.kind === 'bear-away' ? 'tack' : 'gybe';
  return {
    kind: counted ? (open.kind as TurnKind) : through,
    time: Number.isNaN(open.crossed) ? 0.5 * (open.start + boat.t) : open.crossed,
    start: open.start,
    end: boat.t,
    settled: boat.t + 1.2 * Math.max(act.recover, 8),
    from: open.from >= 0 ? 'starboard' : 'port',
    to: boat.order >= 0 ? 'starboard' : 'port',
    racing: boat.racing,
    atMark: open.atMark || !counted,
  };
}

/** One step of a fifth of a second. */
export function advance(boat: Boat): void {
  const { crew, current } = boat;
  boat.wind.at(boat.x, boat.y, boat.t, out);
  const groundTwd = out[0];
  const groundTws = out[1];
  const airE = -groundTws * sind(groundTwd) - current.east;
  const airN = -groundTws * cosd(groundTwd) - current.north;
  const twd = pointing(-airE, -airN);
  const tws = Math.hypot(airE, airN);
  boat.felt += signed(twd - boat.felt) * (DT / 4);
  boat.feltSpeed += (tws - boat.feltSpeed) * (DT / 8);
  steer(boat);
  const gamma = signed(twd - boat.course);
  watchCrossing(boat, gamma);
  const act = boat.acts[0];
  drive(boat, act, tws, Math.abs(gamma), airE, airN);
  const surged = boat.speed * (1 + crew.surge(DT));
  const ux = surged * sind(boat.course) + boat.driftX;
  const uy = surged * cosd(boat.course) + boat.driftY;
  lean(boat, tws, gamma);
  if (boat.step % RATE === 0) record(boat, ux, uy, twd, tws, groundTwd, groundTws);
  const f = 4 * boat.step;
  const vx = ux + current.east;
  const vy = uy + current.north;
  boat.log.fine[f] = boat.x;
  boat.log.fine[f + 1] = boat.y;
  boat.log.fine[f + 2] = vx;
  boat.log.fine[f + 3] = vy;
  boat.x += vx * DT;
  boat.y += vy * DT;
  boat.step += 1;
  boat.t = boat.log.t0 + boat.step * DT;
  if (act && boat.t - boat.actStart >= act.seconds - 1e-9) finish(boat);
}

function steer(boat: Boat): void {
  const { crew } = boat;
  const act = boat.acts[0];
  const aim = crew.aim(DT);
  const helm = crew.helm(DT);
  boat.overshoot *= 1 - DT / 7;
  let want: number;
  let tau = 1.2;
  if (act) {
    want = boat.actFrom + (act.to - boat.actFrom) * ease(Math.min(1, (boat.t - boat.actStart) / act.seconds));
    tau = 0.5;
  } else want = boat.order + sideOf(boat) * (aim + boat.overshoot) + helm;
  const gap = signed(boat.felt - want - boat.course) * (1 - Math.exp(-DT / tau));
  const most = 35 * DT;
  boat.course += Math.max(-most, Math.min(most, gap));
}

function watchCrossing(boat: Boat, gamma: number): void {
  const { open } = boat;
  if (!open) return;
  const crossed = gamma >= 0 !== open.gamma >= 0;
  if (crossed && Number.isNaN(open.crossed)) {
    const nearWind = Math.abs(gamma) < 90;
    if (open.kind !== 'full-turn' || nearWind) open.crossed = boat.t;
  }
  open.gamma = gamma;
}

function drive(boat: Boat, act: Act | undefined, tws: number, gamma: number, airE: number, airN: number): void {
  const { crew } = boat;
  const slow = gamma < 90 ? 1 - (crew.faults.slow ?? 0) : 1;
  const steady = crew.performance.speed(tws, gamma) * crew.speed * slow;
  if (act?.idle) boat.speed *= 1 - DT / (act.phase === 'capsize' ? 1.5 : 6);
  else if (act && act.drop > 0) {
    const p = Math.min(1, (boat.t - boat.actStart) / act.seconds);
    boat.speed += (boat.actSpeed * (1 - act.drop * ease(p)) - boat.speed) * (DT / 0.6);
  } else boat.speed += (steady - boat.speed) * (DT / (boat.t < boat.recoverUntil ? boat.recoverTau : 5));
  const blown = act?.idle ? 0.05 : 0;
  boat.driftX += (blown * airE - boat.driftX) * (DT / 5);
  boat.driftY += (blown * airN - boat.driftY) * (DT / 5);
}

function lean(boat: Boat, tws: number, gamma: number): void {
  const { performance } = boat.crew;
  const magnitude = Math.max(30, Math.abs(gamma));
  const steady = performance.speed(tws, magnitude);
  const ratio = Math.max(0.45, boat.speed / Math.max(0.3, steady));
  const full = Math.abs(gamma) < 25 ? Math.abs(gamma) / 25 : Math.abs(gamma) > 165 ? (180 - Math.abs(gamma)) / 15 : 1;
  const leeway = Math.min(12, performance.leeway(tws, magnitude) / (ratio * ratio)) * full;
  boat.leeway += ((gamma >= 0 ? leeway : -leeway) - boat.leeway) * (DT / 1.5);
}

function record(
  boat: Boat,
  ux: number,
  uy: number,
  twd: number,
  tws: number,
  groundTwd: number,
  groundTws: number,
): void {
  const { log } = boat;
  const c = log.columns;
  const i = log.n++;
  const speed = Math.hypot(ux, uy);
  const track = speed > 0.2 ? pointing(ux, uy) : boat.course;
  const gamma = signed(twd - track);
  const aE = -tws * sind(twd) - ux;
  const aN = -tws * cosd(twd) - uy;
  const side = gamma >= 0 ? 1 : -1;
  c.x[i] = boat.x;
  c.y[i] = boat.y;
  c.vx[i] = ux + boat.current.east;
  c.vy[i] = uy + boat.current.north;
  c.ux[i] = ux;
  c.uy[i] = uy;
  c.gamma[i] = gamma;
  c.beta[i] = Math.abs(signed(pointing(-aE, -aN) - track));
  c.speed[i] = speed;
  c.vmg[i] = speed * cosd(gamma);
  c.twd[i] = signed(twd);
  c.tws[i] = tws;
  c.groundTwd[i] = signed(groundTwd);
  c.groundTws[i] = groundTws;
  c.leeway[i] = side * boat.leeway;
  c.heading[i] = signed(track + boat.leeway);
  c.heel[i] = -side * boat.crew.performance.heel(tws, Math.abs(gamma));
  const best = boat.crew.clean.bestUp(tws);
  c.bestVmg[i] = boat.crew.clean.speed(tws, best) * cosd(best);
  log.phase[i] = PHASES.indexOf(boat.phase);
  log.settled[i] = boat.phase === 'beat' && boat.acts.length === 0 && boat.t >= boat.settleFrom ? 1 : 0;
}
