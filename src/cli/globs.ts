import { readdir } from 'node:fs/promises';
import { join } from 'node:path';

/** True when a name holds signs that stand for other names. */
export const isGlob = (name: string): boolean => /[*?]|\[[^\]]+\]|\{[^}]*,[^}]*\}/.test(name);

/**
 * Files that a pattern stands for, sorted: `*` and `?` within a name, `**` across folders, `[abc]`, `{a,b}`. For shells
 * that leave this to the program. Hidden files are matched only by a pattern that begins with a dot.
 */
export async function expandGlob(pattern: string): Promise<string[]> {
  const found = new Set<string>();
  for (const one of alternatives(pattern.replaceAll('\\', '/'))) {
    const absolute = /^([A-Za-z]:)?\//.exec(one)?.[0] ?? '';
    await walk(absolute, one.slice(absolute.length).split('/'), found);
  }
  return [...found].sort();
}

async function walk(folder: string, parts: readonly string[], found: Set<string>): Promise<void> {
  const [part, ...rest] = parts;
  if (part === '**') {
    await walk(folder, rest, found);
    for (const entry of await list(folder)) {
      if (entry.isDirectory() && !entry.name.startsWith('.')) await walk(join(folder, entry.name), parts, found);
    }
    return;
  }
  if (!isGlob(part)) {
    const next = join(folder, part);
    if (rest.length > 0) await walk(next, rest, found);
    else if ((await list(folder)).some((entry) => entry.name === part)) found.add(next);
    return;
  }
  const pattern = asRegExp(part);
  for (const entry of await list(folder)) {
    if (!pattern.test(entry.name) || (entry.name.startsWith('.') && !part.startsWith('.'))) continue;
    const next = join(folder, entry.name);
    if (rest.length === 0) found.add(next);
    else if (entry.isDirectory()) await walk(next, rest, found);
  }
}

async function list(folder: string) {
  try {
    return await readdir(folder || '.', { withFileTypes: true });
  } catch {
    return [];
  }
}

/** `a{b,c}` as `ab`, `ac`. */
function alternatives(pattern: string): string[] {
  const match = /^(.*?)\{([^{}]*,[^{}]*)\}(.*)$/.exec(pattern);
  if (!match) return [pattern];
  return match[2].split(',').flatMap((one) => alternatives(match[1] + one + match[3]));
}

function asRegExp(part: string): RegExp {
  const source = part.replace(/\[!?[^\]]+\]|[*?]|[^*?[]+|\[/g, (piece) => {
    if (piece === '*') return '.*';
    if (piece === '?') return '.';
    if (piece.length > 2 && piece.startsWith('[')) {
      return `[${piece.slice(1, -1).replace(/^!/, '^').replaceAll('\\', '\\\\')}]`;
    }
    return piece.replace(/[.+^${}()|[\]\\]/g, '\\$&');
  });
  return new RegExp(`^${source}$`, 'u');
}
