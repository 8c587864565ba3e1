import type { Result, WindSource } from '../../result/result.js';
import type { RaceSeries } from '../../result/series.js';
import { el } from '../charts/svg.js';
import { racingSpan } from '../charts/time-series.js';
import { dot } from '../charts/sign.js';
import { inline, secondsOf, time } from '../format.js';
import { html, nameOf, trusted, type Safe } from '../html.js';
import { boatPaint } from '../palette.js';
import { term } from '../terms.js';

export const SOURCE_WORDS: Readonly<Record<WindSource, string>> = {
  station: 'a wind station',
  'on-board': 'instruments aboard',
  tracks: 'the boats’ own tracks',
  'by-hand': 'readings by hand',
};

/** The line and the sign by which a boat is known on every picture. */
export function swatch(index: number): Safe {
  const { colour, dash } = boatPaint(index);
  const stroke = el('path', {
    d: 'M1 8H35',
    stroke: colour,
    'stroke-width': 2.6,
    'stroke-dasharray': dash || undefined,
  });
  return trusted(
    el(
      'svg',
      { class: 'swatch', viewBox: '0 0 36 16', 'aria-hidden': 'true' },
      stroke,
      dot(index, 18, 8, 4.4, colour, 1),
    ),
  );
}

function windLine(result: Result): Safe {
  const { twd_deg: twd, tws_kn: tws, sources } = result.wind;
  const from = sources.map((s) => SOURCE_WORDS[s]).join(' and ');
  const direction = twd ? html`from ${inline(twd, 'deg', { digits: 0 })}` : 'direction not known';
  const known =
    tws &&
    html`${tws.basis === 'inferred' ? ', by the boats’ speed about ' : ' at '}${inline(tws, 'kn', { digits: 1 })}`;
  const speed = known ?? ', speed not known';
  return html`${term('trueWind', 'True wind')} ${direction}${speed}${from && html`, after ${from}`}.`;
}

/** Race, day, wind, boats. */
export function masthead(result: Result, series: RaceSeries, kind: string): Safe {
  const [from, to] = racingSpan(series);
  const start = result.race.start;
  const gun = start ? html` Gun at ${time(secondsOf(start), 'hms')}.` : '';
  return html`<header class="masthead">
    <p class="kicker">${kind}</p>
    <h1>${nameOf(result.race.name)}</h1>
    <p class="day">
      ${time(from, 'day')}, ${time(from, 'hm')} to ${time(to, 'hm')} <span id="zone-words">UTC</span>.${gun}
      ${windLine(result)}
    </p>
  </header>`;
}
