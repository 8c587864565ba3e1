/** The one time cursor, the stretch of time in view, and what is picked. Everything on the page listens here. */
export interface Pick {
  readonly boat: number;
  readonly leg?: number;
  readonly turn?: number;
  /** Settled stretch. */
  readonly spell?: number;
}

export interface Moment {
  readonly time: number;
  readonly window: readonly [number, number];
  readonly pick: Pick | null;
}

type Listener = (now: Moment, before: Moment) => void;

export interface Store {
  readonly now: () => Moment;
  readonly set: (change: Partial<Moment>) => void;
  /** Told at every frame; a listener with a place on the page only while that is near the screen, else a little later. */
  readonly listen: (listener: Listener, place?: Element) => void;
}

interface Told {
  readonly listener: Listener;
  near: boolean;
  /** What it was last told. */
  last: Moment;
}

/** Off the screen things follow when nothing has moved for so long. [ms] */
const LATER = 120;

/** Listeners are called once a frame at most, so that a fast finger costs no more than a slow one. */
export function createStore(from: number, to: number, window: readonly [number, number]): Store {
  let now: Moment = { time: Math.min(window[1], window[0] + 60), window, pick: null };
  let waiting = false;
  let later = 0;
  const all: Told[] = [];
  const places = new Map<Element, Told>();
  const tell = (one: Told): void => {
    if (one.last === now) return;
    const before = one.last;
    one.last = now;
    one.listener(now, before);
  };
  const sight = new IntersectionObserver(
    (seen) => {
      for (const { target, isIntersecting } of seen) {
        const one = places.get(target)!;
        one.near = isIntersecting;
        if (isIntersecting) tell(one);
      }
    },
    { rootMargin: '25%' },
  );
  const frame = (): void => {
    waiting = false;
    for (const one of all) if (one.near) tell(one);
    clearTimeout(later);
    later = setTimeout(() => all.forEach(tell), LATER);
  };
  return {
    now: () => now,
    set: (change) => {
      now = { ...now, ...change };
      now = { ...now, time: Math.max(from, Math.min(to, now.time)) };
      if (waiting) return;
      waiting = true;
      requestAnimationFrame(frame);
    },
    listen: (listener, place) => {
      const one: Told = { listener, near: true, last: now };
      all.push(one);
      if (place) {
        places.set(place, one);
        sight.observe(place);
      }
      listener(now, now);
    },
  };
}
