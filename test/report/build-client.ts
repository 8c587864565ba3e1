import { createHash } from 'node:crypto';
import { readFileSync, writeFileSync } from 'node:fs';
import { build, transform } from 'esbuild';

/**
 * Bundles the client and the style sheet of the page into `src/report/generated/client.ts`, with the digests the page's
 * content security policy names. Run by `npm run build:client`; a test runs it again and compares.
 */
const ROOT = new URL('../../', import.meta.url).pathname;
export const GENERATED = `${ROOT}src/report/generated/client.ts`;

const TARGET = ['chrome100', 'firefox102', 'safari15'];

async function script(): Promise<string> {
  const out = await build({
    entryPoints: [`${ROOT}src/report/client/main.ts`],
    bundle: true,
    minify: true,
    format: 'iife',
    target: TARGET,
    write: false,
    metafile: true,
    legalComments: 'none',
    charset: 'ascii',
    absWorkingDir: ROOT,
    tsconfig: `${ROOT}src/report/client/tsconfig.json`,
  });
  const [made] = Object.values(out.metafile.outputs);
  return notices(made.inputs) + out.outputFiles[0].text.trim();
}

/** Parts of other hands in the bundle: their licences ask that the notice goes with every copy. */
function notices(inputs: Readonly<Record<string, { bytesInOutput: number }>>): string {
  const held = Object.entries(inputs).filter(([, { bytesInOutput }]) => bytesInOutput > 0);
  const names = new Set(held.flatMap(([file]) => /node_modules\/([^/]+)\//.exec(file)?.[1] ?? []));
  const texts = [...names]
    .sort()
    .map((name) => `${name}:\n${readFileSync(`${ROOT}node_modules/${name}/LICENSE`, 'utf8').trim()}`);
  return `/*\n${texts.join('\n\n')}\n*/\n`;
}

async function sheet(): Promise<string> {
  const files = ['node_modules/uplot/dist/uPlot.min.css', 'src/report/style.css'];
  const css = files.map((file) => readFileSync(ROOT + file, 'utf8')).join('\n');
  const out = await transform(css, { loader: 'css', minify: true, legalComments: 'none', target: TARGET });
  return out.code.trim();
}

function digest(text: string): string {
  return `sha256-${createHash('sha256').update(text, 'utf8').digest('base64')}`;
}

/** The text of the generated module. */
export async function buildClient(): Promise<string> {
  const [js, css] = [await script(), await sheet()];
  if (/<\/(script|style)/i.test(js + css)) throw new Error('buildClient: the bundle would end its own element');
  return [
    '/* Made by `npm run build:client` from src/report/client and style.css. Do not edit. */',
    '/* prettier-ignore */',
    `export const clientScript = ${JSON.stringify(js)};`,
    `export const clientHash = '${digest(js)}';`,
    '/* prettier-ignore */',
    `export const style = ${JSON.stringify(css)};`,
    `export const styleHash = '${digest(css)}';`,
    '',
  ].join('\n');
}

if (process.argv[1] && import.meta.url.endsWith(process.argv[1].split('/').pop()!) && !process.env.VITEST) {
  writeFileSync(GENERATED, await buildClient());
}
