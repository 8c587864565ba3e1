import { html, trusted, type Part, type Safe } from '../html.js';

export interface Column {
  readonly head: Part;
  readonly cells: readonly Part[];
}

export interface FigureParts {
  readonly svg: string;
  readonly title: Part;
  /** What the picture says, in words. */
  readonly summary: Part;
  /** The figures behind it. */
  readonly table?: Safe | null;
  readonly className?: string;
}

/** A picture with its words and its figures. */
export function figure(parts: FigureParts): Safe {
  const { svg, title, summary, table, className } = parts;
  return html`<figure class="${className ?? 'plate'}">
    <figcaption class="plate-title">${title}</figcaption>
    ${trusted(svg)}
    <p class="plate-words">${summary}</p>
    ${
      table &&
      html`<details class="figures">
        <summary>The figures behind it</summary>
        ${table}
      </details>`
    }
  </figure>`;
}

/** A plain table: the first cell of each row is its head. */
export function table(
  caption: Part,
  heads: readonly Part[],
  rows: readonly (readonly Part[])[],
  className = 'plain',
): Safe {
  return html`<div class="scroll" tabindex="0" role="region" aria-label="Table">
    <table class="${className}">
      <caption>
        ${caption}
      </caption>
      <thead>
        <tr>
          ${heads.map((h) => html`<th scope="col">${h}</th>`)}
        </tr>
      </thead>
      <tbody>
        ${rows.map(
          ([first, ...rest]) =>
            html`<tr>
              <th scope="row">${first}</th>
              ${rest.map((c) => html`<td>${c}</td>`)}
            </tr>`,
        )}
      </tbody>
    </table>
  </div>`;
}

/** A part of the page under its heading. */
export function section(id: string, title: string, body: Part, className = ''): Safe {
  return html`<section id="${id}" class="${className}" aria-labelledby="h-${id}">
    <h2 id="h-${id}">${title}</h2>
    ${body}
  </section>`;
}
