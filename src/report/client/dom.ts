/** Elements by hand: nothing on the page is ever made from a string of markup. */

type Child = Node | string;
type Attributes = Readonly<Record<string, string | number | boolean | undefined>>;

const SVG = 'http://www.w3.org/2000/svg';

function fill<T extends Element>(element: T, attributes: Attributes, children: readonly Child[]): T {
  for (const [name, value] of Object.entries(attributes)) {
    if (value === undefined || value === false) continue;
    element.setAttribute(name, value === true ? '' : String(value));
  }
  element.append(...children);
  return element;
}

export function make<K extends keyof HTMLElementTagNameMap>(
  tag: K,
  attributes: Attributes = {},
  ...children: readonly Child[]
): HTMLElementTagNameMap[K] {
  return fill(document.createElement(tag), attributes, children);
}

export function draw<K extends keyof SVGElementTagNameMap>(
  tag: K,
  attributes: Attributes = {},
  ...children: readonly Child[]
): SVGElementTagNameMap[K] {
  return fill(document.createElementNS(SVG, tag), attributes, children);
}

export function byId(id: string): HTMLElement | null {
  return document.getElementById(id);
}

/** A button that does one thing. */
export function button(words: string, label: string, act: () => void): HTMLButtonElement {
  // Words name the button themselves; a bare sign needs a name.
  const name = words.length > 1 ? undefined : label;
  const made = make('button', { type: 'button', class: 'tool', 'aria-label': name, title: label }, words);
  made.addEventListener('click', act);
  return made;
}

/** Data the page carries in a script element. */
export function pageData(id: string): unknown {
  return JSON.parse(byId(id)?.textContent ?? 'null');
}

/** A custom property as the page has it now (light or dark). */
export function paint(value: string): string {
  const name = /var\((--[a-z0-9-]+)/.exec(value)?.[1];
  return name ? getComputedStyle(document.documentElement).getPropertyValue(name).trim() || value : value;
}
