import { describe, expect, test } from 'vitest';
import { seasonPage } from '../../src/report/season-page.js';
import { season } from '../../src/season.js';
import { inventedSeason } from '../season/invented-season.js';

/** One sailor who gains four per cent a month, one who stays; the page must tell them apart as the trends do. */
const results = inventedSeason({
  seed: 3,
  races: 14,
  every: 7,
  sailors: [{ name: 'Corrie', gain: 0.04 }, { name: 'Linnet <b>' }],
  scatter: 0.01,
});
const found = season(results);
const page = seasonPage(found);

describe('the page of a season', () => {
  test('says of each sailor what the trends say', () => {
    for (const [i, sailor] of found.json.sailors.entries()) {
      const from = page.indexOf(`id="sailor-${i}"`);
      const part = page.slice(from, page.indexOf('</section>', from));
      for (const verdict of ['better', 'worse', 'nothing shown yet']) {
        const told = sailor.trends.filter((t) => t.verdict === verdict).length;
        expect(part.split(`<b>${verdict}</b>`)).toHaveLength(told + 1);
      }
    }
    expect(found.json.sailors[0].trends.some((t) => t.verdict === 'better')).toBe(true);
  });

  /** Races drawn in the pictures of a page, as their markup. */
  const racesIn = (text: string): string[] =>
    [...text.matchAll(/<(g|a) class="race"[\s\S]*?<\/\1>/g)].map(([markup]) => markup);

  test('draws every race of every trend, each with its figures in words', () => {
    const races = found.detail.flatMap((d) => d.trends.flatMap((t) => t.races));
    const drawn = racesIn(page);
    expect(drawn).toHaveLength(races.length);
    const [first] = found.detail[0].trends;
    const { value } = first.races[0].values[first.quantity.key]!;
    expect(drawn[0]).toContain(`aria-label="2026-04-04 Race 1: ${(100 * value).toFixed(1)}`);
    expect(drawn.every((markup) => markup.startsWith('<g ') && markup.includes('tabindex="0"'))).toBe(true);
  });

  test('a race whose page lies beside opens it, the others do not, and no name breaks out of a link', () => {
    const pageOf = ({ race }: { race: string }): string | null => {
      if (race === 'Race 3') return 'third race.html';
      return race === 'Race 4' ? '"><script>alert(1)</script>.html' : null;
    };
    const linked = seasonPage(found, { pageOf });
    const drawn = racesIn(linked);
    for (const name of ['Race 3', 'Race 4', 'Race 5']) {
      const own = drawn.filter((markup) => markup.includes(` ${name}: `));
      expect(own.length).toBeGreaterThan(1);
      expect(own.every((markup) => markup.startsWith('<a ') === (name !== 'Race 5'))).toBe(true);
    }
    expect(linked).toContain('href="third%20race.html"');
    expect(linked.match(/<script/g)).toHaveLength(page.match(/<script/g)!.length);
    expect(linked).toContain('<a href="third%20race.html"><bdi>Race 3</bdi></a>');
  });

  test('of hundreds of races draws neighbours as one, says so, and keeps every race in a table', () => {
    const many = season(inventedSeason({ seed: 4, races: 300, every: 3, sailors: [{ name: 'Corrie' }] }));
    const long = seasonPage(many, { pageOf: ({ race }) => `${race}.html` });
    const drawn = racesIn(long);
    expect(drawn).toHaveLength(many.detail[0].trends.length * 100);
    const { quantity, races } = many.detail[0].trends[0];
    const mean = races.slice(0, 3).reduce((sum, { values }) => sum + values[quantity.key]!.value / 3, 0);
    expect(drawn[0]).toContain(`aria-label="2026-04-04 to 2026-04-10, 3 races: ${(100 * mean).toFixed(1)} ±`);
    expect(long.split('Each dot is the mean of 3 races in a row.')).toHaveLength(many.detail[0].trends.length + 1);
    for (const { race } of races) expect(long).toContain(`"><bdi>${race}</bdi></a></th>`);
    // Beyond a year the days of the foot are told by month and year.
    expect(long).toMatch(/data-t="month">2026-04</);
    expect(page).not.toContain('data-t="month"');
  });

  test('every race has its row, with all its figures, whether it joined a trend or not', () => {
    const sailors = [{ name: 'Corrie', model: (race: number) => (race < 3 ? 'b' : 'a').repeat(64) }];
    const two = season(inventedSeason({ seed: 4, races: 9, every: 7, sailors }));
    const table = seasonPage(two).split('<summary>Every race</summary>')[1];
    expect(two.detail[0].trends[0].races).toHaveLength(6);
    for (const { race, values, wind } of two.detail[0].races) {
      const row = table.slice(table.indexOf(`<bdi>${race}</bdi>`)).split('</tr>')[0];
      for (const [key, value] of Object.entries(values)) {
        expect(row).toContain(`<span class="n">${((/_m$|_deg$/.test(key) ? 1 : 100) * value.value).toFixed(1)}</span>`);
      }
      expect(row).toContain(`<span class="n">${wind.toFixed(0)}</span>`);
    }
  });

  test('a line that is no evidence is broken, one that is is whole', () => {
    const plates = page.split('<figure').slice(1);
    for (const plate of plates) {
      const broken = plate.includes('stroke-dasharray="5 4"');
      expect(plate.includes('no evidence of a change yet')).toBe(broken);
    }
  });

  test('names are text, nothing unknown is shown, the bytes are the same again', () => {
    expect(page.includes('Linnet <b>')).toBe(false);
    expect(page).toContain('Linnet &lt;b&gt;');
    expect(page.slice(page.indexOf('<body>'), page.lastIndexOf('<script>'))).not.toMatch(
      /\bNaN\b|undefined|>null<|Infinity/,
    );
    expect(seasonPage(season(results))).toBe(page);
  });

  test('an empty logbook is said, not drawn', () => {
    const empty = seasonPage(season([]));
    expect(empty).toContain('holds no race with an upwind leg yet');
  });
});
