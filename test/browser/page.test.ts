import { mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { createRequire } from 'node:module';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import type { BrowserContextOptions, Page } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { eastOf, northOf, turn } from '../../src/math/angles.js';
import { toKnots } from '../../src/math/units.js';
import { comparePage, debriefPage } from '../../src/report/page.js';
import { encodePayload, stretches } from '../../src/report/payload.js';
import { seasonPage } from '../../src/report/season-page.js';
import { season } from '../../src/season.js';
import { sampleLadders } from '../report/sample-ladders.js';
import { bareSample, noWindSpeedSample, renamed, sample, type Sample } from '../report/sample.js';
import { inventedSeason } from '../season/invented-season.js';
import { openBrowser } from './browser.js';

/** The page in a real browser, opened from a file with the network off. One browser for all. */
const LONG = process.env['LEGWORK_LONG'] === '1';
const browser = await openBrowser();
const folder = mkdtempSync(join(tmpdir(), 'legwork-page-'));
const HOSTILE = '</script><img src=x onerror=alert(1)>';

const full = sample();
const FILES: Readonly<Record<string, string>> = {
  full: debriefPage(full.result, full.series),
  compare: comparePage(full.result, full.series, sampleLadders(full)),
  bare: pageOf(bareSample()),
  nowind: pageOf(noWindSpeedSample()),
  hostile: pageOf(renamed(full, HOSTILE)),
  'hostile-compare': hostileCompare(),
  'hostile-season': seasonPage(season(inventedSeason({ seed: 5, races: 4, every: 7, sailors: [{ name: HOSTILE }] }))),
  season: seasonPage(season(inventedSeason({ seed: 5, races: 8, every: 7, sailors: [{ name: 'Corrie' }] })), {
    pageOf: ({ race }) => (race === 'Race 2' ? 'full.html' : null),
  }),
};

function pageOf({ result, series }: Sample): string {
  return debriefPage(result, series);
}

function hostileCompare(): string {
  const bad = renamed(full, HOSTILE);
  return comparePage(bad.result, bad.series, sampleLadders(bad));
}

interface Opened {
  readonly page: Page;
  /** Console errors, page errors, dialogs and requests that leave the file. */
  readonly trouble: string[];
  readonly close: () => Promise<void>;
}

async function open(name: string, options: BrowserContextOptions = {}): Promise<Opened> {
  const context = await browser!.newContext({
    viewport: { width: 1280, height: 900 },
    locale: 'en-GB',
    offline: true,
    ...options,
  });
  const page = await context.newPage();
  const trouble: string[] = [];
  page.on('console', (m) => m.type() === 'error' && trouble.push(m.text()));
  page.on('pageerror', (e) => trouble.push(e.message));
  page.on('dialog', (d) => {
    trouble.push(`dialog: ${d.message()}`);
    void d.dismiss();
  });
  page.on('request', (r) => !r.url().startsWith('file:') && trouble.push(`asks for ${r.url()}`));
  await page.goto(`file://${folder}/${name}.html`);
  return { page, trouble, close: () => context.close() };
}

/** Puts the cursor to a time and waits until all of the page has followed, what is off the screen too. */
async function scrubTo(page: Page, time: number): Promise<void> {
  await page.evaluate((t) => {
    const cursor = document.getElementById('cursor') as HTMLInputElement;
    cursor.value = String(t);
    cursor.dispatchEvent(new Event('input', { bubbles: true }));
    return new Promise((done) => requestAnimationFrame(() => requestAnimationFrame(() => setTimeout(done, 200))));
  }, time);
}

/** A number as an English page writes it. */
function read(text: string): number {
  return Number(text.replace('−', '-').replace(/[^\d.-]/g, '') || NaN);
}

async function readout(page: Page, key: string, boat: number): Promise<number> {
  return read(await page.locator(`[data-read="${key}"][data-boat="${boat}"]`).innerText());
}

describe.skipIf(!browser)('the page in a browser', () => {
  beforeAll(() => {
    for (const [name, text] of Object.entries(FILES)) writeFileSync(join(folder, `${name}.html`), text);
  });
  afterAll(async () => {
    await browser?.close();
    rmSync(folder, { recursive: true, force: true });
  });

  test.each(Object.keys(FILES))('%s opens from a file with the network off, without an error', async (name) => {
    const { page, trouble, close } = await open(name);
    await page.waitForSelector('html.live');
    await page.evaluate(() => window.scrollTo(0, document.body.scrollHeight));
    expect(trouble).toEqual([]);
    await close();
  });

  test('a hostile name is shown as text and makes no element', async () => {
    const { page, trouble, close } = await open('hostile');
    await page.waitForSelector('html.live');
    expect(await page.locator('img').count()).toBe(0);
    expect(await page.locator('h1').innerText()).toBe(HOSTILE);
    expect(await page.locator('#instruments bdi').first().innerText()).toBe(HOSTILE);
    expect(trouble).toEqual([]);
    await close();
  });

  test.each(['hostile-compare', 'hostile-season'])(
    '%s: nothing of a name is run or becomes an element',
    async (name) => {
      const { page, trouble, close } = await open(name);
      await page.waitForSelector('html.live');
      expect(await page.locator('img').count()).toBe(0);
      expect(await page.locator('bdi', { hasText: HOSTILE }).count()).toBeGreaterThan(1);
      expect(trouble).toEqual([]);
      await close();
    },
  );

  test('the numbers at the cursor are those of the series, at five times', async () => {
    const { page, close } = await open('full');
    for (const row of [40, 333, 700, 1234, 1900]) {
      await scrubTo(page, full.series.boats[0].t0 + row);
      for (const [i, boat] of full.series.boats.entries()) {
        expect(await readout(page, 'speed', i)).toBeCloseTo(toKnots(boat.speed[row]), 1);
        expect(await readout(page, 'vmg', i)).toBeCloseTo(toKnots(boat.vmg[row]), 1);
        expect(Math.abs((await readout(page, 'angle', i)) - Math.abs(boat.gamma[row]))).toBeLessThan(0.11);
        expect(Math.abs(turn(await readout(page, 'twd', i), boat.twd[row]))).toBeLessThan(0.56);
        const live = page.locator(`output[data-panel="speed"][data-boat="${i}"]`);
        expect(read(await live.innerText())).toBeCloseTo(toKnots(boat.speed[row]), 1);
      }
    }
    await close();
  });

  test('clock, slider, curves and boats all move with the cursor', async () => {
    const { page, close } = await open('full');
    const state = (): Promise<string[]> =>
      page.evaluate(() => [
        document.getElementById('clock')!.textContent,
        (document.getElementById('cursor') as HTMLInputElement).value,
        document.querySelector('.map-live .boat')!.getAttribute('transform')!,
        (document.querySelector('.u-cursor-x') as HTMLElement).style.transform,
        (document.querySelector('.strip-cursor') as HTMLElement).style.transform,
        document.querySelector('.triangle [data-side=boat]')!.getAttribute('x2')!,
      ]);
    const t0 = full.series.boats[0].t0;
    await scrubTo(page, t0 + 100);
    const before = await state();
    await scrubTo(page, t0 + 260);
    const after = await state();
    for (const [i, value] of before.entries()) expect(after[i]).not.toBe(value);
    expect(after[0]).toBe('14:09:20'); // 12:05:00 UTC and 260 s, in a zone two hours ahead in April
    await close();
  });

  test('the boat lies on its own track: where the paths of the chart put that second', async () => {
    const { page, close } = await open('full');
    for (const row of [90, 512, 1500]) {
      await scrubTo(page, full.series.boats[0].t0 + row);
      for (const [i, boat] of full.series.boats.entries()) {
        const [matrix, shift] = await page.evaluate(
          (k) => [
            document.querySelector('#map .world')!.getAttribute('transform')!,
            document.querySelector(`.map-live .boat[data-boat="${k}"]`)!.getAttribute('transform')!,
          ],
          i,
        );
        const [a, b, c, d, e, f] = matrix.match(/-?[\d.]+/g)!.map(Number) as [
          number,
          number,
          number,
          number,
          number,
          number,
        ];
        const [x, y] = [boat.x[row], -boat.y[row]];
        const [sx, sy] = shift.match(/-?[\d.]+/g)!.map(Number) as [number, number];
        expect(Math.hypot(a * x + c * y + e - sx, b * x + d * y + f - sy)).toBeLessThan(0.3);
      }
    }
    await close();
  });

  test('the triangle of speeds closes: apparent wind is the wind less the boat, as in the series', async () => {
    const { page, close } = await open('full');
    for (const row of [60, 450, 800, 1234, 1700]) {
      await scrubTo(page, full.series.boats[0].t0 + row);
      for (const [i, boat] of full.series.boats.entries()) {
        const sides = await page.evaluate((k) => {
          const svg = document.querySelector(`.triangle[data-boat="${k}"]`)!;
          const scale = Number(svg.getAttribute('data-scale'));
          const of = (side: string): number[] => {
            const line = svg.querySelector(`[data-side=${side}]`)!;
            const at = (name: string): number => Number(line.getAttribute(name)) / scale;
            return [at('x2') - at('x1'), at('y2') - at('y1')];
          };
          return { boat: of('boat'), wind: of('true'), apparent: of('apparent') };
        }, i);
        // The air past the boat from the velocities of the series alone: wind vector less water velocity.
        const from = boat.twd[row];
        const airE = -boat.tws[row] * eastOf(from) - boat.ux[row];
        const airN = -boat.tws[row] * northOf(from) - boat.uy[row];
        expect(Math.hypot(...(sides.apparent as [number, number]))).toBeCloseTo(toKnots(Math.hypot(airE, airN)), 1);
        expect(Math.hypot(...(sides.boat as [number, number]))).toBeCloseTo(toKnots(boat.speed[row]), 1);
        expect(Math.hypot(...(sides.wind as [number, number]))).toBeCloseTo(toKnots(boat.tws[row]), 1);
        expect(sides.boat[0] + sides.apparent[0]).toBeCloseTo(sides.wind[0], 2);
        expect(sides.boat[1] + sides.apparent[1]).toBeCloseTo(sides.wind[1], 2);
        // On starboard tack the wind comes over the right side, so with the wind from the top she goes to the left.
        expect(Math.sign(sides.boat[0])).toBe(-Math.sign(boat.gamma[row]));
      }
    }
    await close();
  });

  test('the ladder follows the cursor: its mark stands at the gain of that second, and a touch on it moves the cursor', async () => {
    const { page, trouble, close } = await open('compare');
    const { from, lead, wind } = sampleLadders(full)[0].legs[0];
    const [a, b] = full.series.boats;
    for (const after of [60, 333, 500]) {
      await scrubTo(page, from + after);
      const [svg, dot] = await page.evaluate(() => {
        const picture = document.querySelector('svg.ladder')!;
        return [picture.getAttribute('data-ladder')!, picture.querySelector('.gain-mark')!.getAttribute('cx')!];
      });
      const { gain } = JSON.parse(svg) as { gain: [number, number] };
      const [i, j] = [from + after - a.t0, from + after - b.t0];
      const apart = (a.x[i] - b.x[j]) * wind.east + (a.y[i] - b.y[j]) * wind.north;
      expect((Number(dot) - gain[0]) / gain[1]).toBeCloseTo(apart, 0);
      expect(Math.abs((Number(dot) - gain[0]) / gain[1] - lead - (apart - lead))).toBeLessThan(0.3);
    }
    expect(await page.locator('svg.ladder').nth(1).locator('.rung-mark').count()).toBe(0); // not on that beat
    const pin = page.locator('svg.ladder').first().locator('.ladder-tack').nth(1);
    const at = Number(await pin.getAttribute('data-at'));
    await pin.click();
    await expect.poll(async () => Math.abs(Number(await page.locator('#cursor').inputValue()) - at)).toBeLessThan(8);
    expect(trouble).toEqual([]);
    await close();
  });

  test('steps go from tack to tack', async () => {
    const { page, close } = await open('full');
    const tacks = full.series.boats.flatMap((b) => b.manoeuvres.filter((m) => m.kind === 'tack' || m.kind === 'gybe').map((m) => b.t0 + m.at)).sort((a, b) => a - b); // prettier-ignore
    await page.locator('#chart').scrollIntoViewIfNeeded();
    for (const at of tacks.slice(0, 3)) {
      await page.locator('#on').click();
      await expect.poll(() => page.locator('#cursor').inputValue()).toBe(String(at));
    }
    await close();
  });

  test('steps go to settled stretches, shifts, legs and by ten seconds, on and back', async () => {
    const { page, close } = await open('full');
    await page.locator('#chart').scrollIntoViewIfNeeded();
    const { boats } = encodePayload(full.series);
    const at: Readonly<Record<string, number[]>> = {
      settled: boats.flatMap((b) => b.settled.map(([from]) => from)),
      shift: boats[0].shifts.map((s) => s.at),
      leg: boats.flatMap((b) => b.legs.map((l) => l.from)),
    };
    const middle = boats[0].t0 + 900;
    const cursor = async (): Promise<number> => Number(await page.locator('#cursor').inputValue());
    for (const [stride, moments] of Object.entries(at)) {
      await page.locator('#stride').selectOption(stride);
      await scrubTo(page, middle);
      await page.locator('#on').click();
      await expect.poll(cursor).toBe(Math.min(...moments.filter((m) => m > middle)));
      await scrubTo(page, middle);
      await page.locator('#back').click();
      await expect.poll(cursor).toBe(Math.max(...moments.filter((m) => m < middle)));
    }
    await page.locator('#stride').selectOption('ten');
    await scrubTo(page, middle);
    await page.locator('#on').click();
    await expect.poll(cursor).toBe(middle + 10);
    await close();
  });

  test('a settled stretch is picked on the strip or at the cursor, and tells its own means', async () => {
    const { page, trouble, close } = await open('full');
    await page.waitForSelector('html.live');
    const boat = full.series.boats[0];
    const [from, to] = stretches(boat.settled)[2];
    const told = async (words: string): Promise<number> =>
      read(await page.locator('#picked tr', { hasText: words }).locator('td').first().innerText());
    const mean = (column: Float64Array): number =>
      column.slice(from, to).reduce((sum, v) => sum + Math.abs(v), 0) / (to - from);
    await page.locator('.spell[data-boat="0"][data-spell="2"]').click();
    await expect.poll(() => page.locator('#picked caption').innerText()).toContain('settled stretch');
    expect(await told('VMG')).toBeCloseTo(toKnots(mean(boat.vmg)), 1);
    expect(Math.abs((await told('Course angle')) - mean(boat.gamma))).toBeLessThan(0.11);
    expect(await told('Seconds')).toBe(to - from);
    expect(await page.locator('.spell.picked').count()).toBe(1);
    await page.locator('.map-tools button', { hasText: 'This stretch' }).click();
    await expect.poll(() => page.locator('#picked table').count()).toBe(0); // the same again lets it go
    expect(trouble).toEqual([]);
    await close();
  });

  test('the map zooms and moves, and a drag across the curves looks closer', async () => {
    const { page, close } = await open('full');
    await page.waitForSelector('html.live');
    const world = async (): Promise<number[]> =>
      (await page.locator('#map .world').getAttribute('transform'))!.match(/-?[\d.]+/g)!.map(Number);
    const scaleOf = (m: readonly number[]): number => Math.hypot(m[0], m[1]);
    const before = await world();
    await page.locator('.map-frame').focus();
    await page.keyboard.press('+');
    const zoomed = await world();
    expect(scaleOf(zoomed) / scaleOf(before)).toBeCloseTo(1.4, 1);
    await page.keyboard.press('ArrowLeft');
    const moved = await world();
    expect(scaleOf(moved)).toBeCloseTo(scaleOf(zoomed), 6);
    expect(Math.hypot(moved[4] - zoomed[4], moved[5] - zoomed[5])).toBeCloseTo(60, 0);
    const curve = page.locator('.live-panel .u-over').first();
    await curve.scrollIntoViewIfNeeded();
    const box = (await curve.boundingBox())!;
    const first = page.locator('.strip').first();
    const width = async (): Promise<number> => Number((await first.getAttribute('viewBox'))!.split(' ')[2]);
    const wide = await width();
    await page.mouse.move(box.x + 0.25 * box.width, box.y + 40);
    await page.mouse.down();
    await page.mouse.move(box.x + 0.5 * box.width, box.y + 40, { steps: 4 });
    await page.mouse.up();
    await expect.poll(async () => Math.round((100 * (await width())) / wide)).toBe(25);
    await close();
  });

  test('at 200 % zoom nothing is cut off and the bars leave room to read', async () => {
    for (const name of ['full', 'compare', 'season']) {
      const { page, close } = await open(name, { viewport: { width: 640, height: 450 }, deviceScaleFactor: 2 });
      await page.waitForSelector('html.live');
      expect(await page.evaluate(() => document.documentElement.scrollWidth)).toBe(640);
      if (name !== 'season') {
        await page.evaluate(() => document.getElementById('chart')!.scrollIntoView());
        await page.waitForFunction(() => !document.getElementById('scrub')!.hidden);
        const inside = await page.evaluate(() => {
          const controls = [...document.querySelectorAll('#scrub button, #scrub select, #scrub input, #clock')];
          return controls.every((c) => {
            const box = c.getBoundingClientRect();
            return box.width > 0 && box.left >= 0 && box.right <= window.innerWidth && box.bottom <= window.innerHeight;
          });
        });
        expect(inside).toBe(true);
        const covered = await page.evaluate(
          () => document.getElementById('scrub')!.offsetHeight + document.querySelector('nav')!.offsetHeight,
        );
        expect(covered).toBeLessThan(0.4 * 450);
      }
      await close();
    }
  });

  test('reduced motion is heeded: nothing moves by itself, and jumps are jumps', async () => {
    for (const [reducedMotion, behaviour] of [
      ['reduce', 'auto'],
      ['no-preference', 'smooth'],
    ] as const) {
      const { page, close } = await open('full', { reducedMotion });
      await page.waitForSelector('html.live');
      expect(await page.evaluate(() => getComputedStyle(document.documentElement).scrollBehavior)).toBe(behaviour);
      expect(await page.evaluate(() => document.getAnimations().length)).toBe(0);
      await close();
    }
  });

  test('the keyboard reaches words, figures, legs, chart and cursor, and always shows where it is', async () => {
    const { page, close } = await open('full');
    const met = new Set<string>();
    let unseen = 0;
    for (let i = 0; i < 400; i++) {
      await page.keyboard.press('Tab');
      const at = await page.evaluate(() => {
        const e = document.activeElement as HTMLElement;
        const style = getComputedStyle(e);
        return {
          name: e.id || e.className.toString() || e.tagName,
          outline: style.outlineStyle !== 'none' && parseFloat(style.outlineWidth) > 0,
        };
      });
      if (at.name === 'BODY') break;
      if (!at.outline) unseen++;
      for (const part of at.name.split(' ')) met.add(part);
      if (met.has('run')) break;
    }
    for (const part of ['skip', 'term', 'q', 'pick', 'map-frame', 'tool', 'cursor', 'back', 'stride', 'on', 'run'])
      expect(met).toContain(part);
    expect(unseen).toBe(0);
    await page.locator('#cursor').focus();
    const before = Number(await page.locator('#cursor').inputValue());
    await page.keyboard.press('ArrowRight');
    await page.keyboard.press('ArrowRight');
    expect(Number(await page.locator('#cursor').inputValue())).toBe(before + 2);
    await close();
  });

  test('a figure tells its error on focus, arrows go to the next one, Escape closes', async () => {
    const { page, close } = await open('full');
    const first = page.locator('table.legs .q').first();
    await first.focus();
    expect(await page.locator('#tip').innerText()).toMatch(/one standard error.*worked out from measurements/);
    const before = await page.locator('#tip').innerText();
    await page.keyboard.press('ArrowDown');
    expect(await page.locator('#tip').innerText()).not.toBe(before);
    await page.keyboard.press('Escape');
    expect(await page.locator('#tip').isVisible()).toBe(false);
    await close();
  });

  test.each(['light', 'dark'] as const)('axe finds nothing serious (%s)', async (colorScheme) => {
    const axe = readFileSync(createRequire(import.meta.url).resolve('axe-core/axe.min.js'), 'utf8');
    // Dark differs by its colours alone, which the fullest page has all of.
    const names = colorScheme === 'light' ? ['full', 'compare', 'season'] : ['full'];
    if (LONG) names.push('bare');
    for (const name of names) {
      const { page, close } = await open(name, { colorScheme });
      await page.waitForSelector('html.live');
      await page.locator('#trust').scrollIntoViewIfNeeded();
      // The page's own policy forbids a foreign script in a script element; the test's way in is not the page's.
      await page.evaluate(axe);
      const found = await page.evaluate(async () => {
        const { axe } = window as unknown as {
          axe: {
            run: (options: {
              resultTypes: string[];
            }) => Promise<{ violations: { id: string; impact: string; nodes: { html: string }[] }[] }>;
          };
        };
        // What passes is not gathered.
        return (await axe.run({ resultTypes: ['violations'] })).violations
          .filter((v) => v.impact === 'serious' || v.impact === 'critical')
          .map((v) => `${v.id}: ${v.nodes[0].html.slice(0, 160)}`);
      });
      expect(found).toEqual([]);
      await close();
    }
  });

  const WIDTHS = LONG ? [320, 360, 414, 640, 768, 1024, 1280, 1920] : [360, 768, 1280];
  test.each(['full', 'compare', 'bare', 'season'])(
    '%s: nothing is wider than its window, opened narrow or made so',
    async (name) => {
      const { page, close } = await open(name, { viewport: { width: WIDTHS[0], height: 800 } });
      await page.waitForSelector('html.live');
      for (const width of [...WIDTHS, WIDTHS[0]]) {
        await page.setViewportSize({ width, height: 800 });
        await expect.poll(() => page.evaluate(() => document.documentElement.scrollWidth)).toBe(width);
      }
      await close();
    },
  );

  test.each(['full', 'compare'])('%s: two boats and two laps print on two leaves before the appendix', async (name) => {
    const { page, close } = await open(name);
    const leaves = async (): Promise<number> => {
      const pdf = (await page.pdf({ preferCSSPageSize: true, printBackground: true })).toString('latin1');
      return pdf.match(/\/Type\s*\/Page\b(?!s)/g)!.length;
    };
    await page.waitForSelector('html.live');
    await page.evaluate(() => document.querySelector('.after')!.remove());
    // The ladder of a comparison has the third leaf to itself.
    expect(await leaves()).toBe(name === 'compare' ? 3 : 2);
    await page.evaluate(() => document.querySelector('#ladder')?.remove());
    expect(await leaves()).toBe(2);
    await close();
  });

  test('without a script there are tables, pictures and words that open', async () => {
    const { page, close } = await open('full', { javaScriptEnabled: false });
    expect(await page.locator('table.legs').first().isVisible()).toBe(true);
    expect(await page.locator('#map').isVisible()).toBe(true);
    expect(await page.locator('.still svg').count()).toBe(5);
    expect(await page.locator('.still svg').first().isVisible()).toBe(true);
    expect(await page.locator('#scrub').isVisible()).toBe(false);
    await page.locator('#verdict .term').first().click();
    expect(await page.locator('#word-settled').isVisible()).toBe(true);
    expect(await page.locator('.day time').nth(1).innerText()).toBe('12:05'); // UTC, as the page says
    await close();
  });

  test('without a script a comparison and a season stand as well', async () => {
    for (const [name, picture] of [
      ['compare', 'svg.ladder'],
      ['season', 'svg.trend'],
    ] as const) {
      const { page, trouble, close } = await open(name, { javaScriptEnabled: false });
      expect(await page.locator(picture).first().isVisible()).toBe(true);
      expect(await page.locator('main table').first().isVisible()).toBe(true);
      expect(trouble).toEqual([]);
      await close();
    }
  });

  test('numbers follow the reader, times follow the race', async () => {
    const { page, close } = await open('full', { locale: 'de-DE', timezoneId: 'Pacific/Auckland' });
    await page.waitForSelector('html.live');
    const vmg = full.result.boats[0].legs[0].steady!.vmg_kn!.value;
    expect(await page.locator('table.legs .q .n').first().innerText()).toBe(vmg.toFixed(2).replace('.', ','));
    expect(await page.locator('.day time').nth(1).innerText()).toBe('14:05'); // Zurich keeps summer time on 18 April
    await close();
  });

  test('a finger on a track moves the cursor there', async () => {
    const { page, close } = await open('full', {
      viewport: { width: 360, height: 740 },
      hasTouch: true,
      isMobile: true,
    });
    await page.waitForSelector('html.live');
    const boat = full.series.boats[0];
    await scrubTo(page, boat.t0 + 200);
    await page.locator('#map').scrollIntoViewIfNeeded();
    const target = await page.evaluate(() => {
      const pin = document.querySelector('#map .tack-pin[data-boat="0"][data-turn="1"]')!.getBoundingClientRect();
      return { x: pin.x + pin.width / 2, y: pin.y + pin.height / 2 };
    });
    await page.touchscreen.tap(target.x, target.y);
    await expect.poll(async () => Math.abs(Number(await page.locator('#cursor').inputValue()) - boat.t0 - boat.manoeuvres[1].at)).toBeLessThan(8); // prettier-ignore
    await close();
  });

  test('season: every race is reached by the keyboard, tells its figures, and opens its page where one lies beside', async () => {
    const { page, trouble, close } = await open('season');
    await page.waitForSelector('html.live');
    const chart = page.locator('svg.trend').first();
    expect(await chart.locator('.race[tabindex="0"]').count()).toBe(1);
    await chart.locator('.race').first().focus();
    expect(await page.locator('#tip').innerText()).toMatch(/Race 1: \d/);
    await page.keyboard.press('ArrowRight');
    expect(await page.locator('#tip').innerText()).toMatch(/Race 2: \d/);
    await chart.locator('.race').nth(4).hover();
    expect(await page.locator('#tip').innerText()).toMatch(/Race 5: \d/);
    await page.keyboard.press('Enter');
    await page.waitForURL(/full\.html$/); // the focus is still on the second race
    await page.waitForSelector('html.live');
    expect(trouble).toEqual([]);
    await close();
  });

  test('ladder: its tacks are buttons the keyboard reaches', async () => {
    const { page, trouble, close } = await open('compare');
    await page.waitForSelector('html.live');
    const pins = page.locator('svg.ladder').first().locator('.ladder-tack');
    await pins.first().focus();
    await page.keyboard.press('ArrowRight');
    await page.keyboard.press('Enter');
    await expect.poll(() => page.locator('#cursor').inputValue()).toBe(await pins.nth(1).getAttribute('data-at'));
    expect(await pins.nth(1).getAttribute('aria-label')).toMatch(/^Tack 2: (Corrie|Linnet) onto (port|starboard)$/);
    expect(trouble).toEqual([]);
    await close();
  });

  test('a tack picked on the overlay stands out in all three panels, and its figures are told beside it', async () => {
    const { page, trouble, close } = await open('full');
    await page.waitForSelector('html.live');
    const boat = full.series.boats[1];
    const k = boat.manoeuvres.findIndex((m) => m.kind === 'tack');
    const home = page.locator('.picked-turn[data-boat="1"]');
    await page.locator(`svg.tack-overlay[data-boat="1"] [data-turn="${k}"]`).first().dispatchEvent('click');
    await expect.poll(() => page.locator('svg.tack-overlay .tack-curve.picked').count()).toBe(3);
    const row = async (words: string): Promise<number> =>
      read(await home.locator('tr', { hasText: words }).locator('td').innerText());
    const { entry, exit, loss } = boat.manoeuvres[k];
    const knots = [...boat.speed.slice(entry, exit)].map(toKnots);
    expect(await row('Lowest speed')).toBeCloseTo(Math.min(...knots), 1);
    expect(await row('Cost')).toBeCloseTo(loss, 1);
    expect(await page.locator('.picked-turn[data-boat="0"] table').count()).toBe(0);
    // The table beside it does the same for the keyboard.
    const pick = page.locator(`.turns .pick[data-boat="1"][data-turn="${k}"]`);
    expect(await pick.getAttribute('aria-pressed')).toBe('true');
    await pick.focus();
    await page.keyboard.press('Enter');
    await expect.poll(() => home.locator('table').count()).toBe(0);
    expect(trouble).toEqual([]);
    await close();
  });

  test('a picked leg stands alone, and is let go again', async () => {
    const { page, close } = await open('full');
    const leg = page.locator('table.legs .pick').nth(1);
    await leg.click();
    await expect.poll(() => leg.getAttribute('aria-pressed')).toBe('true');
    expect(await page.locator('#picked caption').innerText()).toContain('lap 2');
    await expect.poll(() => page.locator('.leg-path.dim').count()).toBe(6); // of two boats' four legs each, one number stays
    await leg.click();
    await expect.poll(() => page.locator('.leg-path.dim').count()).toBe(0);
    await close();
  });
});
