import { describe, expect, test } from 'vitest';
import { comparePage, debriefPage } from '../../src/report/page.js';
import { sampleLadders } from './sample-ladders.js';
import { bareSample, noWindSpeedSample, renamed, sample } from './sample.js';

const HOSTILE = '</script><img src=x onerror=alert(1)>';

describe('the page as a string', () => {
  test('the same input gives the same bytes', () => {
    const a = sample();
    const b = sample();
    expect(debriefPage(a.result, a.series)).toBe(debriefPage(b.result, b.series));
  });

  test('a page of two boats stays far below the size a phone can take', () => {
    const { result, series } = sample();
    expect(debriefPage(result, series).length).toBeLessThan(1_500_000);
  });

  test('a comparison of eight boats does too: every pair has a row, a few are shown in full', () => {
    const { result, series } = sample();
    const names = Array.from({ length: 8 }, (_, k) => `Boat ${k}`);
    const boats = names.map((name, k) => ({ ...result.boats[k % 2], name }));
    const columns = { ...series, boats: names.map((name, k) => ({ ...series.boats[k % 2], name })) };
    const pairs = names.flatMap((a, i) => names.slice(i + 1).map((b) => ({ ...result.pairs![0], boats: [a, b] as const, faster: null }))); // prettier-ignore
    const ladders = pairs.map((pair) => ({ boats: pair.boats, legs: sampleLadders({ result, series })[0].legs }));
    const page = comparePage({ ...result, boats, pairs }, columns, ladders);
    expect(page.length).toBeLessThan(1_500_000);
    expect(page.match(/<bdi>Boat \d<\/bdi> less <bdi>Boat \d<\/bdi><\/th>/g)).toHaveLength(28);
    expect(page.match(/<div class="pair">/g)).toHaveLength(3);
    expect(page).not.toContain('<dl class="lead"');
    expect(page).toContain('At a glance');
  });

  test('a pair has leeway and sheeting beside its VMG, said as something to test; files that lack them have no row', () => {
    const { result, series } = sample();
    const page = comparePage(result, series);
    expect(page).toContain('leeway: by heading, its ± with what that is good to');
    expect(page).toContain('something to test side by side');
    // Sampling error and what the instruments are good to, together: 0.3 and 0.28.
    expect(page).toMatch(/−1\.6<\/span><span class="u">°<\/span> <small class="pm">±<span class="n">0\.4/);
    const { leeway_difference_deg, sheeting_difference_deg, more_leeway, sheeted_wider, ...old } = result.pairs![0];
    expect([leeway_difference_deg, sheeting_difference_deg, more_leeway, sheeted_wider]).not.toContain(undefined);
    const before = comparePage({ ...result, pairs: [old] }, series);
    expect(before).not.toContain('not determined');
    expect(before).not.toContain('something to test side by side');
    const even = { ...result.pairs![0], more_leeway: null, sheeted_wider: null };
    expect(comparePage({ ...result, pairs: [even] }, series)).not.toContain('something to test side by side');
    const bare = { ...result.pairs![0], sheeting_difference_deg: null, sheeted_wider: null };
    expect(comparePage({ ...result, pairs: [bare] }, series)).toContain('<span class="none">not determined</span>');
  });

  test('a hostile name never becomes markup, in either page', () => {
    const { result, series } = renamed(sample(), HOSTILE);
    for (const page of [debriefPage(result, series), comparePage(result, series)]) {
      expect(page.includes('<img')).toBe(false);
      expect(page.match(/<script/g)).toHaveLength(page.match(/<\/script>/g)!.length);
      expect(page).toContain('&lt;img src=x onerror=alert(1)&gt;');
    }
  });

  test('nothing is fetched and no inline style or handler is written', () => {
    const { result, series } = sample();
    const page = debriefPage(result, series);
    const body = page.slice(page.indexOf('<body>')).replace(/<script[\s\S]*?<\/script>/g, '');
    expect(body).not.toMatch(/\s(?:style|on[a-z]+)="/);
    expect(body).not.toMatch(/\s(?:src|href)="(?!#)/);
    expect(page).toContain('default-src &#39;none&#39;');
  });

  test.each([
    ['all that may be null is null', bareSample],
    ['no wind speed', noWindSpeedSample],
  ])('%s: no NaN, null or undefined is shown', (_, make) => {
    const { result, series } = make();
    const page = debriefPage(result, series);
    const body = page.slice(page.indexOf('<body>')).replace(/<script[\s\S]*?<\/script>/g, '');
    expect(body).not.toMatch(/\bNaN\b|\bundefined\b|>null<|Infinity/);
  });
});
