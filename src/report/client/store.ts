/** The one time cursor, the stretch of time in view, and what is picked. Everything on the page listens here. */
export interface Pick {
  readonly boat: number;
  readonly leg?: number;
  readonly turn?: number;
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
  readonly listen: (listener: Listener) => void;
}

/** Listeners are called once a frame at most, so that a fast finger costs no more than a slow one. */
export function createStore(from: number, to: number, window: readonly [number, number]): Store {
  let now: Moment = { time: Math.min(window[1], window[0] + 60), window, pick: null };
  let told: Moment = now;
  let waiting = false;
  const listeners: Listener[] = [];
  const tell = (): void => {
    waiting = false;
    const before = told;
    told = now;
    for (const listener of listeners) listener(now, before);
  };
  return {
    now: () => now,
    set: (change) => {
      now = { ...now, ...change };
      now = { ...now, time: Math.max(from, Math.min(to, now.time)) };
      if (waiting) return;
      waiting = true;
      requestAnimationFrame(tell);
    },
    listen: (listener) => {
      listeners.push(listener);
      listener(now, now);
    },
  };
}
