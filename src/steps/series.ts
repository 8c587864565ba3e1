import type { Marks } from '../files/race-types.js';
import { toPlane } from '../math/geo.js';
import { median } from '../math/median.js';
import { apparentWind } from '../physics/triangle.js';
import type { Frame, Track } from '../recording/track.js';
import type { BoatSeries, MarkPlace } from '../result/series.js';
import { LABEL } from '../segment/spells.js';
import type { Place } from '../segment/legs.js';
import type { BoatEstimate } from './estimate-boat.js';
import type { Sailed } from './sail.js';

const RAD = Math.PI / 180;

/** The aligned columns behind one boat's result. */
export function boatSeries(track: Track, one: Sailed, estimate: BoatEstimate): BoatSeries {
  const { sailing, tws } = one;
  const n = sailing.n;
  const vmg = sailing.gamma.map((gamma, i) => sailing.speed[i] * Math.cos(gamma * RAD));
  const beta = new Float64Array(n).fill(NaN);
  const aws = new Float64Array(n).fill(NaN);
  for (let i = 0; i < n; i++) {
    if (Number.isNaN(tws[i]) || Number.isNaN(sailing.gamma[i])) continue;
    const apparent = apparentWind(sailing.speed[i], tws[i], Math.abs(sailing.gamma[i]));
    beta[i] = apparent.beta;
    aws[i] = apparent.aws;
  }
  return {
    name: track.name,
    t0: track.t0,
    n,
    x: sailing.x,
    y: sailing.y,
    ux: sailing.ux,
    uy: sailing.uy,
    vx: track.vx,
    vy: track.vy,
    twd: sailing.twd,
    tws,
    gamma: sailing.gamma,
    speed: sailing.speed,
    vmg,
    beta,
    aws,
    heading: track.heading ?? new Float64Array(n).fill(NaN),
    settled: settledMask(one, n),
    legs: one.legs.map((leg, index) => ({ index, from: leg.from, to: leg.to })),
    manoeuvres: estimate.manoeuvres.map(({ manoeuvre, loss }) => ({
      kind: manoeuvre.kind,
      from: manoeuvre.from,
      to: manoeuvre.to,
      entry: manoeuvre.entry,
      at: manoeuvre.at,
      exit: manoeuvre.exit,
      loss: loss?.value ?? NaN,
    })),
    blocks: one.blocks.map(({ leg, from, to, tack, gamma, speed, vmg: made, tws: wind, twd, beta: angle }) => ({
      leg,
      from,
      to,
      tack,
      gamma,
      speed,
      vmg: made,
      tws: wind,
      twd,
      beta: angle,
    })),
  };
}

function settledMask(one: Sailed, n: number): Uint8Array {
  const mask = new Uint8Array(n);
  one.legs.forEach((leg, k) => {
    one.rows[k]?.labels.forEach((label, i) => {
      if (label === LABEL.settled) mask[leg.from + i] = 1;
    });
  });
  return mask;
}

/** Marks as given, and the turning marks found from where the boats turned when they were not. */
export function placesOf(
  given: Marks,
  course: { readonly windward: Place | null; readonly leeward: Place | null },
  sailed: readonly Sailed[],
  frame: Frame,
): MarkPlace[] {
  const places: MarkPlace[] = Object.entries(given).map(([role, at]) => ({
    role,
    given: true,
    places: at.map(({ lat, lon }) => toPlane(frame, lat, lon)),
  }));
  if (!course.windward) places.push(...foundMark('windward', sailed, (one) => ends(one, 'upwind')));
  if (!course.leeward) places.push(...foundMark('leeward', sailed, (one) => ends(one, 'downwind')));
  return places;
}

/** Rows at which legs of a kind end, but for the last row of a track. */
function ends(one: Sailed, kind: string): number[] {
  return one.legs.filter((leg) => leg.kind === kind && leg.to < one.sailing.n - 1).map((leg) => leg.to);
}

function foundMark(role: string, sailed: readonly Sailed[], rows: (one: Sailed) => number[]): MarkPlace[] {
  const at = sailed.flatMap((one) => rows(one).map((row) => ({ x: one.sailing.x[row], y: one.sailing.y[row] })));
  const x = median(at.map((place) => place.x));
  const y = median(at.map((place) => place.y));
  return Number.isNaN(x) ? [] : [{ role, given: false, places: [{ x, y }] }];
}
