import type { Feature, FeatureCollection, Geometry, Position } from 'geojson';
import { fromPlane } from '../math/geo.js';
import type { BoatResult, LegResult, Q, Result } from '../result/result.js';
import type { BoatSeries, LegSpan, MarkPlace, RaceSeries } from '../result/series.js';
import { finite } from './columns.js';

/** @turf/turf, loaded only when it is used: it is by far the heaviest import of the program. */
type Turf = typeof import('@turf/turf');

/** Tracks, legs, manoeuvres and marks as RFC 7946: WGS84, longitude first, 7 decimals (1 cm), cut at the 180th meridian. */
export async function raceGeoJson(result: Result, series: RaceSeries): Promise<FeatureCollection> {
  const turf = await import('@turf/turf');
  const features = [
    ...series.marks.map((mark) => markFeature(turf, series, mark)),
    ...series.boats.flatMap((boat, i) => boatFeatures(turf, series, boat, result.boats[i])),
  ];
  return turf.featureCollection(features.filter((feature) => feature !== null));
}

/** The collection as text, one feature a line. */
export async function geoJsonText(result: Result, series: RaceSeries): Promise<string> {
  const { features } = await raceGeoJson(result, series);
  return `{"type":"FeatureCollection","features":[\n${features.map((f) => JSON.stringify(f)).join(',\n')}\n]}\n`;
}

function boatFeatures(turf: Turf, series: RaceSeries, boat: BoatSeries, result: BoatResult): (Feature | null)[] {
  const time = (row: number): string => new Date((boat.t0 + row) * 1000).toISOString();
  const track = lineFeature(turf, series, boat, 0, boat.n, {
    what: 'track',
    boat: boat.name,
    sailor: result.sailor,
    start: time(0),
    end: time(boat.n - 1),
  });
  const legs = boat.legs.map((span) => legFeature(turf, series, boat, span, result.legs[span.index]));
  const turns = boat.manoeuvres.map((turn) => {
    const at = positionAt(series, boat, turn.at);
    if (!at) return null;
    return turf.point(at, {
      what: 'manoeuvre',
      boat: boat.name,
      kind: turn.kind,
      time: time(turn.at),
      from: turn.from,
      to: turn.to,
      seconds: turn.exit - turn.entry,
      loss_m: finite(turn.loss),
    });
  });
  return [track, ...legs, ...turns];
}

function legFeature(turf: Turf, series: RaceSeries, boat: BoatSeries, span: LegSpan, leg: LegResult): Feature | null {
  return lineFeature(turf, series, boat, span.from, span.to, {
    what: 'leg',
    boat: boat.name,
    leg: span.index + 1,
    kind: leg.kind,
    lap: leg.lap,
    start: leg.start,
    end: leg.end,
    tacks: leg.tacks,
    gybes: leg.gybes,
    vmg_kn: valueOf(leg.vmg_kn),
    efficiency: valueOf(leg.efficiency),
    lost_m: valueOf(leg.ledger?.lost_m),
  });
}

const valueOf = (q: Q | undefined): number | null => finite(q?.value);

function markFeature(turf: Turf, series: RaceSeries, mark: MarkPlace): Feature | null {
  const places = mark.places.map(({ x, y }) => position(series, x, y));
  const properties = { what: 'mark', role: mark.role, given: mark.given };
  if (places.length === 0) return null;
  return places.length === 1
    ? turf.point(places[0], properties)
    : turf.feature(lineGeometry(turf, cutAtDateLine(places)), properties);
}

function lineFeature(
  turf: Turf,
  series: RaceSeries,
  boat: BoatSeries,
  from: number,
  to: number,
  properties: Record<string, string | number | null>,
): Feature | null {
  const pieces = piecesOf(series, boat, from, to).flatMap(cutAtDateLine);
  return pieces.length === 0 ? null : turf.feature(lineGeometry(turf, pieces), properties);
}

function lineGeometry(turf: Turf, pieces: Position[][]): Geometry {
  return pieces.length === 1 ? turf.lineString(pieces[0]).geometry : turf.multiLineString(pieces).geometry;
}

/** Stretches of rows with a position; one row alone is no line. */
function piecesOf(series: RaceSeries, boat: BoatSeries, from: number, to: number): Position[][] {
  const pieces: Position[][] = [];
  let piece: Position[] = [];
  for (let row = from; row <= to; row++) {
    const at = row < to ? positionAt(series, boat, row) : null;
    if (at) piece.push(at);
    else {
      if (piece.length > 1) pieces.push(piece);
      piece = [];
    }
  }
  return pieces;
}

function positionAt(series: RaceSeries, boat: BoatSeries, row: number): Position | null {
  const [x, y] = [boat.x[row], boat.y[row]];
  return x === undefined || y === undefined || Number.isNaN(x) || Number.isNaN(y) ? null : position(series, x, y);
}

function position(series: RaceSeries, x: number, y: number): Position {
  const { lat, lon } = fromPlane(series.frame, x, y);
  return [round7(lon), round7(lat)];
}

const round7 = (degrees: number): number => Math.round(degrees * 1e7) / 1e7 + 0;

/**
 * A line cut where it crosses the 180th meridian, so that no piece runs round the world (RFC 7946, 3.1.9).
 *
 * @param line Positions, longitude first, -180..180.
 * @returns Pieces that end and begin on the meridian.
 */
export function cutAtDateLine(line: readonly Position[]): Position[][] {
  const pieces: Position[][] = [];
  let piece: Position[] = [];
  for (const point of line) {
    const last = piece.at(-1);
    if (last && Math.abs(point[0] - last[0]) > 180) {
      const side = last[0] > 0 ? 180 : -180;
      const beyond = point[0] + 2 * side;
      const part = (side - last[0]) / (beyond - last[0]);
      const lat = round7(last[1] + part * (point[1] - last[1]));
      if (last[0] !== side) piece.push([side, lat]);
      if (piece.length > 1) pieces.push(piece);
      piece = point[0] === -side ? [] : [[-side, lat]];
    }
    piece.push([...point]);
  }
  if (piece.length > 1) pieces.push(piece);
  return pieces;
}
