/**
 * Markup that cannot be broken by data: every value put into `html` is escaped unless it is markup made by `html`
 * itself. There is no other way to make markup in this folder.
 */
export interface Safe {
  readonly safe: string;
}

export type Part = Safe | string | number | null | undefined | false | readonly Part[];

const ENTITIES: Readonly<Record<string, string>> = {
  '&': '&amp;',
  '<': '&lt;',
  '>': '&gt;',
  '"': '&quot;',
  "'": '&#39;',
};

/** Text for use between tags and inside quoted attributes. Control characters that no document may hold are dropped. */
export function escapeText(text: string): string {
  return TELLING.test(text) ? escaped(text) : text;
}

/** Most texts hold nothing of the kind. */
const TELLING = /[\u0000-\u0008\u000b\u000c\u000e-\u001f&<>"']/;

function escaped(text: string): string {
  return text.replace(/[\u0000-\u0008\u000b\u000c\u000e-\u001f]/g, '').replace(/[&<>"']/g, (c) => ENTITIES[c]);
}

function render(part: Part): string {
  if (part === null || part === undefined || part === false) return '';
  if (typeof part === 'string') return escapeText(part);
  if (typeof part === 'number') return String(part);
  if ('safe' in part) return part.safe;
  return part.map(render).join('');
}

/** Tagged template: the literal pieces are markup, everything in `${}` is text unless it came from `html`. */
export function html(pieces: TemplateStringsArray, ...parts: readonly Part[]): Safe {
  const literals = foldedOnce(pieces);
  let out = literals[0];
  for (let i = 0; i < parts.length; i++) out += render(parts[i]) + literals[i + 1];
  return { safe: out };
}

/** The literals of each template, folded when it is first used: there is one array a place in the source. */
const known = new WeakMap<TemplateStringsArray, readonly string[]>();

function foldedOnce(pieces: TemplateStringsArray): readonly string[] {
  const before = known.get(pieces);
  if (before) return before;
  const now = pieces.map(folded);
  known.set(pieces, now);
  return now;
}

/** Line breaks of the source mean no more in markup than one space. */
function folded(piece: string): string {
  return piece.includes('\n') ? piece.replace(/\s*\n\s*/g, ' ') : piece;
}

/** An element whose content must stand as it is, byte for byte: a script, a style sheet, data. */
export function verbatim(tag: 'script' | 'style', attributes: string, content: string): Safe {
  return { safe: `<${tag}${attributes}>${content}</${tag}>` };
}

/** Markup from a chart or from a build step; the caller answers for it. */
export function trusted(markup: string): Safe {
  return { safe: markup };
}

/** A name as a person wrote it: kept apart from its surroundings, whatever its direction of writing. */
export function nameOf(name: string): Safe {
  return html`<bdi>${name}</bdi>`;
}
