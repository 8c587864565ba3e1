/**
 * How large the page is and how fast it lives, in a real browser, beside a bare page of the same data drawn by the
 * charting library alone. Prints a table:
 *
 *     npx tsx test/bench/report.ts
 */
import { writeFileSync } from 'node:fs';
import { loadavg } from 'node:os';
import { fileURLToPath } from 'node:url';
import type { Browser, Page } from 'playwright-core';
import { comparePage, debriefPage } from '../../src/report/page.js';
import { openBrowser } from '../browser/browser.js';
import { barePage } from './bare-page.js';
import { scratch } from './data.js';
import { eightBoats, sixBoats, twoBoats } from './report-data.js';

/** What was seen of a page: the median of several openings. */
export interface PageFigures {
  readonly page: string;
  readonly megabytes: number;
  /** First picture on the screen, and all curves drawn and answering, since the page was asked for. [ms] */
  readonly firstChart: number;
  readonly alive: number;
  /** Frames a second while the cursor moves at every frame: mean, and of the slowest twentieth. */
  readonly frames: number;
  readonly slowFrames: number;
  /** From the frame's start until it is laid out and painted, a move. [ms] */
  readonly move: number;
}

const ROUNDS = 5;
const MOVES = 150;

/** Run in the page before anything else: notes the frame after the first picture, and after the first and last curve. */
const WATCH = `
  const seen = {};
  window.seenAt = seen;
  const look = () => {
    const now = performance.now();
    if (document.querySelector('svg[role=img], .uplot canvas')) seen.first ??= now;
    const curves = document.querySelectorAll('.uplot canvas').length;
    if (curves > 0 && document.readyState !== 'loading') seen.alive ??= now;
    if (seen.alive === undefined) requestAnimationFrame(look);
  };
  requestAnimationFrame(look);
`;

/** Moves the cursor from end to end of the racing, once a frame, and gives the time of each frame and the work in it. */
const SCRUB = `(async (moves) => {
  const cursor = document.getElementById('cursor');
  const put = window.scrubTo ?? ((time) => {
    cursor.value = String(time);
    cursor.dispatchEvent(new Event('input', { bubbles: true }));
  });
  const times = () => JSON.parse(document.getElementById('data').textContent).times;
  const [from, to] = cursor ? [Number(cursor.min), Number(cursor.max)] : [times()[0], times().at(-1)];
  const stamps = [];
  const work = [];
  for (let k = 0; k <= moves; k++) {
    put(from + Math.round(((to - from) * k) / moves));
    await new Promise(requestAnimationFrame);
    stamps.push(performance.now());
    // A message is answered once the frame has been laid out and painted.
    await new Promise((done) => {
      const { port1, port2 } = new MessageChannel();
      port1.onmessage = done;
      port2.postMessage(0);
    });
    work.push(performance.now() - stamps.at(-1));
  }
  return { stamps, work };
})`;

async function figuresOf(browser: Browser, name: string, html: string): Promise<PageFigures> {
  const file = scratch(`${name.replace(/\W+/g, '-')}.html`);
  writeFileSync(file, html);
  const rounds: Omit<PageFigures, 'page' | 'megabytes'>[] = [];
  for (let round = 0; round < ROUNDS; round++) {
    const context = await browser.newContext({
      viewport: { width: 1280, height: 900 },
      locale: 'en-GB',
      offline: true,
    });
    const page = await context.newPage();
    rounds.push(await oneOpening(page, file));
    await context.close();
  }
  const middle = (pick: (one: (typeof rounds)[number]) => number): number =>
    rounds.map(pick).sort((a, b) => a - b)[Math.floor(ROUNDS / 2)];
  return {
    page: name,
    megabytes: Buffer.byteLength(html) / 1e6,
    firstChart: middle((one) => one.firstChart),
    alive: middle((one) => one.alive),
    frames: middle((one) => one.frames),
    slowFrames: middle((one) => one.slowFrames),
    move: middle((one) => one.move),
  };
}

async function oneOpening(page: Page, file: string): Promise<Omit<PageFigures, 'page' | 'megabytes'>> {
  await page.addInitScript(WATCH);
  await page.goto(`file://${file}`);
  await page.waitForFunction('window.seenAt.alive !== undefined');
  const seen = await page.evaluate<{ first: number; alive: number }>('window.seenAt');
  await page.evaluate("document.getElementById('chart')?.scrollIntoView()");
  await page.waitForTimeout(300);
  const { stamps, work } = await page.evaluate<{ stamps: number[]; work: number[] }>(`${SCRUB}(${MOVES})`);
  const gaps = stamps.slice(1).map((stamp, k) => stamp - stamps[k]);
  const slowest = [...gaps].sort((a, b) => b - a)[Math.floor(gaps.length / 20)];
  return {
    firstChart: seen.first,
    alive: seen.alive,
    frames: (1000 * gaps.length) / (stamps[stamps.length - 1] - stamps[0]),
    slowFrames: 1000 / slowest,
    move: work.reduce((sum, one) => sum + one, 0) / work.length,
  };
}

/** Figures of the pages a target is set for, each beside the bare page of its data. Empty without a browser. */
export async function reportRows(): Promise<PageFigures[]> {
  const browser = await openBrowser();
  if (!browser) return [];
  try {
    const two = await twoBoats();
    const six = await sixBoats();
    const eight = await eightBoats();
    const pages: [string, string][] = [
      ['two-boat hour at 1 Hz', debriefPage(two.result, two.series)],
      ['  bare page of it', await barePage(two.series)],
      ['six-boat hour at 5 Hz', debriefPage(six.result, six.series)],
      ['  bare page of it', await barePage(six.series)],
      ['eight boats compared', comparePage(eight.result, eight.series, eight.ladders)],
      ['  bare page of it', await barePage(eight.series)],
    ];
    const rows: PageFigures[] = [];
    for (const [name, html] of pages) rows.push(await figuresOf(browser, name, html));
    return rows;
  } finally {
    await browser.close();
  }
}

/** The figures as lines of text. */
export function reportText(rows: readonly PageFigures[]): string {
  const head = ['page', 'MB', 'first chart ms', 'alive ms', 'frames/s', 'slow 5 %', 'ms a move'];
  const cells = rows.map((row) => [
    row.page,
    row.megabytes.toFixed(2),
    row.firstChart.toFixed(0),
    row.alive.toFixed(0),
    row.frames.toFixed(0),
    row.slowFrames.toFixed(0),
    row.move.toFixed(1),
  ]);
  const widths = head.map((words, k) => Math.max(words.length, ...cells.map((row) => row[k].length)));
  return [head, ...cells]
    .map((row) => row.map((cell, k) => (k === 0 ? cell.padEnd(widths[k]) : cell.padStart(widths[k]))).join('  '))
    .join('\n');
}

if (process.argv[1] === fileURLToPath(import.meta.url)) {
  const rows = await reportRows();
  process.stdout.write(`${reportText(rows)}\nload ${loadavg()[0].toFixed(1)}, Node ${process.version}\n`);
}
