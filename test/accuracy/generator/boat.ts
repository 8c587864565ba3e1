/**
 * An invented single-hander of 4.2 m. It shares no form of equation with the program's own boat model: rig
 * coefficients are tables against the apparent wind angle, the hull is a curve in newtons over knots, leeway follows
 * a power law. Coefficients are of plausible size (whole-rig lift/drag 4 to 6 close-hauled, 70 N at 4.8 kn: common
 * practice) and stand for no existing boat.
 */
import { cosd, pointing, sind } from './directions.js';
import { curveThrough } from './curve.js';

const KNOT = 1852 / 3600;
const AIR = 1.225;

export interface BoatKind {
  readonly name: string;
  /** Sail area. [m2] */
  readonly area: number;
  /** Side force at which crew and hull can hold no more. [N] */
  readonly sideLimit: number;
  readonly lift: (awa: number) => number;
  readonly drag: (awa: number) => number;
  /** Upright drag of hull and foils without side force. [N] of [kn] */
  readonly hull: (knots: number) => number;
  /** Leeway at a side force over speed squared of 40 N s2/m2. [deg] */
  readonly leeway40: number;
}

const AWA = [0, 12, 18, 22, 26, 30, 36, 44, 55, 70, 90, 110, 130, 150, 180];
const LIFT = [0, 0.42, 0.8, 1.0, 1.13, 1.22, 1.3, 1.33, 1.3, 1.17, 0.97, 0.7, 0.44, 0.2, 0];
const DRAG = [0.13, 0.148, 0.178, 0.204, 0.23, 0.262, 0.312, 0.39, 0.52, 0.72, 0.95, 1.12, 1.22, 1.28, 1.3];
const KNOTS = [0, 1, 2, 3, 3.5, 4, 4.5, 4.8, 5.2, 5.6, 6, 7, 8, 9, 10, 12, 14];
const NEWTON = [0, 4, 13, 28, 37, 48, 61, 71, 89, 111, 136, 196, 248, 300, 355, 470, 600];

export const SINGLE_HANDER: BoatKind = {
  name: 'single-hander',
  area: 6.6,
  sideLimit: 315,
  lift: curveThrough(AWA, LIFT),
  drag: curveThrough(AWA, DRAG),
  hull: curveThrough(KNOTS, NEWTON),
  leeway40: 4,
};

/**
 * What a sheeting error makes of the lift and drag coefficients of the trimmed sail. Where drive is at its best it does
 * not change to first order, so the two change together, dD/dL = tan beta: eased, the sail loses lift and the drag that
 * went with it; hauled in, it gains little lift (it is near its most) and all the drag. Drive loses by second order. A
 * flattened sail loses as much lift by a degree, works lower on the same parabola, where dD/dL is less in proportion, and
 * so pays more for being eased. [deg, eased positive; deg; share of its full lift]
 */
function mistrim(error: number, beta: number, ease: number, cl: number, cd: number): [number, number] {
  const slope = 0.02 * error;
  const tangent = sind(Math.min(60, beta)) / cosd(Math.min(60, beta));
  return [cl * Math.max(0.05, ease - slope - 0.002 * error * error), Math.max(0.1, cd - tangent * ease * slope * cl)];
}

function leewayAt(boat: BoatKind, side: number, speed: number): number {
  const loading = side / Math.max(0.25, speed * speed);
  return Math.min(16, 0.2 + boat.leeway40 * (loading / 40) ** 1.12);
}

interface Forces {
  readonly surplus: number;
  readonly leeway: number;
  readonly side: number;
}

/** Drive less drag at a speed through the water. [m/s, deg, deg] */
function forcesAt(boat: BoatKind, tws: number, gamma: number, error: number, speed: number): Forces {
  const along = speed + tws * cosd(gamma);
  const across = tws * sind(gamma);
  const push = 0.5 * AIR * boat.area * (along * along + across * across);
  const beta = pointing(across, along);
  let leeway = 3;
  let side = 0;
  let drive = 0;
  let ease = 1;
  // Crew and hull hold so much; the board holds so much before it stalls (a speed squared law). [N]
  const limit = Math.min(boat.sideLimit, 40 + 70 * speed * speed);
  for (let i = 0; i < 4; i++) {
    const awa = Math.max(0, beta - leeway);
    const cl = boat.lift(awa);
    const trimmed = 0.13 + (boat.drag(awa) - 0.13) * ease * ease;
    // The sail is flattened until crew and hull hold it: side force at its limit, solved for the lift that is left.
    const most = (drag: number): number =>
      cosd(beta) > 0 ? Math.max(0.05 * cl, (limit / push - drag * sind(beta)) / cosd(beta)) : cl;
    ease = Math.min(1, most(trimmed) / cl);
    const [free, d] = mistrim(gamma < 110 ? error : 0, beta, ease, cl, trimmed);
    const lift = Math.min(free, most(d));
    side = push * (lift * cosd(beta) + d * sind(beta));
    drive = push * (lift * sind(beta) - d * cosd(beta));
    leeway = leewayAt(boat, Math.max(0, side), speed);
  }
  const induced = 0.7 * Math.max(0, side) * sind(leeway);
  return { surplus: drive - boat.hull(speed / KNOT) - induced, leeway, side };
}

/** Steady speed [m/s], leeway [deg] and heel [deg, magnitude] at a true wind [kn], course angle and sheeting error. */
export function steadyState(boat: BoatKind, twsKn: number, gamma: number, error: number): [number, number, number] {
  const tws = twsKn * KNOT;
  // The upper root: from a speed no boat reaches down to the first with drive to spare.
  let high = 9;
  let below = -1;
  let low = high;
  let above = -1;
  while (above <= 0) {
    [high, below] = [low, above];
    low *= 0.84;
    if (low < 0.15) return [0, 16, 0];
    above = forcesAt(boat, tws, gamma, error, low).surplus;
  }
  for (let i = 0; i < 24 && high - low > 2e-4; i++) {
    // Alternate the chord with halving: sure and quick.
    const middle = i % 2 === 0 ? low + ((high - low) * above) / (above - below) : 0.5 * (low + high);
    const surplus = forcesAt(boat, tws, gamma, error, middle).surplus;
    if (surplus > 0) [low, above] = [middle, surplus];
    else [high, below] = [middle, surplus];
  }
  const { leeway, side } = forcesAt(boat, tws, gamma, error, low);
  return [low, leeway, 3 + 9 * Math.min(1, (side / boat.sideLimit) ** 3)];
}

const TWS_FROM = 2;
const TWS_TO = 26;
const GAMMA_STEP = 3;
const GAMMA_COUNT = 61;
const ERRORS = [-8, -4, 0, 4, 8];

/** Speed, leeway, heel over (wind, angle), row by row. */
interface Table {
  readonly speed: Float64Array;
  readonly leeway: Float64Array;
  readonly heel: Float64Array;
}

/** Luffing, the steady state is a full stop, but a boat comes to it slowly: speed falls off gently below close-hauled. */
function carryWay(table: Table): void {
  for (let k = table.speed.length - 1; k > 0; k--) {
    const gamma = ((k - 1) % GAMMA_COUNT) * GAMMA_STEP;
    const carried = table.speed[k] * (gamma >= 24 ? 0.86 : 0.6);
    if (gamma > 42 || table.speed[k - 1] >= carried) continue;
    table.speed[k - 1] = carried;
    table.leeway[k - 1] = table.leeway[k] + 0.6;
    table.heel[k - 1] = table.heel[k]!;
  }
}

const tables = new Map<string, Table[]>();

function tableOf(boat: BoatKind): Table[] {
  const known = tables.get(boat.name);
  if (known) return known;
  const size = (TWS_TO - TWS_FROM + 1) * GAMMA_COUNT;
  const made = ERRORS.map((error) => {
    const table = { speed: new Float64Array(size), leeway: new Float64Array(size), heel: new Float64Array(size) };
    for (let k = 0; k < size; k++) {
      const tws = TWS_FROM + Math.floor(k / GAMMA_COUNT);
      const state = steadyState(boat, tws, (k % GAMMA_COUNT) * GAMMA_STEP, error);
      [table.speed[k], table.leeway[k], table.heel[k]] = state;
    }
    carryWay(table);
    return table;
  });
  tables.set(boat.name, made);
  return made;
}

/** One boat's behaviour with one habitual sheeting error. */
export interface Performance {
  /** Steady speed through the water [m/s] at a true wind [m/s] and course angle [deg, magnitude]. */
  readonly speed: (tws: number, gamma: number) => number;
  readonly leeway: (tws: number, gamma: number) => number;
  readonly heel: (tws: number, gamma: number) => number;
  /** Course angle of the best speed made good upwind and downwind. [deg] of [m/s] */
  readonly bestUp: (tws: number) => number;
  readonly bestDown: (tws: number) => number;
}

function mix(tables3: Table[], error: number, pick: keyof Table): Float64Array {
  const place = Math.min(ERRORS.length - 1.0001, Math.max(0, (error + 8) / 4));
  const i = Math.floor(place);
  const f = place - i;
  return tables3[i][pick].map((value, k) => value * (1 - f) + tables3[i + 1][pick][k] * f);
}

function lookUp(column: Float64Array): (tws: number, gamma: number) => number {
  return (tws, gamma) => {
    const a = Math.min(TWS_TO - TWS_FROM - 1e-6, Math.max(0, tws / KNOT - TWS_FROM));
    const b = Math.min(GAMMA_COUNT - 1.000001, Math.max(0, gamma / GAMMA_STEP));
    const i = Math.floor(a);
    const j = Math.floor(b);
    const k = i * GAMMA_COUNT + j;
    const f = a - i;
    const g = b - j;
    const low = column[k] * (1 - g) + column[k + 1] * g;
    const high = column[k + GAMMA_COUNT] * (1 - g) + column[k + GAMMA_COUNT + 1] * g;
    return low * (1 - f) + high * f;
  };
}

/** Best angle per knot of wind, by a search over half degrees with the solved boat (no table between). */
const bestAngles = new Map<string, [number[], number[]]>();

function bestAnglesOf(boat: BoatKind): [number[], number[]] {
  const known = bestAngles.get(boat.name);
  if (known) return known;
  const up: number[] = [];
  const down: number[] = [];
  const at = (knots: number, gamma: number): number => steadyState(boat, knots, gamma, 0)[0] * cosd(gamma);
  for (let knots = TWS_FROM; knots <= TWS_TO; knots += 2) {
    let best = 45;
    for (let gamma = 32; gamma <= 60; gamma += 0.5) if (at(knots, gamma) > at(knots, best)) best = gamma;
    up.push(best);
    best = 160;
    for (let gamma = 130; gamma <= 172; gamma += 2) if (at(knots, gamma) < at(knots, best)) best = gamma;
    down.push(best);
  }
  bestAngles.set(boat.name, [up, down]);
  return [up, down];
}

export function performanceOf(boat: BoatKind, sheetingError: number): Performance {
  const table = tableOf(boat);
  const [up, down] = bestAnglesOf(boat);
  const knots = up.map((_, i) => TWS_FROM + 2 * i);
  const upCurve = curveThrough(knots, up);
  const downCurve = curveThrough(knots, down);
  return {
    speed: lookUp(mix(table, sheetingError, 'speed')),
    leeway: lookUp(mix(table, sheetingError, 'leeway')),
    heel: lookUp(mix(table, sheetingError, 'heel')),
    bestUp: (tws) => upCurve(tws / KNOT),
    bestDown: (tws) => downCurve(tws / KNOT),
  };
}
