/** Seeded chance of the invented races: the same seed gives the same race on every machine. */

export interface Chance {
  /** Uniform in [0, 1). */
  next(): number;
  /** Uniform in [low, high). */
  between(low: number, high: number): number;
  /** Whole number in [low, high], both included. */
  whole(low: number, high: number): number;
  /** Normal with mean 0 and standard deviation 1. */
  normal(): number;
  /** True with probability p. */
  happens(p: number): boolean;
}

/** FNV-1a hash of a text, 32 bits: turns a name into a seed. */
export function hashText(text: string): number {
  let h = 0x811c9dc5;
  for (let i = 0; i < text.length; i++) h = Math.imul(h ^ text.charCodeAt(i), 0x01000193);
  return h >>> 0;
}

/** xorshift128 (G. Marsaglia, Xorshift RNGs, J. Stat. Software 8(14), 2003), seeded from a text. */
export function chanceOf(seed: string): Chance {
  let x = hashText(seed) | 1;
  let y = hashText(`${seed}/y`) | 1;
  let z = hashText(`${seed}/z`) | 1;
  let w = hashText(`${seed}/w`) | 1;
  const bits = (): number => {
    const t = x ^ (x << 11);
    x = y;
    y = z;
    z = w;
    w = w ^ (w >>> 19) ^ t ^ (t >>> 8);
    return w >>> 0;
  };
  for (let i = 0; i < 20; i++) bits();
  const next = (): number => bits() / 4294967296;
  let spare = NaN;
  const normal = (): number => {
    if (!Number.isNaN(spare)) {
      const kept = spare;
      spare = NaN;
      return kept;
    }
    const r = Math.sqrt(-2 * Math.log(1 - next()));
    const a = 2 * Math.PI * next();
    spare = r * Math.sin(a);
    return r * Math.cos(a);
  };
  return {
    next,
    normal,
    between: (low, high) => low + (high - low) * next(),
    whole: (low, high) => low + Math.floor((high - low + 1) * next()),
    happens: (p) => next() < p,
  };
}

/** First-order Gauss-Markov wander: standard deviation `sd`, correlation time `tau`, started in its steady state. */
export function wander(chance: Chance, sd: number, tau: number): (dt: number) => number {
  let value = sd * chance.normal();
  return (dt) => {
    const keep = Math.exp(-dt / tau);
    value = keep * value + sd * Math.sqrt(1 - keep * keep) * chance.normal();
    return value;
  };
}

/** A swing that is never quite periodic: the period drifts between two limits, the height between 0.6 and 1.3. */
export function swing(chance: Chance, periodLow: number, periodHigh: number): (dt: number) => number {
  let phase = 2 * Math.PI * chance.next();
  const middle = 0.5 * (periodLow + periodHigh);
  const pace = wander(chance, 0.3 * (periodHigh - periodLow), 2 * middle);
  const height = wander(chance, 0.2, 3 * middle);
  return (dt) => {
    const period = Math.min(periodHigh, Math.max(periodLow, middle + pace(dt)));
    phase += (2 * Math.PI * dt) / period;
    return Math.min(1.3, Math.max(0.6, 1 + height(dt))) * Math.sin(phase);
  };
}
