import type { PairLeg, PairResult, Q, Result } from '../../result/result.js';
import { pairBars } from '../charts/pair-bars.js';
import { duration, inline, plural, quantity } from '../format.js';
import { html, nameOf, type Part, type Safe } from '../html.js';
import { term } from '../terms.js';
import { figure, section, table } from './figure.js';

function verdictOf(pair: PairResult): Safe {
  const [first, second] = pair.boats;
  const other = (name: string): string => (name === first ? second : first);
  const parts: Part[] = [
    pair.faster
      ? html`${nameOf(pair.faster)} made more to windward than ${nameOf(other(pair.faster))}.`
      : html`No difference to windward is shown between ${nameOf(first)} and ${nameOf(second)}.`,
    pair.higher && html` ${nameOf(pair.higher)} pointed higher.`,
    pair.quicker && html` ${nameOf(pair.quicker)} went faster through the water.`,
  ];
  return html`<p class="first">${parts}</p>`;
}

/** What leeway and sheeting say beside it: never what to do, only what to try. */
function trimWords(pair: PairResult): Part {
  const { more_leeway, sheeted_wider } = pair;
  if (!more_leeway && !sheeted_wider) return null;
  const [first, second] = pair.boats;
  const other = (name: string): string => (name === first ? second : first);
  const size = (q: Q | undefined): Part => q && inline(whole({ ...q, value: Math.abs(q.value) })!, 'deg');
  return html`<p>
    ${
      more_leeway &&
      html`${nameOf(more_leeway)} slid ${size(pair.leeway_difference_deg)} more to leeward than
      ${nameOf(other(more_leeway))}.`
    }
    ${
      sheeted_wider &&
      html`The boom of ${nameOf(sheeted_wider)} seems to have been ${size(pair.sheeting_difference_deg)} farther out
      than that of ${nameOf(other(sheeted_wider))}.`
    }
    That may be a cause of the difference or only go with it: something to test side by side, one change at a time, not
    a setting to copy.
  </p>`;
}

/** With one error for all there is to it: sampling, and what the instruments and the boat file are good to. */
function whole(q: Q): Q {
  return q && { value: q.value, se: q.se === null ? null : Math.hypot(q.se, q.sys ?? 0), basis: q.basis };
}

const WAYS = { heading: 'heading', masthead: 'masthead angle', forces: 'forces' } as const;

type Row = (words: Part, get: (p: PairLeg | PairResult) => Part) => Part[];

/** Rows of leeway and sheeting; none in files of earlier programs. */
function trimRows(pair: PairResult, row: Row): Part[][] {
  if (pair.leeway_difference_deg === undefined) return [];
  const cell =
    (key: 'leeway_difference_deg' | 'sheeting_difference_deg') =>
    (p: PairLeg | PairResult): Part => {
      const q = p[key];
      if (q) return quantity(whole(q), 'deg', { sign: true });
      return html`<span class="none">${p === pair ? 'not determined' : '–'}</span>`;
    };
  return [
    row(term('leeway', 'Leeway'), cell('leeway_difference_deg')),
    row(term('sheeting', 'Sheeting'), cell('sheeting_difference_deg')),
  ];
}

/** What leeway and sheeting rest on, beside the notes of the result. */
function basisNotes({ leeway_difference_deg, sheeting_difference_deg, leeway_ways = [] }: PairResult): string[] {
  const ways = leeway_ways.map(({ way }) => WAYS[way]);
  if (!leeway_difference_deg || leeway_ways.every(({ way }) => way === 'forces')) return [];
  const sheeting = sheeting_difference_deg ? '; sheeting: by what the boat file makes of it' : '';
  return [`leeway: by ${ways.join(' and ')}, its ± with what that is good to${sheeting}`];
}

function pairPlate(pair: PairResult): Safe {
  const [first, second] = pair.boats;
  const d = pair.vmg_difference_kn;
  const columns = [pair, ...pair.legs];
  const row: Row = (words, get) => [words, ...columns.map(get)];
  const rows = [
    row('VMG', (p) => quantity(p.vmg_difference_kn, 'kn', { sign: true })),
    row('by height', (p) => quantity(p.height_part_kn, 'kn', { sign: true })),
    row('by speed', (p) => quantity(p.speed_part_kn, 'kn', { sign: true })),
    row('Course angle', (p) => quantity(p.gamma_difference_deg, 'deg', { sign: true })),
    ...trimRows(pair, row),
    row('Gained', (p) => quantity(p.gain_m, 'm', { sign: true })),
    row('Stretches', (p) => p.blocks),
  ];
  const amount =
    d &&
    html`${nameOf(first)} less ${nameOf(second)}: ${inline(d, 'kn', { sign: true })} of ${term('vmg')}, over
    ${plural(pair.blocks, 'pair')} of stretches sailed side by side on one tack (${duration(pair.settled_s)} minutes).`;
  const heads = ['', 'Together', ...pair.legs.map((l) => `Lap ${l.lap}`)];
  const bars = [
    { name: 'VMG', value: d },
    { name: 'by height', value: pair.height_part_kn },
    { name: 'by speed', value: pair.speed_part_kn },
  ];
  const plate = figure({
    svg: pairBars(bars, { first, second }),
    title: html`${nameOf(first)} and ${nameOf(second)}`,
    summary: html`Bars are two standard errors here. ${term('height', 'Height')} and ${term('quickness', 'speed')} add
    up to the whole.`,
  });
  const told = [...basisNotes(pair), ...pair.notes];
  const notes = html`<ul class="notes">
    ${told.map((n) => html`<li>${n}</li>`)}
  </ul>`;
  return html`<div class="pair">
    <div>
      ${verdictOf(pair)}
      <p>${amount}</p>
      ${table('Differences, first less second', heads, rows)}
    </div>
    <div>${plate}${trimWords(pair)}${told.length > 0 && notes}</div>
  </div>`;
}

/** Pairs shown in full at most: all there are among four boats. Of a fleet every pair has a row, and a few follow. */
const MOST_IN_FULL = 6;
const OF_A_FLEET = 3;

/** Every pair of a fleet in a row. */
function fleetTable(all: readonly PairResult[]): Safe {
  const rows = all.map((pair): Part[] => [
    html`${nameOf(pair.boats[0])} less ${nameOf(pair.boats[1])}`,
    quantity(pair.vmg_difference_kn, 'kn', { sign: true, unitless: true }),
    quantity(pair.height_part_kn, 'kn', { sign: true, unitless: true }),
    quantity(pair.speed_part_kn, 'kn', { sign: true, unitless: true }),
    quantity(pair.gamma_difference_deg, 'deg', { sign: true }),
    quantity(pair.gain_m, 'm', { sign: true }),
    pair.blocks,
    pair.faster ? html`<b>${nameOf(pair.faster)}</b>` : 'not shown',
  ]);
  const heads = [
    '',
    'VMG, kn',
    'by height',
    'by speed',
    'Course angle',
    'Gained',
    'Stretches',
    'Made more to windward',
  ];
  return html`<p>
      ${plural(all.length, 'pair')}; a name in the last column stands only where the difference is more than chance
      makes of so many pairs looked at together. ${term('height', 'Height')} and ${term('quickness', 'speed')} add up to
      the whole.
    </p>
    ${table('Every pair, first less second', heads, rows, 'plain fleet')}
    <p class="small">Of a fleet only the first pairs follow in full; compare fewer boats to see the others.</p>`;
}

/** Boat against boat where they sailed in the same wind. */
export function pairs(result: Result): Part {
  const all = result.pairs ?? [];
  if (all.length === 0) return null;
  const fleet = all.length > MOST_IN_FULL;
  const shown = fleet ? all.slice(0, OF_A_FLEET) : all;
  return section('pairs', 'Side by side', html`${fleet && fleetTable(all)}${shown.map(pairPlate)}`);
}
