import { document } from './document.js';
import { inline, number, plural, quantity, scaled, time } from './format.js';
import { html, nameOf, type Part, type Safe } from './html.js';
import { QUANTITIES, wordsOf } from './season-data.js';
import type { GroupData, Links, SailorDetail, SailorTrends, SeasonData, TrendWords } from './season-data.js';
import { raceTable } from './season-races.js';
import { readingOf, trendPlate } from './season-trends.js';
import { section, table } from './sections/figure.js';
import { termCards } from './terms.js';

export type { SeasonData } from './season-data.js';

export interface SeasonPageOptions {
  /** The page of a race, as a path from this one with `/` between folders; null where none lies beside. */
  readonly pageOf?: (race: { readonly race: string; readonly time: number }) => string | null;
}

/**
 * Every sailor's races as trends.
 *
 * @returns One self-contained HTML document; the same input gives the same bytes.
 */
export function seasonPage(season: SeasonData, options: SeasonPageOptions = {}): string {
  const { sailors } = season.json;
  const { from: origin } = timesOf(season);
  const links = linksTo(options.pageOf);
  const parts = sailors.map((sailor, i) => sailorSection(sailor, season.detail[i], i, origin, links));
  const names = sailors.map((s, i) => html`<li><a href="#sailor-${i}">${nameOf(s.name)}</a></li>`);
  const none = sailors.length === 0 && html`<p>The logbook holds no race with an upwind leg yet.</p>`;
  const body = html`<a class="skip" href="#sailor-0">To the first sailor</a>
    <header class="masthead">
      <p class="kicker">Season</p>
      <h1>Race by race</h1>
      <p class="day">${spanOf(season)}</p>
    </header>
    <nav aria-label="Contents">
      <ul>
        ${names}
      </ul>
    </nav>
    <main class="season">${none}${parts}${reading()}</main>
    <div id="tip" class="card" popover="manual" role="status"></div>
    ${termCards()}`;
  return document({ title: 'Season', body, data: {} });
}

function linksTo(pageOf: SeasonPageOptions['pageOf']): Links {
  return (race) => pageOf?.(race)?.split('/').map(encodeURIComponent).join('/') ?? null;
}

/** First and last race of all. */
function timesOf(season: SeasonData): { from: number; to: number } {
  let [from, to] = [Infinity, -Infinity];
  for (const { races } of season.detail) {
    for (const { time: at } of races) {
      from = Math.min(from, at);
      to = Math.max(to, at);
    }
  }
  return { from, to };
}

function spanOf(season: SeasonData): Part {
  const { from, to } = timesOf(season);
  if (from > to) return null;
  const races = new Set(season.detail.flatMap((d) => d.races.map((r) => `${r.time} ${r.race}`))).size;
  return html`${plural(races, 'race')}, ${time(from, 'day')} to ${time(to, 'day')}.`;
}

function sailorSection(sailor: SailorTrends, detail: SailorDetail, index: number, origin: number, links: Links): Safe {
  const plates = detail.trends.map((t, k) => trendPlate(t, sailor.trends[k], origin, links));
  const heading = html`${sailor.name}`;
  return html`<section id="sailor-${index}" aria-labelledby="h-sailor-${index}">
    <h2 id="h-sailor-${index}">${nameOf(sailor.name)}</h2>
    <p class="first">${plural(sailor.races, 'race')}. ${shortOf(sailor)}</p>
    ${sailor.trends.length > 0 && trendTable(sailor, heading)}
    ${
      detail.notes.length > 0 &&
      html`<ul class="notes">
        ${detail.notes.map((n) => html`<li>${n}.</li>`)}
      </ul>`
    }
    ${detail.trends.length > 0 && readingOf(detail, links)}
    <div class="plates">${plates}</div>
    ${groupTable('By wind', detail.byWind)}${detail.byBoat.length > 1 && groupTable('By boat', detail.byBoat)}${
      detail.byCrewMass.length > 1 && groupTable('By crew weight', detail.byCrewMass)
    }
    ${raceTable(detail.races, links)}
  </section>`;
}

/** What has changed, in a sentence. */
function shortOf(sailor: SailorTrends): string {
  const told = (verdict: string): string[] =>
    sailor.trends.filter((t) => t.verdict === verdict).map((t) => lowerFirst(wordsOf(t.quantity).words));
  const better = told('better');
  const worse = told('worse');
  if (better.length + worse.length === 0) return 'Nothing shown yet: what changed is within what chance deals.';
  const parts = [
    better.length > 0 && `Better: ${better.join(', ')}.`,
    worse.length > 0 && `Worse: ${worse.join(', ')}.`,
  ];
  return parts.filter(Boolean).join(' ');
}

function lowerFirst(words: string): string {
  return words.charAt(0).toLowerCase() + words.slice(1);
}

function trendTable(sailor: SailorTrends, name: Part): Safe {
  const rows = sailor.trends.map((t) => {
    const { words, unit, times } = wordsOf(t.quantity);
    return [
      words,
      html`<b>${t.verdict}</b>`,
      quantity(t.slope_per_30_days, unit, { times, sign: true, digits: 1 }),
      needed(t),
      t.p < 0.001 ? html`&lt; ${number(0.001, 3)}` : number(t.p, 3),
    ];
  });
  const heads = ['', 'Verdict', 'Change in 30 days', 'Races still needed', 'p'];
  return table(html`Trends of ${name}`, heads, rows, 'plain trends');
}

function needed(t: TrendWords): Part {
  if (t.verdict !== 'nothing shown yet') return '–';
  return t.races_needed === null ? 'none in sight would show it' : `about ${t.races_needed} more like these`;
}

function groupTable(caption: string, groups: readonly GroupData[]): Part {
  if (groups.length === 0) return null;
  const keys = Object.keys(QUANTITIES).filter((key) => groups.some((g) => g.means[key]));
  const rows = groups.map((g) => [
    g.name,
    g.races,
    ...keys.map((key) => {
      const mean = g.means[key];
      const { unit, times } = wordsOf(key);
      return mean ? inline(scaled({ ...mean, basis: 'derived' }, times), unit, { digits: 1 }) : '–';
    }),
  ]);
  return table(caption, ['', 'Races', ...keys.map((key) => wordsOf(key).words)], rows, 'plain groups');
}

function reading(): Safe {
  return section(
    'trust',
    'How to read this',
    html`<p>
        A trend is the middle slope between all pairs of races; a verdict is given only where chance would deal as clear
        an order in fewer than one of twenty seasons, all quantities and sailors of this page counted together. Better
        means nearer to what the boat could do on that day, not faster through the water.
      </p>
      <div class="safety">
        <h3>For looking back, ashore</h3>
        <p>
          This page is not for navigation or for deciding whether to sail, and no measure of a person. A change may come
          from the boat, the sails, the crew or the instruments as well as from the helm.
        </p>
      </div>`,
  );
}
