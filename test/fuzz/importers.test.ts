/**
 * Every importer under damaged logs: 300 in a usual run, 100,000 with LEGWORK_LONG=1. One that fails is run again with
 * FUZZ_FROM=<its number> FUZZ_CASES=1.
 */
import { readdirSync, readFileSync, statSync } from 'node:fs';
import { join } from 'node:path';
import { expect, test } from 'vitest';
import { UserError } from '../../src/recording/issues.js';
import { importBytes, rejectedOf } from '../importers/check-import.js';
import type { ImportedLog } from '../../src/importers/types.js';
import { damaged, drawFrom, pick } from './damage.js';

const FIXTURES = join(import.meta.dirname, '../../fixtures/logs');
const RECORDINGS = process.env['LEGWORK_RECORDINGS'] ?? join(import.meta.dirname, '../../../shared/data');
const FROM = Number(process.env['FUZZ_FROM'] ?? 0);
const CASES = Number(process.env['FUZZ_CASES'] ?? (process.env['LEGWORK_LONG'] ? 100_000 : 300));

/** Beginnings are enough: what matters is how a log is written, and short ones are many. */
const MOST = 24_000;
/** No hang: processor time for a log of so many bytes, with room for a machine that does other work too. [s] */
const allowed = (bytes: number): number => 1.5 + (2 * bytes) / 1e6;
/** Held after all cases beyond what was held before: a leak of four kilobytes a case would show in the long run. [MB] */
const MOST_HELD = 400;

function filesBelow(folder: string): string[] {
  try {
    return readdirSync(folder, { recursive: true, encoding: 'utf8' })
      .map((name) => join(folder, name))
      .filter((path) => /\.(gpx|nmea|csv|tsv|txt|log)$/i.test(path) && statSync(path).isFile());
  } catch {
    return [];
  }
}

/** Fixtures always; real and odd recordings too where they are and the run is long (a usual run is the same anywhere). */
function logs(): Uint8Array[] {
  const paths = [...filesBelow(FIXTURES), ...(process.env['LEGWORK_LONG'] ? filesBelow(RECORDINGS) : [])];
  return paths.sort().map((path) => new Uint8Array(readFileSync(path).subarray(0, MOST)));
}

const OPTIONS = [
  {},
  { date: '2026-04-18' },
  { zone: 'Europe/Zurich' },
  { date: '2026-10-25', zone: 'America/St_Johns' },
] as const;

/** rows = kept + ignored + rejected; times finite and rising; positions on earth: what every reader is promised. */
function faultOf(log: ImportedLog): string | null {
  const { time, channels } = log.recording;
  if (log.kept + log.ignored + rejectedOf(log) !== log.rows) return 'the books do not balance';
  if (log.kept < time.length) return 'more rows than records kept';
  for (let i = 0; i < time.length; i++) {
    if (!Number.isFinite(time[i]) || (i > 0 && !(time[i] > time[i - 1]))) return `time ${i} is not in order`;
  }
  for (const column of Object.values(channels)) {
    if (column.length !== time.length) return 'columns of different lengths';
    if (column.some((value) => Math.abs(value) === Infinity)) return 'an infinite value';
  }
  const fixes = channels.lat?.reduce((n, value) => n + (Number.isNaN(value) ? 0 : 1), 0) ?? 0;
  return fixes === log.fixes ? null : 'fixes are miscounted';
}

test(
  `${CASES} damaged logs are read with balanced books or refused in words`,
  async () => {
    const all = logs();
    const held = process.memoryUsage().rss;
    const seen = { read: 0, refused: 0, slowest: 0 };
    const faults: string[] = [];
    for (let seed = FROM; seed < FROM + CASES; seed++) {
      const draw = drawFrom(seed + 1);
      const bytes = damaged(all, draw);
      const options = pick(draw, OPTIONS);
      const before = process.cpuUsage();
      try {
        const fault = faultOf(await importBytes(bytes, options));
        if (fault !== null) faults.push(`case ${seed}: ${fault}`);
        seen.read++;
      } catch (error) {
        if (error instanceof UserError && error.exitCode === 2) seen.refused++;
        else faults.push(`case ${seed}: ${error instanceof Error ? (error.stack ?? error.message) : String(error)}`);
      }
      const { user, system } = process.cpuUsage(before);
      const seconds = (user + system) / 1e6;
      seen.slowest = Math.max(seen.slowest, seconds);
      if (seconds > allowed(bytes.length)) faults.push(`case ${seed}: ${seconds} s for ${bytes.length} bytes`);
      if (faults.length >= 20) break;
    }
    expect(faults).toEqual([]);
    if (CASES >= 100) expect(seen.read).toBeGreaterThan(CASES / 3);
    expect((process.memoryUsage().rss - held) / 1e6).toBeLessThan(MOST_HELD);
    if (CASES > 300) process.stdout.write(`fuzz: ${JSON.stringify(seen)}\n`);
  },
  3 * 3600_000,
);
