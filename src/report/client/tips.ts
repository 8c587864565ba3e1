import { errorSentence } from '../notes.js';
import { byId } from './dom.js';
import { localText } from './locale.js';
import { roving } from './roving.js';

/** Notes on figures and words: on hover, on focus, on a tap. One table is one stop of the tab key, arrows move within. */
export function mountTips(): void {
  const tip = byId('tip');
  if (!tip || !('showPopover' in tip)) return;
  prepareFigures();
  let owner: Element | null = null;
  const hide = (): void => {
    owner = null;
    if (tip.matches(':popover-open')) tip.hidePopover();
  };
  const show = (target: HTMLElement): void => {
    if (owner === target) return;
    owner = target;
    tip.textContent = noteOf(target);
    if (!tip.matches(':popover-open')) tip.showPopover();
    place(tip, target);
  };
  const noted = (event: Event): HTMLElement | null =>
    (event.target as Element).closest<HTMLElement>('.q, .term, .race');
  document.addEventListener('pointerover', (event) => {
    if (event.pointerType !== 'mouse') return;
    const target = noted(event);
    if (target) show(target);
    else if (owner && owner !== document.activeElement) hide();
  });
  document.addEventListener('focusin', (event) => {
    const target = noted(event);
    if (target) show(target);
    else hide();
  });
  document.addEventListener('click', (event) => {
    const target = noted(event);
    if (!target) return hide();
    // A race with a page of its own opens it.
    if (target.matches('a')) return;
    event.preventDefault();
    show(target);
  });
  document.addEventListener('keydown', (event) => {
    if (event.key === 'Escape') hide();
    else moveWithin(event);
  });
  window.addEventListener('scroll', hide, { passive: true });
}

/** Words open here, not by their own button; of a table's figures the first is a stop of the tab key. */
function prepareFigures(): void {
  for (const word of document.querySelectorAll('.term')) {
    word.setAttribute('aria-describedby', word.getAttribute('popovertarget')!);
    word.removeAttribute('popovertarget');
  }
  for (const chart of document.querySelectorAll('.trend')) roving([...chart.querySelectorAll<SVGElement>('.race')]);
  for (const table of document.querySelectorAll('table')) {
    table.querySelectorAll<HTMLElement>('.q').forEach((figure, i) => (figure.tabIndex = i === 0 ? 0 : -1));
  }
}

/** What a figure or a word has to say. The title would come up a second time on hover: it becomes the note. */
function noteOf(target: HTMLElement): string {
  const title = target.querySelector(':scope > title');
  if (title) {
    target.dataset.note = title.textContent.replace(/\d+\.\d+/g, localText);
    title.remove();
  }
  if (target.title) {
    const shown = [...target.querySelectorAll('.q > .n, .u')].map((part) => part.textContent).join('');
    const note = errorSentence(shown, target.title).replace(
      /±(\d+(?:\.\d+)?)/g,
      (_, error: string) => `±${localText(error)}`,
    );
    target.dataset.note = note;
    target.setAttribute('aria-description', note);
    target.removeAttribute('title');
  }
  if (target.dataset.note) return target.dataset.note;
  const card = byId(target.getAttribute('aria-describedby') ?? '');
  return card?.querySelector('p')?.textContent ?? '';
}

/** Above the word where there is room, below it else; never outside the window. */
function place(tip: HTMLElement, target: HTMLElement): void {
  const at = target.getBoundingClientRect();
  tip.classList.add('placed');
  const width = Math.min(400, window.innerWidth - 24);
  tip.style.width = `${width}px`;
  tip.style.inset = 'auto';
  const left = Math.max(12, Math.min(at.left, window.innerWidth - width - 12));
  const above = at.top - tip.offsetHeight - 8;
  tip.style.left = `${left}px`;
  tip.style.top = `${above > 48 ? above : at.bottom + 8}px`;
}

const MOVES: Readonly<Record<string, readonly [number, number]>> = {
  ArrowRight: [0, 1],
  ArrowLeft: [0, -1],
  ArrowDown: [1, 0],
  ArrowUp: [-1, 0],
};

/** From figure to figure within a table by the arrow keys. */
function moveWithin(event: KeyboardEvent): void {
  const from = document.activeElement;
  const move = MOVES[event.key];
  if (!move || !from?.classList.contains('q')) return;
  const rows = [...(from.closest('table')?.querySelectorAll('tr') ?? [])].filter((r) => r.querySelector('.q'));
  const row = rows.findIndex((r) => r.contains(from));
  const within = [...(rows[row]?.querySelectorAll<HTMLElement>('.q') ?? [])];
  const across = within.indexOf(from as HTMLElement) + move[1];
  const next = move[0] === 0 ? within[across] : nextRow(rows[row + move[0]], across);
  if (!next) return;
  event.preventDefault();
  (from as HTMLElement).tabIndex = -1;
  next.tabIndex = 0;
  next.focus();
}

function nextRow(row: Element | undefined, across: number): HTMLElement | undefined {
  const figures = [...(row?.querySelectorAll<HTMLElement>('.q') ?? [])];
  return figures[Math.min(across, figures.length - 1)];
}
