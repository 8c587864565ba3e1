import { readdir } from 'node:fs/promises';
import { extname, join, resolve } from 'node:path';
import { expandGlob, isGlob } from './globs.js';
import { forMessages, kindOf, readText, standardInput, STDIN_NAME, unusable } from './files.js';

/** What the words after a command come to. */
export type Source =
  /** A race file; `-` is standard input. */
  | { readonly kind: 'race-file'; readonly path: string; readonly shown: string }
  /** Tracks (and wind logs) of one race. */
  | { readonly kind: 'logs'; readonly paths: readonly string[] };

const RACE_FILES = ['.yaml', '.yml', '.json'];
const LOG_FILES = ['.gpx', '.nmea', '.csv', '.tsv', '.txt', '.log', '.gz', '.zip', '.dat'];
/** The same in a folder, where texts of other kinds lie about. */
const CLEARLY_LOGS = LOG_FILES.filter((extension) => extension !== '.txt' && extension !== '.dat');
/** Looked for where no INPUT is given. */
const DEFAULT_FILES = ['race.yaml', 'race.yml', 'race.json'];

/**
 * Race files, each for itself, or the logs of one race.
 *
 * @throws UserError (2) when something is not there, or both kinds are mixed.
 */
export async function expandInputs(inputs: readonly string[]): Promise<Source[]> {
  const words = inputs.length > 0 ? inputs : await defaultInput();
  const raceFiles: Source[] = [];
  const logs: string[] = [];
  for (const word of words) {
    for (const path of await pathsOf(word)) {
      const kind = path === '-' ? 'file' : await kindOf(path);
      if (kind === 'folder') {
        const inside = await folderSources(path);
        raceFiles.push(...inside.filter((source) => source.kind === 'race-file'));
        logs.push(...inside.flatMap((source) => (source.kind === 'logs' ? source.paths : [])));
      } else if (await isRaceFile(path)) {
        raceFiles.push({ kind: 'race-file', path, shown: path === '-' ? STDIN_NAME : forMessages(path) });
      } else logs.push(path);
    }
  }
  if (raceFiles.length > 0 && logs.length > 0) {
    throw unusable(
      `${forMessages(logs[0])}: a log beside a race file.`,
      'Name the log in the race file (or a wind log with --wind), or give logs only.',
    );
  }
  return logs.length > 0 ? [{ kind: 'logs', paths: [...new Set(logs)] }] : raceFiles;
}

async function defaultInput(): Promise<string[]> {
  for (const file of DEFAULT_FILES) if ((await kindOf(file)) === 'file') return [file];
  throw unusable(
    'no INPUT, and no race.yaml in this folder.',
    'Give a race file or the tracks of one race: `legwork debrief corrie.gpx --wind committee.csv`.',
  );
}

/** Files a word on the command line stands for. */
export async function pathsOf(word: string): Promise<string[]> {
  if (word === '-') return ['-'];
  if ((await kindOf(word)) !== null) return [word];
  if (!isGlob(word)) throw unusable(`${word}: is not there.`, await suggestion(word));
  const found = await expandGlob(word);
  if (found.length === 0) throw unusable(`${word}: no file matches.`, 'Check the pattern and the folder.');
  return found;
}

/** What there is instead, in the folder where the file was looked for. */
async function suggestion(path: string): Promise<string> {
  const folder = resolve(path, '..');
  if ((await kindOf(folder)) === null) return `There is no folder ${forMessages(folder)} either.`;
  const near = await nearestName(path);
  return near === null ? 'Check the name and the folder.' : `Is it ${near}?`;
}

/** A file of the same folder whose name differs by little; null when there is none. */
export async function nearestName(path: string): Promise<string | null> {
  const { editDistance } = await (await import('../index.js')).raceParts();
  const folder = resolve(path, '..');
  const wanted = resolve(path)
    .slice(folder.length)
    .replace(/^[/\\]/, '')
    .toLowerCase();
  let best: string | null = null;
  let least = 1 + Math.max(1, Math.floor(wanted.length / 4));
  for (const name of (await namesIn(folder)).slice(0, 500)) {
    const changes = editDistance(wanted, name.toLowerCase());
    if (changes < least) {
      least = changes;
      best = name;
    }
  }
  return best;
}

async function namesIn(folder: string): Promise<string[]> {
  try {
    return (await readdir(folder)).filter((name) => !name.startsWith('.')).sort();
  } catch {
    return [];
  }
}

/** By its extension; where that says nothing, by how it begins. */
async function isRaceFile(path: string): Promise<boolean> {
  const extension = extname(path).toLowerCase();
  if (RACE_FILES.includes(extension)) return true;
  if (path !== '-' && LOG_FILES.includes(extension)) return false;
  const head = path === '-' ? (await standardInput()).subarray(0, 4096).toString('utf8') : await textHead(path);
  return looksLikeRace(head);
}

async function textHead(path: string): Promise<string> {
  const { open } = await import('node:fs/promises');
  try {
    const handle = await open(path);
    const { buffer, bytesRead } = await handle.read(Buffer.alloc(4096), 0, 4096, 0);
    await handle.close();
    return buffer.subarray(0, bytesRead).toString('utf8');
  } catch {
    return '';
  }
}

const looksLikeRace = (text: string): boolean =>
  /^\uFEFF?\s*\{/.test(text) || /^["']?(race|races|boats|wind|start|zone)["']?\s*:(\s|$)/m.test(text);

/** Race files of a folder, or of the folders in it; without any, its logs as those of one race. */
async function folderSources(folder: string): Promise<Source[]> {
  const here = await raceFilesIn(folder);
  if (here.length > 0) return here;
  const below: Source[] = [];
  for (const name of await namesIn(folder)) {
    const path = join(folder, name);
    if (name !== 'node_modules' && (await kindOf(path)) === 'folder') below.push(...(await raceFilesIn(path)));
  }
  if (below.length > 0) return below;
  const logs = (await namesIn(folder)).filter((name) => CLEARLY_LOGS.includes(extname(name).toLowerCase()));
  if (logs.length > 0) return [{ kind: 'logs', paths: logs.map((name) => join(folder, name)) }];
  throw unusable(`${forMessages(folder)}: a folder without a race file and without logs.`, 'Name the files.');
}

/** Boat files and results lie in such folders too; only what names boats is a race. */
async function raceFilesIn(folder: string): Promise<Source[]> {
  const found: Source[] = [];
  for (const name of await namesIn(folder)) {
    if (!RACE_FILES.includes(extname(name).toLowerCase())) continue;
    const path = join(folder, name);
    if ((await kindOf(path)) !== 'file') continue;
    const text = await readText(path);
    const isRace =
      /(^|[{,])\s*["']?(races?|boats)["']?\s*:/m.test(text) && !/"format"\s*:\s*"legwork-/.test(text.slice(0, 200));
    if (isRace) found.push({ kind: 'race-file', path, shown: forMessages(path) });
  }
  return found;
}
