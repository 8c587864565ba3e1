/** What a satellite receiver on board writes of a boat's way: errors that wander, a leap, silence. */
import type { Condition } from './condition.js';
import { compass, pointing, signed } from './directions.js';
import { RATE, type Log } from './hull.js';
import { wander, type Chance } from './random.js';

export interface Fix {
  readonly t: number;
  readonly x: number;
  readonly y: number;
  /** Over ground, NaN where the receiver logs none. [m/s, deg] */
  readonly sog: number;
  readonly cog: number;
}

export function receive(condition: Condition, log: Log, chance: Chance): Fix[] {
  const fixes: Fix[] = [];
  const [slow, white] = condition.positionNoise;
  const tau = chance.between(60, 100);
  const errorX = wander(chance, slow, tau);
  const errorY = wander(chance, slow, tau);
  const every = condition.receiver === '5hz' ? 1 : condition.receiver === '5s' ? 5 * RATE : RATE;
  const steps = log.n * RATE - RATE;
  const silences = condition.dropouts ? [0, 0, 0].map(() => chance.between(0, steps)) : [];
  const lengths = silences.map(() => chance.between(10, 40) * RATE);
  const keep = condition.receiver === 'thinned' ? thinner() : () => true;
  for (let step = 0; step < steps; step += every) {
    const f = 4 * step;
    const ex = errorX(every / RATE) + white * chance.normal();
    const ey = errorY(every / RATE) + white * chance.normal();
    const leap = condition.outliers && chance.happens(every / RATE / 1200) ? chance.between(30, 120) : 0;
    const angle = leap > 0 ? chance.between(0, 2 * Math.PI) : 0;
    const vx = log.fine[f + 2] + 0.05 * chance.normal();
    const vy = log.fine[f + 3] + 0.05 * chance.normal();
    if (silences.some((from, k) => step >= from && step < from + lengths[k])) continue;
    if (!keep(step / RATE, log.fine[f + 2], log.fine[f + 3])) continue;
    fixes.push({
      t: log.t0 + step / RATE,
      x: log.fine[f] + ex + leap * Math.cos(angle),
      y: log.fine[f + 1] + ey + leap * Math.sin(angle),
      sog: condition.doppler ? Math.hypot(vx, vy) : NaN,
      cog: condition.doppler ? compass(pointing(vx, vy)) : NaN,
    });
  }
  return fixes;
}

/** Keeps a fix when the course or speed has changed, else one in twenty seconds: as watches save memory. */
function thinner(): (t: number, vx: number, vy: number) => boolean {
  let last = -Infinity;
  let course = 0;
  let speed = 0;
  return (t, vx, vy) => {
    const nowCourse = pointing(vx, vy);
    const nowSpeed = Math.hypot(vx, vy);
    const turned = Math.abs(signed(nowCourse - course)) > 6 && nowSpeed > 0.4;
    if (t - last < 20 && !turned && Math.abs(nowSpeed - speed) < 0.5) return false;
    [last, course, speed] = [t, nowCourse, nowSpeed];
    return true;
  };
}
