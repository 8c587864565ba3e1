import type { BoatResult, Hint, Quantity, Result } from '../../result/result.js';
import { CAUSE_MEANING, CAUSE_WORDS, REFERENCE_WORDS } from '../causes.js';
import {
  beyondError,
  dayBest,
  difference,
  efficiencyMean,
  largestLosses,
  leastOfOthers,
  settledMean,
  upwindLegs,
  type DayBest,
} from '../figures.js';
import { inline, number, plural, quantity } from '../format.js';
import { el } from '../charts/svg.js';
import { html, nameOf, trusted, type Part, type Safe } from '../html.js';
import { term } from '../terms.js';
import { swatch } from './masthead.js';
import { section } from './figure.js';

function against(boat: BoatResult, vmg: Quantity, best: DayBest): Safe {
  const own = best.boat === boat;
  const where = own ? html`her own lap ${best.leg.lap}` : html`${nameOf(best.boat.name)}, lap ${best.leg.lap}`;
  if (own && upwindLegs(boat).length === 1) return html`This is ${term('dayBest', 'the day’s best')}.`;
  const gap = difference(vmg, best.vmg)!;
  const dayBestWords = html`${term('dayBest')} (${where}: ${inline(best.vmg, 'kn')})`;
  const amount = inline({ ...gap, value: Math.abs(gap.value) }, 'kn');
  if (!beyondError(gap))
    return html`No difference beyond the error from ${dayBestWords}: ${inline(gap, 'kn', { sign: true })}.`;
  return html`${amount} ${gap.value < 0 ? 'below' : 'above'} ${dayBestWords}.`;
}

function modelLine(boat: BoatResult): Part {
  const share = efficiencyMean(boat);
  if (!share) return null;
  const model = boat.model.tuned
    ? html`the tuned ${boat.model.boat} model`
    : html`the ${boat.model.boat} model, which is not tuned to this boat`;
  return html`<p class="second">
    ${inline(share, 'percent', { times: 100 })} of the ${term('optimum')}, by ${model}.
  </p>`;
}

function angleLine(boat: BoatResult): Part {
  const gamma = settledMean(boat, 'gamma_deg');
  const speed = settledMean(boat, 'speed_kn');
  if (!gamma || !speed) return null;
  return html`<p class="second">
    Sailed ${inline(speed, 'kn')} at ${inline(gamma, 'deg')} ${term('courseAngle', 'to the true wind')}.
  </p>`;
}

/** A bar as long as its share of the largest. */
function bar(share: number): Safe {
  const rect = el('rect', { width: 100 * Math.max(0, Math.min(1, share)), height: 10 });
  return trusted(
    el('svg', { class: 'bar', viewBox: '0 0 100 10', preserveAspectRatio: 'none', 'aria-hidden': 'true' }, rect),
  );
}

/** The three largest items of the ledger, shifts apart, each beside the least of the other boats. */
function findings(result: Result, boat: BoatResult): Safe {
  const losses = largestLosses(boat, 3);
  const ledger = upwindLegs(boat).find(({ leg }) => leg.ledger)?.leg.ledger;
  if (losses.length === 0 || !ledger) return html`<p class="second">No ledger of metres: ${whyNoLedger(boat)}.</p>`;
  const most = losses[0].metres.value;
  const rows = losses.map(({ cause, metres }) => {
    const other = leastOfOthers(result, boat, cause);
    const excess = other && difference(metres, other.metres);
    const note =
      other &&
      html` <span class="soft"
        >${nameOf(other.name)}
        ${number(other.metres.value, 0)}${beyondError(excess) ? '' : '; not apart beyond the error'}</span
      >`;
    return html`<li>
      ${bar(metres.value / most)}<span class="what" title="${CAUSE_MEANING[cause]}">${CAUSE_WORDS[cause]}</span>
      <span class="metres">${quantity(metres, 'm')}</span>${note}
    </li>`;
  });
  return html`<p class="lead-in">
      Where the metres went, ${plural(upwindLegs(boat).length, 'beat')}, against ${REFERENCE_WORDS[ledger.reference]}:
    </p>
    <ol class="findings">
      ${rows}
    </ol>`;
}

export function whyNoLedger(boat: BoatResult): string {
  const notes = upwindLegs(boat).flatMap(({ leg }) => leg.notes);
  if (upwindLegs(boat).length === 0) return 'no upwind leg was found';
  return notes[0] ?? 'what it needs was not recorded';
}

/** Metres behind a hint, unless its own words give them. */
function hintMetres({ text, metres }: Hint): Part {
  if (!metres || /\d\s?m\b/.test(text)) return null;
  return html` <span class="soft">About ${inline(metres, 'm')}.</span>`;
}

function hints(boat: BoatResult): Part {
  if (boat.hints.length === 0) return null;
  return html`<p class="lead-in">Worth trying:</p>
    <ul class="hints">
      ${boat.hints.map((hint) => html`<li>${hint.text}${hintMetres(hint)}</li>`)}
    </ul>`;
}

function boatVerdict(result: Result, boat: BoatResult, index: number, best: DayBest | null): Safe {
  const vmg = settledMean(boat, 'vmg_kn');
  const figure = vmg
    ? html`<p class="figure">${quantity(vmg, 'kn')} <span class="what">${term('settled')} ${term('vmg')}</span></p>
        ${best && html`<p class="first">${against(boat, vmg, best)}</p>`}`
    : html`<p class="first">No settled ${term('vmg')} to windward: ${whyNoLedger(boat)}.</p>`;
  return html`<article class="verdict">
    <h3>${swatch(index)} ${nameOf(boat.name)}</h3>
    ${figure}${angleLine(boat)}${modelLine(boat)}${findings(result, boat)}${hints(boat)}
  </article>`;
}

/** The first screen: one verdict a boat. */
export function verdicts(result: Result): Safe {
  const best = dayBest(result);
  const cards = result.boats.map((boat, i) => boatVerdict(result, boat, i, best));
  return section(
    'verdict',
    'The short of it',
    html`<div class="verdicts">${cards}</div>
      <p class="small">
        ${term('standardError', 'Every ±')} is one standard error. Remarks are hints to test on the water, not
        instructions.
      </p>`,
  );
}
