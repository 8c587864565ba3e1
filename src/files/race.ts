import { UserError } from '../recording/issues.js';
import type { Issue } from '../recording/issues.js';
import { checkWritten } from './check.js';
import type { RaceFile, WrittenLogs } from './race-schema.js';
import { parseTime } from './times.js';
import { readWritten } from './written.js';
import type { WrittenFile } from './written.js';

/**
 * A race as it was written: checked, but not yet leaning on its logs for the day of a bare `14:05` or for the name of
 * a boat. `resolveRace` makes a `Race` of it.
 */
export interface RaceDraft {
  /** The race file, for messages; null for a race put together from bare logs. */
  readonly file: string | null;
  /** Its `race` key, or what the file or the logs suggest. */
  readonly name: string;
  readonly content: RaceFile;
  /** Start of the next race in the same recording, as written. */
  readonly nextStart: string | null;
  /** `race.yaml:12`, where a value was written. */
  readonly where: (path: readonly PropertyKey[]) => string;
  /** Said while the draft was made. */
  readonly issues: readonly Issue[];
}

/**
 * Reads a race file: YAML 1.2 or JSON, one race or several (`races`).
 *
 * @param text Contents.
 * @param file Name for messages.
 * @throws UserError (2) with file, line, field, what is wrong.
 */
export async function readRaces(text: string, file: string): Promise<RaceDraft[]> {
  const written = readWritten(text, file);
  refuseOthers(written);
  const { raceFileSchema } = await import('./race-schema.js');
  const content = checkWritten(raceFileSchema, written, withoutExtensions(asWritten(written)));
  if (!content.races) return [draftOf(written, content, null)];
  for (const key of ['race', 'start', 'finish'] as const) {
    if (content[key] === undefined || content[key] === null) continue;
    throw new UserError(`${file}:${written.lineOf([key])}: \`${key}\` stands beside \`races\`.`, {
      exitCode: 2,
      suggestion: `Move it into the entries of \`races\`, or leave out \`races\`.`,
    });
  }
  return content.races.map((_, index) => draftOf(written, content, index));
}

function draftOf(written: WrittenFile, content: RaceFile, index: number | null): RaceDraft {
  const { races, ...shared } = content;
  const where = (path: readonly PropertyKey[]): string => {
    const key = path[0];
    const inEntry = index !== null && (key === 'race' || key === 'start' || key === 'finish');
    return `${written.file}:${written.lineOf(inEntry ? ['races', index, ...path] : path)}`;
  };
  const stem = fileStem(written.file);
  if (index === null) {
    return { file: written.file, name: content.race ?? stem, content: shared, nextStart: null, where, issues: [] };
  }
  const entry = races![index];
  const one: RaceFile = { ...shared, race: entry.race, start: entry.start, finish: entry.finish };
  if (typeof entry.notes === 'string') one.notes = entry.notes;
  const name = entry.race ?? `${stem} ${index + 1}`;
  return { file: written.file, name, content: one, nextStart: races![index + 1]?.start ?? null, where, issues: [] };
}

/** File name without its folders and extensions. */
export function fileStem(file: string): string {
  const base = file.split(/[/\\]/).at(-1)!;
  return base.replace(/(\.[A-Za-z][A-Za-z0-9]{0,5}){1,2}$/, '') || base;
}

/** Kinds of our own files that are sometimes taken for race files. */
function refuseOthers({ data, file }: WrittenFile): void {
  const refuse = (what: string, suggestion: string): never => {
    throw new UserError(`${file}: ${what}`, { exitCode: 2, suggestion });
  };
  if (data === null || data === undefined) refuse('empty.', 'A race file names at least one boat and its track.');
  if (typeof data !== 'object' || Array.isArray(data)) {
    refuse('not a race file.', 'A race file is YAML or JSON with keys such as `race`, `wind` and `boats`.');
  }
  const format = (data as Record<string, unknown>).format;
  if (typeof format === 'string' && format.startsWith('legwork-')) {
    refuse(`a ${format} file, written by this program, not a race file.`, 'Give the race file it was made from.');
  }
}

/** Names are kept as they stand in the file: `007` is not 7, `1e3` not 1000. */
function asWritten(written: WrittenFile): unknown {
  const named = new Set(['race', 'name', 'sailor', 'track', 'instruments', 'file', 'boat']);
  const visit = (value: unknown, path: readonly PropertyKey[], depth: number): unknown => {
    if (depth > 12) return value;
    if (Array.isArray(value)) return value.map((item, i) => visit(item, [...path, i], depth + 1));
    if (value !== null && typeof value === 'object') {
      return Object.fromEntries(
        Object.entries(value).map(([key, inner]) => [key, visit(inner, [...path, key], depth + 1)]),
      );
    }
    if (typeof value === 'string' || !named.has(String(path.at(-1)))) return value;
    const source = written.sourceOf(path);
    return source === null || source === '' || source === '~' ? value : source;
  };
  return visit(written.data, [], 0);
}

/** `x-…` keys are anyone's own. Not inside `columns`, whose keys are headers. */
function withoutExtensions(value: unknown): unknown {
  if (Array.isArray(value)) return value.map(withoutExtensions);
  if (value === null || typeof value !== 'object') return value;
  const kept = Object.entries(value).filter(([key]) => !key.startsWith('x-'));
  return Object.fromEntries(
    kept.map(([key, inner]) => [key, key === 'columns' || key === 'notes' ? inner : withoutExtensions(inner)]),
  );
}

/** What the command line says instead of the race file, or beside it. */
export interface Overrides {
  readonly boat?: string;
  readonly start?: string;
  readonly finish?: string;
  readonly zone?: string;
  readonly date?: string;
  readonly current?: { readonly set_deg: number; readonly drift_kn: number };
  readonly columns?: Readonly<Record<string, string>>;
  /** Wind logs (paths as messages and results shall name them) and winds by hand, added to what the file names. */
  readonly wind?: readonly (string | { readonly twd_deg: number; readonly tws_kn: number })[];
}

/** The draft with the command line's word in place of the file's. */
export function overridden(draft: RaceDraft, overrides: Overrides): RaceDraft {
  const { boat, start, finish, zone, date, current, columns, wind } = overrides;
  const content: RaceFile = { ...draft.content };
  if (start !== undefined) content.start = start;
  if (finish !== undefined) content.finish = finish;
  if (zone !== undefined) content.zone = zone;
  if (date !== undefined) content.date = date;
  if (current !== undefined) content.current = { ...current };
  if (boat !== undefined) {
    content.boat = boat;
    content.boats = content.boats.map((entry) => ({ ...entry, boat: undefined }));
  }
  if (wind && wind.length > 0) {
    const before = content.wind ?? [];
    content.wind = [
      ...(Array.isArray(before) ? before : [before]),
      ...wind.map((entry) => (typeof entry === 'string' ? entry : { ...entry })),
    ];
  }
  return { ...draft, content: columns ? withColumns(content, columns) : content };
}

/** The draft with other names for its log and boat files. */
export function renamed(draft: RaceDraft, rename: (file: string) => string): RaceDraft {
  const one = <T>(log: T): T => {
    if (typeof log === 'string') return rename(log) as T;
    if (log === null || typeof log !== 'object' || !('file' in log)) return log;
    return { ...log, file: rename(String(log.file)) };
  };
  // A built-in boat has a bare name, a boat file an extension or a folder.
  const boat = <T extends string | null | undefined>(name: T): T =>
    typeof name === 'string' && /[./\\]/.test(name) ? (rename(name) as T) : name;
  const content = withLogs(draft.content, one);
  const boats = content.boats.map((entry) => ({ ...entry, boat: boat(entry.boat) }));
  return { ...draft, content: { ...content, boat: boat(content.boat), boats } };
}

/** Headers told on the command line hold for every log; what a log says for itself comes first. */
function withColumns(content: RaceFile, columns: Readonly<Record<string, string>>): RaceFile {
  const one = <T>(log: T): T => {
    if (typeof log === 'string') return { file: log, columns: { ...columns } } as T;
    if (log === null || typeof log !== 'object' || !('file' in log)) return log;
    const own = (log as { columns?: Record<string, string> | null }).columns;
    return { ...log, columns: { ...columns, ...own } };
  };
  return withLogs(content, one);
}

/** The content with every log in it changed. */
function withLogs(content: RaceFile, one: <T>(log: T) => T): RaceFile {
  const all = <T>(logs: T): T => (Array.isArray(logs) ? (logs.map((log: unknown) => one(log)) as T) : one(logs));
  return {
    ...content,
    wind: all(content.wind),
    boats: content.boats.map((boat) => ({ ...boat, track: all(boat.track), instruments: all(boat.instruments) })),
  };
}

/** Files of the logs a draft names, wind logs last. Each once. */
export function logFiles(draft: RaceDraft): string[] {
  const { boats, wind } = draft.content;
  const files = boats.flatMap((boat) => [...filesOf(boat.track), ...filesOf(boat.instruments)]);
  const stations = (Array.isArray(wind) ? wind : [wind]).flatMap((entry) => {
    if (typeof entry === 'string') return [entry];
    return entry && 'file' in entry ? [entry.file] : [];
  });
  return [...new Set([...files, ...stations])];
}

/** Where a draft names a log: `race.yaml:12`. */
export function whereNamed(draft: RaceDraft, file: string): string {
  const { boats, wind } = draft.content;
  for (const [i, boat] of boats.entries()) {
    for (const key of ['track', 'instruments'] as const) {
      if (filesOf(boat[key]).includes(file)) return draft.where(['boats', i, key]);
    }
  }
  const list = Array.isArray(wind) ? wind : [wind];
  const at = list.findIndex(
    (entry) => entry === file || (typeof entry === 'object' && entry && 'file' in entry && entry.file === file),
  );
  return draft.where(at < 0 ? [] : ['wind', at]);
}

/** How a boat's log is to be read: what it says for itself, else its boat, else the race. */
export function readingOf(
  draft: RaceDraft,
  file: string,
): { zone?: string; date?: string; columns?: Record<string, string> } {
  const { content } = draft;
  const logsOf = (logs: WrittenLogs | null | undefined): (string | WrittenReading)[] =>
    logs === undefined || logs === null ? [] : Array.isArray(logs) ? logs : [logs];
  for (const boat of content.boats) {
    for (const log of [...logsOf(boat.track), ...logsOf(boat.instruments)]) {
      if ((typeof log === 'string' ? log : log.file) !== file) continue;
      const own: Partial<WrittenReading> = typeof log === 'string' ? {} : log;
      const zone = own.zone ?? boat.zone ?? content.zone;
      const date = own.date ?? content.date;
      return { ...(zone && { zone }), ...(date && { date }), ...(own.columns && { columns: own.columns }) };
    }
  }
  return {};
}

interface WrittenReading {
  readonly file: string;
  readonly zone?: string | null | undefined;
  readonly date?: string | null | undefined;
  readonly columns?: Record<string, string> | null | undefined;
}

/** Files of a `track` or `instruments` value. */
export function filesOf(logs: WrittenLogs | null | undefined): string[] {
  if (logs === undefined || logs === null) return [];
  return (Array.isArray(logs) ? logs : [logs]).map((log) => (typeof log === 'string' ? log : log.file));
}

/** First track of each boat the file gives no name: where to look for one. */
export function unnamedTracks(draft: RaceDraft): string[] {
  return draft.content.boats.filter((boat) => !boat.name).map((boat) => filesOf(boat.track)[0]);
}

/** True when some time of day in the draft leans on the day of the logs. */
export function needsDay(draft: RaceDraft): boolean {
  const { date, start } = draft.content;
  if (date) return false;
  if (start) return parseTime(start)?.kind === 'clock';
  return /"\d{1,2}:\d{2}/.test(JSON.stringify({ ...draft.content, notes: null, race: null }));
}
