import type { BoatResult, Q, Result } from '../../result/result.js';
import type { RaceSeries } from '../../result/series.js';
import { angleDistribution, histogram } from '../charts/angle-distribution.js';
import { dragAngles, type DragAngleRow } from '../charts/drag-angles.js';
import { polar } from '../charts/polar.js';
import { portStarboard, type TwoTacks } from '../charts/port-starboard.js';
import { racingSpan } from '../charts/time-series.js';
import { windStrip } from '../charts/wind-strip.js';
import { dayBest, settledMean, timeMean, upwindLegs } from '../figures.js';
import { plain, quantity, time, withUnit } from '../format.js';
import { html, nameOf, type Part, type Safe } from '../html.js';
import { shiftsOf } from '../shifts.js';
import { toKnots } from '../../math/units.js';
import { term } from '../terms.js';
import { figure, section, table } from './figure.js';

function modelMean(boat: BoatResult, key: 'gamma_deg' | 'beta_deg'): Q {
  return timeMean(
    upwindLegs(boat).map(({ leg }) => ({ q: leg.optimum?.[key] ?? null, seconds: leg.steady?.seconds ?? 1 })),
  );
}

function polarPlate(result: Result, series: RaceSeries): Part {
  if (series.boats.every((b) => b.blocks.length === 0)) return null;
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
  const model = result.boats.some((b) => b.legs.some((l) => l.optimum))
    ? ' The cross in a ring is the model’s optimum.'
    : '';
  return figure({
    svg: polar(result, series),
    title: 'Angle and speed of every settled half minute',
    summary: html`Small signs are half minutes, large ones each boat’s mean on that tack with the error of its angle.
    Level lines are equal VMG. The dotted one is the ${term('ceiling')}: a bound, not a mark.${model}`,
    table: table(
      'Settled half minutes',
      ['Boat and time', 'Tack', 'Seconds', 'Course angle °', 'Speed kn', 'VMG kn', 'Wind kn'],
      rows,
    ),
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
    const model = { name: 'model’s optimum', aero: null, hydro: null, beta: modelMean(boat, 'beta_deg') };
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

function windPlate(series: RaceSeries): Part {
  const boat = series.boats.find((b) => b.twd.some(Number.isFinite));
  if (!boat) return null;
  const [from, to] = racingSpan(series);
  const shifts = shiftsOf(boat.twd).filter((s) => boat.t0 + s.row >= from && boat.t0 + s.row <= to);
  return figure({
    svg: windStrip(boat, shifts, { span: [from, to] }),
    title: 'The wind over the race',
    summary: html`The thin line is the wind at ${nameOf(boat.name)} each second, the heavy one its mean over a minute.
    Marks: the minute’s mean has moved five degrees since the last mark.`,
    table: table(
      'Shifts',
      ['Time', 'Wind from °', 'Moved by °'],
      shifts.map((s) => [time(boat.t0 + s.row, 'hms'), plain(s.twd, 0), plain(s.by, 0)]),
    ),
  });
}

/** Angles, speeds, tacks and wind as pictures. */
export function angles(result: Result, series: RaceSeries): Safe {
  const plates = [
    polarPlate(result, series),
    distributionPlate(result, series),
    dragPlate(result),
    tackPlates(result),
    windPlate(series),
  ];
  return section('angles', 'Angles, speeds, wind', html`<div class="plates">${plates}</div>`);
}
