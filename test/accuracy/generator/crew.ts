/** Who sails: habits, slips, and how the helm's hand wanders. */
import type { Performance } from './boat.js';
import { performanceOf, SINGLE_HANDER } from './boat.js';
import type { Condition, Faults } from './condition.js';
import { swing, wander, type Chance } from './random.js';

export interface Crew {
  readonly name: string;
  readonly performance: Performance;
  /** The same boat, perfectly trimmed. */
  readonly clean: Performance;
  readonly faults: Faults;
  /** Added to the best angle [deg]; factor on the clean speed. */
  readonly angle: number;
  readonly speed: number;
  readonly sheeting: number;
  /** Part of the speed a tack takes, and seconds until it is back: limits. */
  readonly drop: readonly [number, number];
  readonly recover: readonly [number, number];
  /** Shift that makes it tack [deg], chance to see it, seconds on one tack at least and at most. */
  readonly shift: number;
  readonly alert: number;
  readonly hold: readonly [number, number];
  /** Lateral room left to the far lay line, and metres past the near one. */
  readonly corner: number;
  readonly overstand: number;
  /** Per step: slow drift of the aim [deg], wander of the helm [deg], surge of the speed (fraction). */
  readonly aim: (dt: number) => number;
  readonly helm: (dt: number) => number;
  readonly surge: (dt: number) => number;
}

export function drawCrew(condition: Condition, index: number, name: string, chance: Chance): Crew {
  const faults: Faults = index === 0 ? condition.faults : {};
  const spread = condition.skill;
  const sheeting = (faults.sheeting ?? 0) + spread * chance.between(-1, 1.5);
  const cost = faults.tackCost ?? 1;
  const stretch = 1 + 0.5 * (cost - 1);
  const fast = swing(chance, 8, 13);
  const slow = swing(chance, 13, 20);
  const long = swing(chance, 4.5, 6);
  const short = swing(chance, 3, 4.2);
  const performance = performanceOf(SINGLE_HANDER, sheeting);
  return {
    name,
    performance: { ...performance, leeway: (tws, gamma) => (faults.leeway ?? 1) * performance.leeway(tws, gamma) },
    clean: performanceOf(SINGLE_HANDER, 0),
    faults,
    angle: faults.pinch === undefined ? spread * chance.between(-1.5, 2.5) : -faults.pinch,
    speed: 1 - spread * chance.between(0, 0.03),
    sheeting,
    drop: [Math.min(0.8, 0.35 * stretch), Math.min(0.85, 0.5 * stretch)],
    recover: [15 * stretch, 25 * stretch],
    shift: chance.between(3, 5),
    alert: faults.headed ? 0.9 : chance.between(0.7, 0.95),
    hold: [chance.between(45, 80), chance.between(170, 300)],
    corner: chance.between(40, 160),
    overstand: faults.overstand ?? chance.between(1, 10),
    aim: wander(chance, 1, 150),
    helm: (dt) => condition.helm * (0.9 * fast(dt) + 0.9 * slow(dt)),
    surge: (dt) => condition.surge * (0.9 * long(dt) + 0.6 * short(dt)),
  };
}
