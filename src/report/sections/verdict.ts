import type { BoatResult, Hint, Quantity, Result } from '../../result/result.js';
import { CAUSE_WORDS } from '../causes.js';
import { beyondError, dayBest, difference, efficiencyMean, settledMean, upwindLegs, type DayBest } from '../figures.js';
import { findingsOf, leastOfOthers, type Finding } from '../findings.js';
import { inline, number, plural, quantity } from '../format.js';
import { el } from '../charts/svg.js';
import { html, nameOf, trusted, type Part, type Safe } from '../html.js';
import { term } from '../terms.js';
import { lead } from './lead.js';
import { swatch } from './masthead.js';
import { section } from './figure.js';

function against(boat: BoatResult, vmg: Quantity, best: DayBest): Safe {
  const own = best.boat === boat;
  const where = own ? html`her own lap ${best.leg.lap}` : html`${nameOf(best.boat.name)}, lap ${best.leg.lap}`;
  if (own && upwindLegs(boat).length === 1) return html`This is ${term('dayBest', 'the day’s best')}.`;
  const gap = difference(vmg, best.vmg)!;
  const digits = digitsThatTell(gap);
  const dayBestWords = html`${term('dayBest')} (${where}: ${inline(best.vmg, 'kn')})`;
  const amount = inline({ ...gap, value: Math.abs(gap.value) }, 'kn', { digits });
  if (!beyondError(gap))
    return html`No difference beyond the error from ${dayBestWords}: ${inline(gap, 'kn', { sign: true, digits })}.`;
  return html`${amount} ${gap.value < 0 ? 'below' : 'above'} ${dayBestWords}.`;
}

/** One figure more where the usual two, rounded, would say otherwise of twice the error than the values do. */
function digitsThatTell({ value, se }: Quantity): number {
  const rounded = (x: number): number => Math.round(100 * Math.abs(x)) / 100;
  const told = rounded(value) > 2 * rounded(se ?? 0);
  return told === beyondError({ value, se, basis: 'derived' }) ? 2 : 3;
}

function modelLine(boat: BoatResult): Part {
  const share = efficiencyMean(boat);
  if (!share) return null;
  return html`<p class="second">
    ${inline(share, 'percent', { times: 100 })} of the ${term('optimum')} (${boat.model.boat},
    ${boat.model.tuned ? 'tuned' : 'not tuned'}).
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
  const found = findingsOf(boat, 3);
  const ledger = upwindLegs(boat).find(({ leg }) => leg.ledger)?.leg.ledger;
  if (found.length === 0 || !ledger) return html`<p class="second">No ledger of metres: ${whyNoLedger(boat)}.</p>`;
  const most = found[0].metres.value;
  const rows = found.map(
    (one) =>
      html`<li>
        ${bar(one.metres.value / most)}<span class="what" title="${one.meaning}">${one.words}</span>
        <span class="metres">${quantity(one.metres, 'm')}</span>${noteOf(result, boat, one)}
      </li>`,
  );
  return html`<p class="lead-in">
      Where the metres went, ${plural(upwindLegs(boat).length, 'beat')}, against the
      ${term('reference', REFERENCE_SHORT[ledger.reference])}:
    </p>
    <ol class="findings">
      ${rows}
    </ol>`;
}

const REFERENCE_SHORT = { model: 'boat model', best: 'day’s best sailing', file: 'boat file given' } as const;

/** What it is made of, and the same of the other boat that lost least by it. */
function noteOf(result: Result, boat: BoatResult, { causes, metres, parts }: Finding): Part {
  const other = leastOfOthers(result, boat, causes);
  const excess = other && difference(metres, other.metres);
  const made = parts.map(
    ({ cause, metres: { value } }, k) => html`${k > 0 && ', '}${CAUSE_WORDS[cause].toLowerCase()} ${number(value, 0)}`,
  );
  if (parts.length === 0 && !other) return null;
  return html` <span class="soft"
    >${made}${parts.length > 0 && other && '. '}${other && html`${nameOf(other.name)} ${number(other.metres.value, 0)}`}${
      other && !beyondError(excess) && '; not apart beyond the error'
    }</span
  >`;
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

function sailorOf({ name, sailor }: BoatResult): Part {
  return sailor !== name && html` <span class="soft">${nameOf(sailor)}</span>`;
}

function boatVerdict(result: Result, boat: BoatResult, index: number, best: DayBest | null): Safe {
  const vmg = settledMean(boat, 'vmg_kn');
  const figure = vmg
    ? html`${best && html`<p class="first">${against(boat, vmg, best)}</p>`}`
    : html`<p class="first">No settled ${term('vmg')} to windward: ${whyNoLedger(boat)}.</p>`;
  return html`<article class="verdict">
    <div class="verdict-head">
      <h3>${swatch(index)} ${nameOf(boat.name)}${sailorOf(boat)}</h3>
      ${vmg && html`<p class="figure">${quantity(vmg, 'kn')} <span class="what">${term('settled')} ${term('vmg')}</span></p>`}
    </div>
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
    html`${lead(result)}
      <div class="verdicts">${cards}</div>
      <p class="small">
        ${term('standardError', 'Every ±')} is one standard error. Remarks are hints to test on the water, not
        instructions.
      </p>`,
  );
}
