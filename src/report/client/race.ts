import { decodePayload, type BoatHeader, type Columns, type Payload } from '../payload.js';
import type { MarkPlace } from '../../result/series.js';
import { pageData } from './dom.js';

/** What the page knows, taken apart once. */
export interface LegFacts {
  readonly kind: 'upwind' | 'downwind' | 'reach';
  readonly lap: number;
  readonly available: number | null;
  readonly vmg: number | null;
  readonly settledVmg: number | null;
  readonly gamma: number | null;
  readonly gammaPort: number | null;
  readonly gammaStarboard: number | null;
  readonly leeway: number | null;
  readonly tacks: number;
}

export interface Boat {
  readonly index: number;
  readonly name: string;
  readonly header: BoatHeader;
  readonly columns: Columns;
  /** Metres made to windward by each row, from the first. */
  readonly made: Float64Array;
  readonly legs: readonly LegFacts[];
}

export interface Race {
  /** The racing with a minute on both sides: what is in view at first. */
  readonly racing: readonly [number, number];
  readonly zone: string;
  readonly step: number;
  readonly from: number;
  readonly to: number;
  readonly boats: readonly Boat[];
  readonly marks: readonly MarkPlace[];
}

interface BoatsData {
  readonly marks: readonly MarkPlace[];
  readonly boats: readonly { readonly name: string; readonly legs: readonly LegFacts[] }[];
}

export function readRace(): Race {
  const payload = pageData('series') as Payload;
  const facts = pageData('boats') as BoatsData;
  const columns = decodePayload(payload);
  const boats = payload.boats.map((header, index) => ({
    index,
    name: header.name,
    header,
    columns: columns[index],
    made: madeBy(columns[index].vmg, payload.step),
    legs: facts.boats[index]?.legs ?? [],
  }));
  const from = Math.min(...boats.map((b) => b.header.t0));
  const to = Math.max(...boats.map((b) => b.header.t0 + (b.header.rows - 1) * payload.step));
  return {
    racing: racingOf(boats, from, to),
    zone: payload.zone ?? 'UTC',
    step: payload.step,
    from,
    to,
    boats,
    marks: facts.marks,
  };
}

function madeBy(vmg: Float64Array, step: number): Float64Array {
  const made = new Float64Array(vmg.length);
  for (let i = 1; i < vmg.length; i++) made[i] = made[i - 1] + (vmg[i - 1] || 0) * step;
  return made;
}

function racingOf(boats: readonly Boat[], from: number, to: number): [number, number] {
  const legs = boats.flatMap((b) => b.header.legs);
  if (legs.length === 0) return [from, to];
  return [
    Math.max(from, Math.min(...legs.map((l) => l.from)) - 60),
    Math.min(to, Math.max(...legs.map((l) => l.to)) + 60),
  ];
}

/** The row nearest to a time, or -1 when the boat has none there. */
export function rowAt(race: Race, boat: Boat, time: number): number {
  const row = Math.round((time - boat.header.t0) / race.step);
  return row >= 0 && row < boat.header.rows ? row : -1;
}

/** The leg a boat is on, with its facts. */
export function legAt(boat: Boat, time: number): { facts: LegFacts; index: number; from: number; to: number } | null {
  const span = boat.header.legs.find((l) => time >= l.from && time < l.to);
  const facts = span && boat.legs[span.index];
  return span && facts ? { facts, ...span } : null;
}

/** What the boat is doing, in words. */
export function doingAt(race: Race, boat: Boat, time: number): string {
  const turn = boat.header.turns.find((m) => time >= m.entry && time < m.exit);
  if (turn)
    return turn.kind === 'tack' || turn.kind === 'gybe' ? `${turn.kind} onto ${turn.to}` : turn.kind.replace('-', ' ');
  const row = rowAt(race, boat, time);
  const gamma = row < 0 ? NaN : boat.columns.gamma[row];
  const tack = Number.isFinite(gamma) ? (gamma > 0 ? 'starboard tack' : 'port tack') : '';
  const settled = boat.header.settled.some(([a, b]) => time >= a && time < b);
  return settled ? `settled on ${tack}` : tack || 'not known';
}
