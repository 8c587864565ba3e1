import { clientHash, clientScript, style, styleHash } from './generated/client.js';
import { html, verbatim, type Safe } from './html.js';
import { sanitizeJson } from './json.js';

export interface Document {
  readonly title: string;
  readonly body: Safe;
  /** What the client reads, by the id of its element. */
  readonly data: Readonly<Record<string, unknown>>;
}

/** Nothing may be fetched; the one script and the one style sheet are named by their digests. */
const POLICY = `default-src 'none'; script-src '${clientHash}'; style-src '${styleHash}'; img-src data:; base-uri 'none'; form-action 'none'`;

/** The whole page as one string. */
export function document({ title, body, data }: Document): string {
  const blocks = Object.entries(data).map(([id, value]) =>
    verbatim('script', ` type="application/json" id="${id}"`, sanitizeJson(value)),
  );
  const head = html`<meta charset="utf-8" />
    <meta http-equiv="Content-Security-Policy" content="${POLICY}" />
    <meta name="viewport" content="width=device-width, initial-scale=1" />
    <meta name="color-scheme" content="light dark" />
    <meta name="generator" content="legwork" />
    <title>${title}</title>`;
  const parts = [
    '<!doctype html>\n<html lang="en">\n<head>',
    head.safe,
    verbatim('style', '', style).safe,
    '</head>\n<body>',
    body.safe,
    ...blocks.map((block) => block.safe),
    verbatim('script', '', clientScript).safe,
    '</body>\n</html>\n',
  ];
  return parts.join('\n');
}
