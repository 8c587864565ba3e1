import type { Race } from './files/race-types.js';
import { importLog } from './importers/index.js';
import type { ImportedLog, ImportOptions, LogSource } from './importers/types.js';
import { makeFrame, middleOf } from './math/geo.js';
import { median } from './math/median.js';
import { UserError, type Issue } from './recording/issues.js';
import { channelValues, type Channel, type Recording } from './recording/recording.js';
import type { InputEntry, Warning } from './result/result.js';
import { findEngine } from './sensors/engine.js';
import { findStuckWind } from './sensors/stuck.js';
import { smoothTrack } from './smooth/index.js';

/** What one log holds. */
export interface InspectFile extends InputEntry {
  readonly columns: readonly { readonly header: string; readonly means: string | null; readonly unit: string | null }[];
  readonly from: string | null;
  readonly to: string | null;
  /** Positions a second (wind readings where there are none), from the median step; null with fewer than two. */
  readonly rate_hz: number | null;
  readonly stretches: readonly { readonly from: string; readonly to: string; readonly what: string }[];
  readonly warnings: readonly Warning[];
}

export interface InspectResult {
  readonly format: 'legwork-inspect';
  readonly version: 1;
  readonly files: readonly InspectFile[];
}

/** A hole in a log is a gap from here on, or from five of its own median steps on. [s] */
const SHORTEST_GAP = 5;
const GAP_STEPS = 5;

/**
 * What logs hold: format, columns as understood, span, rate, gaps, rejections. Judges nothing.
 *
 * @param files   Names of the logs.
 * @param open    Opens a log by its name.
 * @param options How to read them.
 */
export async function inspect(
  files: readonly string[],
  open: (file: string) => LogSource,
  options: ImportOptions = {},
): Promise<InspectResult> {
  const found: InspectFile[] = [];
  for (const file of files) {
    const log = await importLog(open(file), options);
    found.push({ ...inspectLog(file, log), stretches: await racing(file, log, open, options) });
  }
  return { format: 'legwork-inspect', version: 1, files: found };
}

/** Fewer fixes than this (a minute of the usual one a second) hold no beat. */
const FEWEST_FIXES = 60;

/**
 * Stretches that look like racing: the legs a debrief of this log alone finds, with the wind it carries or, without
 * any, the direction its own tacks tell. Nothing where it finds none.
 */
async function racing(
  file: string,
  log: ImportedLog,
  open: (file: string) => LogSource,
  options: ImportOptions,
): Promise<InspectFile['stretches']> {
  if (log.fixes < FEWEST_FIXES) return [];
  const { debrief } = await import('./debrief.js');
  try {
    const { result } = await debrief(raceOf(file, options), open);
    return result.boats[0].legs.map(({ start, end, kind, tacks, gybes }) => ({
      from: start,
      to: end,
      what: `${LEG_WORDS[kind]}${turnWords(kind === 'upwind' ? tacks : gybes, kind === 'upwind' ? 'tack' : 'gybe')}`,
    }));
  } catch (error) {
    if (error instanceof UserError) return [];
    throw error;
  }
}

const LEG_WORDS = { upwind: 'beat', downwind: 'run', reach: 'reach' } as const;

const turnWords = (count: number, word: string): string =>
  count === 0 ? '' : `, ${count} ${word}${count === 1 ? '' : 's'}`;

/** The log as the only boat of a race of which nothing else is known. */
function raceOf(file: string, options: ImportOptions): Race {
  const { zone, date, columns } = options;
  const reference = { file, ...(date && { date }), ...(columns && { columns }), clockS: 0 };
  const boat = { name: file, sailor: file, track: [reference], instruments: [], boat: 'single-hander' };
  return {
    name: file,
    start: null,
    finish: null,
    zone: zone ?? null,
    wind: [],
    current: null,
    marks: {},
    runs: [],
    exclude: [],
    boats: [boat],
    boatAssumed: false,
    notes: null,
  };
}

/** One log's books, span, gaps and warnings. */
export function inspectLog(file: string, log: ImportedLog): InspectFile {
  const { recording } = log;
  const { time } = recording;
  const track = log.fixes >= 3 ? smoothed(recording, file) : null;
  const step = medianStep(recording, log.fixes > 0 ? 'lat' : log.samples > 0 ? windChannel(recording) : null);
  const gaps = track ? track.gaps : holes(time, step);
  const issues: readonly Issue[] = [
    ...log.issues,
    ...(track?.issues ?? []),
    ...findStuckWind(recording, file).issues,
    ...(track ? findEngine(track.track, undefined, file).issues : []),
  ];
  return {
    file,
    sha256: log.sha256,
    kind: log.kind,
    rows: log.rows,
    kept: log.kept,
    ignored: log.ignored,
    ignored_types: log.ignoredTypes,
    rejected: log.rejected,
    fixes: log.fixes,
    samples: log.samples,
    gaps: gaps.map(({ from, seconds }) => ({ from: iso(from), seconds })),
    columns: log.columns.map(({ header, means, unit }) => ({ header, means, unit })),
    from: time.length > 0 ? iso(time[0]) : null,
    to: time.length > 0 ? iso(time[time.length - 1]) : null,
    rate_hz: step > 0 ? 1 / step : null,
    stretches: [],
    warnings: issues.map(({ code, message }) => ({ code, message, file })),
  };
}

function smoothed(recording: Recording, file: string) {
  const { lat, lon } = recording.channels;
  const middle = lat && lon ? middleOf(lat, lon) : null;
  return middle && smoothTrack(recording, makeFrame(middle.lat, middle.lon), { file });
}

/** Seconds from one record to the next, of those that hold a channel where one is named; NaN with fewer than two. */
function medianStep(recording: Recording, channel: Channel | null): number {
  const { time } = channel === null ? recording : channelValues(recording, channel);
  return time.length > 1 ? median(time.slice(1).map((t, i) => t - time[i])) : NaN;
}

const windChannel = ({ channels }: Recording): Channel | null =>
  (['tws', 'twd', 'twdMagnetic', 'aws', 'awa'] as const).find((channel) => channels[channel]) ?? null;

/** Holes of a log without positions. */
function holes(time: Float64Array, step: number): { from: number; seconds: number }[] {
  const longest = Math.max(SHORTEST_GAP, GAP_STEPS * step);
  const found = [];
  for (let i = 1; i < time.length; i++) {
    const seconds = time[i] - time[i - 1];
    if (seconds > longest) found.push({ from: time[i - 1], seconds });
  }
  return found;
}

const iso = (seconds: number): string => new Date(seconds * 1000).toISOString();
