/** Where the data of a bench come from, and the folder they are laid in. */
import { spawnSync } from 'node:child_process';
import { existsSync, mkdirSync, statSync } from 'node:fs';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { generateSentences, generateTable, generateTrack } from './generator.js';

export const ROOT = fileURLToPath(new URL('../../', import.meta.url));
const FOLDER = join(ROOT, 'node_modules/.cache/bench-data');
const GENERATOR = process.env['LEGWORK_BENCH_GENERATOR'] ?? join(ROOT, '../shared/bench/gen.mjs');

export interface Track {
  readonly gpx: string;
  readonly wind: string;
}

/** Told once, before anything is measured. */
export function whichGenerator(): string {
  return existsSync(GENERATOR) ? 'data: the generator given' : "data: the bench's own generator (no other is there)";
}

/** A folder for what a bench writes. */
export function scratch(name: string): string {
  mkdirSync(FOLDER, { recursive: true });
  return join(FOLDER, name);
}

/** A GPX track at 10 Hz of about so many megabytes with the wind aboard; made once and kept. */
export function track(megabytes: number): Track {
  const kind = existsSync(GENERATOR) ? 'given' : 'own';
  const gpx = scratch(`${kind}-${megabytes}.gpx`);
  const wind = scratch(`${kind}-${megabytes}-wind.csv`);
  if (existsSync(wind)) return { gpx, wind };
  if (kind === 'own') generateTrack(gpx, wind, megabytes);
  else generate('--kind', 'gpx', '--mb', String(megabytes), '--hz', '10', '--out', gpx, '--wind', wind);
  return { gpx, wind };
}

/** A table of about so many megabytes; made once and kept. */
export function table(megabytes: number): string {
  const kind = existsSync(GENERATOR) ? 'given' : 'own';
  const csv = scratch(`${kind}-${megabytes}.csv`);
  if (existsSync(csv) && statSync(csv).size > megabytes * 0.9e6) return csv;
  if (kind === 'own') generateTable(csv, megabytes);
  else generate('--kind', 'csv', '--mb', String(megabytes), '--hz', '10', '--out', csv);
  return csv;
}

/** A log of sentences of about so many megabytes; made once and kept. */
export function sentences(megabytes: number): string {
  const nmea = scratch(`own-${megabytes}.nmea`);
  if (!existsSync(nmea)) generateSentences(nmea, megabytes);
  return nmea;
}

function generate(...args: readonly string[]): void {
  const { status, stderr } = spawnSync(process.execPath, [GENERATOR, ...args], { encoding: 'utf8' });
  if (status !== 0) throw new Error(`the generator failed: ${stderr}`);
}
