import type { z } from 'zod';
import { UserError } from '../recording/issues.js';
import { editDistance, nearestKey } from './nearest-key.js';
import type { WrittenFile } from './written.js';

/** How many mistakes of one file are told at once. */
const MOST_TOLD = 4;

/**
 * Holds data against a strict schema.
 *
 * @returns What the schema makes of it.
 * @throws UserError (2) that tells, per mistake, file, line, field, what is wrong and what to do.
 */
export function checkWritten<S extends z.ZodType>(schema: S, written: WrittenFile, data: unknown): z.output<S> {
  const outcome = schema.safeParse(data);
  if (outcome.success) return outcome.data;
  const mistakes = outcome.error.issues.flatMap((issue) => mistakesOf(issue, [], schema, written, data));
  const told = mistakes.slice(0, MOST_TOLD);
  if (mistakes.length > told.length) told.push(`and ${mistakes.length - told.length} more.`);
  throw new UserError(told.join('\n'), { exitCode: 2 });
}

type Issue = z.core.$ZodIssue;
type Path = readonly PropertyKey[];

function mistakesOf(issue: Issue, above: Path, schema: z.ZodType, written: WrittenFile, data: unknown): string[] {
  const path = [...above, ...issue.path];
  if (issue.code === 'unrecognized_keys') {
    return issue.keys.map((key) => unknownKey(key, path, schema, written, data));
  }
  const branches = issue.code === 'invalid_union' ? issue.errors : [];
  if (branches.length > 0 && !plainBranches(branches)) {
    const best = branches.reduce((a, b) => (weight(b) < weight(a) ? b : a));
    return best.flatMap((inner) => mistakesOf(inner, path, schema, written, data));
  }
  return [`${written.file}:${written.lineOf(path)}: ${fieldName(path)} ${complaint(issue, valueAt(data, path))}`];
}

/**
 * How far a reading of the data is from fitting: keys that do not belong weigh as much as values that do not fit, a
 * value of quite another type more than either.
 */
const weight = (issues: readonly Issue[]): number =>
  issues.reduce((sum, issue) => {
    if (issue.code === 'unrecognized_keys') return sum + issue.keys.length;
    if (issue.code === 'invalid_union') return sum + Math.min(1e6, ...issue.errors.map(weight));
    return sum + (issue.code === 'invalid_type' && issue.path.length === 0 ? 10 : 1);
  }, 0);

/** All branches fail at the value itself by its type: no branch is nearer than another. */
const plainBranches = (branches: readonly (readonly Issue[])[]): boolean =>
  branches.every((issues) => issues.every((issue) => issue.code === 'invalid_type' && issue.path.length === 0));

function complaint(issue: Issue, value: unknown): string {
  if (value === undefined || value === null) return 'is missing.';
  const shown = shortly(value);
  if (issue.code === 'invalid_union') return `is ${shown}, which is not a way to write it.`;
  if (issue.code === 'invalid_type') {
    const wanted = issue.message.startsWith('is ') ? issue.message : `is not ${article(issue.expected)}`;
    return `${wanted} (it says ${shown}).`;
  }
  if (issue.code === 'too_big') return `is ${shown}: at most ${issue.maximum} is allowed.`;
  if (issue.code === 'too_small' && issue.origin === 'number') {
    return `is ${shown}: ${issue.inclusive ? 'at least' : 'more than'} ${issue.minimum} is wanted.`;
  }
  if (/^(is|names) /.test(issue.message)) return `${issue.message} (it says ${shown}).`;
  return `is ${shown}: ${issue.message.replace(/^Too small: /, '')}.`;
}

function shortly(value: unknown): string {
  const text = JSON.stringify(value) ?? String(value);
  return text.length > 60 ? `${text.slice(0, 57)}...` : text;
}

const article = (type: string): string =>
  type === 'array' ? 'a list' : type === 'object' ? 'a group of keys' : `a ${type}`;

function unknownKey(key: string, path: Path, schema: z.ZodType, written: WrittenFile, data: unknown): string {
  const known = knownKeys(schema, path, data).filter((candidate) => candidate !== '$schema' || key.startsWith('$'));
  const near = nearestKey(key, known);
  const place = path.length === 0 ? 'here' : `in ${fieldName(path)}`;
  const hint = near === null ? '' : ` The nearest known one is \`${near}\`${elsewhere(key, near, schema)}.`;
  return `${written.file}:${written.lineOfKey(path, key)}: unknown key \`${key}\` ${place}.${hint}`;
}

/** A key that is known under another one, and much more like what was written: `height_m` belongs under `wind`. */
function elsewhere(key: string, near: string, schema: z.ZodType): string {
  const under = new Map<string, string>();
  for (const { def } of unwrapped(schema)) {
    for (const [owner, value] of Object.entries(def.shape ?? {})) {
      for (const inside of keysWithin(value)) if (!under.has(inside)) under.set(inside, owner);
    }
  }
  const other = nearestKey(key, [...under.keys()]);
  if (other === null || editDistance(key, other) >= Math.min(editDistance(key, near), key.length / 2)) return '';
  return `; \`${other}\` stands under \`${under.get(other)!}\``;
}

/** Keys of the groups a value may be or be a list of. */
function keysWithin(schema: unknown): string[] {
  return unwrapped(schema).flatMap(({ def }) =>
    def.shape ? Object.keys(def.shape) : def.element ? keysWithin(def.element) : [],
  );
}

/** `boats[1].track` */
export function fieldName(path: Path): string {
  let name = '';
  for (const part of path) {
    if (typeof part === 'number') name += `[${part + 1}]`;
    else name += (name ? '.' : '') + String(part);
  }
  return `\`${name || 'the file'}\``;
}

function valueAt(data: unknown, path: Path): unknown {
  let value = data;
  for (const part of path) {
    if (value === null || typeof value !== 'object') return undefined;
    value = (value as Record<PropertyKey, unknown>)[part];
  }
  return value;
}

/** Keys the schema knows at a place; where several kinds may stand there, the keys of all that share one with the data. */
function knownKeys(schema: z.ZodType, path: Path, data: unknown): string[] {
  let shapes = unwrapped(schema);
  for (const part of path) shapes = shapes.flatMap((shape) => inner(shape, part)).flatMap(unwrapped);
  const objects = shapes.map((shape) => shape.def.shape).filter((shape) => shape !== undefined);
  const value = valueAt(data, path);
  const has = value !== null && typeof value === 'object' ? Object.keys(value) : [];
  const shares = (shape: object): number => has.filter((key) => key in shape).length;
  const most = Math.max(0, ...objects.map(shares));
  const near = objects.filter((shape) => shares(shape) === most);
  return [...new Set(near.flatMap((shape) => Object.keys(shape)))];
}

/** The parts of a zod definition that hold others. */
interface Shape {
  readonly def: {
    readonly type: string;
    readonly shape?: Record<string, unknown>;
    readonly element?: unknown;
    readonly items?: readonly unknown[];
    readonly options?: readonly unknown[];
    readonly innerType?: unknown;
    readonly in?: unknown;
    readonly valueType?: unknown;
  };
}

function unwrapped(schema: unknown): Shape[] {
  const shape = schema as Shape;
  const { options, innerType, in: input } = shape.def;
  if (options) return options.flatMap(unwrapped);
  if (innerType) return unwrapped(innerType);
  if (input) return unwrapped(input);
  return [shape];
}

function inner(shape: Shape, part: PropertyKey): unknown[] {
  const { shape: keys, element, items, valueType } = shape.def;
  if (typeof part === 'number') return [element ?? items?.[part]].filter((found) => found !== undefined);
  return [keys?.[String(part)] ?? valueType].filter((found) => found !== undefined);
}
