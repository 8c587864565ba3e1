import type { BoatResult, Q, Quantity, Result } from '../../result/result.js';
import { beyondError, difference, efficiencyMean, settledMean, upwindLegs } from '../figures.js';
import { ANGLE_AND_SPEED, findingsOf, metresOf } from '../findings.js';
import { CAUSE_WORDS } from '../causes.js';
import { inline, number, quantity } from '../format.js';
import { html, nameOf, type Part, type Safe } from '../html.js';
import { term } from '../terms.js';
import { table } from './figure.js';
import { swatch } from './masthead.js';

/** Who made more to windward, on which beat, and how: the first words of the page where there are several boats. */
export function lead(result: Result): Part {
  const boats = result.boats.filter((boat) => settledMean(boat, 'vmg_kn'));
  if (boats.length < 2) return null;
  return boats.length === 2 ? twoBoats(boats[0], boats[1]) : fleet(result, boats);
}

function entry(head: Part, words: Part): Part {
  return (
    words &&
    html`<div>
      <dt>${head}</dt>
      <dd>${words}</dd>
    </div>`
  );
}

function twoBoats(a: BoatResult, b: BoatResult): Safe {
  return html`<dl class="lead">
    ${entry('To windward', windward(a, b))} ${entry('Beat by beat', beats(a, b))} ${entry('How', how(a, b))}
    ${entry('In metres', inMetres(a, b))}
  </dl>`;
}

/** A difference without its sign. */
function size(gap: Quantity, unit: 'kn' | 'deg' | 'm'): Safe {
  return inline({ ...gap, value: Math.abs(gap.value) }, unit);
}

/** Which of two has more of a quantity, by how much; the name in bold where it is beyond the error. */
function whoBy(a: BoatResult, b: BoatResult, gap: Quantity): Safe {
  const name = nameOf((gap.value >= 0 ? a : b).name);
  return html`${beyondError(gap) ? html`<b>${name}</b>` : name} by ${size(gap, 'kn')}`;
}

function windward(a: BoatResult, b: BoatResult): Part {
  const gap = difference(settledMean(a, 'vmg_kn'), settledMean(b, 'vmg_kn'));
  if (!gap) return null;
  return beyondError(gap)
    ? html`${whoBy(a, b, gap)}, ${term('settled')}, each in the wind she had.`
    : html`<b>no difference shown</b>, ${term('settled')}: ${size(gap, 'kn')} apart, each in the wind she had.`;
}

/** Whole beats: tacks, starts and all. */
function beats(a: BoatResult, b: BoatResult): Part {
  const both = upwindLegs(a).flatMap(({ leg }) => {
    const gap = difference(leg.vmg_kn, upwindLegs(b).find((other) => other.leg.lap === leg.lap)?.leg.vmg_kn ?? null);
    return gap ? [{ lap: leg.lap, gap }] : [];
  });
  if (both.length === 0) return null;
  const within = both.filter(({ gap }) => !beyondError(gap)).map(({ lap }) => lap);
  const doubt =
    within.length === 0
      ? ''
      : within.length === both.length
        ? '; not beyond the error'
        : `; lap ${within.join(', ')} not beyond the error`;
  return html`${both.map(({ lap, gap }, k) => html`${k > 0 && ', '}lap ${lap} ${whoBy(a, b, gap)}`)}, tacks and
  all${doubt}.`;
}

function how(a: BoatResult, b: BoatResult): Part {
  const gamma = difference(settledMean(b, 'gamma_deg'), settledMean(a, 'gamma_deg'));
  const speed = difference(settledMean(a, 'speed_kn'), settledMean(b, 'speed_kn'));
  if (!gamma || !speed) return null;
  const part = (gap: Quantity, unit: 'kn' | 'deg', more: string, same: string): Part =>
    beyondError(gap)
      ? html`<b>${nameOf(gap.value > 0 ? a.name : b.name)}</b> ${more} by ${size(gap, unit)}`
      : html`${same}`;
  return html`${part(gamma, 'deg', 'sailed higher', 'no difference in height shown')},
  ${part(speed, 'kn', 'went faster', 'none in speed')}.`;
}

const TRADE = 'angle and speed, the reach into the mark included';

/** What each lost more than the other beyond the error, largest first, two at most; else the largest there is. */
function inMetres(a: BoatResult, b: BoatResult): Part {
  const found = [...findingsOf(a, 9), ...findingsOf(b, 9)].map(({ causes }) =>
    [...causes].some((cause) => ANGLE_AND_SPEED.has(cause)) ? ANGLE_AND_SPEED : causes,
  );
  const byWords = new Map(
    found.map((causes) => [causes === ANGLE_AND_SPEED ? TRADE : CAUSE_WORDS[[...causes][0]].toLowerCase(), causes]),
  );
  const gaps = [...byWords].flatMap(([words, causes]) => {
    const gap = difference(metresOf(a, causes), metresOf(b, causes));
    return gap ? [{ words, gap }] : [];
  });
  gaps.sort((x, y) => Math.abs(y.gap.value) - Math.abs(x.gap.value));
  const clear = gaps.filter(({ gap }) => beyondError(gap)).slice(0, 2);
  const told = clear.length > 0 ? clear : gaps.slice(0, 1);
  if (told.length === 0) return null;
  const words = told.map(
    ({ words: cause, gap }, k) =>
      html`${k > 0 && '; '}${nameOf((gap.value > 0 ? a : b).name)} lost ${size(gap, 'm')} more by ${cause}`,
  );
  return html`${words}${clear.length === 0 && ': not beyond the error'}.`;
}

/** Boats by settled VMG, best first. */
function fleet(result: Result, boats: readonly BoatResult[]): Safe {
  const laps = [...new Set(boats.flatMap((boat) => upwindLegs(boat).map(({ leg }) => leg.lap)))].sort((a, b) => a - b);
  const sorted = [...boats].sort((a, b) => settledMean(b, 'vmg_kn')!.value - settledMean(a, 'vmg_kn')!.value);
  const rows = sorted.map((boat): Part[] => {
    const [most] = findingsOf(boat, 1);
    const lapVmg = (lap: number): Q => upwindLegs(boat).find(({ leg }) => leg.lap === lap)?.leg.vmg_kn ?? null;
    return [
      html`${swatch(result.boats.indexOf(boat))} ${nameOf(boat.name)}`,
      quantity(settledMean(boat, 'vmg_kn'), 'kn', { unitless: true }),
      quantity(efficiencyMean(boat), 'percent', { times: 100, unitless: true }),
      ...laps.map((lap) => quantity(lapVmg(lap), 'kn', { unitless: true, bare: true })),
      quantity(settledMean(boat, 'gamma_deg'), 'deg'),
      quantity(settledMean(boat, 'speed_kn'), 'kn', { unitless: true }),
      most ? html`${most.words.toLowerCase()}, ${number(most.metres.value, 0)}&nbsp;m` : '–',
    ];
  });
  const heads: Part[] = [
    '',
    html`Settled ${term('vmg')}, kn`,
    html`of ${term('optimum', 'model’s')}, %`,
    ...laps.map((lap) => `Lap ${lap}, all of it`),
    'Course angle',
    'Speed, kn',
    'Cost most',
  ];
  return table('At a glance, by settled VMG', heads, rows, 'plain glance');
}
