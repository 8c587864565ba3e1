/** The bare page the report is measured against: the same columns as curves of the charting library, and nothing else. */
import { build } from 'esbuild';
import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { PANELS } from '../../src/report/charts/time-series.js';
import type { RaceSeries } from '../../src/result/series.js';
import { ROOT } from './data.js';

const SCRIPT = `
import uPlot from 'uplot';
const { times, panels } = JSON.parse(document.getElementById('data').textContent);
const plots = panels.map((columns) => {
  const series = [{}, ...columns.map((_, k) => ({ stroke: ['#1f4e79', '#a8570a', '#0d6e66', '#6b3a8c'][k % 4] }))];
  const options = { width: 1180, height: 138, legend: { show: false }, series };
  return new uPlot(options, [times, ...columns], document.body);
});
window.scrubTo = (time) => plots.forEach((plot) => plot.setCursor({ left: plot.valToPos(time, 'x'), top: 10 }));
`;

/** A page that draws the five panels of the series, all boats and all rows, with a cursor through them. */
export async function barePage(series: RaceSeries): Promise<string> {
  const { outputFiles } = await build({
    stdin: { contents: SCRIPT, resolveDir: ROOT },
    bundle: true,
    minify: true,
    format: 'iife',
    write: false,
  });
  const css = readFileSync(join(ROOT, 'node_modules/uplot/dist/uPlot.min.css'), 'utf8');
  return `<!doctype html><meta charset="utf-8"><title>bare</title><style>${css}</style><body>
<script type="application/json" id="data">${JSON.stringify(curvesOf(series))}</script><script>${outputFiles[0].text}</script>`;
}

/** All boats on one clock, to a thousandth; null where a boat has nothing. */
function curvesOf({ boats }: RaceSeries): { times: number[]; panels: (number | null)[][][] } {
  const from = Math.min(...boats.map(({ t0 }) => t0));
  const to = Math.max(...boats.map(({ t0, n }) => t0 + n));
  const times = Array.from({ length: to - from }, (_, i) => from + i);
  const panels = PANELS.map(({ values }) =>
    boats.map((boat) => {
      const column = values(boat);
      return times.map((t) => {
        const value = column[t - boat.t0] ?? NaN;
        return Number.isFinite(value) ? Math.round(value * 1000) / 1000 : null;
      });
    }),
  );
  return { times, panels };
}
