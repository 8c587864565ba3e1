import { trendChart, type TrendPoint } from './charts/trend.js';
import { isoOf, plain, suffix, timeText, type Unit } from './format.js';
import { html, type Part } from './html.js';
import { wordsOf, type Links, type RaceValue, type SailorDetail, type TrendWords } from './season-data.js';
import { figure } from './sections/figure.js';

/** A quantity of a sailor from race to race. */

type TrendDetail = SailorDetail['trends'][number];

const DAY = 86400;
/** More dots than this are a smear: then neighbours in time are drawn as one, at their mean. */
const MOST_DOTS = 120;

/** What a scale counts in, in words: a lone sign would be lost. */
const SCALE: Readonly<Record<Unit, string>> = {
  percent: 'per cent',
  m: 'metres',
  deg: 'degrees',
  kn: 'knots',
  s: 'seconds',
  count: '',
};

/** The picture of a trend with its words; null where no race has a figure. */
export function trendPlate(
  { quantity: { key }, trend, races }: TrendDetail,
  told: TrendWords,
  origin: number,
  links: Links,
): Part {
  const { words, unit, times } = wordsOf(key);
  const known = races.filter((race) => race.values[key]);
  if (known.length === 0) return null;
  const size = Math.ceil(known.length / MOST_DOTS);
  const points = size > 1 ? groupsOf(known, size).map((group) => groupPoint(group, key)) : known.map((race) => racePoint(race, key, links)); // prettier-ignore
  const fit = (t: number): number => (trend.intercept + (trend.slope * (t - origin)) / DAY) * times;
  const shown = told.verdict !== 'nothing shown yet';
  const drawn = points.length > 1 && Number.isFinite(trend.slope);
  return figure({
    svg: trendChart(points, {
      title: `${words}, ${suffix(unit).trim()}`,
      unit: SCALE[unit],
      fit: drawn ? fit : null,
      shown,
      races: known.length,
    }),
    title: words,
    summary: html`${shown ? 'The line is evidence of a change.' : 'The broken line is no evidence of a change yet.'}
    ${size > 1 && `Each dot is the mean of ${size} races in a row.`}`,
  });
}

/** How the pictures of a sailor are read, said once. */
export function readingOf({ trends, races }: SailorDetail, links: Links): Part {
  const wind = trends.filter(({ trend }) => trend.wind === 'allowed for').length;
  const together = trends.some((one) => one.races.length > MOST_DOTS);
  return html`<p class="small">
    Bars are one standard error${together && ', by the spread of the races where a dot stands for several'}.
    ${
      wind > 0 &&
      `The wind of each race is allowed for in ${wind === trends.length ? 'the trends' : 'most trends'}, not in the dots.`
    }
    ${!together && races.some((race) => links(race) !== null) && 'A point in a ring opens the page of its race.'}
  </p>`;
}

/** Neighbours in time, so many each, the last perhaps fewer. */
function groupsOf(races: readonly RaceValue[], size: number): RaceValue[][] {
  return Array.from({ length: Math.ceil(races.length / size) }, (_, k) => races.slice(k * size, (k + 1) * size));
}

function racePoint(race: RaceValue, key: string, links: Links): TrendPoint {
  const { times } = wordsOf(key);
  const { value, se } = race.values[key]!;
  const day = timeText(isoOf(race.time), 'date');
  const point = { time: race.time, value: value * times, se: se * times };
  const href = links(race);
  return {
    ...point,
    words: `${day} ${race.race}: ${figures(point, key, race.wind)}`,
    ...(href === null ? {} : { href }),
  };
}

/** Several races as one: their mean, its error by their spread. */
function groupPoint(races: readonly RaceValue[], key: string): TrendPoint {
  const { times } = wordsOf(key);
  const values = races.map((race) => race.values[key]!.value * times);
  const mean = meanOf(values);
  const squares = values.reduce((sum, value) => sum + (value - mean) ** 2, 0);
  const n = races.length;
  const point = {
    time: meanOf(races.map((race) => race.time)),
    value: mean,
    se: n < 2 ? NaN : Math.sqrt(squares / (n - 1) / n),
  };
  const [from, to] = [races[0], races[n - 1]].map((race) => timeText(isoOf(race.time), 'date'));
  const wind = meanOf(races.map((race) => race.wind).filter(Number.isFinite));
  return { ...point, words: `${from} to ${to}, ${n} races: ${figures(point, key, wind)}` };
}

function figures({ value, se }: { readonly value: number; readonly se: number }, key: string, wind: number): string {
  const error = Number.isFinite(se) ? ` ±${plain(se, 1)}` : '';
  const blow = Number.isFinite(wind) ? `, wind ${plain(wind, 0)} kn` : '';
  return `${plain(value, 1)}${error}${suffix(wordsOf(key).unit)}${blow}`;
}

const meanOf = (values: readonly number[]): number => values.reduce((sum, value) => sum + value, 0) / values.length;
