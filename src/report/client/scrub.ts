import { byId } from './dom.js';
import { localNumber, type Clock } from './locale.js';
import type { Race } from './race.js';
import type { Store } from './store.js';

/** The bar at the foot: a slider of time, steps from event to event, and a run at twenty times the speed. */

export type Stride = 'tack' | 'settled' | 'shift' | 'leg' | 'ten';

export interface Event {
  readonly at: number;
  readonly words: string;
}

/** Moments to step to, in order of time. */
export function eventsOf(race: Race, stride: Stride): Event[] {
  const out: Event[] = [];
  for (const { name, header, legs } of race.boats) {
    if (stride === 'tack') {
      for (const t of header.turns) {
        if (t.kind !== 'tack' && t.kind !== 'gybe') continue;
        out.push({
          at: t.at,
          words: `${name}: ${t.kind} onto ${t.to}${t.loss === null ? '' : `, cost ${localNumber(t.loss, 1)} m`}`,
        });
      }
    }
    if (stride === 'settled') for (const [at] of header.settled) out.push({ at, words: `${name} settled` });
    if (stride === 'leg') {
      for (const l of header.legs) {
        const facts = legs[l.index];
        if (facts) out.push({ at: l.from, words: `${name}: lap ${facts.lap}, ${facts.kind}` });
      }
    }
  }
  if (stride === 'shift') {
    for (const s of race.boats[0]?.header.shifts ?? []) {
      out.push({ at: s.at, words: `Wind ${s.by > 0 ? 'veered' : 'backed'} to ${localNumber(s.twd, 0)}°` });
    }
  }
  return out.sort((a, b) => a.at - b.at);
}

/** The next event beyond `time` in a direction; null at the end. */
export function nextEvent(events: readonly Event[], time: number, direction: 1 | -1): Event | null {
  const beyond = events.filter((e) => (direction > 0 ? e.at > time : e.at < time));
  return (direction > 0 ? beyond[0] : beyond[beyond.length - 1]) ?? null;
}

export function mountScrub(race: Race, store: Store, clock: Clock): void {
  const bar = byId('scrub');
  const cursor = byId('cursor') as HTMLInputElement | null;
  const out = byId('clock');
  const stride = byId('stride') as HTMLSelectElement | null;
  const said = byId('said');
  if (!bar || !cursor || !out || !stride || !said) return;
  showFrom(bar, byId('chart'));
  const step = (direction: 1 | -1): void => {
    const { time } = store.now();
    if (stride.value === 'ten') return store.set({ time: time + 10 * direction });
    const event = nextEvent(eventsOf(race, stride.value as Stride), time, direction);
    said.textContent = event ? `${clock.write(event.at, 'hms')} ${event.words}` : 'No more that way';
    if (event) store.set({ time: event.at });
  };
  cursor.addEventListener('input', () => store.set({ time: Number(cursor.value) }));
  byId('back')?.addEventListener('click', () => step(-1));
  byId('on')?.addEventListener('click', () => step(1));
  document.addEventListener('keydown', (event) => shortcut(event, store, step));
  mountRun(race, store);
  store.listen(({ time }) => {
    cursor.value = String(Math.round(time));
    cursor.setAttribute('aria-valuetext', clock.write(time, 'hms'));
    out.textContent = clock.write(time, 'hms');
  });
}

/** The bar keeps out of the way of the first screen: it comes when the chart does. */
function showFrom(bar: HTMLElement, chart: HTMLElement | null): void {
  const look = (): void => {
    const top = chart ? chart.getBoundingClientRect().top : 0;
    // Within the chart section (the bar is part of it) the keyboard may be ahead of the scrolling.
    bar.hidden = top > window.innerHeight * 0.85 && !chart?.contains(document.activeElement);
  };
  chart?.addEventListener('focusin', () => (bar.hidden = false));
  window.addEventListener('scroll', look, { passive: true });
  window.addEventListener('resize', look);
  look();
}

/** Keys that work where nothing else wants them: comma and full stop step, J and L go ten seconds. */
function shortcut(event: KeyboardEvent, store: Store, step: (d: 1 | -1) => void): void {
  const target = event.target as Element;
  if (event.ctrlKey || event.metaKey || event.altKey || target.matches('input, select, textarea')) return;
  if (event.key === ',') step(-1);
  if (event.key === '.') step(1);
  if (event.key === 'j') store.set({ time: store.now().time - 10 });
  if (event.key === 'l') store.set({ time: store.now().time + 10 });
}

const RUN_FACTOR = 20;

function mountRun(race: Race, store: Store): void {
  const run = byId('run');
  if (!run) return;
  let last = NaN;
  let running = false;
  const frame = (now: number): void => {
    if (!running) return;
    const { time } = store.now();
    if (Number.isFinite(last)) store.set({ time: time + ((now - last) / 1000) * RUN_FACTOR });
    last = now;
    if (time >= race.to) stop();
    else requestAnimationFrame(frame);
  };
  const stop = (): void => {
    running = false;
    run.setAttribute('aria-pressed', 'false');
    run.textContent = 'Run';
  };
  run.addEventListener('click', () => {
    if (running) return stop();
    running = true;
    last = NaN;
    if (store.now().time >= race.to) store.set({ time: race.from });
    run.setAttribute('aria-pressed', 'true');
    run.textContent = 'Halt';
    requestAnimationFrame(frame);
  });
}
