import type { BoatResult, Result } from '../../result/result.js';
import type { BoatSeries, RaceSeries } from '../../result/series.js';
import { tackOverlay, tacksOf } from '../charts/tack-overlay.js';
import { toKnots } from '../../math/units.js';
import { plain, quantity, secondsOf, time } from '../format.js';
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

function turnTable(boat: BoatResult, index: number): Safe {
  const rows: Part[][] = boat.manoeuvres.map((m, k) => [
    html`<button type="button" class="pick" data-boat="${index}" data-turn="${k}">
      ${time(secondsOf(m.time), 'hms')}
    </button>`,
    KINDS[m.kind],
    m.from === m.to ? `on ${m.from}` : `${m.from} to ${m.to}`,
    html`${plain(m.seconds, 0)}`,
    quantity(m.loss_m, 'm', { digits: 1 }),
  ]);
  return table(
    html`${swatch(index)} ${nameOf(boat.name)}`,
    ['Time', 'Turn', 'Tacks', 'Seconds', html`${term('tackCost', 'Cost')}`],
    rows,
    'plain turns',
  );
}

function overlayTable(s: BoatSeries): Safe {
  const offsets = [-10, -5, 0, 5, 10, 15, 20, 30, 40];
  const rows = tacksOf(s).map((k) => {
    const m = s.manoeuvres[k]!;
    return [
      time(s.t0 + m.at, 'hms'),
      ...offsets.map((o) => plain(m.at + o < s.n && m.at + o >= 0 ? toKnots(s.vmg[m.at + o]!) : NaN, 1)),
    ];
  });
  return table('VMG in knots by seconds from head to wind', ['Tack', ...offsets.map((o) => plain(o, 0))], rows);
}

/** Every turn with its cost, and all tacks laid over one another. */
export function tacks(result: Result, series: RaceSeries): Safe {
  const plates = series.boats.flatMap((s, i) =>
    tacksOf(s).length === 0
      ? []
      : [
          figure({
            svg: tackOverlay(s, { boat: i }),
            title: html`${swatch(i)} ${nameOf(s.name)}`,
            summary: 'Whole lines go onto starboard, broken lines onto port; the heavy line is the middle one.',
            table: overlayTable(s),
            className: 'plate overlay',
          }),
        ],
  );
  const tables = result.boats.map((b, i) =>
    b.manoeuvres.length > 0 ? turnTable(b, i) : html`<p>${nameOf(b.name)}: no turns were found.</p>`,
  );
  return section(
    'turns',
    'Tacks and turns',
    html`<div class="plates">${plates}</div>
      <div class="plates">${tables}</div>`,
  );
}
