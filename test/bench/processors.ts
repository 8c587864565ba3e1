/**
 * What a second processor is worth: the same work by one thread and by two, and beside it what two programs with one
 * thread each come to that are started together, which is the most that this machine has for this work.
 */
import { createHash } from 'node:crypto';
import { existsSync, mkdirSync, readdirSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { ROOT, scratch } from './data.js';
import { generateTrack } from './generator.js';
import { inTurn, runCommand, type Measured } from './measure.js';

const PROGRAM = join(ROOT, 'dist/cli/legwork.js');

export interface Processors {
  readonly what: string;
  /** By the clock: one thread, two threads, two programs of one thread at once. [s] */
  readonly one: number;
  readonly two: number;
  readonly both: number;
  /** Digests of all that was written by one thread and by two. */
  readonly check: readonly [string, string];
}

/** How many times as fast two threads are, and the most to be had: two programs at once, against one after the other. */
export const gain = ({ one, two }: Processors): number => one / two;
export const ceiling = ({ one, both }: Processors): number => (2 * one) / both;

/** A folder with so many tracks of so many megabytes, and races that name them all. */
function folder(name: string, tracks: number, megabytes: number, races: number): string {
  const place = scratch(name);
  mkdirSync(place, { recursive: true });
  const boats = Array.from({ length: tracks }, (_, k) => `boat-${k + 1}-of-${megabytes}-MB`);
  boats.forEach((boat, k) => {
    const wind = join(place, `${boat}.csv`);
    if (!existsSync(wind)) generateTrack(join(place, `${boat}.gpx`), wind, megabytes, 2026 + k);
  });
  const lines = boats.map((boat, k) => ` - { name: Boat ${k + 1}, track: ${boat}.gpx, instruments: ${boat}.csv }`);
  for (let k = 1; k <= races; k++) {
    const text = [`race: Race ${k}`, 'zone: UTC', 'boat: single-hander', 'boats:', ...lines, ''].join('\n');
    writeFileSync(join(place, `race-${k}.yaml`), text);
  }
  return place;
}

async function run(place: string, workers: number, out: string): Promise<Measured<string>> {
  const written = join(place, out);
  rmSync(written, { recursive: true, force: true });
  const races = readdirSync(place).filter((file) => file.endsWith('.yaml'));
  const inputs = races.map((file) => join(place, file));
  const json = races.length > 1 ? `${written}/` : join(written, 'one.json');
  const html = races.length > 1 ? `${written}/` : join(written, 'one.html');
  const measured = await runCommand(
    process.execPath,
    [PROGRAM, 'debrief', ...inputs, '--json', json, '--out', html, '--quiet'],
    {
      env: { LEGWORK_WORKERS: String(workers) },
    },
  );
  const hash = createHash('sha256');
  for (const file of readdirSync(written).sort()) hash.update(file).update(readFileSync(join(written, file)));
  return { ...measured, value: hash.digest('hex').slice(0, 12) };
}

async function together(place: string): Promise<Measured<string>> {
  const start = performance.now();
  const [first] = await Promise.all([run(place, 1, 'out-a'), run(place, 1, 'out-b')]);
  return { ...first, wall: (performance.now() - start) / 1000 };
}

/** Eight long tracks in one race, and a folder of races. */
export async function processors(rounds: number): Promise<Processors[]> {
  const kinds: [string, string][] = [
    ['8 tracks of 12 MB in one race', folder('fleet', 8, 12, 1)],
    ['8 races of 4 tracks of 2 MB', folder('races', 4, 2, 8)],
  ];
  const found: Processors[] = [];
  for (const [what, place] of kinds) {
    const [one, two, both] = await inTurn<[string, string, string]>(rounds, [
      () => run(place, 1, 'out-1'),
      () => run(place, 2, 'out-2'),
      () => together(place),
    ]);
    found.push({ what, one: one.wall, two: two.wall, both: both.wall, check: [one.value, two.value] });
  }
  return found;
}
