import type { BoatResult, Q, Result } from '../../result/result.js';
import type { PolarCurve, PolarPoint, RaceSeries } from '../../result/series.js';
import { angleDistribution, histogram } from '../charts/angle-distribution.js';
import { dragAngles, type DragAngleRow } from '../charts/drag-angles.js';
import { polar } from '../charts/polar.js';
import { polarWhole } from '../charts/polar-whole.js';
import { portStarboard, type TwoTacks } from '../charts/port-starboard.js';
import { racingSpan } from '../charts/time-series.js';
import { windStrip } from '../charts/wind-strip.js';
import { dayBest, settledMean, timeMean, upwindLegs } from '../figures.js';
import { number, plain, quantity, time, withUnit } from '../format.js';
import { html, nameOf, type Part, type Safe } from '../html.js';
import { shiftsOf } from '../shifts.js';
import { isTaken, liftedShare } from '../shifts-taken.js';
import { RAD } from '../../math/angles.js';
import { toKnots } from '../../math/units.js';
import { REFERENCE_WORDS } from '../causes.js';
import { term } from '../terms.js';
import { figure, section, table } from './figure.js';

function modelMean(boat: BoatResult, key: 'beta_deg' | 'aero_drag_angle_deg' | 'hydro_drag_angle_deg'): Q {
  return timeMean(
    upwindLegs(boat).map(({ leg }) => ({ q: leg.optimum?.[key] ?? null, seconds: leg.steady?.seconds ?? 1 })),
  );
}

/** Half minutes listed one by one at most; of more, the means of legs and tacks are given. */
const MOST_LISTED = 120;

function blockTable(series: RaceSeries): Safe {
  const rows = series.boats.flatMap((b) =>
    b.blocks.map((k) => [
      html`${nameOf(b.name)} ${time(b.t0 + k.from, 'hms')}`,
      k.tack,
      plain(k.to - k.from, 0),
      plain(k.gamma, 1),
      plain(toKnots(k.speed), 2),
      plain(toKnots(k.vmg), 2),
      plain(toKnots(k.tws), 1),
    ]),
  );
  return table(
    'Settled half minutes',
    ['Boat and time', 'Tack', 'Seconds', 'Course angle °', 'Speed kn', 'VMG kn', 'Wind kn'],
    rows,
  );
}

function tackTable(result: Result): Safe {
  const rows = result.boats.flatMap((boat) =>
    upwindLegs(boat).flatMap(({ leg }) =>
      (['port', 'starboard'] as const).flatMap((tack): Part[][] => {
        const side = leg.steady?.[tack];
        if (!side) return [];
        return [
          [
            html`${nameOf(boat.name)}, lap ${leg.lap}`,
            tack,
            plain(side.seconds, 0),
            quantity(side.gamma_deg, 'deg'),
            quantity(side.speed_kn, 'kn', { unitless: true }),
            quantity(side.vmg_kn, 'kn', { unitless: true }),
            quantity(side.tws_kn, 'kn', { unitless: true, digits: 1 }),
          ],
        ];
      }),
    ),
  );
  return table(
    'Means of the settled half minutes',
    ['Boat and leg', 'Tack', 'Seconds', 'Course angle', 'Speed kn', 'VMG kn', 'Wind kn'],
    rows,
  );
}

function polarPlate(result: Result, series: RaceSeries): Part {
  const blocks = series.boats.reduce((sum, b) => sum + b.blocks.length, 0);
  if (blocks === 0) return null;
  const curves = series.polars ?? [];
  const model = curves.find(({ kind }) => kind === 'model');
  const reference = curves.find(({ kind }) => kind !== 'model');
  const lines =
    model &&
    html` The line is the boat model in ${number(toKnots(model.tws), 1)}&nbsp;kn, the mean wind of all these half
    minutes${reference && html`, the broken one the ${term('reference')}: ${REFERENCE_WORDS[reference.kind]}`}. The
    cross in a ring is the best point on it. A sign outside a line is more speed than that at the angle, or more wind
    than the mean just then.`;
  return figure({
    svg: polar(result, series),
    title: 'Angle and speed of every settled half minute',
    summary: html`Up is speed toward the wind, to the side speed across it; rays are course angles, dotted arcs speeds.
    Small signs are half minutes, large ones each boat’s mean on that tack with the error of its angle.${lines}`,
    table: blocks > MOST_LISTED ? tackTable(result) : blockTable(series),
  });
}

/** Angles at which the curves are told in figures. [deg] */
const TOLD = [40, 50, 60, 75, 90, 105, 120, 135, 150, 165, 180];

function curveTable(curve: PolarCurve): Safe {
  const row = (words: Part, { gamma, speed }: PolarPoint): Part[] => [
    words,
    number(gamma, 1),
    number(toKnots(speed), 2),
    number(toKnots(speed) * Math.cos(gamma * RAD), 2),
  ];
  const nearest = (gamma: number): PolarPoint =>
    curve.points.reduce((best, one) => (Math.abs(one.gamma - gamma) < Math.abs(best.gamma - gamma) ? one : best));
  const told = [...new Set(TOLD.map(nearest))].map((point) => row('', point));
  return table(
    html`${curve.boat} in ${number(toKnots(curve.tws), 1)} kn`,
    ['', 'Course angle °', 'Speed kn', 'VMG kn'],
    [row('best upwind', curve.up), ...(curve.down ? [row('best downwind', curve.down)] : []), ...told],
  );
}

function bestWords({ boat, up, down }: PolarCurve): Part {
  const point = ({ gamma, speed }: PolarPoint): Part =>
    html`${number(gamma, 0)}° at ${number(toKnots(speed), 1)}&nbsp;kn`;
  return html` Best of the ${boat} model: upwind ${point(up)}${down && html`, downwind ${point(down)}`}.`;
}

function wholePolarPlate(series: RaceSeries): Part {
  const models = (series.polars ?? []).filter(({ kind }) => kind === 'model');
  if (models.length === 0) return null;
  return figure({
    svg: polarWhole(series),
    title: 'The whole polar diagram',
    summary: html`The line is the boat model’s speed at every course angle in
    ${number(toKnots(models[0].tws), 1)}&nbsp;kn; crosses in rings are its best courses.${models.map(bestWords)} Full
    signs are settled half minutes upwind, open ones half minutes off the wind, sailed in whatever wind there was. The
    broken line is the ${term('reference')}, drawn only where it was anchored.`,
    table: html`${models.map(curveTable)}`,
  });
}

function bestAngle(result: Result): { best: number; bestWords: string } {
  const best = dayBest(result);
  const gamma = best?.leg.steady?.gamma_deg;
  return gamma ? { best: gamma.value, bestWords: 'day’s best' } : { best: NaN, bestWords: '' };
}

function distributionPlate(result: Result, series: RaceSeries): Part {
  const boats = series.boats;
  if (boats.every((b) => !b.settled.some(Boolean))) return null;
  const all = boats.map((b) => histogram(b, 25, 65, 5));
  const rows = all[0].share.map((_, k) => [
    `${25 + 5 * k}–${30 + 5 * k}°`,
    ...all.map((h) => withUnit(100 * h.share[k], 'percent')),
  ]);
  return figure({
    svg: angleDistribution(boats, bestAngle(result)),
    title: 'How often each course angle was sailed',
    summary: html`Settled seconds only. A broad hump is unsteady helming, a wind that swings, or a wind measured away
    from the boat; the picture cannot tell which.`,
    table: table('Share of settled time', ['Course angle', ...boats.map((b) => nameOf(b.name))], rows),
  });
}

function dragPlate(result: Result): Part {
  const rows: DragAngleRow[] = result.boats.flatMap((boat) => {
    const achieved = {
      name: boat.name,
      aero: settledMean(boat, 'aero_drag_angle_deg'),
      hydro: settledMean(boat, 'hydro_drag_angle_deg'),
      beta: settledMean(boat, 'beta_deg'),
    };
    const model = {
      name: 'model’s optimum',
      aero: modelMean(boat, 'aero_drag_angle_deg'),
      hydro: modelMean(boat, 'hydro_drag_angle_deg'),
      beta: modelMean(boat, 'beta_deg'),
    };
    return [achieved, model].filter((r) => r.beta);
  });
  if (rows.length === 0) return null;
  return figure({
    svg: dragAngles(rows),
    title: 'Drag angles',
    summary: html`The two ${term('dragAngle', 'drag angles')} together are the ${term('beta')}. Only their sum is
    geometry; how it divides is inferred through the boat model, the upper bar under each row shows how surely.`,
    table: table(
      'Drag angles',
      ['', 'Rig', 'Hull and foils', 'Together'],
      rows.map((r) => [nameOf(r.name), quantity(r.aero, 'deg'), quantity(r.hydro, 'deg'), quantity(r.beta, 'deg')]),
    ),
  });
}

const WAYS = { heading: 'by heading', masthead: 'by masthead angle', forces: 'by balance of forces' } as const;

/** What leeway and sheeting of each beat rest on: every way with its weight, and sheeting before and after the log. */
function trimTable(result: Result): Part {
  const beats = result.boats.flatMap((boat) =>
    upwindLegs(boat).flatMap(({ leg }) => (leg.trim ? [{ boat, leg, trim: leg.trim }] : [])),
  );
  if (beats.length === 0) return null;
  const ways = (['heading', 'masthead', 'forces'] as const).filter((way) =>
    beats.some(({ trim }) => trim.leeway_ways.some((one) => one.way === way)),
  );
  const rows = beats.map(({ boat, leg, trim }): Part[] => [
    html`${nameOf(boat.name)}, lap ${leg.lap}`,
    ...ways.map((way): Part => {
      const one = trim.leeway_ways.find((found) => found.way === way);
      return one ? html`${quantity(one.leeway_deg, 'deg')} (${plain(100 * one.weight, 0)}&nbsp;%)` : '–';
    }),
    quantity(leg.steady?.leeway_deg ?? null, 'deg'),
    quantity(leg.optimum?.leeway_deg ?? null, 'deg'),
    quantity(trim.sheeting_prior_deg, 'deg'),
    quantity(trim.sheeting_posterior_deg, 'deg'),
  ]);
  return html`<details class="figures">
    <summary>What leeway and sheeting rest on</summary>
    ${table(
      'Leeway by each way, with its weight; sheeting angle as the model would trim, and with what the log says',
      ['', ...ways.map((way) => `Leeway ${WAYS[way]}`), 'Together', 'Model’s best', 'Sheeting before', 'and after'],
      rows,
    )}
    <p class="plate-words">Where after differs little from before, the log says little of the sheeting.</p>
  </details>`;
}

function tackPlates(result: Result): Part {
  const rowsOf = (key: 'vmg_kn' | 'gamma_deg'): TwoTacks[] =>
    result.boats.flatMap((b) =>
      upwindLegs(b).map(({ leg }) => ({ name: `${b.name}, lap ${leg.lap}`, port: leg.steady?.port?.[key] ?? null, starboard: leg.steady?.starboard?.[key] ?? null })),
    ).filter((r) => r.port ?? r.starboard); // prettier-ignore
  const plate = (key: 'vmg_kn' | 'gamma_deg', title: string, unit: 'kn' | 'deg', mark: string): Part => {
    const rows = rowsOf(key);
    if (rows.length === 0) return null;
    return figure({
      svg: portStarboard(rows, { title, unit: mark }),
      title: `Port against starboard: ${title}`,
      summary:
        'P is port, S starboard; bars are one standard error. An equal and opposite gap on every leg of every boat points to the wind direction, not to the crews.',
      table: table(
        title,
        ['Leg', 'Port', 'Starboard'],
        rows.map((r) => [nameOf(r.name), quantity(r.port, unit), quantity(r.starboard, unit)]),
      ),
    });
  };
  return [plate('vmg_kn', 'VMG', 'kn', 'kn'), plate('gamma_deg', 'course angle', 'deg', '°')];
}

/** For each shift and boat, the share of its beat to the next shift on the tack that is lifted; NaN: no beat. */
function takenShares(
  result: Result,
  series: RaceSeries,
  times: readonly number[],
  veers: readonly number[],
): number[][] {
  const end = racingSpan(series)[1];
  return times.map((at, k) =>
    series.boats.map((boat, b) => {
      const beats = boat.legs.filter((leg) => result.boats[b].legs.at(leg.index)?.kind === 'upwind');
      return liftedShare(boat, beats, [at, times.at(k + 1) ?? end], veers[k]);
    }),
  );
}

function windPlate(result: Result, series: RaceSeries): Part {
  const boat = series.boats.find((b) => b.twd.some(Number.isFinite));
  if (!boat) return null;
  const [from, to] = racingSpan(series);
  const shifts = shiftsOf(boat.twd).filter((s) => boat.t0 + s.row >= from && boat.t0 + s.row <= to);
  const shares = takenShares(
    result,
    series,
    shifts.map((s) => boat.t0 + s.row),
    shifts.map((s) => s.by),
  );
  const counts = series.boats.map((b, k) => {
    const told = shares.map((row) => isTaken(row[k])).filter((taken) => taken !== null);
    return html`${k > 0 ? ', ' : ''}${nameOf(b.name)} ${told.filter(Boolean).length} of ${told.length}`;
  });
  return figure({
    svg: windStrip(boat, shifts, { span: [from, to] }),
    title: 'The wind over the race',
    summary: html`The thin line is the wind at ${nameOf(boat.name)} each second, the heavy one its mean over a minute.
    Marks: the minute’s mean has moved five degrees since the last mark. Shifts taken on the beats, that is most of the
    time to the next on the tack it lifted: ${counts}.`,
    table: table(
      'Shifts, and the share of the beat to the next one on the lifted tack',
      ['Time', 'Wind from °', 'Moved by °', ...series.boats.map((b) => nameOf(b.name))],
      shifts.map((s, k) => [
        time(boat.t0 + s.row, 'hms'),
        plain(s.twd, 0),
        plain(s.by, 0),
        ...shares[k].map((share) => (Number.isNaN(share) ? '' : withUnit(100 * share, 'percent'))),
      ]),
    ),
  });
}

/** Angles, speeds, tacks and wind as pictures. */
export function angles(result: Result, series: RaceSeries): Safe {
  const plates = [
    polarPlate(result, series),
    wholePolarPlate(series),
    distributionPlate(result, series),
    dragPlate(result),
    tackPlates(result),
    windPlate(result, series),
  ];
  return section(
    'angles',
    'Angles, speeds, wind',
    html`<div class="plates">${plates}</div>
      ${trimTable(result)}`,
  );
}
