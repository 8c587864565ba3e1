import type { PairLadder } from '../../compare.js';
import type { LadderLeg } from '../../between/ladder.js';
import type { Result } from '../../result/result.js';
import type { RaceSeries } from '../../result/series.js';
import { ladder as ladderPicture } from '../charts/ladder.js';
import { duration, number, time } from '../format.js';
import { html, nameOf, type Part, type Safe } from '../html.js';
import { climbOf, shareOnTheRight, WANDER, type Climb, type RungTack } from '../rungs.js';
import { term } from '../terms.js';
import { figure, section, table } from './figure.js';
import { ledgerGapTable } from './ledger-gaps.js';
import { swatch } from './masthead.js';

/** Beats drawn at most, whole pairs: a fleet has more pairs than a page can carry. The others get a row of figures. */
const MOST_DRAWN = 6;
/** Share of a beat on one side that is told as being on that side. */
const CLEARLY = 0.6;

function metres(value: number, sign = false): Safe {
  return html`<span class="nb">${number(value, 0, sign)}&nbsp;m</span>`;
}

/** Who gained how much, and of what, in words. */
function wordsOf(climb: Climb): Safe {
  const { leg, names } = climb;
  const [first, second] = leg.gain >= 0 ? names : ([names[1], names[0]] as const);
  const way = leg.gain >= 0 ? 1 : -1;
  const { sailing, manoeuvres, shifts, rest } = leg.parts;
  const lead =
    Math.abs(leg.lead) < 1
      ? 'they began level'
      : html`${nameOf(leg.lead > 0 ? names[0] : names[1])} began ${metres(Math.abs(leg.lead))} ahead`;
  const doubt =
    Math.abs(leg.gain) < WANDER && ' Receivers wander that much against one another: call it no gain at all.';
  return html`${nameOf(first)} gained ${metres(Math.abs(leg.gain))} on ${nameOf(second)} in
  ${duration(leg.to - leg.from)} minutes; ${lead}. Sailing brought ${metres(sailing * way, true)}, the moments when
  either tacked or turned ${metres(manoeuvres * way, true)}. Apart from that the ${term('shift', 'shifts')} gave her
  ${metres(shifts * way, true)}${Math.abs(rest) >= 0.5 && html`; ${metres(rest * way, true)} is not explained`}.${doubt}
  ${sideOf(climb)}`;
}

function sideOf(climb: Climb): Part {
  const share = shareOnTheRight(climb);
  if (!Number.isFinite(share)) return null;
  const [first, second] = climb.names;
  const [name, part] = share >= 0.5 ? [first, share] : [second, 1 - share];
  if (part > 0.995) return html`${nameOf(name)} was the boat to the right throughout.`;
  if (part < CLEARLY) return html`Each was to the right of the other for part of the beat.`;
  return html`${nameOf(name)} was the boat to the right for ${number(100 * part, 0)}&nbsp;% of the beat.`;
}

const ONTO = { port: 'port', starboard: 'starboard' } as const;

function besideWords({ boat, fromOther }: RungTack, { names }: Climb): Part {
  const { rung, across } = fromOther;
  if (!Number.isFinite(rung)) return '–';
  const other = nameOf(names[boat === 0 ? 1 : 0]);
  const side = across >= 0 ? 'right' : 'left';
  return html`${metres(Math.abs(across))} ${side}, ${metres(Math.abs(rung))} ${rung >= 0 ? 'ahead' : 'behind'} of
  ${other}`;
}

function tackTable(climb: Climb): Safe {
  const rows = climb.tacks.map((tack, k): Part[] => [
    html`${k + 1}. ${nameOf(climb.names[tack.boat])}`,
    time(tack.time, 'hms'),
    tack.onto ? ONTO[tack.onto] : '–',
    number(tack.place.rung, 0),
    besideWords(tack, climb),
    number(tack.gain, 0, true),
  ]);
  return table(
    html`Tacks of lap ${climb.leg.lap}; gains are ${nameOf(climb.names[0])}’s`,
    ['Tack', 'Time', 'Onto', 'm to windward', 'Where', 'm gained by then'],
    rows,
  );
}

const sumOf = (values: readonly number[]): number => values.reduce((sum, value) => sum + value, 0);

/** What was gained and of what, a beat a column; shifts under a line of their own. */
function partsTable({ boats, legs }: PairLadder): Safe {
  const row = (words: Part, get: (leg: LadderLeg) => number): Part[] => [
    words,
    ...[...legs.map(get), ...(legs.length > 1 ? [sumOf(legs.map(get))] : [])].map((value) => number(value, 0, true)),
  ];
  const rows = [
    row('By sailing', ({ parts }) => parts.sailing),
    row('While either tacked or turned', ({ parts }) => parts.manoeuvres),
    row(html`<b>Before shifts</b>`, ({ parts }) => parts.sailing + parts.manoeuvres),
    row(html`By ${term('shift', 'shifts')}`, ({ parts }) => parts.shifts),
    row('Not explained', ({ parts }) => parts.rest),
    row(html`<b>Gained on the beat</b>`, ({ gain }) => gain),
  ];
  return table(
    html`Metres ${nameOf(boats[0])} gained on ${nameOf(boats[1])}`,
    ['', ...legs.map(({ lap }) => `Lap ${lap}`), ...(legs.length > 1 ? ['Together'] : [])],
    rows,
    'plain parts',
  );
}

function climbsOf(pair: PairLadder, series: RaceSeries): Climb[] {
  const index = pair.boats.map((name) => series.boats.findIndex((boat) => boat.name === name));
  if (index.includes(-1)) return [];
  const [first, second] = index as [number, number];
  return pair.legs.map((leg) => climbOf(leg, [series.boats[first], series.boats[second]], [first, second]));
}

function climbPlate(climb: Climb): Safe {
  const { names, index, leg, tacks } = climb;
  return figure({
    svg: ladderPicture(climb),
    title: html`Lap ${leg.lap}, from ${time(leg.from, 'hms')}: ${swatch(index[0])} ${nameOf(names[0])},
    ${swatch(index[1])} ${nameOf(names[1])}`,
    summary: wordsOf(climb),
    table: tacks.length > 0 ? tackTable(climb) : null,
    className: 'plate ladder-plate',
  });
}

/** One pair: a plate a beat, what the gains were made of, and where one lost more than the other. */
function pairParts(pair: PairLadder, result: Result, series: RaceSeries, alone: boolean): Safe {
  const [first, second] = pair.boats.map((name) => result.boats.find((boat) => boat.name === name));
  return html`${!alone && html`<h3>${nameOf(pair.boats[0])} and ${nameOf(pair.boats[1])}</h3>`}
    <div class="plates">${climbsOf(pair, series).map(climbPlate)}</div>
    <div class="plates">${partsTable(pair)} ${first && second && ledgerGapTable(first, second)}</div>`;
}

/** Pairs that are not drawn, a row each: metres over all beats. */
function restTable(pairs: readonly PairLadder[]): Safe {
  const rows = pairs.map(({ boats, legs }): Part[] => {
    const sum = (get: (leg: LadderLeg) => number): Part => number(sumOf(legs.map(get)), 0, true);
    return [
      html`${nameOf(boats[0])} on ${nameOf(boats[1])}`,
      sum(({ parts }) => parts.sailing),
      sum(({ parts }) => parts.manoeuvres),
      sum(({ parts }) => parts.shifts),
      sum(({ gain }) => gain),
    ];
  });
  return html`<p class="small">Of a fleet only the first pairs are drawn; compare fewer boats to see the others.</p>
    ${table(
      'The other pairs, metres the first gained over all beats',
      ['', 'By sailing', 'While either turned', 'By shifts', 'In all'],
      rows,
    )}`;
}

/** How many pairs can be drawn before the page holds too many beats; one always. */
function pairsDrawn(pairs: readonly PairLadder[]): number {
  let beats = 0;
  const over = pairs.findIndex(({ legs }) => (beats += legs.length) > MOST_DRAWN);
  return over < 0 ? pairs.length : Math.max(1, over);
}

/** The pairs that sailed a beat at the same time, up the ladder together. */
export function ladders(result: Result, series: RaceSeries, pairs: readonly PairLadder[]): Part {
  const sailed = pairs.filter(({ legs }) => legs.length > 0);
  if (sailed.length === 0) return null;
  const drawn = pairsDrawn(sailed);
  const rest = sailed.slice(drawn);
  return section(
    'ladder',
    'Rung by rung',
    html`<p>
        Rungs lie square to the mean wind of the beat, so two boats on one rung are level. Left: the tracks, tacks
        numbered. Right, at the same height: what was gained by then. Shifts are what a boat got for being on the tack
        the wind favoured at that moment; sailing is the rest. Within the pale band nothing was gained: that is what two
        receivers wander.
      </p>
      ${clockNotes(result)}
      ${sailed.slice(0, drawn).map((pair) => pairParts(pair, result, series, sailed.length === 1))}
      ${rest.length > 0 && restTable(rest)}`,
  );
}

/** A gain hangs on the clocks: a second is two or three metres of track. */
function clockNotes(result: Result): Part {
  const said = result.warnings.filter(({ code }) => code === 'clock-skew');
  if (said.length === 0) return null;
  return html`<ul class="notes">
    ${said.map(({ message }) => html`<li>${message}</li>`)}
  </ul>`;
}
