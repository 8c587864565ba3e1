import { isMap, isScalar, LineCounter, parseDocument } from 'yaml';
import type { Document, Node, Pair } from 'yaml';
import { UserError } from '../recording/issues.js';

/** What a person wrote in YAML 1.2 (core schema) or JSON, with the places of everything. */
export interface WrittenFile {
  readonly file: string;
  /** Plain data: objects, arrays, strings, numbers, booleans, null. */
  readonly data: unknown;
  /** 1-based line of a value, or of the nearest thing above it that was written. */
  lineOf(path: readonly PropertyKey[]): number;
  /** 1-based line of a key of the object at `path`. */
  lineOfKey(path: readonly PropertyKey[], key: string): number;
  /** The characters of a plain scalar as written (`007`, `1e3`), null when it is not one. */
  sourceOf(path: readonly PropertyKey[]): string | null;
}

/** Longest file read: far above any race file, far below what would hurt. */
const LONGEST = 4_000_000;
/** Deeper than this nothing lies in a race or boat file. */
const DEEPEST = 40;
/** Brackets upon brackets: the parser would take a second for every few thousand. */
const BRACKETS = new RegExp(`(?:[[{]\\s*){${DEEPEST + 1}}`);
/** An alias may stand for at most this many copies of what it names. */
const MOST_ALIASES = 100;

/**
 * Reads a YAML or JSON text. No code, no custom types: a tag the core schema does not know is an error, aliases are
 * bounded, keys must be unique.
 *
 * @throws UserError (2) naming file and line.
 */
export function readWritten(text: string, file: string): WrittenFile {
  if (text.length > LONGEST) {
    throw new UserError(`${file}: too long for a race or boat file (${(text.length / 1e6).toFixed(1)} MB).`, {
      exitCode: 2,
      suggestion: 'Is it a log? Name it under `boats` or `wind` in a race file, or give it with its own extension.',
    });
  }
  if (BRACKETS.test(text)) throw tooDeep(file);
  const lines = new LineCounter();
  const document = parsed(text.replace(/^\uFEFF/, ''), file, lines);
  const trouble = document.errors[0] ?? document.warnings[0];
  if (trouble) {
    const line = lines.linePos(trouble.pos[0]).line;
    throw new UserError(`${file}:${line}: ${firstSentence(trouble.message)}`, {
      exitCode: 2,
      suggestion:
        'The file must be YAML 1.2 or JSON. Look at the indentation, quotes and brackets on and above that line.',
    });
  }
  const data = plainData(document, file);
  if (isDeeperThan(data, DEEPEST)) throw tooDeep(file);
  return {
    file,
    data,
    lineOf: (path) => lineAt(lines, nodeNear(document, path)),
    lineOfKey: (path, key) => lineAt(lines, keyNode(document, path, key) ?? nodeNear(document, path)),
    sourceOf: (path) => scalarSource(document, path),
  };
}

function parsed(text: string, file: string, lineCounter: LineCounter): Document {
  try {
    return parseDocument(text, {
      version: '1.2',
      schema: 'core',
      lineCounter,
      prettyErrors: false,
      uniqueKeys: true,
      strict: true,
      logLevel: 'warn',
    });
  } catch (error) {
    if (!(error instanceof RangeError)) throw error;
    throw tooDeep(file);
  }
}

function tooDeep(file: string): UserError {
  return new UserError(`${file}: nested too deeply to be a race or boat file.`, {
    exitCode: 2,
    suggestion: 'Look for an `*alias` inside what it stands for, or for brackets that are never closed.',
  });
}

/** An alias inside what it stands for makes data without an end. */
function isDeeperThan(data: unknown, most: number): boolean {
  if (data === null || typeof data !== 'object') return false;
  return most === 0 || Object.values(data).some((one) => isDeeperThan(one, most - 1));
}

function plainData(document: Document, file: string): unknown {
  try {
    return document.toJS({ maxAliasCount: MOST_ALIASES });
  } catch (error) {
    if (!(error instanceof ReferenceError || error instanceof RangeError)) throw error;
    throw new UserError(`${file}: aliases that multiply out of bounds, or one that points to nothing.`, {
      exitCode: 2,
      suggestion: 'Write the values out instead of using `*alias`.',
    });
  }
}

const firstSentence = (message: string): string => message.split('\n')[0].replace(/\s+at line \d+.*$/, '');

function nodeAt(document: Document, path: readonly PropertyKey[]): Node | null {
  const node: unknown = path.length === 0 ? document.contents : document.getIn(path, true);
  return node !== null && typeof node === 'object' && 'range' in node ? (node as Node) : null;
}

function nodeNear(document: Document, path: readonly PropertyKey[]): Node | null {
  for (let length = path.length; length >= 0; length--) {
    const node = nodeAt(document, path.slice(0, length));
    if (node) return node;
  }
  return null;
}

function keyNode(document: Document, path: readonly PropertyKey[], key: string): Node | null {
  const node = nodeAt(document, path);
  if (!isMap(node)) return null;
  const pair = node.items.find((item: Pair) => isScalar(item.key) && String(item.key.value) === key);
  return (pair?.key as Node | undefined) ?? null;
}

const lineAt = (lines: LineCounter, node: Node | null): number =>
  node?.range ? Math.max(1, lines.linePos(node.range[0]).line) : 1;

function scalarSource(document: Document, path: readonly PropertyKey[]): string | null {
  const node = nodeAt(document, path);
  return isScalar(node) && typeof node.source === 'string' ? node.source : null;
}
