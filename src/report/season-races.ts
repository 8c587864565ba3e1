import { plain, suffix, time } from './format.js';
import { html, nameOf, trusted, type Part } from './html.js';
import { QUANTITIES, type Links, type RaceValue } from './season-data.js';
import { table } from './sections/figure.js';

/** Every race of a sailor with every figure there is of it, folded away. */
export function raceTable(races: readonly RaceValue[], links: Links): Part {
  const keys = Object.keys(QUANTITIES).filter((key) => races.some(({ values }) => values[key]));
  if (keys.length === 0) return null;
  const heads = keys.map((key) => `${QUANTITIES[key].words}, ${suffix(QUANTITIES[key].unit).trim()}`);
  const rows = races.map((race): Part[] => [
    nameCell(race, links),
    Number.isFinite(race.wind) ? trusted(figureOf(race.wind, NaN, 0)) : '–',
    ...keys.map((key) => {
      const value = race.values[key];
      const { times } = QUANTITIES[key];
      return value ? trusted(figureOf(value.value * times, value.se * times, 1)) : '–';
    }),
  ]);
  return html`<details class="figures">
    <summary>Every race</summary>
    ${table('Joined in the trends or not; ± one standard error', ['Race', 'Wind, kn', ...heads], rows, 'plain groups races')}
  </details>`;
}

function nameCell(race: RaceValue, links: Links): Part {
  const href = links(race);
  const name = nameOf(race.race);
  return html`${time(race.time, 'ymd')} ${href === null ? name : html`<a href="${href}">${name}</a>`}`;
}

/** Figures that the client localises. Thousands of cells: they are put together without templates. */
function figureOf(value: number, se: number, digits: number): string {
  const error = Number.isFinite(se) ? ` ± <span class="n">${plain(se, digits)}</span>` : '';
  return `<span class="n">${plain(value, digits)}</span>${error}`;
}
