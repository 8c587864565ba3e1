import type { PairLadder } from '../../compare.js';
import type { LadderLeg } from '../../between/ladder.js';
import type { Result } from '../../result/result.js';
import type { RaceSeries } from '../../result/series.js';
import { ladder as ladderPicture } from '../charts/ladder.js';
import { duration, number, plural, time } from '../format.js';
import { html, nameOf, type Part, type Safe } from '../html.js';
import { climbOf, shareOnTheRight, type Climb, type RungTack } from '../rungs.js';
import { term } from '../terms.js';
import { figure, section, table } from './figure.js';
import { swatch } from './masthead.js';

/** Beats drawn at most: a fleet has more pairs than a page can carry. The others keep their row of figures. */
const MOST_DRAWN = 36;
/** What the positions of two receivers wander against one another on a beat (common practice, no source). [m] */
const WANDER = 5;
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
  const ahead =
    Math.abs(leg.lead) < 1
      ? 'level at the start of it'
      : html`${nameOf(leg.lead * way > 0 ? first : second)} ${metres(Math.abs(leg.lead))} ahead at the start of it`;
  const doubt =
    Math.abs(leg.gain) < WANDER && ' Receivers wander that much against one another: call it no gain at all.';
  return html`In ${duration(leg.to - leg.from)} minutes ${nameOf(first)} gained ${metres(Math.abs(leg.gain))} on
  ${nameOf(second)}, ${ahead}. Sailing made ${metres(sailing * way, true)} of it, the time in which either was tacking
  or turning ${metres(manoeuvres * way, true)}; ${term('shift', 'shifts')} ${metres(shifts * way, true)}; tracks alone
  show ${metres(rest * way, true)}.${doubt} ${sideOf(climb)}`;
}

function sideOf(climb: Climb): Part {
  const share = shareOnTheRight(climb);
  if (!Number.isFinite(share)) return null;
  const [first, second] = climb.names;
  const [name, part] = share >= 0.5 ? [first, share] : [second, 1 - share];
  if (part < CLEARLY) return html`They shared the two sides of the beat.`;
  return html`${nameOf(name)} was to the right for ${number(100 * part, 0)}&nbsp;% of it.`;
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

/** What was gained and of what, a beat a column; shifts under a line of their own. */
function partsTable({ boats, legs }: PairLadder): Safe {
  const row = (words: Part, get: (leg: LadderLeg) => number): Part[] => [
    words,
    ...legs.map((leg) => number(get(leg), 0, true)),
    ...(legs.length > 1
      ? [
          number(
            legs.reduce((sum, leg) => sum + get(leg), 0),
            0,
            true,
          ),
        ]
      : []),
  ];
  const rows = [
    row('By sailing', ({ parts }) => parts.sailing),
    row('While either tacked or turned', ({ parts }) => parts.manoeuvres),
    row(html`By ${term('shift', 'shifts')}`, ({ parts }) => parts.shifts),
    row('Tracks alone', ({ parts }) => parts.rest),
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

/** The pairs that sailed a beat at the same time, up the ladder together. */
export function ladders(result: Result, series: RaceSeries, pairs: readonly PairLadder[]): Part {
  const sailed = pairs.filter(({ legs }) => legs.length > 0);
  if (sailed.length === 0) return null;
  let drawn = 0;
  let left = 0;
  const parts = sailed.map((pair) => {
    const climbs = climbsOf(pair, series);
    const shown = climbs.slice(0, Math.max(0, MOST_DRAWN - drawn));
    drawn += shown.length;
    left += climbs.length - shown.length;
    return html`${sailed.length > 1 && html`<h3>${nameOf(pair.boats[0])} and ${nameOf(pair.boats[1])}</h3>`}
      <div class="plates">${shown.map(climbPlate)}</div>
      ${partsTable(pair)}`;
  });
  return section(
    'ladder',
    'Rung by rung',
    html`<p>
        Rungs lie square to the mean wind of the beat, so two boats on one rung are level. Left: the tracks, tacks
        numbered. Right, at the same height: what was gained by then. Shifts are what a boat got for being on the tack
        the wind favoured at that moment; sailing is the rest.
      </p>
      ${clockNotes(result)}${parts}
      ${left > 0 && html`<p class="small">${plural(left, 'beat')} more are not drawn; compare fewer boats to see them.</p>`}`,
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
