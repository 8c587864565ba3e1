import { importLog } from './importers/index.js';
import type { ImportedLog, ImportOptions, LogSource } from './importers/types.js';
import { makeFrame, middleOf } from './math/geo.js';
import { median } from './math/median.js';
import type { Issue } from './recording/issues.js';
import type { Recording } from './recording/recording.js';
import type { InputEntry, Warning } from './result/result.js';
import { smoothTrack } from './smooth/index.js';

/** What one log holds. */
export interface InspectFile extends InputEntry {
  readonly columns: readonly { readonly header: string; readonly means: string | null; readonly unit: string | null }[];
  readonly from: string | null;
  readonly to: string | null;
  /** Rows a second, from the median step; null with fewer than two rows. */
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
  for (const file of files) found.push(inspectLog(file, await importLog(open(file), options)));
  return { format: 'legwork-inspect', version: 1, files: found };
}

/** One log's books, span, gaps and warnings. */
export function inspectLog(file: string, log: ImportedLog): InspectFile {
  const { recording } = log;
  const { time } = recording;
  const track = log.fixes >= 3 ? smoothed(recording, file) : null;
  const step = time.length > 1 ? median(time.slice(1).map((t, i) => t - time[i])) : NaN;
  const gaps = track ? track.gaps : holes(time, step);
  const moved = (track?.rejected ?? []).map(({ reason, count, firstTime }) => ({
    code: 'fixes-not-used',
    message: `${count} ${count === 1 ? 'fix' : 'fixes'} not used, ${reason}; the first at ${iso(firstTime)}.`,
  }));
  const issues: readonly Issue[] = [...log.issues, ...(track?.issues ?? []), ...moved];
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
