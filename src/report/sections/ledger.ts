import type { BoatResult, Cause, LegResult, Q, Result } from '../../result/result.js';
import { waterfall, waterfallFloor, waterfallReach } from '../charts/waterfall.js';
import { CAUSE_MEANING, CAUSE_WORDS, REFERENCE_WORDS } from '../causes.js';
import { causeTotals, total, upwindLegs } from '../figures.js';
import { ANGLE_AND_SPEED, TOGETHER_MEANING, TOGETHER_WORDS } from '../findings.js';
import { inline, quantity } from '../format.js';
import { html, nameOf, type Part, type Safe } from '../html.js';
import { term } from '../terms.js';
import { figure, section, table } from './figure.js';
import { swatch } from './masthead.js';
import { whyNoLedger } from './verdict.js';

function ledgerTable(boat: BoatResult): Safe {
  const legs = upwindLegs(boat).filter(({ leg }) => leg.ledger);
  const causes = causeTotals(boat);
  const entryOf = (leg: LegResult, cause: Cause): Q =>
    leg.ledger!.entries.find((e) => e.cause === cause)?.metres ?? null;
  const rows = causes.map(({ cause, metres }): Part[] => [
    html`<span title="${CAUSE_MEANING[cause]}">${CAUSE_WORDS[cause]}</span>`,
    ...legs.map(({ leg }) => quantity(entryOf(leg, cause), 'm')),
    quantity(metres, 'm'),
  ]);
  const trade = causes.filter(({ cause }) => ANGLE_AND_SPEED.has(cause));
  if (trade.length > 1) {
    const sums = legs.map(({ leg }) => total(trade.map(({ cause }) => entryOf(leg, cause)).filter((q) => q !== null)));
    const row = [...sums, total(trade.map(({ metres }) => metres))].map((q) => quantity(q, 'm'));
    rows.splice(causes.indexOf(trade[trade.length - 1]) + 1, 0, [
      html`<i title="${TOGETHER_MEANING}">${TOGETHER_WORDS}</i>`,
      ...row,
    ]);
  }
  const sums: Part[][] = (['lost_m', 'available_m', 'made_m'] as const).map((key) => [
    { lost_m: 'Lost in all', available_m: 'Available', made_m: 'Made good' }[key],
    ...legs.map(({ leg }) => quantity(leg.ledger![key], 'm')),
    quantity(total(legs.map(({ leg }) => leg.ledger![key])), 'm'),
  ]);
  return table(
    html`Ledger of ${nameOf(boat.name)}, metres to windward`,
    ['Cause', ...legs.map(({ leg }) => `Lap ${leg.lap}`), 'Together'],
    [...rows, ...sums],
  );
}

function summaryOf(boat: BoatResult): Safe {
  const ledgers = upwindLegs(boat).flatMap(({ leg }) => (leg.ledger ? [leg.ledger] : []));
  const available = total(ledgers.map((l) => l.available_m));
  const made = total(ledgers.map((l) => l.made_m));
  return html`Of ${available ? inline(available, 'm') : 'an unknown number of metres'} ${term('available')},
  ${made ? inline(made, 'm') : 'an unknown number'} were made good. Bars step on from one another; whiskers are one
  standard error. ${term('shift', 'Shifts')} stand apart: they can outweigh everything else and say little about the
  sailing.`;
}

/** Metres by cause, a waterfall a boat on one scale. */
export function ledger(result: Result): Safe {
  const withLedger = result.boats.filter((b) => upwindLegs(b).some(({ leg }) => leg.ledger));
  const data = withLedger.map((b) => ({ boat: b.name, entries: causeTotals(b) }));
  const reach = waterfallReach(data);
  const floor = waterfallFloor(data);
  const plates = withLedger.map((boat, i) =>
    figure({
      svg: waterfall(data[i], { reach, floor }),
      title: html`${swatch(result.boats.indexOf(boat))} ${nameOf(boat.name)}`,
      summary: summaryOf(boat),
      table: ledgerTable(boat),
    }),
  );
  const without = result.boats.filter((b) => !withLedger.includes(b));
  const reference = withLedger.flatMap((b) => upwindLegs(b)).find(({ leg }) => leg.ledger)?.leg.ledger?.reference;
  return section(
    'ledger',
    'Where the metres went',
    html`${reference && html`<p>All upwind legs, against the ${term('reference')}: ${REFERENCE_WORDS[reference]}.</p>`}
      <div class="plates">${plates}</div>
      ${without.map((b) => html`<p>${nameOf(b.name)}: no ledger, ${whyNoLedger(b)}.</p>`)}`,
  );
}
