import type { BoatResult, ManoeuvreResult, Quantity, Result } from '../../result/result.js';
import type { BoatSeries, RaceSeries } from '../../result/series.js';
import { tackOverlay, tacksOf } from '../charts/tack-overlay.js';
import { manoeuvresOf, upwindLegs } from '../figures.js';
import { number, plain, plural, quantity, secondsOf, time } from '../format.js';
import { html, nameOf, type Part, type Safe } from '../html.js';
import { turnFigures } from '../tack-figures.js';
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
    k < 0 ? when : html`<button class="pick" data-boat="${boat}" data-turn="${k}">${when}</button>`,
    `${KINDS[m.kind]} ${m.from === m.to ? `on ${m.from}` : `onto ${m.to}`}`,
    quantity(m.loss_m, 'm', { digits: 1 }),
    plain(m.seconds, 0),
  ];
}

/** What it did to the boat; of tacks only. */
function figureCells(m: ManoeuvreResult, s: BoatSeries | undefined): Part[] {
  const k = seriesTurn(s, m);
  if (!s || k < 0 || m.kind !== 'tack') return MORE.map(() => '–');
  const { before, lowest, back, rate, out } = turnFigures(s, s.manoeuvres[k]);
  return [
    html`${number(before, 1)} <span class="soft">→</span> ${number(lowest, 1)}`,
    plain(back, 0),
    plain(rate, 0),
    `${plain(out, 0)}°`,
  ];
}

const MORE = ['Speed → lowest, kn', 'Back after, s', 'Turning, °/s', 'Out at'];

/** Turns on the beats in full view, the rest folded away. */
function turnTables(boat: BoatResult, index: number, s: BoatSeries | undefined): Safe {
  if (boat.manoeuvres.length === 0) return html`<p>${nameOf(boat.name)}: no turns were found.</p>`;
  const heads = ['Time', 'Turn', term('tackCost', 'Cost'), 'Seconds'];
  const beats = upwindLegs(boat).flatMap(({ leg }) => manoeuvresOf(boat, leg));
  const others = boat.manoeuvres.filter((m) => !beats.includes(m));
  const caption = html`${swatch(index)} ${nameOf(boat.name)}, on the beats`;
  const full = beats.map((m) => [...turnRow(m, index, s), ...figureCells(m, s)]);
  const brief = others.map((m) => turnRow(m, index, s));
  return html`<div>
    ${beats.length > 0 && table(caption, [...heads, ...MORE], full, 'plain turns')}
    ${
      others.length > 0 &&
      html`<details class="figures">
        <summary>${plural(others.length, 'other turn')}</summary>
        ${table(html`${nameOf(boat.name)}, elsewhere`, heads, brief, 'plain turns')}
      </details>`
    }
  </div>`;
}

/** Metres each turn cost, with the error, by its place in the series. */
function costsOf(s: BoatSeries, boat: BoatResult | undefined): ReadonlyMap<number, Quantity> {
  const known = (boat?.manoeuvres ?? []).map((m) => [seriesTurn(s, m), m.loss_m] as const);
  return new Map(known.filter((pair): pair is [number, Quantity] => pair[0] >= 0 && pair[1] !== null));
}

function overlayPlate(s: BoatSeries, index: number, boat: BoatResult | undefined): Part {
  const legs = new Set(boat ? upwindLegs(boat).map((l) => l.index) : []);
  if (tacksOf(s, legs).length === 0) return null;
  const plate = figure({
    svg: tackOverlay(s, { boat: index, legs, costs: costsOf(s, boat) }),
    title: html`${swatch(index)} ${nameOf(s.name)}`,
    summary: html`Tacks on the beats, every one at head to wind; the heavy line is the middle one, second by second.
      Costs within two standard errors of the middle one are not told apart.<span class="only-live">
        A touch on a line, or on a time in the table, shows that tack alone with its figures.</span
      >`,
    className: 'plate overlay',
  });
  return html`<div>
    ${plate}
    <div class="picked-turn" data-boat="${index}"></div>
  </div>`;
}

/** Every turn with its cost, and all tacks laid over one another. */
export function tacks(result: Result, series: RaceSeries): Safe {
  return section(
    'turns',
    'Tacks and turns',
    html`<div class="plates">${series.boats.map((s, i) => overlayPlate(s, i, result.boats[i]))}</div>
      <div class="plates turn-tables">${result.boats.map((b, i) => turnTables(b, i, series.boats[i]))}</div>
      <p class="plate-words">
        Speed: mean of the ten seconds before, and the lowest in the turn; back after: seconds from head to wind until
        nineteen twentieths of it are had again; turning: at its fastest over three seconds, by the bow where that was
        logged; out at: widest course angle in the quarter minute after.
      </p>`,
  );
}
