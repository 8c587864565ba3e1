import type { BoatResult, LegResult, Q, Result, TackSide } from '../result/result.js';

/** One column of a table; null is an empty cell. Times are ISO 8601 UTC text. */
export interface Column {
  readonly name: string;
  readonly type: 'text' | 'time' | 'count' | 'number';
  readonly values: readonly (string | number | null)[];
}

interface Leg {
  readonly boat: BoatResult;
  readonly leg: LegResult;
  /** 1-based place in the boat's legs. */
  readonly number: number;
}

const TACK = [
  'gamma_deg',
  'speed_kn',
  'vmg_kn',
  'tws_kn',
  'aws_kn',
  'beta_deg',
  'awa_deg',
  'leeway_deg',
  'sheeting_deg',
  'incidence_deg',
  'aero_drag_angle_deg',
  'hydro_drag_angle_deg',
] as const satisfies readonly (keyof TackSide)[];
const OPTIMUM = ['gamma_deg', 'speed_kn', 'vmg_kn', 'beta_deg', 'leeway_deg', 'sheeting_deg'] as const;
const LEDGER = ['available_m', 'made_m', 'lost_m'] as const;
const CAUSES = ['manoeuvres', 'start', 'high', 'low', 'trim', 'speed', 'overstood', 'stopped', 'shifts'] as const;

/** Every leg of every boat, one row each, under the names of the result file; `_se` is one standard error. */
export function legColumns(result: Result): Column[] {
  const legs = result.boats.flatMap((boat) => boat.legs.map((leg, i): Leg => ({ boat, leg, number: i + 1 })));
  const of = <T extends string | number | null>(read: (leg: Leg) => T): T[] => legs.map(read);
  return [
    { name: 'boat', type: 'text', values: of(({ boat }) => boat.name) },
    { name: 'sailor', type: 'text', values: of(({ boat }) => boat.sailor) },
    { name: 'leg', type: 'count', values: of(({ number }) => number) },
    { name: 'kind', type: 'text', values: of(({ leg }) => leg.kind) },
    { name: 'lap', type: 'count', values: of(({ leg }) => leg.lap) },
    { name: 'start', type: 'time', values: of(({ leg }) => leg.start) },
    { name: 'end', type: 'time', values: of(({ leg }) => leg.end) },
    { name: 'seconds', type: 'number', values: of(({ leg }) => (Date.parse(leg.end) - Date.parse(leg.start)) / 1000) },
    { name: 'tacks', type: 'count', values: of(({ leg }) => leg.tacks) },
    { name: 'gybes', type: 'count', values: of(({ leg }) => leg.gybes) },
    ...quantity(
      'vmg_kn',
      of2(legs, ({ leg }) => leg.vmg_kn),
    ),
    ...quantity(
      'efficiency',
      of2(legs, ({ leg }) => leg.efficiency),
    ),
    ...quantity(
      'share',
      of2(legs, ({ leg }) => leg.share),
    ),
    ...quantity(
      'ceiling_vmg_kn',
      of2(legs, ({ leg }) => leg.ceiling_vmg_kn),
    ),
    ...steadyColumns(legs),
    ...OPTIMUM.flatMap((key) =>
      quantity(
        `optimum_${key}`,
        of2(legs, ({ leg }) => leg.optimum?.[key]),
      ),
    ),
    ...ledgerColumns(legs),
    { name: 'notes', type: 'text', values: of(({ leg }) => leg.notes.join(' | ')) },
  ];
}

function steadyColumns(legs: readonly Leg[]): Column[] {
  const sides = (['port', 'starboard'] as const).flatMap((side) => [
    seconds(`${side}_seconds`, legs, ({ leg }) => leg.steady?.[side]?.seconds),
    ...TACK.flatMap((key) =>
      quantity(
        `${side}_${key}`,
        of2(legs, ({ leg }) => leg.steady?.[side]?.[key]),
      ),
    ),
  ]);
  return [
    seconds('steady_seconds', legs, ({ leg }) => leg.steady?.seconds),
    ...quantity(
      'steady_tacking_angle_deg',
      of2(legs, ({ leg }) => leg.steady?.tacking_angle_deg),
    ),
    ...TACK.flatMap((key) =>
      quantity(
        `steady_${key}`,
        of2(legs, ({ leg }) => leg.steady?.[key]),
      ),
    ),
    ...sides,
  ];
}

function ledgerColumns(legs: readonly Leg[]): Column[] {
  const entry = ({ leg }: Leg, cause: string): Q | undefined =>
    leg.ledger?.entries.find((found) => found.cause === cause)?.metres;
  return [
    { name: 'reference', type: 'text', values: legs.map(({ leg }) => leg.ledger?.reference ?? null) },
    ...LEDGER.flatMap((key) =>
      quantity(
        key,
        of2(legs, ({ leg }) => leg.ledger?.[key]),
      ),
    ),
    ...CAUSES.flatMap((cause) =>
      quantity(
        `${cause}_m`,
        of2(legs, (leg) => entry(leg, cause)),
      ),
    ),
  ];
}

const of2 = (legs: readonly Leg[], read: (leg: Leg) => Q | undefined): (Q | undefined)[] => legs.map(read);

const seconds = (name: string, legs: readonly Leg[], read: (leg: Leg) => number | undefined): Column => ({
  name,
  type: 'number',
  values: legs.map((leg) => read(leg) ?? null),
});

function quantity(name: string, values: readonly (Q | undefined)[]): Column[] {
  return [
    { name, type: 'number', values: values.map((q) => finite(q?.value)) },
    { name: `${name}_se`, type: 'number', values: values.map((q) => finite(q?.se)) },
  ];
}

/** Not a number is an empty cell. */
export const finite = (value: number | null | undefined): number | null =>
  typeof value === 'number' && Number.isFinite(value) ? value : null;
