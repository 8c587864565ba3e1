import { createHash } from 'node:crypto';
import { mkdirSync, writeFileSync } from 'node:fs';
import { openBrowser } from '../browser/browser.js';
import { sampleReports } from './sample-reports.js';

/**
 * Renews reports/sample from the demo race (`npm run reports`): the result file to be reviewed as a difference, the
 * digest of the page, and the README's pictures of it.
 */
const FOLDER = new URL('../../reports/sample/', import.meta.url).pathname;

const { json, page } = await sampleReports();
mkdirSync(FOLDER, { recursive: true });
writeFileSync(`${FOLDER}result.json`, json);
writeFileSync(`${FOLDER}page.sha256`, `${createHash('sha256').update(page).digest('hex')}\n`);
writeFileSync(`${FOLDER}page.html`, page);

const browser = await openBrowser();
if (!browser) throw new Error('rebuild: no browser for the pictures');
const context = await browser.newContext({
  viewport: { width: 1280, height: 900 },
  colorScheme: 'light',
  locale: 'en-GB',
});
const tab = await context.newPage();
await tab.goto(`file://${FOLDER}page.html`);
await tab.waitForTimeout(1500);
await tab.screenshot({ path: `${FOLDER}first-screen.png` });
await tab.locator('#chart').scrollIntoViewIfNeeded();
await tab.evaluate("document.querySelector('#chart').scrollIntoView()");
await tab.waitForTimeout(800);
await tab.screenshot({ path: `${FOLDER}chart.png` });
await browser.close();
