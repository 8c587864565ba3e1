/** A set of things with one stop of the tab key among them: arrows, Home and End move within. */
export function roving(things: readonly (HTMLElement | SVGElement)[]): void {
  things.forEach((thing, i) => {
    thing.setAttribute('tabindex', i === 0 ? '0' : '-1');
    thing.addEventListener('keydown', (event) => {
      const to = target(things.length, i, (event as KeyboardEvent).key);
      if (to === null) return;
      event.preventDefault();
      thing.setAttribute('tabindex', '-1');
      things[to].setAttribute('tabindex', '0');
      things[to].focus();
    });
  });
}

function target(count: number, from: number, key: string): number | null {
  if (key === 'ArrowRight' || key === 'ArrowDown') return Math.min(count - 1, from + 1);
  if (key === 'ArrowLeft' || key === 'ArrowUp') return Math.max(0, from - 1);
  if (key === 'Home') return 0;
  return key === 'End' ? count - 1 : null;
}
