import type { Result } from '../../result/result.js';
import type { RaceSeries } from '../../result/series.js';
import { PANELS, panelKnown, timePanel, timeSpan } from '../charts/time-series.js';
import { trackMap } from '../charts/track-map.js';
import { toKnots } from '../../math/units.js';
import { wrap360 } from '../../math/angles.js';
import { plain, time } from '../format.js';
import { html, nameOf, trusted, type Part, type Safe } from '../html.js';
import { term } from '../terms.js';
import { section, table } from './figure.js';

/** The map, and beside it what the client brings to life. */
export function replay(result: Result, series: RaceSeries): Safe {
  const marks =
    series.marks.length === 0
      ? 'No marks were given or found, so no laylines are drawn.'
      : html`The ${term('layline', 'laylines')} are each boat’s own.`;
  return section(
    'chart',
    'The race on the chart',
    html`<div class="bench">
        <div class="map-frame" tabindex="0" role="group" aria-label="Chart: arrow keys move it, plus and minus zoom">
          <div class="map-tools" hidden></div>
          <div class="sheet">${trusted(trackMap(result, series))}</div>
          <p class="plate-words">
            Circles are tacks, squares gybes. ${marks}
            <span class="only-live"
              >A finger or the mouse along a track moves the time; elsewhere it moves the chart. The red ray is the
              course, the dark one the bow: between them lies leeway.</span
            >
          </p>
        </div>
        <div class="instruments" id="instruments" hidden></div>
      </div>
      ${scrubBar(series)}
      <div id="strips" class="strips" hidden></div>`,
    'wide',
  );
}

/** One picture a quantity, and the table of every minute behind them. */
export function seriesSection(series: RaceSeries): Safe {
  const panels = PANELS.filter((p) => panelKnown(p, series));
  const missing = PANELS.filter((p) => !panels.includes(p));
  const still = panels.map(
    (p) => html`<div class="still" data-panel="${p.key}">${trusted(timePanel(p, series))}</div>`,
  );
  return section(
    'time',
    'Minute by minute',
    html`<div id="live-series" class="live-series" hidden></div>
      <div class="stills">${still}</div>
      <p class="plate-words">
        Ticks at the head are tacks and gybes. Course angle and VMG are drawn to the scale of the
        beats.${missing.length > 0 && html` Not known in this race: ${missing.map((p) => p.title.toLowerCase()).join(', ')}.`}
      </p>
      <details class="figures">
        <summary>
          The figures behind it, one row
          ${minutesARow(series) === 1 ? 'a minute' : `every ${minutesARow(series)} minutes`}
        </summary>
        ${minuteTables(series)}
      </details>`,
    'wide',
  );
}

/** Rows of the tables of all boats together at most, about. */
const MOST_ROWS = 360;

function minutesARow(series: RaceSeries): number {
  return Math.max(1, Math.ceil(series.boats.reduce((sum, b) => sum + b.n / 60, 0) / MOST_ROWS));
}

function minuteTables(series: RaceSeries): Part {
  const step = 60 * minutesARow(series);
  return series.boats.map((b) => {
    const rows: Part[][] = [];
    for (let i = 0; i < b.n; i += step) {
      rows.push([
        time(b.t0 + i, 'hms'),
        plain(Math.abs(b.gamma[i]), 0),
        plain(toKnots(b.speed[i]), 1),
        plain(toKnots(b.vmg[i]), 1),
        plain(wrap360(b.twd[i]), 0),
        plain(toKnots(b.tws[i]), 1),
      ]);
    }
    return table(nameOf(b.name), ['Time', 'Course angle °', 'Speed kn', 'VMG kn', 'Wind from °', 'Wind kn'], rows);
  });
}

/** The one time cursor of the page; it shows itself when the client is alive. */
function scrubBar(series: RaceSeries): Safe {
  const [from, to] = timeSpan(series);
  return html`<div class="scrub" id="scrub" role="group" aria-label="Time cursor" hidden>
    <output id="clock" for="cursor">${time(from, 'hms')}</output
    ><input type="range" id="cursor" min="${from}" max="${to}" step="1" value="${from}" aria-label="Time" /><span
      class="stepper"
      ><button type="button" id="back" aria-label="Step back">◂</button
      ><select id="stride" aria-label="Step by">
        <option value="tack">tack</option>
        <option value="settled">settled stretch</option>
        <option value="shift">wind shift</option>
        <option value="leg">leg</option>
        <option value="ten">10 seconds</option></select
      ><button type="button" id="on" aria-label="Step on">▸</button></span
    ><button type="button" id="run" aria-pressed="false">Run</button>
    <p id="said" class="vh" aria-live="polite"></p>
  </div>`;
}
