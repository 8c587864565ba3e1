import { toKnots } from '../math/units.js';
import type { Basis, Q } from './result.js';

/** A value with its error as estimates carry it. Inside units; `sys` 0 = none. */
export interface Estimated {
  readonly value: number;
  readonly se: number;
  readonly sys?: number;
}

/** A quantity of the result file; null where there is no finite value. An error that is not finite is null. */
export function quantity(figure: Estimated | null, basis: Basis, scale = 1): Q {
  if (!figure || !Number.isFinite(figure.value)) return null;
  const se = Number.isFinite(figure.se) ? figure.se * scale : null;
  const sys = figure.sys !== undefined && figure.sys > 0 && Number.isFinite(figure.sys) ? figure.sys * scale : null;
  return { value: figure.value * scale, se, ...(sys === null ? {} : { sys }), basis };
}

/** The same for a speed in m/s, given in knots. */
export function knotsQuantity(figure: Estimated | null, basis: Basis): Q {
  return quantity(figure, basis, toKnots(1));
}

/** UTC time as the result file writes it, to the tenth of a second at most. */
export function isoTime(time: number): string {
  return new Date(Math.round(time * 1000)).toISOString();
}
