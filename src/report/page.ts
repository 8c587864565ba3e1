import type { PairLadder } from '../compare.js';
import type { Result } from '../result/result.js';
import type { RaceSeries } from '../result/series.js';
import { document } from './document.js';
import { html, type Part, type Safe } from './html.js';
import { encodePayload } from './payload.js';
import { angles } from './sections/angles.js';
import { ladders } from './sections/ladder.js';
import { ledger } from './sections/ledger.js';
import { legs, otherLegs } from './sections/legs.js';
import { masthead } from './sections/masthead.js';
import { pairs } from './sections/pairs.js';
import { replay, seriesSection } from './sections/replay.js';
import { tacks } from './sections/tacks.js';
import { glossary, trust } from './sections/trust.js';
import { verdicts } from './sections/verdict.js';
import { termCards } from './terms.js';

/**
 * The report of one race, one or more boats.
 *
 * @returns One self-contained HTML document; the same input gives the same bytes.
 */
export function debriefPage(result: Result, series: RaceSeries): string {
  return page(result, series, 'Debrief', 'debrief', [
    verdicts(result),
    legs(result),
    replay(result, series),
    ledger(result),
    pairs(result),
  ]);
}

/**
 * The same race with boat against boat first.
 *
 * @param climbs What `compare` found along each beat; left out, no ladder is drawn.
 * @returns One self-contained HTML document; the same input gives the same bytes.
 */
export function comparePage(result: Result, series: RaceSeries, climbs: readonly PairLadder[] = []): string {
  const front = [
    pairs(result),
    ladders(result, series, climbs),
    verdicts(result),
    ledger(result),
    legs(result),
    replay(result, series),
  ];
  return page(result, series, 'Boat against boat', 'compare', front, front[1] !== null);
}

const NAVIGATION: readonly (readonly [string, string])[] = [
  ['verdict', 'In short'],
  ['legs', 'Legs'],
  ['chart', 'Chart'],
  ['ledger', 'Metres'],
  ['time', 'Minutes'],
  ['turns', 'Tacks'],
  ['angles', 'Angles'],
  ['trust', 'Trust'],
  ['words', 'Words'],
];

function contents(withPairs: boolean, withLadder: boolean): Safe {
  const entries = withPairs
    ? [
        ...NAVIGATION.slice(0, 2),
        ['pairs', 'Side by side'] as const,
        ...(withLadder ? [['ladder', 'Rung by rung'] as const] : []),
        ...NAVIGATION.slice(2),
      ]
    : NAVIGATION;
  return html`<nav aria-label="Contents">
    <ul>
      ${entries.map(([id, words]) => html`<li><a href="#${id}">${words}</a></li>`)}
    </ul>
  </nav>`;
}

function page(
  result: Result,
  series: RaceSeries,
  kind: string,
  className: string,
  front: readonly Part[],
  withLadder = false,
): string {
  const appendix = html`<div class="after">
    ${seriesSection(series)}${tacks(result, series)}${angles(result, series)}${otherLegs(result)}${trust(result)}${glossary()}
  </div>`;
  const body = html`<a class="skip" href="#verdict">To the verdict</a
    >${masthead(result, series, kind)}${contents((result.pairs?.length ?? 0) > 0, withLadder)}
    <main class="${className}">${front}${appendix}</main>

    <div id="tip" class="card" popover="manual" role="status"></div>
    ${termCards()}`;
  return document({
    title: `${result.race.name} – ${kind.toLowerCase()}`,
    body,
    data: { series: encodePayload(series), boats: clientResult(result, series) },
  });
}

/** What the client needs of the result: references of the running ledger, settled angles for laylines. */
function clientResult(result: Result, series: RaceSeries): unknown {
  return {
    race: result.race.name,
    frame: series.frame,
    marks: series.marks,
    boats: result.boats.map((b) => ({
      name: b.name,
      legs: b.legs.map((l) => ({
        kind: l.kind,
        lap: l.lap,
        available: l.ledger?.available_m?.value ?? null,
        vmg: l.vmg_kn?.value ?? null,
        settledVmg: l.steady?.vmg_kn?.value ?? null,
        gamma: l.steady?.gamma_deg?.value ?? null,
        gammaPort: l.steady?.port?.gamma_deg?.value ?? null,
        gammaStarboard: l.steady?.starboard?.gamma_deg?.value ?? null,
        leeway: l.steady?.leeway_deg?.value ?? null,
        tacks: l.tacks,
      })),
    })),
  };
}
