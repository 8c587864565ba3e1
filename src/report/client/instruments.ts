import { make } from './dom.js';
import { localNumber, write } from './locale.js';
import { behindAt, readingAt, windwardGap, type Reading } from './reading.js';
import type { Race } from './race.js';
import type { Store } from './store.js';
import { createTriangle } from './triangle.js';
import { dotSwatch } from './swatch.js';

/** Numbers at the cursor, and the triangle of speeds, a column a boat. */

interface Line {
  readonly key: string;
  readonly words: string;
  readonly unit: string;
  readonly digits: number;
  readonly get: (r: Reading) => number;
}

const LINES: readonly Line[] = [
  { key: 'speed', words: 'Speed', unit: 'kn', digits: 2, get: (r) => r.speed },
  { key: 'vmg', words: 'VMG', unit: 'kn', digits: 2, get: (r) => r.vmg },
  { key: 'angle', words: 'Course angle to the true wind', unit: '°', digits: 1, get: (r) => r.angle },
  { key: 'course', words: 'Course through the water', unit: '°', digits: 0, get: (r) => r.course },
  { key: 'leeway', words: 'Leeway', unit: '°', digits: 1, get: (r) => r.leeway },
  { key: 'twd', words: 'True wind from', unit: '°', digits: 0, get: (r) => r.twd },
  { key: 'tws', words: 'True wind', unit: 'kn', digits: 1, get: (r) => r.tws },
  { key: 'beta', words: 'Course angle to the apparent wind', unit: '°', digits: 1, get: (r) => r.beta },
  { key: 'aws', words: 'Apparent wind', unit: 'kn', digits: 1, get: (r) => r.aws },
];

export function mountInstruments(race: Race, store: Store): void {
  const home = document.getElementById('instruments');
  if (!home) return;
  home.hidden = false;
  const cells: { key: string; boat: number; cell: HTMLElement }[] = [];
  const row = (key: string, words: string, unit: string): HTMLElement => {
    const each = race.boats.map((b) => {
      const cell = make('td', { 'data-read': key, 'data-boat': b.index });
      cells.push({ key, boat: b.index, cell });
      return cell;
    });
    const head = make('th', { scope: 'row' }, words, ...(unit ? [make('span', { class: 'soft' }, ` ${unit}`)] : []));
    return make('tr', {}, head, ...each);
  };
  const lines = LINES.filter((l) => race.boats.some((b) => known(race, b.index, l)));
  const heads = race.boats.map((b) => make('th', { scope: 'col' }, dotSwatch(b.index), ' ', make('bdi', {}, b.name)));
  const rows = [
    row('doing', 'Doing', ''),
    row('leg', 'Leg', ''),
    ...lines.map((l) => row(l.key, l.words, l.unit)),
    row('behind', 'Behind the reference on this leg', 'm'),
  ];
  const head = make('thead', {}, make('tr', {}, make('td', {}), ...heads));
  const table = make(
    'table',
    { class: 'plain readings' },
    make('caption', {}, 'At the cursor'),
    head,
    make('tbody', {}, ...rows),
  );
  const gap = make('p', { class: 'plate-words', id: 'gap' });
  const triangles = race.boats.map((b) => createTriangle(b.index, b.name));
  home.append(table, gap, make('div', { class: 'triangles' }, ...triangles.map((t) => t.element)));
  store.listen(({ time }) => {
    const readings = race.boats.map((b) => readingAt(race, b, time));
    for (const { key, boat, cell } of cells) write(cell, wordsFor(race, key, boat, readings[boat], time));
    triangles.forEach((t, i) => t.show(readings[i]));
    gap.textContent = gapWords(race, readings);
  }, home);
}

function known(race: Race, index: number, line: Line): boolean {
  const boat = race.boats[index];
  const { from, to } = race;
  for (let k = 0; k <= 20; k++) {
    const time = Math.round(from + ((to - from) * k) / 20);
    if (Number.isFinite(line.get(readingAt(race, boat, time)))) return true;
  }
  return false;
}

function wordsFor(race: Race, key: string, boat: number, reading: Reading, time: number): string {
  if (key === 'doing') return reading.doing;
  if (key === 'leg') return reading.leg;
  if (key === 'behind') return localNumber(behindAt(race, race.boats[boat], time), 0);
  const line = LINES.find((l) => l.key === key)!;
  return localNumber(line.get(reading), line.digits);
}

function gapWords(race: Race, readings: readonly Reading[]): string {
  const [a, b] = readings;
  if (!a || !b) return '';
  const gap = windwardGap(a, b);
  if (!Number.isFinite(gap)) return '';
  const [front, back] = gap >= 0 ? [race.boats[0], race.boats[1]] : [race.boats[1], race.boats[0]];
  return `${front.name} is ${localNumber(Math.abs(gap), 0)} m to windward of ${back.name}.`;
}
