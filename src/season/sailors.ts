/** Who is who in a season: names that belong together, names that are not to be shown. */
export interface Sailors {
  /** Every other spelling -> the name that counts. */
  readonly names: ReadonlyMap<string, string>;
  readonly hidden: ReadonlySet<string>;
}

export const ALL_AS_WRITTEN: Sailors = { names: new Map(), hidden: new Set() };

/**
 * Understands the content of `sailors.yaml`:
 *
 *     aliases:
 *       Corrie: [Corrie B, corrie-2]
 *     hidden: [Linnet]
 *
 * @param content What the file holds, as read from YAML or JSON; null or undefined for an empty file.
 * @returns The sailors, or in `problem` what is wrong with the file.
 */
export function readSailors(content: unknown): { sailors: Sailors; problem: string | null } {
  const fail = (problem: string): { sailors: Sailors; problem: string } => ({ sailors: ALL_AS_WRITTEN, problem });
  if (content === null || content === undefined) return { sailors: ALL_AS_WRITTEN, problem: null };
  if (!isTable(content)) return fail('expected `aliases` and `hidden`');
  const unknown = Object.keys(content).find((key) => key !== 'aliases' && key !== 'hidden' && !key.startsWith('x-'));
  if (unknown) return fail(`unknown key \`${unknown}\`: only \`aliases\` and \`hidden\` are known`);
  const { aliases = {}, hidden = [] } = content;
  if (!isTable(aliases)) return fail('`aliases` must name each sailor with a list of other spellings');
  const names = new Map<string, string>();
  for (const [name, others] of Object.entries(aliases)) {
    const list = Array.isArray(others) ? others : [others];
    for (const other of list) {
      if (!isName(other)) return fail(`\`aliases.${name}\` must be a list of names`);
      const taken = names.get(keyOf(other));
      if (taken !== undefined && taken !== name) return fail(`\`${other}\` stands for both ${taken} and ${name}`);
      names.set(keyOf(other), name);
    }
    names.set(keyOf(name), name);
  }
  if (!Array.isArray(hidden) || !hidden.every(isName)) return fail('`hidden` must be a list of names');
  return {
    sailors: { names, hidden: new Set(hidden.map((name) => keyOf(canonical(names, String(name))))) },
    problem: null,
  };
}

/** The name a sailor counts under; null when hidden. */
export function sailorName(sailors: Sailors, written: string): string | null {
  const name = canonical(sailors.names, written);
  return sailors.hidden.has(keyOf(name)) ? null : name;
}

function canonical(names: ReadonlyMap<string, string>, written: string): string {
  return names.get(keyOf(written)) ?? written;
}

/** Spaces and case do not make another person. */
function keyOf(name: string | number): string {
  return String(name).trim().replace(/\s+/g, ' ').toLowerCase();
}

function isName(value: unknown): value is string | number {
  return typeof value === 'string' || typeof value === 'number';
}

function isTable(value: unknown): value is Record<string, unknown> {
  return typeof value === 'object' && value !== null && !Array.isArray(value);
}
