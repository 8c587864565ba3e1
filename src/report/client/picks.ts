import { turnFigures } from '../tack-figures.js';
import { byId, make } from './dom.js';
import { localNumber, type Clock } from './locale.js';
import { rowAt, type Boat, type Race } from './race.js';
import type { Pick, Store } from './store.js';

/** A leg or a turn picked in a table: the page looks at it alone and shows its own figures. */
export function mountPicks(race: Race, store: Store, clock: Clock): void {
  document.addEventListener('click', (event) => {
    const target = (event.target as Element).closest<HTMLElement>('.pick, .tack-pin, .tack-curve');
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
  const { leg, turn } = target.dataset;
  return {
    boat,
    ...(leg === undefined ? {} : { leg: Number(leg) }),
    ...(turn === undefined ? {} : { turn: Number(turn) }),
  };
}

function same(a: Pick | null, b: Pick): boolean {
  return a !== null && a.boat === b.boat && a.leg === b.leg && a.turn === b.turn;
}

function choose(race: Race, store: Store, pick: Pick): void {
  if (same(store.now().pick, pick)) return store.set({ pick: null, window: race.racing });
  const boat = race.boats[pick.boat];
  const turn = pick.turn === undefined ? undefined : boat?.header.turns[pick.turn];
  const leg = boat?.header.legs.find((l) => l.index === pick.leg);
  if (turn) return store.set({ pick, time: turn.at, window: [turn.at - 45, turn.at + 75] });
  if (leg) store.set({ pick, time: leg.from, window: [leg.from, leg.to] });
}

function mark(pick: Pick | null): void {
  for (const element of document.querySelectorAll<HTMLElement>('.pick, .tack-curve')) {
    const on = pick !== null && same(pick, pickOf(element));
    if (element.classList.contains('pick')) element.setAttribute('aria-pressed', String(on));
    else element.classList.toggle('picked', on);
  }
}

function figuresOf(race: Race, pick: Pick, clock: Clock): Node[] {
  const boat = race.boats[pick.boat];
  const rows = pick.turn !== undefined ? turnRows(race, boat, pick.turn) : legFigures(boat, pick.leg ?? 0);
  const span =
    pick.turn !== undefined
      ? boat.header.turns[pick.turn].at
      : boat.header.legs.find((l) => l.index === pick.leg)!.from;
  const what =
    pick.turn !== undefined
      ? boat.header.turns[pick.turn].kind
      : `lap ${boat.legs[pick.leg ?? 0].lap}, ${boat.legs[pick.leg ?? 0].kind}`;
  const body = rows.map(([words, value]) => make('tr', {}, make('th', { scope: 'row' }, words), make('td', {}, value)));
  return [
    make(
      'table',
      { class: 'plain' },
      make('caption', {}, make('bdi', {}, boat.name), `: ${what}, ${clock.write(span, 'hms')}`),
      make('tbody', {}, ...body),
    ),
  ];
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
