/**
 * A season of 2,000 result files with 20,000 upwind legs, from the command to the page: as lean as files get, and as a
 * race of five boats is filed.
 *
 *     npx tsx test/bench/season.ts
 */
import { existsSync, mkdirSync, readdirSync, readFileSync, rmSync, statSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { jsonText } from '../../src/result/json.js';
import type { BoatResult, Result } from '../../src/result/result.js';
import { inventedSeason } from '../season/invented-season.js';
import { ROOT, scratch } from './data.js';
import { inTurn, runCommand, SAYS_COST, type Cost } from './measure.js';

const PROGRAM = join(ROOT, 'dist/cli/legwork.js');
const SAMPLE = join(ROOT, 'reports/sample/result.json');
const RACES = 2000;
const SAILORS = 5;
/** Most processor time the lean season may take. [s] */
export const SEASON_WITHIN = 3;

export interface SeasonFigures {
  readonly season: string;
  readonly megabytes: number;
  readonly pageMegabytes: number;
  readonly cost: Cost;
}

/** Races whose figures are dealt: one object a boat with two beats, little beside what a season looks at. */
function lean(): Result[] {
  const sailors = Array.from({ length: SAILORS }, (_, k) => ({ name: `Sailor ${k + 1}` }));
  return inventedSeason({ seed: 1, races: RACES, every: 1, sailors, legs: 2 });
}

/** The same races, every boat with all that the sample's boats have: tacks, both sides, runs, trim, hints. */
function full(): Result[] {
  const sample = JSON.parse(readFileSync(SAMPLE, 'utf8')) as Result;
  return lean().map(({ race, wind, boats }) => ({ ...sample, race, wind, boats: boats.map((boat, k) => filled(boat, sample.boats[k % 2])) })); // prettier-ignore
}

function filled(boat: BoatResult, rich: BoatResult): BoatResult {
  let beat = 0;
  const legs = rich.legs.map((leg) => {
    const own = leg.kind === 'upwind' ? boat.legs[beat++ % boat.legs.length] : undefined;
    if (!own) return leg;
    const steady = leg.steady && { ...leg.steady, vmg_kn: own.steady!.vmg_kn, tws_kn: own.steady!.tws_kn };
    return { ...leg, start: own.start, end: own.end, steady, efficiency: own.efficiency, share: own.share };
  });
  return { ...rich, name: boat.name, sailor: boat.sailor, legs };
}

/** A logbook of such races; made once and kept. */
function logbook(name: string, make: () => Result[]): string {
  const folder = scratch(`season-${name}-${RACES}`);
  if (existsSync(folder) && readdirSync(folder).length === RACES) return folder;
  rmSync(folder, { recursive: true, force: true });
  mkdirSync(folder, { recursive: true });
  make().forEach((result, k) => {
    const digest = (0x10000000 + k).toString(16);
    writeFileSync(join(folder, `${result.race.start!.slice(0, 10)}-race-${k + 1}-${digest}.json`), jsonText(result));
  });
  return folder;
}

const megabytesOf = (folder: string): number =>
  readdirSync(folder).reduce((sum, file) => sum + statSync(join(folder, file)).size, 0) / 1e6;

async function figuresOf(name: string, make: () => Result[], rounds: number): Promise<SeasonFigures> {
  const folder = logbook(name, make);
  const page = scratch(`season-${name}.html`);
  const args = ['--import', SAYS_COST, PROGRAM, 'season', folder, '--out', page, '--quiet'];
  const [cost] = await inTurn<[string]>(rounds, [() => runCommand(process.execPath, args)]);
  return { season: name, megabytes: megabytesOf(folder), pageMegabytes: statSync(page).size / 1e6, cost };
}

/** Both seasons, the best of several rounds. */
export async function seasonRows(rounds: number): Promise<SeasonFigures[]> {
  return [await figuresOf('lean', lean, rounds), await figuresOf('full', full, rounds)];
}

/** `met` or `missed`, of the lean season. */
export function seasonVerdict(rows: readonly SeasonFigures[]): string {
  return rows[0].cost.cpu <= SEASON_WITHIN ? 'met' : 'missed';
}

/** The figures as lines of text. */
export function seasonText(rows: readonly SeasonFigures[]): string {
  const lines = rows.map(
    ({ season, megabytes, pageMegabytes, cost }) =>
      `season of ${RACES} files, ${season}: ${megabytes.toFixed(0)} MB, ${cost.wall.toFixed(2)} s, cpu ` +
      `${cost.cpu.toFixed(2)} s, ${cost.memory.toFixed(0)} MB held, page ${pageMegabytes.toFixed(1)} MB`,
  );
  return [...lines, `  lean within ${SEASON_WITHIN} s: ${seasonVerdict(rows)}`].join('\n');
}

if (process.argv[1] === fileURLToPath(import.meta.url)) {
  process.stdout.write(`${seasonText(await seasonRows(3))}\n`);
}
