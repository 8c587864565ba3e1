import { wrap360 } from '../math/angles.js';
import { fromKnots } from '../math/units.js';
import { UserError } from '../recording/issues.js';
import type { Issue } from '../recording/issues.js';
import { boatNames } from './boat-names.js';
import { checkedPosition, parsePosition } from './position.js';
import type { RaceDraft } from './race.js';
import { filesOf } from './race.js';
import type { RaceFile, WrittenBoat, WrittenLogs, WrittenMark, WrittenPosition, WrittenWind } from './race-schema.js';
import type {
  BoatReference,
  CurrentReading,
  HandWind,
  LatLon,
  LogReference,
  MarkRole,
  Marks,
  Race,
  Span,
  StationReference,
  WindReference,
} from './race-types.js';
import { raceClock } from './race-clock.js';
import type { RaceClock } from './race-clock.js';

/** What a draft may lean on. */
export interface LogFacts {
  /** UTC seconds of the first fix of the first track; null: not known. */
  readonly firstTime: number | null;
  /** Names inside the tracks, by file as written. */
  readonly innerNames: ReadonlyMap<string, string>;
}

/** The boat taken when none is named. */
export const DEFAULT_BOAT = 'single-hander';
/** One standard deviation of a station's mounting [deg] and of its calibration [%] when the race file does not say. */
const STATION_ACCURACY = { dir: 2, percent: 2 };
/** Standard errors of a wind told by hand: a hand-held reading off a moving boat. [deg], [kn] */
const HAND_ACCURACY = { deg: 10, kn: 2 };
/** Part of a recording that belongs to a later race ends for us a day after it began. [s] */
const DAY = 86_400;

const ROLES: readonly MarkRole[] = ['windward', 'leeward', 'start', 'finish', 'wing', 'offset'];

/**
 * The race a draft describes, once what it leans on is known: times as UTC seconds, units as inside, defaults filled in.
 *
 * @throws UserError (2) naming file, line and field.
 */
export function resolveRace(draft: RaceDraft, facts: LogFacts): { race: Race; issues: Issue[] } {
  const { content } = draft;
  const clock = raceClock(draft, facts.firstTime);
  const { boats, issues: nameIssues } = resolveBoats(draft, clock, facts);
  const exclude = (content.exclude ?? []).map(({ from, to, why }, i) => ({
    ...clock.span(from, to, ['exclude', i]),
    why: why ?? '',
  }));
  const next = draft.nextStart === null ? null : clock.at(draft.nextStart, ['races']);
  if (next !== null) exclude.push({ from: next, to: next + DAY, why: 'a later race of the same recording' });
  const race: Race = {
    name: draft.name,
    start: clock.start,
    finish: clock.finish,
    zone: content.zone ?? null,
    wind: windOf(content).map((entry, i) => resolveWind(entry, ['wind', i], content, clock)),
    current: resolveCurrent(content, clock),
    marks: resolveMarks(content),
    runs: (content.runs ?? []).map(([from, to], i): Span => clock.span(from, to, ['runs', i])),
    exclude,
    boats,
    boatAssumed: content.boats.some((boat) => !boat.boat && !content.boat),
    notes: notesText(content.notes),
  };
  return { race, issues: [...draft.issues, ...nameIssues, ...clock.issues()] };
}

function resolveBoats(
  draft: RaceDraft,
  clock: RaceClock,
  facts: LogFacts,
): { boats: BoatReference[]; issues: Issue[] } {
  const written = draft.content.boats;
  const files = written.map((boat) => filesOf(boat.track)[0]);
  refuseTwins(draft);
  const { names, issues } = boatNames(
    written.map((boat, i) => ({
      written: boat.name ?? null,
      inner: facts.innerNames.get(files[i]) ?? '',
      file: files[i],
    })),
  );
  const boats = written.map((boat, i) => resolveBoat(boat, names[i], ['boats', i], draft.content, clock));
  return { boats, issues };
}

function refuseTwins(draft: RaceDraft): void {
  const seen = new Set<string>();
  for (const [i, { name }] of draft.content.boats.entries()) {
    if (!name) continue;
    if (seen.has(name)) {
      throw new UserError(`${draft.where(['boats', i, 'name'])}: two boats are called "${name}".`, {
        exitCode: 2,
        suggestion: 'Give each boat a name of its own; several logs of one boat go into one `track` list.',
      });
    }
    seen.add(name);
  }
}

type Path = readonly PropertyKey[];

function resolveBoat(boat: WrittenBoat, name: string, path: Path, content: RaceFile, clock: RaceClock): BoatReference {
  const own = { zone: boat.zone, from: boat.from, to: boat.to };
  const logs = (value: WrittenLogs | null | undefined, key: string): LogReference[] =>
    value === undefined || value === null
      ? []
      : (Array.isArray(value) ? value : [value]).map((log) =>
          resolveLog(typeof log === 'string' ? { file: log } : log, own, [...path, key], content, clock),
        );
  return {
    name,
    sailor: boat.sailor ?? name,
    track: logs(boat.track, 'track'),
    instruments: logs(boat.instruments, 'instruments'),
    boat: boat.boat ?? content.boat ?? DEFAULT_BOAT,
    ...(boat.crew_mass_kg ? { crewMassKg: boat.crew_mass_kg } : {}),
  };
}

type WrittenLog = Exclude<Exclude<WrittenLogs, string>, readonly unknown[]>;
type Owner = Pick<WrittenBoat, 'zone' | 'from' | 'to'>;

function resolveLog(log: WrittenLog, owner: Owner, path: Path, content: RaceFile, clock: RaceClock): LogReference {
  const zone = log.zone ?? owner.zone ?? content.zone;
  const date = log.date ?? content.date;
  const from = log.from ?? owner.from;
  const to = log.to ?? owner.to;
  const part: { from?: number; to?: number } =
    from && to
      ? clock.span(from, to, path)
      : { ...(from ? { from: clock.at(from, path) } : {}), ...(to ? { to: clock.at(to, path) } : {}) };
  return {
    file: log.file.replaceAll('\\', '/'),
    ...(zone ? { zone } : {}),
    ...(date ? { date } : {}),
    ...(log.columns ? { columns: log.columns } : {}),
    ...part,
    clockS: log.clock_s ?? 0,
  };
}

const windOf = (content: RaceFile): WrittenWind[] => {
  const { wind } = content;
  if (wind === undefined || wind === null) return [];
  return Array.isArray(wind) ? wind : [wind];
};

function resolveWind(entry: WrittenWind, path: Path, content: RaceFile, clock: RaceClock): WindReference {
  if (typeof entry === 'string') return resolveStation({ file: entry }, path, content, clock);
  if ('file' in entry) return resolveStation(entry, path, content, clock);
  const errors = {
    seDir: entry.se_deg ?? HAND_ACCURACY.deg,
    seSpeed: fromKnots(entry.se_kn ?? HAND_ACCURACY.kn),
  };
  const readings: HandWind['readings'] =
    'readings' in entry
      ? entry.readings.map(([time, twd, tws]) => ({
          time: clock.at(time, [...path, 'readings']),
          twd: wrap360(twd),
          tws: fromKnots(tws),
        }))
      : [{ time: null, twd: wrap360(entry.twd_deg), tws: fromKnots(entry.tws_kn) }];
  return { kind: 'by-hand', readings: inOrder(readings), ...errors };
}

type WrittenStation = Extract<WrittenWind, { file: string }>;

function resolveStation(entry: WrittenStation, path: Path, content: RaceFile, clock: RaceClock): StationReference {
  return {
    kind: 'log',
    ...resolveLog(entry, {}, path, content, clock),
    ...(entry.at ? { at: place(entry.at) } : {}),
    ...(entry.height_m ? { heightM: entry.height_m } : {}),
    accuracyDir: entry.accuracy?.dir_deg ?? STATION_ACCURACY.dir,
    accuracySpeed: (entry.accuracy?.speed_percent ?? STATION_ACCURACY.percent) / 100,
    offset: entry.offset_deg ?? 0,
  };
}

function resolveCurrent(content: RaceFile, clock: RaceClock): CurrentReading[] | null {
  const { current } = content;
  if (current === undefined || current === null) return null;
  if (!Array.isArray(current)) return [reading(null, current.set_deg, current.drift_kn)];
  const rows = current.map((entry) => {
    const [time, set, drift] = Array.isArray(entry) ? entry : [entry.time, entry.set_deg, entry.drift_kn];
    return reading(clock.at(time, ['current']), set, drift);
  });
  return inOrder(rows);
}

const reading = (time: number | null, set: number, drift: number): CurrentReading => ({
  time,
  set: wrap360(set),
  drift: fromKnots(drift),
});

const inOrder = <T extends { readonly time: number | null }>(rows: readonly T[]): T[] =>
  [...rows].sort((a, b) => (a.time ?? 0) - (b.time ?? 0));

function resolveMarks(content: RaceFile): Marks {
  const marks: Partial<Record<MarkRole, readonly LatLon[]>> = {};
  for (const role of ROLES) {
    const mark = content.marks?.[role];
    if (mark !== undefined && mark !== null) marks[role] = places(mark);
  }
  return marks;
}

function places(mark: WrittenMark): LatLon[] {
  if (typeof mark === 'string') return [place(mark)];
  if (typeof mark[0] === 'number') return [place(mark as [number, number])];
  return (mark as WrittenPosition[]).map(place);
}

/** The schema has let through positions only. */
function place(position: WrittenPosition): LatLon {
  return (typeof position === 'string' ? parsePosition(position) : checkedPosition(...position))!;
}

function notesText(notes: unknown): string | null {
  if (typeof notes === 'string') return notes;
  if (Array.isArray(notes) && notes.every((line) => typeof line === 'string')) return notes.join('\n');
  return null;
}
