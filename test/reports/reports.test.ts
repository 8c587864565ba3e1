import { createHash } from 'node:crypto';
import { readFileSync } from 'node:fs';
import { expect, test } from 'vitest';
import { sampleReports } from './sample-reports.js';

const FOLDER = new URL('../../reports/sample/', import.meta.url).pathname;

test('the demo race gives the reviewed result and page; `npm run reports` renews them', async () => {
  const { json, page } = await sampleReports();
  expect(json).toBe(readFileSync(`${FOLDER}result.json`, 'utf8'));
  const digest = createHash('sha256').update(page).digest('hex');
  expect(digest).toBe(readFileSync(`${FOLDER}page.sha256`, 'utf8').trim());
});

test('the same input gives the same bytes', async () => {
  const [first, second] = [await sampleReports(), await sampleReports()];
  expect(second.json).toBe(first.json);
  expect(second.page).toBe(first.page);
});
