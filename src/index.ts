/**
 * What a program may import. Nothing here touches files, prints, or asks the time; it runs in a browser too. Each part
 * is loaded when it is first called.
 */
import { UserError } from './recording/issues.js';
import type { Result } from './result/result.js';
import type { Season } from './season.js';

export type { LogSource, ImportOptions, ImportedLog, ColumnReading } from './importers/types.js';
export type { LogGlance } from './files/race-from-logs.js';
export type { LogFacts } from './files/race-resolve.js';
export type { Overrides, RaceDraft } from './files/race.js';
export type * from './files/race-types.js';
export type { Issue } from './recording/issues.js';
export type * from './result/result.js';
export type * from './result/series.js';
export type { Comparison, PairLadder } from './compare.js';
export type { InspectFile, InspectResult } from './inspect.js';
export { UserError };

/** Reads a race file, YAML or JSON: one draft a race. */
export const readRaces: typeof import('./files/race.js').readRaces = async (...args) =>
  (await import('./files/race.js')).readRaces(...args);

/** The parts that put races together from race files, options and bare logs. */
export const raceParts = async () => ({
  ...(await import('./files/race.js')),
  ...(await import('./files/race-resolve.js')),
  ...(await import('./files/race-from-logs.js')),
  ...(await import('./files/times.js')),
  ...(await import('./files/nearest-key.js')),
});

/** Reads one log: GPX, NMEA 0183 or a table. */
export const importLog: typeof import('./importers/index.js').importLog = async (...args) =>
  (await import('./importers/index.js')).importLog(...args);

/** The main job: one race to a result and the columns behind it. */
export const debrief: typeof import('./debrief.js').debrief = async (...args) =>
  (await import('./debrief.js')).debrief(...args);

/** Boats of one race against each other. */
export const compare: typeof import('./compare.js').compare = async (...args) =>
  (await import('./compare.js')).compare(...args);

/** What logs hold, judging nothing. */
export const inspect: typeof import('./inspect.js').inspect = async (...args) =>
  (await import('./inspect.js')).inspect(...args);

/** JSON Schemas of all files, by file name. */
export const jsonSchemas: typeof import('./schemas.js').jsonSchemas = async () =>
  (await import('./schemas.js')).jsonSchemas();

/** Result files: text out, text in. */
export const resultFiles = async () => ({
  ...(await import('./result/json.js')),
  ...(await import('./result/read.js')),
});

/** Tables, GeoJSON, Parquet. */
export const exporters = async () => ({
  ...(await import('./export/csv.js')),
  ...(await import('./export/geojson.js')),
  ...(await import('./export/parquet.js')),
});

/** Pages: one HTML text each. */
export const debriefPage = async (
  ...args: Parameters<typeof import('./report/page.js').debriefPage>
): Promise<string> => (await import('./report/page.js')).debriefPage(...args);
export const comparePage = async (
  ...args: Parameters<typeof import('./report/page.js').comparePage>
): Promise<string> => (await import('./report/page.js')).comparePage(...args);

export type { OptimumTable } from './physics/optimum.js';

/** The boat model alone: a built-in boat by name, or a boat file. */
export const optimum: typeof import('./optimum.js').optimum = async (...args) =>
  (await import('./optimum.js')).optimum(...args);

export type { Season } from './season.js';
export type * from './season/season-types.js';

/** Races of a logbook as trends per sailor; `sailors` is the content of a `sailors.yaml`, if there is one. */
export const season = async (
  results: readonly Result[] | AsyncIterable<Result>,
  sailors?: { readonly file: string; readonly text: string },
): Promise<Season> => {
  const { season: trends, seasonOfMany } = await import('./season.js');
  const options = sailors ? { sailors: await sailorsIn(sailors) } : {};
  return Symbol.asyncIterator in results ? seasonOfMany(results, options) : trends(results, options);
};

async function sailorsIn({ file, text }: { readonly file: string; readonly text: string }) {
  const { readWritten } = await import('./files/written.js');
  const { readSailors } = await import('./season/sailors.js');
  const read = readSailors(readWritten(text, file).data);
  if (read.problem !== null) throw new UserError(`${file}: ${read.problem}.`, { exitCode: 2 });
  return read.sailors;
}

/** The files of the demo race, by name. */
export const demoFiles = async (): Promise<ReadonlyMap<string, string>> =>
  (await import('./demo/index.js')).demoFiles();

/** Names of the built-in boats. */
export const builtInBoats = async (): Promise<string[]> =>
  (await import('./physics/built-in.js')).BUILT_IN_BOATS.map((boat) => boat.name);

export const seasonPage = async (
  ...args: Parameters<typeof import('./report/season-page.js').seasonPage>
): Promise<string> => (await import('./report/season-page.js')).seasonPage(...args);

export type { Tuned } from './tune.js';

/** The boat model fitted to the logs of one or several races. */
export const tune: typeof import('./tune.js').tune = async (...args) => (await import('./tune.js')).tune(...args);

export const tunePage = async (...args: Parameters<typeof import('./report/tune-page.js').tunePage>): Promise<string> =>
  (await import('./report/tune-page.js')).tunePage(...args);
