import { execFileSync } from 'node:child_process';
import { existsSync, mkdirSync, mkdtempSync, readFileSync, renameSync, rmSync } from 'node:fs';
import { chromium, type Browser } from 'playwright-core';

/**
 * A Chromium for the tests: BROWSER_PATH, else the one that comes with the development dependencies, else one of the
 * system. The shipped one is packed; it is unpacked beside its final place and moved there in one step, so that two
 * runs at once cannot meet half a file.
 */
const ROOT = new URL('../../', import.meta.url).pathname;
const SYSTEM = ['/usr/bin/chromium', '/usr/bin/chromium-browser', '/usr/bin/google-chrome'];
const FLAGS = ['--no-sandbox', '--font-render-hinting=none', '--hide-scrollbars', '--disable-gpu'];

interface Candidate {
  readonly path: string;
  /** Libraries that came with it, for bare systems. */
  readonly libraries?: string;
}

const UNPACK = `
import chromium from '@sparticuz/chromium';
process.stdout.write(await chromium.executablePath());
`;

function shipped(): Candidate | null {
  const manifest = `${ROOT}node_modules/@sparticuz/chromium/package.json`;
  if (!existsSync(manifest) || process.platform !== 'linux' || process.arch !== 'x64') return null;
  const { version } = JSON.parse(readFileSync(manifest, 'utf8')) as { version: string };
  const home = `${ROOT}node_modules/.cache/chromium-${version}`;
  if (!existsSync(`${home}/chromium`)) unpack(home);
  return { path: `${home}/chromium`, libraries: `${home}/al2023/lib` };
}

function unpack(home: string): void {
  mkdirSync(`${ROOT}node_modules/.cache`, { recursive: true });
  const fresh = mkdtempSync(`${home}-`);
  const env = { ...process.env, TMPDIR: fresh, AWS_EXECUTION_ENV: 'AWS_Lambda_nodejs20.x' };
  execFileSync(process.execPath, ['--input-type=module', '-e', UNPACK], { cwd: ROOT, env, stdio: 'pipe' });
  try {
    renameSync(fresh, home);
  } catch {
    // Another run was first; its copy is as good.
    rmSync(fresh, { recursive: true, force: true });
  }
}

function candidates(): Candidate[] {
  const asked = process.env.BROWSER_PATH;
  if (asked) return [{ path: asked }];
  const out: Candidate[] = [];
  try {
    const own = shipped();
    if (own) out.push(own);
  } catch (error) {
    console.error(`The shipped browser could not be unpacked: ${String(error)}`);
  }
  return [...out, ...SYSTEM.filter((path) => existsSync(path)).map((path) => ({ path }))];
}

async function launch({ path, libraries }: Candidate): Promise<Browser> {
  const options = { executablePath: path, args: FLAGS, headless: true };
  try {
    return await chromium.launch(options);
  } catch (error) {
    if (!libraries) throw error;
    return chromium.launch({
      ...options,
      env: { ...process.env, LD_LIBRARY_PATH: libraries },
    });
  }
}

/**
 * Starts the browser. None to be had: an error where CI or REQUIRE_BROWSER is set, else null and one line that says so.
 */
export async function openBrowser(): Promise<Browser | null> {
  const failures: string[] = [];
  for (const candidate of candidates()) {
    try {
      return await launch(candidate);
    } catch (error) {
      failures.push(`${candidate.path}: ${String(error).split('\n')[0]}`);
    }
  }
  const message = `NO BROWSER: the tests of the page in a browser cannot run. ${failures.join('; ')}`;
  if (process.env.CI || process.env.REQUIRE_BROWSER) throw new Error(message);
  console.error(message);
  return null;
}
