import { UserError } from '../recording/issues.js';
import type { Issue } from '../recording/issues.js';
import { boatNames } from './boat-names.js';
import type { RaceDraft } from './race.js';
import { isGenericName } from './boat-names.js';
import type { RaceFile } from './race-schema.js';

/** What a look into a log tells about it. */
export interface LogGlance {
  /** As messages and results name it. */
  readonly file: string;
  /** Name inside the track; empty when there is none. */
  readonly inner: string;
  readonly hasPosition: boolean;
  readonly hasTrueWind: boolean;
  readonly hasApparentWind: boolean;
  /** UTC seconds. */
  readonly firstTime: number | null;
}

/**
 * A race put together from bare logs: each with positions is a boat, each with true wind and no position a wind log
 * (and says so), one with apparent wind and no position the instruments of the only boat.
 *
 * @throws UserError (2) when no log holds a position, or a log fits nowhere.
 */
export function raceFromLogs(logs: readonly LogGlance[]): RaceDraft {
  const tracks = logs.filter((log) => log.hasPosition);
  if (tracks.length === 0) {
    throw new UserError(
      `${logs.map((log) => log.file).join(', ')}: no position in ${logs.length === 1 ? 'it' : 'any of them'}.`,
      {
        exitCode: 2,
        suggestion: 'Give the track of at least one boat; `legwork inspect` shows what a log holds.',
      },
    );
  }
  const issues: Issue[] = [];
  const { names, issues: nameIssues } = boatNames(tracks);
  const boats: RaceFile['boats'] = tracks.map((log, i) => ({ name: names[i], track: log.file }));
  const wind: string[] = [];
  for (const log of logs) {
    if (log.hasPosition) continue;
    if (log.hasTrueWind) {
      wind.push(log.file);
      issues.push(taken(log, 'wind and no position: it was taken as a wind log.'));
    } else if (log.hasApparentWind && boats.length === 1) {
      boats[0].instruments = log.file;
      issues.push(taken(log, `apparent wind and no position: it was taken as the instruments of ${names[0]}.`));
    } else throw fitsNowhere(log);
  }
  const content: RaceFile = { boats, ...(wind.length > 0 ? { wind } : {}) };
  const where = (path: readonly PropertyKey[]): string =>
    path[0] === 'start' || path[0] === 'finish' ? `--${path[0]}` : 'the command line';
  return { file: null, name: nameOf(names), content, nextStart: null, where, issues: [...issues, ...nameIssues] };
}

const taken = (log: LogGlance, what: string): Issue => ({
  code: 'log-kind-assumed',
  message: `This log holds ${what}`,
  file: log.file,
});

function fitsNowhere(log: LogGlance): UserError {
  return log.hasApparentWind
    ? new UserError(`${log.file}: apparent wind and no position, and more than one boat it may belong to.`, {
        exitCode: 2,
        suggestion: 'Name it under `instruments` of its boat in a race file.',
      })
    : new UserError(`${log.file}: neither a position nor wind in it.`, {
        exitCode: 2,
        suggestion: '`legwork inspect` shows how its columns were understood; `--columns` tells them.',
      });
}

/** "Corrie", "Corrie and Linnet", "Corrie, Linnet and 3 more". */
function nameOf(names: readonly string[]): string {
  if (names.length === 1) return isGenericName(names[0]) ? 'race' : names[0];
  if (names.length === 2) return names.join(' and ');
  return `${names.slice(0, 2).join(', ')} and ${names.length - 2} more`;
}
