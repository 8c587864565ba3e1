import { basename, dirname, isAbsolute, relative, resolve, sep } from 'node:path';
import { builtInBoats, importLog, raceParts, readRaces } from '../index.js';
import type { ImportOptions, Issue, LogGlance, LogSource, Overrides, Race, RaceDraft } from '../index.js';
import { forMessages, kindOf, logSource, readText, standardInput, STDIN_NAME, unusable } from './files.js';
import { nearestName } from './inputs.js';
import type { Source } from './inputs.js';
import { THREAD } from './race-workers.js';
import { bigLogs, ReadAhead } from './read-ahead.js';
import type { Progress } from './terminal.js';

/** A race put together: plain data, that may go to another thread. */
export interface PlainJob {
  readonly race: Race;
  /** Said while it was put together; goes into the result's warnings. */
  readonly issues: readonly Issue[];
  /** Local day of the race, YYYY-MM-DD; null when no time is known. */
  readonly day: string | null;
  readonly files: Whereabouts;
}

/** A race ready to be worked on. */
export interface Job extends PlainJob {
  readonly open: (file: string) => LogSource;
  /** To be called once it has been worked on, or has failed. */
  readonly close: () => Promise<void>;
}

/** Where the files of a race lie, by the names results show; a name that is not among them counts from the folder. */
export interface Whereabouts {
  readonly folder: string;
  readonly paths: ReadonlyMap<string, string>;
}

/** The command line's words that change a race. */
export interface RaceOptions extends Omit<Overrides, 'wind'> {
  /** Wind logs as given, and winds by hand. */
  readonly wind: readonly (string | { readonly twd_deg: number; readonly tws_kn: number })[];
}

/** How much of a log is looked at for its name, kind and first time. */
const GLANCE = 1 << 18;

/** The races of one source, each to be made ready when its turn comes. */
export async function loadRaces(source: Source, options: RaceOptions): Promise<(() => Promise<PlainJob>)[]> {
  const folder = source.kind === 'race-file' && source.path !== '-' ? dirname(resolve(source.path)) : process.cwd();
  const names = new FileNames(folder);
  const drafts =
    source.kind === 'race-file' ? await draftsOf(source, names) : [await draftOfLogs(source.paths, names, options)];
  return drafts.map((draft) => () => prepare(draft, names, options));
}

async function draftsOf(source: Extract<Source, { kind: 'race-file' }>, names: FileNames): Promise<RaceDraft[]> {
  const text = source.path === '-' ? new TextDecoder().decode(await standardInput()) : await readText(source.path);
  if (source.path !== '-') names.given(source.path);
  const { renamed } = await raceParts();
  return (await readRaces(text, source.shown)).map((draft) => renamed(draft, (file) => names.written(file)));
}

async function draftOfLogs(paths: readonly string[], names: FileNames, options: RaceOptions): Promise<RaceDraft> {
  const { raceFromLogs } = await raceParts();
  const glances: LogGlance[] = [];
  for (const path of paths) glances.push(await glance(names.given(path), path, importOptions(options)));
  return raceFromLogs(glances);
}

const importOptions = ({ zone, date, columns }: RaceOptions): ImportOptions => ({
  ...(zone === undefined ? {} : { zone }),
  ...(date === undefined ? {} : { date }),
  ...(columns === undefined ? {} : { columns }),
});

async function prepare(plain: RaceDraft, names: FileNames, options: RaceOptions): Promise<PlainJob> {
  const parts = await raceParts();
  const wind = options.wind.map((entry) => (typeof entry === 'string' ? names.given(entry) : entry));
  const boat =
    options.boat !== undefined && (await kindOf(options.boat)) === 'file' ? names.given(options.boat) : options.boat;
  const draft = parts.overridden(plain, { ...options, wind, ...(boat === undefined ? {} : { boat }) });
  const files = parts.logFiles(draft);
  for (const file of files) await mustBeThere(file, names.pathOf(file), draft);
  await boatsMustBeKnown(draft, names, options.boat === undefined ? null : `--boat ${options.boat}`);
  const unnamed = parts.unnamedTracks(draft);
  const first = parts.filesOf(draft.content.boats[0].track)[0];
  const dayWanted = parts.needsDay(draft) || !draft.content.start;
  const innerNames = new Map<string, string>();
  let firstTime: number | null = null;
  for (const file of new Set([...(dayWanted ? [first] : []), ...unnamed])) {
    const seen = await glance(file, names.pathOf(file), parts.readingOf(draft, file));
    innerNames.set(file, seen.inner);
    if (file === first) firstTime = seen.firstTime;
  }
  const { race, issues } = parts.resolveRace(draft, { firstTime, innerNames });
  const at = race.start ?? firstTime;
  return {
    race,
    issues,
    day: at === null ? null : parts.dayOf(at, race.zone ?? 'UTC'),
    files: names.whereabouts(),
  };
}

/**
 * With its logs at hand.
 *
 * @param helpers Threads that may read big logs beside this one.
 */
export function jobOf(plain: PlainJob, progress: Progress, helpers = 0): Job {
  const pathOf = (file: string): string => pathIn(plain.files, file);
  const logs = helpers > 0 ? bigLogs(plain.race, pathOf) : [];
  const ahead = logs.length > 0 ? new ReadAhead(logs, helpers, THREAD) : null;
  const open = (file: string): LogSource => {
    let read = 0;
    const onBytes = (bytes: number): void => {
      read += bytes;
      progress.say(`reading ${file}: ${(read / 1e6).toFixed(1)} MB`);
    };
    const source = logSource(file, pathOf(file), { onBytes });
    return ahead ? { ...source, elsewhere: (options) => ahead.take(file, options) } : source;
  };
  return { ...plain, open, close: async () => ahead?.close() };
}

const pathIn = ({ folder, paths }: Whereabouts, name: string): string => paths.get(name) ?? resolve(folder, name);

async function mustBeThere(file: string, path: string, draft: RaceDraft): Promise<void> {
  if (path === '-') return;
  const kind = await kindOf(path);
  if (kind === 'file') return;
  const who = (await raceParts()).whereNamed(draft, file);
  if (kind === 'folder') throw unusable(`${who}: ${file} is a folder, not a log.`, 'Name the files in it.');
  const near = await nearestName(path);
  const place =
    draft.file === null ? '' : ` Paths are relative to the race file: it was looked for at ${forMessages(path)}.`;
  throw unusable(
    `${who}: the log ${file} is not there.`,
    `${near === null ? 'Check the name.' : `Is it ${near}?`}${place}`,
  );
}

/** A boat is built in or a file. */
async function boatsMustBeKnown(draft: RaceDraft, names: FileNames, option: string | null): Promise<void> {
  const { content } = draft;
  const known = await builtInBoats();
  const written: [string | null | undefined, PropertyKey[]][] = [
    [content.boat, ['boat']],
    ...content.boats.map((boat, i): [string | null | undefined, PropertyKey[]] => [boat.boat, ['boats', i, 'boat']]),
  ];
  for (const [boat, path] of written) {
    if (!boat || known.includes(boat) || (await kindOf(names.pathOf(boat))) === 'file') continue;
    throw unusable(
      `${option ?? `${draft.where(path)}: ${boat}`}: neither a built-in boat nor a boat file that is there.`,
      `The built-in boats are ${known.join(', ')}${option === null ? '; paths are relative to the race file' : ''}.`,
    );
  }
}

/** Looks into the beginning of a log; at all of it where the beginning does not tell. */
async function glance(name: string, path: string, options: ImportOptions): Promise<LogGlance> {
  if (!/\.zip$/i.test(path)) {
    try {
      const seen = glanceAt(name, await importLog(logSource(name, path, { most: GLANCE }), options));
      if (seen.firstTime !== null && (seen.hasPosition || seen.hasTrueWind)) return seen;
    } catch {
      // A beginning that cannot be read alone says nothing of the whole.
    }
  }
  return glanceAt(name, await importLog(logSource(name, path), options));
}

function glanceAt(file: string, { recording, fixes }: Awaited<ReturnType<typeof importLog>>): LogGlance {
  const { channels, time } = recording;
  return {
    file,
    inner: recording.name,
    hasPosition: fixes > 0,
    hasTrueWind: (channels.twd ?? channels.twdMagnetic) !== undefined,
    hasApparentWind: channels.awa !== undefined,
    firstTime: time.length > 0 ? time[0] : null,
  };
}

/**
 * Names of files as results show them, and where the files lie. A file is named from the folder of its race (the race
 * file's, else the working folder), `/` as separator; one that lies elsewhere by its own name. Never an absolute path.
 */
class FileNames {
  readonly #folder: string;
  readonly #paths = new Map<string, string>();

  constructor(folder: string) {
    this.#folder = folder;
  }

  /** A path as given on the command line. */
  given(path: string): string {
    if (path === '-') return this.#named(STDIN_NAME, '-');
    const absolute = resolve(path);
    for (const base of [this.#folder, process.cwd()]) {
      const below = relative(base, absolute);
      if (below !== '' && !below.startsWith('..') && !isAbsolute(below)) return this.#named(slashed(below), absolute);
    }
    return this.#named(basename(absolute), absolute);
  }

  /** A path as written in the race file. */
  written(file: string): string {
    const plain = slashed(file);
    if (isAbsolute(file) || /^[A-Za-z]:\//.test(plain)) return this.given(file);
    return this.#named(plain, resolve(this.#folder, plain));
  }

  pathOf(name: string): string {
    return pathIn({ folder: this.#folder, paths: this.#paths }, name);
  }

  whereabouts(): Whereabouts {
    return { folder: this.#folder, paths: new Map(this.#paths) };
  }

  /** Two files of one name are told apart by a number. */
  #named(name: string, path: string): string {
    for (let n = 1; ; n++) {
      const candidate = n === 1 ? name : name.replace(/(\.[^./]*)?$/, ` (${n})$1`);
      const there = this.#paths.get(candidate);
      if (there !== undefined && there !== path) continue;
      this.#paths.set(candidate, path);
      return candidate;
    }
  }
}

const slashed = (path: string): string => (sep === '\\' ? path : path.replaceAll('\\', '/')).split(sep).join('/');
