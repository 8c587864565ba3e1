import { toKnots } from '../../math/units.js';
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
  const rows = pick.turn !== undefined ? turnFigures(race, boat, pick.turn) : legFigures(boat, pick.leg ?? 0);
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

/** What a turn did to speed and VMG, read off the curves. */
export function turnFigures(race: Race, boat: Boat, index: number): [string, string][] {
  const t = boat.header.turns[index];
  const speed = (from: number, to: number): number[] => {
    const out: number[] = [];
    for (let s = from; s <= to; s += race.step) {
      const row = rowAt(race, boat, s);
      if (row >= 0 && Number.isFinite(boat.columns.speed[row])) out.push(toKnots(boat.columns.speed[row]));
    }
    return out;
  };
  const before = speed(t.entry - 10, t.entry);
  const during = speed(t.entry, t.exit);
  const after = speed(t.exit, t.exit + 10);
  const mean = (v: number[]): number => v.reduce((a, b) => a + b, 0) / v.length;
  return [
    ['Onto', t.to],
    ['Cost', t.loss === null ? '–' : `${localNumber(t.loss, 1)} m`],
    ['From settled to settled', `${localNumber(t.exit - t.entry, 0)} s`],
    ['Speed before', `${localNumber(mean(before), 2)} kn`],
    ['Lowest speed', `${localNumber(Math.min(...during), 2)} kn`],
    ['Speed after', `${localNumber(mean(after), 2)} kn`],
  ];
}
