import type { BoatResult, ManoeuvreResult, Result } from '../../result/result.js';
import type { BoatSeries, RaceSeries } from '../../result/series.js';
import { tackOverlay, tacksOf } from '../charts/tack-overlay.js';
import { toKnots } from '../../math/units.js';
import { manoeuvresOf, upwindLegs } from '../figures.js';
import { plain, plural, quantity, secondsOf, time } from '../format.js';
import { html, nameOf, type Part, type Safe } from '../html.js';
import { term } from '../terms.js';
import { figure, section, table } from './figure.js';
import { swatch } from './masthead.js';

const KINDS = {
  tack: 'tack',
  gybe: 'gybe',
  'round-up': 'rounded up',
  'bear-away': 'bore away',
  'full-turn': 'full turn',
} as const;

/** Place of a turn in the series: the two lists are told apart by time, not by order. */
function seriesTurn(s: BoatSeries | undefined, m: ManoeuvreResult): number {
  const at = secondsOf(m.time);
  return s?.manoeuvres.findIndex((span) => span.kind === m.kind && Math.abs(s.t0 + span.at - at) <= 1) ?? -1;
}

function turnRow(m: ManoeuvreResult, boat: number, s: BoatSeries | undefined): Part[] {
  const k = seriesTurn(s, m);
  const when = time(secondsOf(m.time), 'hms');
  return [
    k < 0 ? when : html`<button type="button" class="pick" data-boat="${boat}" data-turn="${k}">${when}</button>`,
    KINDS[m.kind],
    m.from === m.to ? `on ${m.from}` : `${m.from} to ${m.to}`,
    plain(m.seconds, 0),
    quantity(m.loss_m, 'm', { digits: 1 }),
  ];
}

const HEADS = ['Time', 'Turn', 'Tacks', 'Seconds'];

/** Turns on the beats in full view, the rest folded away. */
function turnTables(boat: BoatResult, index: number, s: BoatSeries | undefined): Safe {
  if (boat.manoeuvres.length === 0) return html`<p>${nameOf(boat.name)}: no turns were found.</p>`;
  const heads = [...HEADS, term('tackCost', 'Cost')];
  const beats = upwindLegs(boat).flatMap(({ leg }) => manoeuvresOf(boat, leg));
  const others = boat.manoeuvres.filter((m) => !beats.includes(m));
  const rowsOf = (list: readonly ManoeuvreResult[]): Part[][] => list.map((m) => turnRow(m, index, s));
  const caption = html`${swatch(index)} ${nameOf(boat.name)}, on the beats`;
  return html`<div>
    ${beats.length > 0 && table(caption, heads, rowsOf(beats), 'plain turns')}
    ${
      others.length > 0 &&
      html`<details class="figures">
        <summary>${plural(others.length, 'other turn')}</summary>
        ${table(html`${nameOf(boat.name)}, elsewhere`, heads, rowsOf(others), 'plain turns')}
      </details>`
    }
  </div>`;
}

function overlayTable(s: BoatSeries, legs: ReadonlySet<number>): Safe {
  const offsets = [-10, -5, 0, 5, 10, 15, 20, 30, 40];
  const vmgAt = (row: number): string => plain(row >= 0 && row < s.n ? toKnots(s.vmg[row]) : NaN, 1);
  const rows = tacksOf(s, legs).map((k) => {
    const { at } = s.manoeuvres[k];
    return [time(s.t0 + at, 'hms'), ...offsets.map((o) => vmgAt(at + o))];
  });
  return table('VMG in knots by seconds from head to wind', ['Tack', ...offsets.map((o) => plain(o, 0))], rows);
}

function overlayPlate(s: BoatSeries, index: number, boat: BoatResult | undefined): Part {
  const legs = new Set(boat ? upwindLegs(boat).map((l) => l.index) : []);
  if (tacksOf(s, legs).length === 0) return null;
  return figure({
    svg: tackOverlay(s, { boat: index, legs }),
    title: html`${swatch(index)} ${nameOf(s.name)}`,
    summary:
      'Tacks on the beats. Whole lines go onto starboard, broken lines onto port; the heavy line is the middle one.',
    table: overlayTable(s, legs),
    className: 'plate overlay',
  });
}

/** Every turn with its cost, and all tacks laid over one another. */
export function tacks(result: Result, series: RaceSeries): Safe {
  return section(
    'turns',
    'Tacks and turns',
    html`<div class="plates">${series.boats.map((s, i) => overlayPlate(s, i, result.boats[i]))}</div>
      <div class="plates">${result.boats.map((b, i) => turnTables(b, i, series.boats[i]))}</div>`,
  );
}
