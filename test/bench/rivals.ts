/** General tools on the same work: what one would write without this program. */
import { createReadStream } from 'node:fs';
import Papa from 'papaparse';
import { SaxesParser } from 'saxes';
import type { ForceModel } from '../../src/physics/balance.js';
import { balance } from '../../src/physics/balance.js';
import type { Columns } from './columns.js';

class Growing {
  values = new Float64Array(1 << 16);
  length = 0;
  push(value: number): void {
    if (this.length === this.values.length) {
      const larger = new Float64Array(2 * this.length);
      larger.set(this.values);
      this.values = larger;
    }
    this.values[this.length++] = value;
  }
  get done(): Float64Array {
    return this.values.subarray(0, this.length);
  }
}

/** GPX by saxes alone into the same columns. */
export async function gpxBySaxes(path: string): Promise<Columns> {
  const [time, lat, lon, sog] = [new Growing(), new Growing(), new Growing(), new Growing()];
  const parser = new SaxesParser({ xmlns: false, position: false });
  let [text, stamp, speed] = ['', NaN, NaN];
  parser.on('opentag', ({ name, attributes }) => {
    text = '';
    if (name !== 'trkpt') return;
    lat.push(Number(attributes['lat']));
    lon.push(Number(attributes['lon']));
    stamp = speed = NaN;
  });
  parser.on('text', (piece) => (text += piece));
  parser.on('closetag', ({ name }) => {
    if (name === 'time') stamp = Date.parse(text) / 1000;
    else if (name.endsWith(':speed')) speed = Number(text);
    else if (name === 'trkpt') {
      time.push(stamp);
      sog.push(speed);
    }
  });
  for await (const piece of createReadStream(path, { encoding: 'utf8', highWaterMark: 1 << 18 })) {
    parser.write(piece as string);
  }
  parser.close();
  return { time: time.done, lat: lat.done, lon: lon.done, sog: sog.done };
}

/** A table by papaparse alone, in its fastest way: a stream, chunks, no header, times by Date.parse. Speeds in knots. */
export function tableByPapaparse(path: string): Promise<Columns> {
  const [time, lat, lon, sog] = [new Growing(), new Growing(), new Growing(), new Growing()];
  let isHeader = true;
  return new Promise((resolve, reject) => {
    Papa.parse<string[]>(createReadStream(path, { encoding: 'utf8', highWaterMark: 1 << 18 }), {
      header: false,
      skipEmptyLines: true,
      chunk: ({ data }) => {
        for (const row of data) {
          if (!isHeader) {
            time.push(Date.parse(row[0]) / 1000);
            lat.push(Number(row[1]));
            lon.push(Number(row[2]));
            sog.push((Number(row[3]) * 1852) / 3600);
          }
          isHeader = false;
        }
      },
      complete: () => resolve({ time: time.done, lat: lat.done, lon: lon.done, sog: sog.done }),
      error: reject,
    });
  });
}

/** The same by pandas: prints rows and the sums of the columns. */
export const TABLE_BY_PANDAS = `
import sys, json, pandas as pd
d = pd.read_csv(sys.argv[1])
t = pd.to_datetime(d['time'], format='%Y-%m-%dT%H:%M:%S.%fZ').to_numpy('M8[ms]').astype('i8') / 1e3
print(json.dumps(dict(n=len(t), time=float((t - t[0]).mean()), lat=float(d.lat.mean()), lon=float(d.lon.mean()), sog=float(d.sog.mean()) * 1852 / 3600)))
`;

/** The best course upwind by trying every twentieth of a degree. */
export function bestByGrid(model: ForceModel, tws: number): { gamma: number; vmg: number } {
  let best = { gamma: NaN, vmg: -Infinity };
  for (let k = 0; k <= 1000; k++) {
    const gamma = 25 + k / 20;
    const { vmg } = balance(model, tws, gamma, NaN);
    if (vmg > best.vmg) best = { gamma, vmg };
  }
  return best;
}
