import { readdirSync, readFileSync, statSync } from 'node:fs';
import { dirname, join, relative, resolve, sep } from 'node:path';
import { expect, test } from 'vitest';

const ROOT = new URL('../src', import.meta.url).pathname;

/** Who may import whom at run time. What only lends its types is not an import. */
const ALL_STAGES = [
  ...['math', 'physics', 'recording', 'files', 'importers', 'sensors', 'smooth', 'wind', 'segment', 'estimate'],
  ...['between', 'season', 'result', 'steps'],
];
const JOBS = ['debrief.ts', 'compare.ts', 'season.ts', 'tune.ts', 'optimum.ts', 'inspect.ts', 'schemas.ts'];
const MAY_IMPORT: Readonly<Record<string, readonly string[]>> = {
  math: [],
  recording: ['math'],
  physics: ['math'],
  files: ['math', 'recording'],
  importers: ['recording', 'math'],
  smooth: ['recording', 'math'],
  segment: ['recording', 'math'],
  sensors: ['recording', 'math', 'physics'],
  wind: ['recording', 'math', 'physics'],
  estimate: ['recording', 'math', 'physics', 'segment', 'wind'],
  between: ['recording', 'math', 'physics', 'segment', 'wind'],
  result: ['math'],
  season: ['math'],
  report: ['result', 'math'],
  export: ['result', 'math'],
  demo: [],
  steps: ALL_STAGES,
  cli: ['index.ts'],
  'index.ts': [...ALL_STAGES, ...JOBS, 'report', 'export', 'demo'],
  ...Object.fromEntries(JOBS.map((job) => [job, [...ALL_STAGES, ...JOBS]])),
};

function filesIn(folder: string): string[] {
  return readdirSync(folder).flatMap((name) => {
    const path = join(folder, name);
    if (statSync(path).isDirectory()) return path.endsWith(join('report', 'client')) ? [] : filesIn(path);
    return path.endsWith('.ts') ? [path] : [];
  });
}

function importsOf(path: string): string[] {
  const text = readFileSync(path, 'utf8');
  const found = [...text.matchAll(/^(?:import|export)\s+(?!type\b)[^'"]*?from\s+'([^']+)'/gms)].map((m) => m[1]);
  const bare = [...text.matchAll(/^import\s+'([^']+)'/gm)].map((m) => m[1]);
  const late = [...text.matchAll(/(?<!typeof )\bimport\('([^']+)'\)/g)].map((m) => m[1]);
  return [...found, ...bare, ...late];
}

const layerOf = (path: string): string => relative(ROOT, path).split(sep)[0];

test('every folder imports only what stands beneath it', () => {
  const offences: string[] = [];
  for (const path of filesIn(ROOT)) {
    const layer = layerOf(path);
    const allowed = MAY_IMPORT[layer];
    expect(allowed, `${layer} is not in the table`).toBeDefined();
    for (const target of importsOf(path)) {
      if (target.startsWith('node:')) {
        if (layer !== 'cli') offences.push(`${relative(ROOT, path)} -> ${target}`);
        continue;
      }
      if (!target.startsWith('.')) continue;
      const other = layerOf(resolve(dirname(path), target.replace(/\.js$/, '.ts')));
      if (other !== layer && !allowed.includes(other)) offences.push(`${relative(ROOT, path)} -> ${target}`);
    }
  }
  expect(offences).toEqual([]);
});

test('only the command line prints, asks the time or draws at random', () => {
  const offences = filesIn(ROOT)
    .filter((path) => layerOf(path) !== 'cli')
    .filter((path) =>
      /\bconsole\.|Date\.now\(|new Date\(\)|Math\.random\(|performance\.now/.test(readFileSync(path, 'utf8')),
    )
    .map((path) => relative(ROOT, path));
  expect(offences).toEqual([]);
});
