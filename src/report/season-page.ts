import type { Q } from '../result/result.js';
import { trendChart, type TrendPoint } from './charts/trend.js';
import { document } from './document.js';
import { inline, isoOf, number, plain, plural, quantity, scaled, suffix, time, timeText, type Unit } from './format.js';
import { html, nameOf, type Part, type Safe } from './html.js';
import { figure, section, table } from './sections/figure.js';
import { termCards } from './terms.js';

/** What the page of a season draws from: trends with the races behind them. */
export interface SeasonData {
  readonly json: { readonly sailors: readonly SailorTrends[] };
  readonly detail: readonly SailorDetail[];
}

interface SailorTrends {
  readonly name: string;
  readonly races: number;
  readonly trends: readonly TrendWords[];
}

interface TrendWords {
  readonly quantity: string;
  readonly slope_per_30_days: Q;
  readonly p: number;
  readonly verdict: 'better' | 'worse' | 'nothing shown yet';
  readonly races_needed: number | null;
}

interface RaceValue {
  readonly race: string;
  /** UTC seconds. */
  readonly time: number;
  readonly wind: number;
  readonly values: Readonly<Record<string, { readonly value: number; readonly se: number } | undefined>>;
}

interface SailorDetail {
  readonly name: string;
  readonly races: readonly RaceValue[];
  readonly trends: readonly {
    readonly quantity: { readonly key: string };
    readonly trend: { readonly slope: number; readonly intercept: number; readonly wind: string };
    readonly races: readonly RaceValue[];
  }[];
  readonly byWind: readonly GroupData[];
  readonly byBoat: readonly GroupData[];
  readonly byCrewMass: readonly GroupData[];
  readonly notes: readonly string[];
}

interface GroupData {
  readonly name: string;
  readonly races: number;
  readonly means: Readonly<Record<string, { readonly value: number; readonly se: number | null } | undefined>>;
}

interface Words {
  readonly words: string;
  readonly unit: Unit;
  readonly times: number;
}

const QUANTITIES: Readonly<Record<string, Words>> = {
  share: { words: 'Share of the metres there were', unit: 'percent', times: 100 },
  efficiency: { words: 'Settled VMG against the model’s optimum', unit: 'percent', times: 100 },
  settled_vmg: { words: 'Settled VMG against the reference', unit: 'percent', times: 100 },
  tack_cost_m: { words: 'Cost of a tack', unit: 'm', times: 1 },
  leeway_off_best_deg: { words: 'Leeway off the model’s best', unit: 'deg', times: 1 },
  sheeting_off_best_deg: { words: 'Sheeting off the model’s best', unit: 'deg', times: 1 },
};

function wordsOf(key: string): Words {
  return QUANTITIES[key] ?? { words: key, unit: 'count', times: 1 };
}

const DAY = 86400;

export interface SeasonPageOptions {
  /** The page of a race, as a path from this one with `/` between folders; null where none lies beside. */
  readonly pageOf?: (race: { readonly race: string; readonly time: number }) => string | null;
}

type Links = NonNullable<SeasonPageOptions['pageOf']>;

/**
 * Every sailor's races as trends.
 *
 * @returns One self-contained HTML document; the same input gives the same bytes.
 */
export function seasonPage(season: SeasonData, options: SeasonPageOptions = {}): string {
  const { sailors } = season.json;
  const origin = Math.min(...season.detail.flatMap((d) => d.races.map((r) => r.time)));
  const links: Links = options.pageOf ?? (() => null);
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

function spanOf(season: SeasonData): Part {
  const times = season.detail.flatMap((d) => d.races.map((r) => r.time));
  if (times.length === 0) return null;
  const races = new Set(season.detail.flatMap((d) => d.races.map((r) => `${r.time} ${r.race}`))).size;
  const [from, to] = [Math.min(...times), Math.max(...times)];
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
    <div class="plates">${plates}</div>
    ${groupTable('By wind', detail.byWind)}${detail.byBoat.length > 1 && groupTable('By boat', detail.byBoat)}${
      detail.byCrewMass.length > 1 && groupTable('By crew weight', detail.byCrewMass)
    }
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
      quantity(t.slope_per_30_days, unit, { times, sign: true, digits: 1 }),
      html`<b>${t.verdict}</b>`,
      needed(t),
      number(t.p, 3),
    ];
  });
  return table(html`Trends of ${name}`, ['', 'Change in 30 days', 'Verdict', 'Races still needed', 'p'], rows);
}

function needed(t: TrendWords): Part {
  if (t.verdict !== 'nothing shown yet') return '–';
  return t.races_needed === null ? 'none in sight would show it' : `about ${t.races_needed} more like these`;
}

type TrendDetail = SailorDetail['trends'][number];

/** A race's page as a link: every part of its path encoded. */
function hrefOf(race: RaceValue, links: Links): string | null {
  const path = links(race);
  return path === null ? null : path.split('/').map(encodeURIComponent).join('/');
}

function pointsOf(races: readonly RaceValue[], key: string, links: Links): TrendPoint[] {
  const { unit, times } = wordsOf(key);
  return races.flatMap((race) => {
    const v = race.values[key];
    if (!v) return [];
    const [value, se] = [v.value * times, v.se * times];
    const error = Number.isFinite(se) ? ` ±${plain(se, 1)}` : '';
    const wind = Number.isFinite(race.wind) ? `, wind ${plain(race.wind, 0)} kn` : '';
    const words = `${timeText(isoOf(race.time), 'date')} ${race.race}: ${plain(value, 1)}${error}${suffix(unit)}${wind}`;
    const href = hrefOf(race, links);
    return [{ time: race.time, value, se, words, ...(href === null ? {} : { href }) }];
  });
}

function trendPlate(
  { quantity: { key }, trend, races }: TrendDetail,
  told: TrendWords,
  origin: number,
  links: Links,
): Part {
  const { words, unit, times } = wordsOf(key);
  const points = pointsOf(races, key, links);
  if (points.length === 0) return null;
  const fit = (t: number): number => (trend.intercept + (trend.slope * (t - origin)) / DAY) * times;
  const shown = told.verdict !== 'nothing shown yet';
  const wind =
    trend.wind === 'allowed for' ? ' The wind of each race is allowed for in the trend, not in the dots.' : '';
  return figure({
    svg: trendChart(points, {
      title: `${words}, ${suffix(unit).trim()}`,
      fit: points.length > 1 && Number.isFinite(trend.slope) ? fit : null,
      shown,
    }),
    title: words,
    summary: html`${shown ? 'The line is evidence of a change.' : 'The broken line is no evidence of a change yet.'}
    Bars are one standard
    error.${wind}${points.some(({ href }) => href !== undefined) && ' A point in a ring opens the page of its race.'}`,
    table: raceTable(races, key, links),
  });
}

function raceTable(races: readonly RaceValue[], key: string, links: Links): Safe {
  const { words, unit, times } = wordsOf(key);
  const rows = races.map((r) => {
    const v = r.values[key];
    const q: Q = v ? { value: v.value, se: Number.isFinite(v.se) ? v.se : null, basis: 'derived' } : null;
    const href = hrefOf(r, links);
    return [
      html`${time(r.time, 'date')} ${href === null ? nameOf(r.race) : html`<a href="${href}">${nameOf(r.race)}</a>`}`,
      q ? inline(q, unit, { times, digits: 1 }) : '–',
      plain(r.wind, 0),
    ];
  });
  return table(words, ['Race', 'Value', 'Wind kn'], rows);
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
