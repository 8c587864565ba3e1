import { clockCorrections, type ClockCorrection } from './between/common-clock.js';
import type { BetweenBoat, BowAngle, TrimForces, TrimSources } from './between/boat.js';
import { ladder, type LadderLeg } from './between/ladder.js';
import { comparePairs, pairsOf, type PairComparison } from './between/pairs.js';
import { debrief, type Debrief, type DebriefOptions } from './debrief.js';
import { trimForces } from './estimate/trim-forces.js';
import type { BoatReference, LogReference, Race } from './files/race-types.js';
import type { LogSource } from './importers/types.js';
import { UserError } from './recording/issues.js';
import type { BoatResult, Q, Warning } from './result/result.js';
import type { BoatSeries, MarkPlace } from './result/series.js';
import { boatModels } from './steps/boat-models.js';

export interface CompareOptions extends DebriefOptions {
  /** Names of the boats to compare, all when left out. */
  readonly pairs?: readonly string[];
}

/** Gains of the first boat over the second along each beat, for the page. */
export interface PairLadder {
  readonly boats: readonly [string, string];
  readonly legs: readonly LadderLeg[];
}

export interface Comparison extends Debrief {
  /** What stands behind `result.pairs`, in the same order: blocks and sampling errors. */
  readonly comparisons: readonly PairComparison[];
  readonly ladders: readonly PairLadder[];
}

/**
 * Boats of one race against each other.
 *
 *     debrief, clocks set right -> pairs of settled blocks, ladders -> result with pairs
 *
 * @param race What is to be compared.
 * @param open Opens a log by the name it has in `race`.
 * @throws UserError when there are fewer than two boats, or for what a debrief cannot use.
 */
export async function compare(
  race: Race,
  open: (file: string) => LogSource,
  options: CompareOptions = {},
): Promise<Comparison> {
  const { pairs: only, ...rest } = options;
  if (race.boats.length < 2) {
    throw new UserError(`${race.name}: one boat alone cannot be compared`, {
      exitCode: 2,
      suggestion: 'Give the tracks of two boats or more.',
    });
  }
  const { result, series, boats, warnings } = await onTime(race, open, rest);
  const { results: pairs, comparisons } = comparePairs(boats, only ? { only } : {});
  const ladders = pairsOf(boats, only).map(([first, second]) => ({
    boats: [first.name, second.name] as const,
    legs: ladder(first, second),
  }));
  return { result: { ...result, pairs, warnings: [...result.warnings, ...warnings] }, series, comparisons, ladders };
}

/** Corrections of clocks build on each other: hours hide seconds. */
const MOST_ROUNDS = 2;

/** The debrief, done again with clocks set right where it is certain that one is off. */
async function onTime(
  race: Race,
  open: (file: string) => LogSource,
  options: DebriefOptions,
): Promise<Debrief & { boats: BetweenBoat[]; warnings: Warning[] }> {
  const warnings: Warning[] = [];
  const forces = await forcesOf(race, open);
  for (let round = 0, right = race; ; round++) {
    const { result, series } = await debrief(right, open, options);
    const marks = race.runs.length > 0 ? [] : series.marks;
    const boats = series.boats.map((boat, k) => ({
      ...betweenBoat(boat, result.boats[k], marks),
      trim: trimSources(boat, result.boats[k], forces[k]),
    }));
    const corrections = round < MOST_ROUNDS ? clockCorrections(boats) : [];
    if (corrections.length === 0) return { result, series, boats, warnings };
    warnings.push(...corrections.map(clockWarning));
    right = { ...right, boats: right.boats.map((boat) => withClock(boat, corrections)) };
  }
}

function withClock(boat: BoatReference, corrections: readonly ClockCorrection[]): BoatReference {
  const seconds = corrections.find(({ name }) => name === boat.name)?.correction;
  if (seconds === undefined) return boat;
  const own = new Set(boat.track.map(({ file }) => file));
  const moved = (log: LogReference): LogReference =>
    own.has(log.file) ? { ...log, clockS: log.clockS + seconds } : log;
  return { ...boat, track: boat.track.map(moved), instruments: boat.instruments.map(moved) };
}

/** A boat of a debrief as comparisons see it. */
export function betweenBoat(series: BoatSeries, result: BoatResult, marks: readonly MarkPlace[]): BetweenBoat {
  const { name, t0, n, x, y, ux, uy, twd, tws, settled, gamma } = series;
  const windward = marks.find(({ role }) => role === 'windward')?.places ?? [];
  const distance = (i: number): number => Math.min(...windward.map((mark) => Math.hypot(x[i] - mark.x, y[i] - mark.y)));
  return {
    name,
    t0,
    n,
    x,
    y,
    ux,
    uy,
    twd,
    tws,
    settled,
    tack: Int8Array.from(gamma, (angle) => (Number.isNaN(angle) ? 0 : angle >= 0 ? 1 : -1)),
    ...(windward.length > 0 ? { toMark: x.map((_, i) => distance(i)) } : {}),
    legs: series.legs.flatMap(({ index, from, to }) => {
      const leg = result.legs[index];
      return leg.kind === 'upwind' ? [{ lap: leg.lap, from, to }] : [];
    }),
    manoeuvres: series.manoeuvres.map(({ kind, entry, at, exit }) => ({ kind, from: entry, at, to: exit })),
  };
}

async function forcesOf(race: Race, open: (file: string) => LogSource): Promise<TrimForces[]> {
  const models = await boatModels(race, open);
  return models.map(({ model, accuracy, sha256 }, k) =>
    trimForces(model, accuracy, `${sha256} ${race.boats[k].crewMassKg ?? ''}`),
  );
}

/** The instruments of a boat that the debrief found its leeway by, and its boat file. */
function trimSources({ heading, awa }: BoatSeries, { corrections, legs }: BoatResult, forces: TrimForces): TrimSources {
  const ways = new Set(legs.flatMap(({ trim }) => (trim?.leeway_ways ?? []).map(({ way }) => way)));
  const bowAngle = (angle: Float64Array, offset: Q): BowAngle => ({ angle, offsetSe: offset?.se ?? 0 });
  return {
    forces,
    ...(ways.has('heading') && { heading: bowAngle(heading, corrections.compass_offset_deg) }),
    ...(ways.has('masthead') && awa && { masthead: bowAngle(awa, corrections.awa_offset_deg) }),
  };
}

function clockWarning({ name, correction, skew }: ClockCorrection): Warning {
  const ahead = correction < 0 ? 'ahead of' : 'behind';
  return {
    code: 'clock-skew',
    message:
      `The clock of ${name} is ${Math.abs(correction)} s ${ahead} the others' (${skew.note}, give or take ` +
      `${Math.round(skew.se)} s). It was set right here.`,
  };
}
