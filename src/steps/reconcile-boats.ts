import { reconcileBlocks, type Stretch } from '../estimate/reconcile-blocks.js';
import { reconcile, type Reconciliation, type Reconciled } from '../estimate/reconcile.js';
import { wrap180, wrap360 } from '../math/angles.js';
import type { Issue } from '../recording/issues.js';
import type { Track } from '../recording/track.js';
import { uncorrected, windAtBoat, type CorrectedSource } from '../wind/field.js';
import type { CleanBoat, CleanTracks } from './clean-tracks.js';
import type { FoundWind } from './find-wind.js';
import type { CurrentAt, Sailed } from './sail.js';

/** What must be added to a boat's instruments; null where it was not found or may not be applied. [deg] */
export interface BoatCorrections {
  readonly compass: Reconciled | null;
  readonly masthead: Reconciled | null;
  /** Leeway upwind as reconciled over the whole log. [deg] */
  readonly leeway: Reconciled | null;
}

export interface Estimate {
  readonly value: number;
  readonly se: number;
}

export interface Corrections {
  readonly boats: readonly BoatCorrections[];
  /** To be added to the stations' direction [deg]; null: not found this way. */
  readonly station: Estimate | null;
  /** Where the water flows to, where it was found. [m/s] */
  readonly current: { readonly east: Estimate; readonly north: Estimate } | null;
  readonly issues: readonly Issue[];
}

/** Shortest stretch off the wind that is used. [s] */
const LEAST_RUN = 30;

/**
 * Reconciles every boat that carries a compass, a vane or a log, each with its own log; what they say of the station
 * and of the current is averaged by inverse variance.
 *
 * @param told Current of the race file; null where it is not given.
 */
export function reconcileBoats(
  clean: CleanTracks,
  wind: FoundWind,
  gun: number | null,
  told: CurrentAt | null,
): Corrections {
  const stations = wind.sources.filter(({ source }) => source.kind === 'station');
  const all = clean.boats.map((boat, k) => reconcileBoat(boat, wind.sailed[k], stations, gun, told));
  const applied = (from: readonly (Reconciliation | null)[], pick: (r: Reconciliation) => Reconciled): Reconciled[] =>
    from.flatMap((one) => (one && pick(one).applied ? [pick(one)] : []));
  // Along the wind, current and leeway look alike unless the water speed is logged.
  const withLog = all.map((one, k) => (clean.boats[k].track.stw ? one : null));
  const east = combined(applied(withLog, (one) => one.estimates.currentEast));
  const north = combined(applied(withLog, (one) => one.estimates.currentNorth));
  return {
    boats: all.map(correctionsOf),
    station: stations.length > 0 ? combined(applied(all, (one) => one.estimates.windDirection)) : null,
    current: told || !east || !north ? null : { east, north },
    issues: all.flatMap((one, k) => (one ? issuesOf(one, clean.boats[k], stations.length > 0) : [])),
  };
}

function reconcileBoat(
  { track }: CleanBoat,
  one: Sailed,
  stations: readonly CorrectedSource[],
  gun: number | null,
  told: CurrentAt | null,
): Reconciliation | null {
  if (!track.heading && !track.awa && !track.stw) return null;
  const raw = stations.map(({ source, lag, carry, middle }) => ({ ...uncorrected(source), lag, carry, middle }));
  const at = windAtBoat(-1, track, raw);
  const blocks = reconcileBlocks(track, { from: at.twd, speed: at.tws }, stretchesOf(one, gun));
  const current = told?.(track.t0 + track.n / 2);
  return reconcile(blocks, current ? { current } : {});
}

/** Settled spells of the beats, and steady running and reaching after the gun, manoeuvres left out. */
function stretchesOf(one: Sailed, gun: number | null): Stretch[] {
  const beats = one.rows.flatMap((rows) =>
    (rows?.spells ?? []).map(({ from, to, tack }): Stretch => ({ from, to, tack, upwind: true })),
  );
  const off = one.states
    .filter((state) => state.point !== 'upwind' && (gun === null || one.sailing.t0 + state.from > gun))
    .flatMap((state) => {
      const before = one.manoeuvres.filter((m) => m.exit > state.from && m.at <= state.from + 5).at(-1);
      const next = one.manoeuvres.find((m) => m.entry > state.from + 5);
      const from = Math.max(state.from, before?.exit ?? state.from) + 5;
      const to = Math.min(state.to, next?.entry ?? state.to) - 5;
      const tack = state.side > 0 ? ('starboard' as const) : ('port' as const);
      const moving = to > from && one.sailing.speed.subarray(from, to).every((v) => v > 0.4 * one.usual);
      return to - from >= LEAST_RUN && moving ? [{ from, to, tack, upwind: false }] : [];
    });
  return [...beats, ...off].sort((a, b) => a.from - b.from);
}

function combined(estimates: readonly Reconciled[]): Estimate | null {
  if (estimates.length === 0) return null;
  const total = estimates.reduce((sum, one) => sum + 1 / one.se ** 2, 0);
  const value = estimates.reduce((sum, one) => sum + one.value / one.se ** 2, 0) / total;
  return { value, se: Math.sqrt(1 / total) };
}

function correctionsOf(one: Reconciliation | null): BoatCorrections {
  const applied = (estimate: Reconciled | undefined): Reconciled | null => (estimate?.applied ? estimate : null);
  return {
    compass: applied(one?.estimates.compass),
    masthead: applied(one?.estimates.masthead),
    leeway: applied(one?.estimates.leewayUpwind),
  };
}

const NAMES = {
  compass: 'the compass offset',
  masthead: 'the masthead offset',
  windDirection: 'the direction offset of the wind station',
  leewayUpwind: 'leeway by the sensors',
} as const;

/** What the log cannot tell apart, of what it has sensors for; and a current that must be there. */
function issuesOf(one: Reconciliation, { track, logs }: CleanBoat, hasStation: boolean): Issue[] {
  const file = logs.instruments[0]?.file ?? logs.trackFiles[0] ?? '';
  const has = {
    compass: !!track.heading,
    masthead: !!track.awa,
    windDirection: hasStation,
    leewayUpwind: !!track.heading,
  };
  const keys = (Object.keys(NAMES) as (keyof typeof NAMES)[]).filter((key) => has[key] && !one.estimates[key].applied);
  const list = keys.map((key) => `${NAMES[key]} (${one.estimates[key].reason})`).join(', ');
  const others = one.warnings.filter(({ code }) => code !== 'not-separable');
  return [
    ...(list ? [{ code: 'not-separable', message: `The log cannot tell, so nothing is done about: ${list}.` }] : []),
    ...others,
  ].map(({ code, message }) => ({ code, message: `${logs.reference.name}: ${message}`, file }));
}

/** The boats with their instruments corrected. */
export function correctTracks(clean: CleanTracks, corrections: Corrections): CleanTracks {
  const boats = clean.boats.map((boat, k): CleanBoat => {
    const { compass, masthead } = corrections.boats[k];
    return { ...boat, track: correctTrack(boat.track, compass?.value ?? 0, masthead?.value ?? 0) };
  });
  return { ...clean, boats };
}

function correctTrack(track: Track, compass: number, masthead: number): Track {
  return {
    ...track,
    ...(track.heading ? { heading: track.heading.map((h) => wrap360(h + compass)) } : {}),
    ...(track.awa ? { awa: track.awa.map((angle) => wrap180(angle + masthead)) } : {}),
  };
}
