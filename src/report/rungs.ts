import type { LadderLeg } from '../between/ladder.js';
import type { BoatSeries } from '../result/series.js';

/** One beat of two boats seen with the mean wind from the top: what the picture and the words of a ladder share. */

/** What the positions of two receivers wander against one another on a beat (common practice, no source). [m] */
export const WANDER = 5;

/** A place on the ladder: metres to windward, and to the right, of where the first boat was when both had begun. */
export interface RungPlace {
  readonly rung: number;
  readonly across: number;
}

export interface RungRow {
  readonly time: number;
  readonly places: readonly [RungPlace, RungPlace];
  /** Metres gained by the first boat, and of them by shifts. */
  readonly gain: number;
  readonly shifts: number;
}

export interface RungTack {
  /** 0 the first boat, 1 the second. */
  readonly boat: 0 | 1;
  readonly time: number;
  readonly onto: 'port' | 'starboard' | null;
  readonly place: RungPlace;
  /** Of the boat that tacked less the other: metres to windward, and to the right. */
  readonly fromOther: RungPlace;
  readonly gain: number;
}

export interface Climb {
  readonly leg: LadderLeg;
  readonly names: readonly [string, string];
  /** Places of the two boats in the result. */
  readonly index: readonly [number, number];
  /** Of the first boat's place at the start, on the ladder of the frame. [m] */
  readonly origin: RungPlace;
  readonly rows: readonly RungRow[];
  readonly tacks: readonly RungTack[];
}

type Two = readonly [BoatSeries, BoatSeries];

/** The ladder of one leg with both tracks on it. */
export function climbOf(leg: LadderLeg, boats: Two, index: readonly [number, number]): Climb {
  const zero = { rung: 0, across: 0 };
  const origin = onRung(boats[0], leg.from, leg, zero);
  const placesAt = (time: number): readonly [RungPlace, RungPlace] => [
    onRung(boats[0], time, leg, origin),
    onRung(boats[1], time, leg, origin),
  ];
  const rows = leg.rows.map(({ time, gain, shifts }) => ({ time, gain, shifts, places: placesAt(time) }));
  const tacks = leg.tacks.map(({ boat, time, gain }) => {
    const places = placesAt(time);
    const [own, other] = [places[boat], places[boat === 0 ? 1 : 0]];
    const fromOther = { rung: own.rung - other.rung, across: own.across - other.across };
    return { boat, time, gain, onto: ontoAt(boats[boat], time), place: own, fromOther };
  });
  return { leg, names: [boats[0].name, boats[1].name], index, origin, rows, tacks };
}

/** East and north turned so that the mean wind comes from ahead. NaN where the boat is not known. */
function onRung(boat: BoatSeries, time: number, { wind }: LadderLeg, origin: RungPlace): RungPlace {
  const row = Math.round(time) - boat.t0;
  const [x, y] = row >= 0 && row < boat.n ? [boat.x[row], boat.y[row]] : [NaN, NaN];
  return {
    rung: x * wind.east + y * wind.north - origin.rung,
    across: x * wind.north - y * wind.east - origin.across,
  };
}

function ontoAt(boat: BoatSeries, time: number): RungTack['onto'] {
  return boat.manoeuvres.find(({ kind, at }) => kind === 'tack' && boat.t0 + at === time)?.to ?? null;
}

/** Share of the beat that the first boat was to the right of the second, looking to windward; NaN when never known. */
export function shareOnTheRight({ rows }: Climb): number {
  const known = rows.filter(({ places: [a, b] }) => Number.isFinite(a.across - b.across));
  return known.filter(({ places: [a, b] }) => a.across > b.across).length / known.length;
}

/** How far up the beat the two are at a row, on the mean of their rungs. [m] */
export function heightOf({ places: [a, b] }: RungRow): number {
  return (a.rung + b.rung) / 2;
}
