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

  test('draws every race of every trend', () => {
    const dots = found.detail.reduce((s, d) => s + d.trends.reduce((n, t) => n + t.races.length, 0), 0);
    const drawn = page
      .split('class="trend"')
      .slice(1)
      .map((part) => part.slice(0, part.indexOf('</svg>')));
    expect(drawn.reduce((s, svg) => s + svg.split('<circle').length - 1, 0)).toBe(dots);
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
