import type { BoatResult, LegResult, Q, Result, Steady, TackSide } from '../../result/result.js';
import { dayBest, difference, tackCost, upwindLegs, type DayBest, type NumberedLeg } from '../figures.js';
import { duration, quantity, secondsOf, time, type QuantityOptions, type Unit } from '../format.js';
import { html, nameOf, type Part, type Safe } from '../html.js';
import { term } from '../terms.js';
import { section } from './figure.js';
import { swatch } from './masthead.js';

interface Row {
  readonly head: Part;
  readonly unit: Unit;
  readonly get: (leg: LegResult, boat: BoatResult) => Q;
  readonly options?: QuantityOptions;
  readonly className?: string;
  /** Left out of the column of the day's best. */
  readonly ownOnly?: boolean;
}

type SideKey = Exclude<keyof TackSide, 'seconds'>;

function steady(key: Exclude<keyof Steady, 'seconds' | 'port' | 'starboard'>): Row['get'] {
  return (leg) => leg.steady?.[key] ?? null;
}

/** The same quantity on each tack and how the tacks differ. */
function bothTacks(key: SideKey, unit: Unit): Row[] {
  const side =
    (which: 'port' | 'starboard'): Row['get'] =>
    (leg) =>
      leg.steady?.[which]?.[key] ?? null;
  return [
    { head: html`<i class="tack p" aria-hidden="true">P</i> on port`, unit, get: side('port'), className: 'sub' },
    {
      head: html`<i class="tack s" aria-hidden="true">S</i> on starboard`,
      unit,
      get: side('starboard'),
      className: 'sub',
    },
    {
      head: term('asymmetry'),
      unit,
      get: (leg) => difference(leg.steady?.port?.[key] ?? null, leg.steady?.starboard?.[key] ?? null),
      options: { sign: true },
      className: 'sub',
    },
  ];
}

function rowsFor(best: DayBest | null): Row[] {
  return [
    { head: html`${term('vmg')}, ${term('settled')}`, unit: 'kn', get: steady('vmg_kn'), className: 'main' },
    { head: html`less ${term('dayBest')}`, unit: 'kn', get: (leg) => (best && best.leg !== leg ? difference(leg.steady?.vmg_kn ?? null, best.vmg) : null), options: { sign: true }, className: 'sub', ownOnly: true },
    ...bothTacks('vmg_kn', 'kn'),
    { head: 'VMG, whole leg', unit: 'kn', get: (leg) => leg.vmg_kn },
    { head: term('courseAngle', 'Course angle, true wind'), unit: 'deg', get: steady('gamma_deg'), className: 'main' },
    ...bothTacks('gamma_deg', 'deg'),
    { head: term('tackingAngle', 'Tacking angle'), unit: 'deg', get: steady('tacking_angle_deg') },
    { head: term('speed', 'Speed'), unit: 'kn', get: steady('speed_kn'), className: 'main' },
    ...bothTacks('speed_kn', 'kn'),
    { head: term('apparentAngle', 'Apparent wind angle'), unit: 'deg', get: steady('awa_deg'), className: 'main' },
    { head: 'less the day’s best’s', unit: 'deg', get: (leg) => (best && best.leg !== leg ? difference(leg.steady?.awa_deg ?? null, best.leg.steady?.awa_deg ?? null) : null), options: { sign: true }, className: 'sub', ownOnly: true },
    { head: term('beta', 'Course angle, apparent'), unit: 'deg', get: steady('beta_deg') },
    { head: term('leeway', 'Leeway'), unit: 'deg', get: steady('leeway_deg') },
    { head: term('sheeting', 'Sheeting angle'), unit: 'deg', get: steady('sheeting_deg') },
    { head: html`Each tack ${term('tackCost', 'cost')}`, unit: 'm', get: (leg, boat) => tackCost(boat, leg), options: { digits: 1 }, className: 'main' },
    { head: 'True wind', unit: 'kn', get: steady('tws_kn'), options: { digits: 1 } },
    { head: term('optimum', 'Share of the model’s'), unit: 'percent', get: (leg) => leg.efficiency, options: { times: 100 } },
    { head: term('optimum', 'Model’s optimum'), unit: 'kn', get: (leg) => leg.optimum?.vmg_kn ?? null },
    { head: 'at course angle', unit: 'deg', get: (leg) => leg.optimum?.gamma_deg ?? null, className: 'sub' },
    { head: term('ceiling', 'Upper bound'), unit: 'kn', get: (leg) => leg.ceiling_vmg_kn },
  ]; // prettier-ignore
}

const UNIT_WORDS: Readonly<Record<Unit, string>> = { kn: 'kn', deg: '', m: 'm', percent: '%', s: 's', count: '' };

function unitOf(row: Row): Part {
  if (row.className === 'sub') return null;
  return html` <span class="soft">${UNIT_WORDS[row.unit]}</span>`;
}

function legHead({ leg, index }: NumberedLeg, boat: number): Safe {
  const seconds = secondsOf(leg.end) - secondsOf(leg.start);
  return html`<th scope="col">
    <button type="button" class="pick" data-boat="${boat}" data-leg="${index}">Lap ${leg.lap}</button>
    <span class="soft under">${time(secondsOf(leg.start), 'hm')}, </span
    ><span class="soft under">${duration(seconds)} min</span>
  </th>`;
}

function countRow(legs: readonly NumberedLeg[], bestLeg: LegResult | null): Safe {
  return html`<tr>
    <th scope="row">Tacks</th>
    ${legs.map(({ leg }) => html`<td>${leg.tacks}</td>`)}${bestLeg && html`<td class="best">${bestLeg.tacks}</td>`}
  </tr>`;
}

/** More boats than this have the day's best once, in its own table, not beside every boat's. */
const MOST_BESIDE = 3;

function boatTable(boat: BoatResult, index: number, best: DayBest | null, boats: number): Safe {
  const legs = upwindLegs(boat);
  if (legs.length === 0)
    return html`<div class="leg-sheet">
      <h3>${swatch(index)} ${nameOf(boat.name)}</h3>
      <p>No upwind leg was found.</p>
    </div>`;
  const showBest = best !== null && boats <= MOST_BESIDE && !(best.boat === boat && legs.length === 1);
  const rows = rowsFor(best).filter((row) => legs.some(({ leg }) => row.get(leg, boat)));
  const body = rows.map((row) => {
    const cells = legs.map(
      ({ leg }) =>
        html`<td>${quantity(row.get(leg, boat), row.unit, { ...row.options, unitless: row.unit !== 'deg' })}</td>`,
    );
    const bestCell =
      showBest &&
      html`<td class="best">
        ${row.ownOnly ? '' : quantity(row.get(best.leg, best.boat), row.unit, { ...row.options, unitless: row.unit !== 'deg' })}
      </td>`;
    return html`<tr class="${row.className ?? 'lone'}">
      <th scope="row">${row.head}${unitOf(row)}</th>
      ${cells}${bestCell}
    </tr>`;
  });
  const bestHead =
    showBest &&
    html`<th scope="col" class="best">
      Day’s best <span class="soft under">${nameOf(best.boat.name)}, lap ${best.leg.lap}</span>
    </th>`;
  return html`<div class="leg-sheet">
    <div class="scroll" tabindex="0" role="region" aria-label="Upwind legs of ${boat.name}">
      <table class="legs">
        <caption>
          ${swatch(index)} ${nameOf(boat.name)}
        </caption>
        <thead>
          <tr>
            <th scope="col">Upwind</th>
            ${legs.map((l) => legHead(l, index))}${bestHead}
          </tr>
        </thead>
        <tbody>
          ${body}${countRow(legs, showBest ? best.leg : null)}
        </tbody>
      </table>
    </div>
    ${notesOf(legs)}
  </div>`;
}

function notesOf(legs: readonly NumberedLeg[]): Part {
  const byText = new Map<string, number[]>();
  for (const { leg } of legs) for (const note of leg.notes) byText.set(note, [...(byText.get(note) ?? []), leg.lap]);
  if (byText.size === 0) return null;
  return html`<ul class="notes">
    ${[...byText].map(([note, laps]) => html`<li>${note} <span class="soft">(lap ${laps.join(', ')})</span></li>`)}
  </ul>`;
}

const KIND_WORDS = { upwind: 'upwind', downwind: 'downwind', reach: 'reach' } as const;

/** Downwind legs and reaches, in brief. */
export function otherLegs(result: Result): Part {
  const rows = result.boats.flatMap((boat) =>
    boat.legs
      .filter((leg) => leg.kind !== 'upwind')
      .map(
        (leg) =>
          html`<tr>
            <th scope="row">${nameOf(boat.name)}, lap ${leg.lap}</th>
            <td>${KIND_WORDS[leg.kind]}</td>
            <td>${time(secondsOf(leg.start), 'hm')}</td>
            <td>${duration(secondsOf(leg.end) - secondsOf(leg.start))}</td>
            <td>${quantity(leg.vmg_kn, 'kn')}</td>
            <td>${leg.gybes}</td>
          </tr>`,
      ),
  );
  if (rows.length === 0) return null;
  return html`<div class="scroll" tabindex="0" role="region" aria-label="Other legs">
    <table class="plain">
      <caption>
        Other legs
      </caption>
      <thead>
        <tr>
          <th scope="col">Leg</th>
          <th scope="col">Kind</th>
          <th scope="col">From</th>
          <th scope="col">Minutes</th>
          <th scope="col">VMG to the goal</th>
          <th scope="col">Gybes</th>
        </tr>
      </thead>
      <tbody>
        ${rows}
      </tbody>
    </table>
  </div>`;
}

/** Every upwind leg, its figures with their errors, beside the best leg of the day. */
export function legs(result: Result): Safe {
  const best = dayBest(result);
  return section(
    'legs',
    'Leg by leg',
    html`<div class="leg-sheets">${result.boats.map((boat, i) => boatTable(boat, i, best, result.boats.length))}</div>`,
  );
}
