import { toKnots } from '../../math/units.js';
import { turnFigures } from '../tack-figures.js';
import { byId, make } from './dom.js';
import { localNumber, type Clock } from './locale.js';
import { rowAt, type Boat, type Race } from './race.js';
import type { Pick, Store } from './store.js';

/** A leg or a turn picked in a table: the page looks at it alone and shows its own figures. */
export function mountPicks(race: Race, store: Store, clock: Clock): void {
  document.addEventListener('click', (event) => {
    const target = (event.target as Element).closest<HTMLElement>('.pick, .tack-pin, .tack-curve, .spell');
    if (target) choose(race, store, pickOf(target));
  });
  const panel = make('div', { id: 'picked', 'aria-live': 'polite' });
  byId('instruments')?.prepend(panel);
  store.listen((now, before) => {
    if (now.pick === before.pick) return;
    mark(now.pick);
    panel.replaceChildren(...(now.pick ? figuresOf(race, now.pick, clock) : []));
    for (const home of document.querySelectorAll<HTMLElement>('.picked-turn')) {
      const here = now.pick?.turn !== undefined && home.dataset.boat === String(now.pick.boat);
      home.replaceChildren(...(here ? figuresOf(race, now.pick, clock) : []));
    }
  });
}

function pickOf(target: HTMLElement | SVGElement): Pick {
  const boat = Number(target.closest('[data-boat]')?.getAttribute('data-boat') ?? 0);
  const { leg, turn, spell } = target.dataset;
  return {
    boat,
    ...(leg === undefined ? {} : { leg: Number(leg) }),
    ...(turn === undefined ? {} : { turn: Number(turn) }),
    ...(spell === undefined ? {} : { spell: Number(spell) }),
  };
}

function same(a: Pick | null, b: Pick): boolean {
  return a !== null && a.boat === b.boat && a.leg === b.leg && a.turn === b.turn && a.spell === b.spell;
}

export function choose(race: Race, store: Store, pick: Pick): void {
  if (same(store.now().pick, pick)) return store.set({ pick: null, window: race.racing });
  const boat = race.boats[pick.boat];
  const turn = pick.turn === undefined ? undefined : boat?.header.turns[pick.turn];
  const leg = boat?.header.legs.find((l) => l.index === pick.leg);
  if (turn) return store.set({ pick, time: turn.at, window: [turn.at - 45, turn.at + 75] });
  const spell = pick.spell === undefined ? undefined : boat?.header.settled[pick.spell];
  if (spell) return store.set({ pick, time: spell[0], window: [spell[0] - 15, spell[1] + 15] });
  if (leg) store.set({ pick, time: leg.from, window: [leg.from, leg.to] });
}

function mark(pick: Pick | null): void {
  for (const element of document.querySelectorAll<HTMLElement>('.pick, .tack-curve, .spell')) {
    const on = pick !== null && same(pick, pickOf(element));
    if (element.classList.contains('pick')) element.setAttribute('aria-pressed', String(on));
    else element.classList.toggle('picked', on);
  }
}

function figuresOf(race: Race, pick: Pick, clock: Clock): Node[] {
  const boat = race.boats[pick.boat];
  const { what, at, rows } = factsOf(race, boat, pick);
  const body = rows.map(([words, value]) => make('tr', {}, make('th', { scope: 'row' }, words), make('td', {}, value)));
  return [
    make(
      'table',
      { class: 'plain' },
      make('caption', {}, make('bdi', {}, boat.name), `: ${what}, ${clock.write(at, 'hms')}`),
      make('tbody', {}, ...body),
    ),
  ];
}

interface Facts {
  readonly what: string;
  readonly at: number;
  readonly rows: readonly (readonly [string, string])[];
}

function factsOf(race: Race, boat: Boat, { turn, spell, leg = 0 }: Pick): Facts {
  if (turn !== undefined) {
    const { kind, at } = boat.header.turns[turn];
    return { what: kind, at, rows: turnRows(race, boat, turn) };
  }
  if (spell !== undefined) {
    return { what: 'settled stretch', at: boat.header.settled[spell][0], rows: spellRows(race, boat, spell) };
  }
  const { lap, kind } = boat.legs[leg];
  const at = boat.header.legs.find((l) => l.index === leg)!.from;
  return { what: `lap ${lap}, ${kind}`, at, rows: legFigures(boat, leg) };
}

/** Means over a settled stretch. */
function spellRows(race: Race, boat: Boat, index: number): [string, string][] {
  const [from, to] = boat.header.settled[index];
  const { gamma, speed, vmg, tws } = boat.columns;
  const rows: number[] = [];
  for (let t = from; t < to; t += race.step) rows.push(rowAt(race, boat, t));
  const mean = (value: (row: number) => number): number => {
    const known = rows.filter((row) => row >= 0).map(value).filter(Number.isFinite); // prettier-ignore
    return known.reduce((sum, v) => sum + v, 0) / known.length;
  };
  const known = (value: number, digits: number, unit: string): string =>
    Number.isFinite(value) ? `${localNumber(value, digits)}${unit}` : '–';
  return [
    ['Tack', gamma[rows[0]] > 0 ? 'starboard' : 'port'],
    ['Seconds', localNumber(to - from, 0)],
    ['VMG', known(toKnots(mean((i) => vmg[i])), 2, ' kn')],
    ['Speed', known(toKnots(mean((i) => speed[i])), 2, ' kn')],
    ['Course angle to the true wind', known(mean((i) => Math.abs(gamma[i])), 1, '°')], // prettier-ignore
    ['True wind', known(toKnots(mean((i) => tws[i])), 1, ' kn')],
  ];
}

/** The settled stretch at a time that began last. */
export function spellAt(race: Race, time: number): Pick | null {
  let last: { readonly pick: Pick; readonly from: number } | null = null;
  for (const { index, header } of race.boats) {
    header.settled.forEach(([from, to], spell) => {
      if (time >= from && time < to && (!last || from > last.from)) last = { pick: { boat: index, spell }, from };
    });
  }
  return (last as { readonly pick: Pick } | null)?.pick ?? null;
}

function legFigures(boat: Boat, index: number): [string, string][] {
  const f = boat.legs[index];
  const span = boat.header.legs.find((l) => l.index === index)!;
  const known = (v: number | null, digits: number, unit: string): string =>
    v === null ? '–' : `${localNumber(v, digits)}${unit}`;
  return [
    ['Minutes', localNumber((span.to - span.from) / 60, 1)],
    ['VMG, whole leg', known(f.vmg, 2, ' kn')],
    ['VMG, settled', known(f.settledVmg, 2, ' kn')],
    ['Course angle to the true wind', known(f.gamma, 1, '°')],
    ['Metres available', known(f.available, 0, ' m')],
    ['Tacks', String(f.tacks)],
  ];
}

/** What a turn did, read off the columns. */
function turnRows(race: Race, boat: Boat, index: number): [string, string][] {
  const t = boat.header.turns[index];
  const [entry, at, exit] = [t.entry, t.at, t.exit].map((time) => rowAt(race, boat, time)) as [number, number, number];
  const known = (value: number, digits: number, unit: string): string =>
    Number.isFinite(value) ? `${localNumber(value, digits)}${unit}` : '–';
  const figures = turnFigures(boat.columns, { entry, at, exit }, race.step);
  return [
    ['Onto', t.to],
    ['Cost', known(t.loss ?? NaN, 1, ' m')],
    ['From settled to settled', known(t.exit - t.entry, 0, ' s')],
    ['Speed before', known(figures.before, 2, ' kn')],
    ['Lowest speed', known(figures.lowest, 2, ' kn')],
    ['Speed had again after', known(figures.back, 0, ' s')],
    ['Fastest turning', known(figures.rate, 0, ' °/s')],
    ['Widest course angle after', known(figures.out, 0, '°')],
  ];
}
