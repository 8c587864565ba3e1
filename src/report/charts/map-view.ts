import { RAD } from '../../math/angles.js';

/**
 * From the local plane to the paper and back. `up` is the direction at the top of the sheet; the client pans, zooms and
 * turns by changing the view and drawing with the same functions.
 */
export interface MapView {
  /** Place at the middle of the sheet. [m] */
  readonly cx: number;
  readonly cy: number;
  /** Units of the drawing a metre. */
  readonly scale: number;
  /** Direction at the top. [deg true] */
  readonly up: number;
  readonly width: number;
  readonly height: number;
}

export interface Place {
  readonly x: number;
  readonly y: number;
}

/** Place in the plane to place on the sheet. */
export function toSheet(view: MapView, x: number, y: number): Place {
  const θ = view.up * RAD;
  const east = x - view.cx;
  const north = y - view.cy;
  const right = east * Math.cos(θ) - north * Math.sin(θ);
  const upward = east * Math.sin(θ) + north * Math.cos(θ);
  return { x: view.width / 2 + view.scale * right, y: view.height / 2 - view.scale * upward };
}

/** Place on the sheet to place in the plane. */
export function toPlane(view: MapView, sheetX: number, sheetY: number): Place {
  const θ = view.up * RAD;
  const right = (sheetX - view.width / 2) / view.scale;
  const upward = (view.height / 2 - sheetY) / view.scale;
  return {
    x: view.cx + right * Math.cos(θ) + upward * Math.sin(θ),
    y: view.cy - right * Math.sin(θ) + upward * Math.cos(θ),
  };
}

/** The transform that draws paths given in (x, -y) metres. */
export function worldTransform(view: MapView): string {
  const { scale, up } = view;
  const θ = up * RAD;
  const at = toSheet(view, 0, 0);
  const cos = scale * Math.cos(θ);
  const sin = scale * Math.sin(θ);
  return `matrix(${[cos, -sin, sin, cos, at.x, at.y].map((v) => Number(v.toFixed(5))).join(' ')})`;
}

/** The view that shows all places with a margin. */
export function fitView(places: readonly Place[], up: number, width: number, height: number, margin = 46): MapView {
  const flat: MapView = { cx: 0, cy: 0, scale: 1, up, width, height };
  const sheet = places.filter((p) => Number.isFinite(p.x) && Number.isFinite(p.y)).map((p) => toSheet(flat, p.x, p.y));
  if (sheet.length === 0) return flat;
  const [left, right] = extentOf(sheet.map((p) => p.x));
  const [top, bottom] = extentOf(sheet.map((p) => p.y));
  const scale = Math.min(
    (width - 2 * margin) / Math.max(right - left, 20),
    (height - 2 * margin) / Math.max(bottom - top, 20),
  );
  const middle = toPlane(flat, (left + right) / 2, (top + bottom) / 2);
  return { ...flat, cx: middle.x, cy: middle.y, scale };
}

function extentOf(values: readonly number[]): [number, number] {
  let low = Infinity;
  let high = -Infinity;
  for (const v of values) {
    low = Math.min(low, v);
    high = Math.max(high, v);
  }
  return [low, high];
}

/** A round length for the scale bar: 1, 2 or 5 times a power of ten, near `target` units of the drawing. */
export function barLength(view: MapView, target = 110): number {
  const metres = target / view.scale;
  const power = 10 ** Math.floor(Math.log10(metres));
  const lead = metres / power;
  return (lead >= 5 ? 5 : lead >= 2 ? 2 : 1) * power;
}
