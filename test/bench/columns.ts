/** Columns that two readers must agree on, and their checksum. */
import type { Recording } from '../../src/recording/recording.js';

export interface Columns {
  readonly time: Float64Array;
  readonly lat: Float64Array;
  readonly lon: Float64Array;
  readonly sog: Float64Array;
}

export function columnsOf({ time, channels }: Recording): Columns {
  const none = new Float64Array(time.length).fill(NaN);
  return { time, lat: channels.lat ?? none, lon: channels.lon ?? none, sog: channels.sog ?? none };
}

/** How many rows, and the means of what the columns hold, to a centimetre (times since the first). */
export function checksum({ time, lat, lon, sog }: Columns): string {
  const mean = (column: Float64Array, from = 0): number => {
    let [sum, n] = [0, 0];
    for (const value of column) {
      if (Number.isNaN(value)) continue;
      sum += value - from;
      n++;
    }
    return sum / n;
  };
  return sumsText({ n: time.length, time: mean(time, time[0]), lat: mean(lat), lon: mean(lon), sog: mean(sog) });
}

export function sumsText(sums: {
  readonly n: number;
  readonly time: number;
  readonly lat: number;
  readonly lon: number;
  readonly sog: number;
}): string {
  const { n, time, lat, lon, sog } = sums;
  return [n, time.toFixed(4), lat.toFixed(7), lon.toFixed(7), sog.toFixed(6)].join(' ');
}

/**
 * Mean speed from positions once a second: what the Python baseline computes from its columns (linear between fixes,
 * radii of curvature at the mean latitude, central differences), as a checksum of them. [kn]
 */
export function meanSpeed({ time, lat, lon }: Columns): number {
  const first = Math.ceil(time[0]);
  const n = Math.floor(time[time.length - 1]) - first + 1;
  const la = new Float64Array(n);
  const lo = new Float64Array(n);
  for (let i = 0, k = 0; i < n; i++) {
    while (k < time.length - 2 && time[k + 1] < first + i) k++;
    const share = (first + i - time[k]) / (time[k + 1] - time[k]);
    la[i] = lat[k] + share * (lat[k + 1] - lat[k]);
    lo[i] = lon[k] + share * (lon[k + 1] - lon[k]);
  }
  const rad = Math.PI / 180;
  const phi = (la.reduce((sum, value) => sum + value, 0) / n) * rad;
  const e2 = 0.00669437999014;
  const w = 1 - e2 * Math.sin(phi) ** 2;
  const x = lo.map((value) => ((value - lo[0]) * rad * 6378137 * Math.cos(phi)) / Math.sqrt(w));
  const y = la.map((value) => ((value - la[0]) * rad * 6378137 * (1 - e2)) / w ** 1.5);
  let sum = 0;
  for (let i = 0; i < n; i++) {
    const [a, b] = [Math.max(0, i - 1), Math.min(n - 1, i + 1)];
    sum += Math.hypot((x[b] - x[a]) / (b - a), (y[b] - y[a]) / (b - a));
  }
  return (sum / n) * 1.943844;
}
