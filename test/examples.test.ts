import { readdirSync, readFileSync, statSync } from 'node:fs';
import { join, relative } from 'node:path';
import { describe, expect, test } from 'vitest';

const ROOT = new URL('../src', import.meta.url).pathname;

function filesIn(folder: string): string[] {
  return readdirSync(folder).flatMap((name) => {
    const path = join(folder, name);
    if (statSync(path).isDirectory()) return filesIn(path);
    return path.endsWith('.ts') && !path.includes(join('report', 'client')) ? [path] : [];
  });
}

/** Lines of doc comments of the form `call(...); // => value`. */
const EXAMPLE = /^\s*\*\s+(.+?);\s*\/\/ => (.+?)\s*$/gm;

describe('examples in doc comments', () => {
  const examples = filesIn(ROOT).flatMap((path) =>
    [...readFileSync(path, 'utf8').matchAll(EXAMPLE)].map(([, call, value]) => ({ path, call, value })),
  );

  test('there are some', () => {
    expect(examples.length).toBeGreaterThan(20);
  });

  for (const { path, call, value } of examples) {
    test(`${relative(ROOT, path)}: ${call}`, async () => {
      const names = (await import(path)) as Record<string, unknown>;
      const evaluate = (text: string): unknown =>
        // Examples are code of this project, in its own comments.
        // eslint-disable-next-line @typescript-eslint/no-implied-eval, @typescript-eslint/no-unsafe-call
        new Function(...Object.keys(names), `return (${text});`)(...Object.values(names)) as unknown;
      const expected = evaluate(value);
      const actual = evaluate(call);
      if (typeof expected === 'number') expect(actual).toBeCloseTo(expected, decimalsOf(value));
      else expect(actual).toEqual(expected);
    });
  }
});

/** As many decimals as the comment gives. */
function decimalsOf(text: string): number {
  const fraction = /\.(\d+)\s*$/.exec(text)?.[1];
  return fraction ? Math.min(12, fraction.length) : 9;
}
