import { median } from '../math/median.js';
import type { Issue } from '../recording/issues.js';
import type { Track } from '../recording/track.js';
import type { WindAtBoat } from '../wind/field.js';
import type { WindSource } from '../wind/source.js';

interface Sailor {
  readonly name: string;
  readonly file: string;
  readonly track: Track;
}

/** What of the wind is not there: logs and boats that share no time, and races without a wind speed. */
export function windGaps(
  boats: readonly Sailor[],
  sources: readonly WindSource[],
  atBoats: readonly WindAtBoat[],
): Issue[] {
  const logs = sources.filter((source) => source.kind !== 'by-hand');
  const idle = logs.filter((source) => !boats.some(({ track }) => shareTime(source, track)));
  const windless = logs.length > 0 ? boats.filter(({ track }) => !logs.some((log) => shareTime(log, track))) : [];
  const speedless = boats.filter((boat, k) => !windless.includes(boat) && Number.isNaN(median(atBoats[k].tws)));
  return [
    ...idle.map(({ file, t0, n }) =>
      noOverlap(file, `It runs from ${iso(t0)} to ${iso(t0 + n)}, when no boat sailed: it is not used.`),
    ),
    ...windless.map(({ file, name }) =>
      noOverlap(file, `No wind log reaches the time ${name} sailed: nothing is said of its wind.`),
    ),
    ...(speedless.length > 0 ? [unknown(speedless, boats.length)] : []),
  ];
}

const shareTime = (a: Span, b: Span): boolean => a.t0 < b.t0 + b.n && a.t0 + a.n > b.t0;

interface Span {
  readonly t0: number;
  readonly n: number;
}

const noOverlap = (file: string, message: string): Issue => ({ code: 'wind-no-overlap', message, file });

function unknown(boats: readonly Sailor[], all: number): Issue {
  const whose = boats.length === all ? '' : ` of ${boats.map(({ name }) => name).join(', ')}`;
  return {
    code: 'wind-unknown',
    message:
      `The wind speed${whose} is not known: optimum, ceiling, efficiency and ledger are left out. ` +
      'Give a wind log, or one wind by hand such as --wind 215@12.',
  };
}

const iso = (time: number): string => new Date(time * 1000).toISOString().replace('.000Z', 'Z');
