import { UserError } from '../recording/issues.js';
import { detectEncoding, latin1 } from './encoding.js';
import type { LogKind } from './types.js';

/** What a log is, judged by how it begins. Its name is not asked. */
export interface Detected {
  readonly kind: LogKind;
  readonly encoding: string;
}

/** How much of a log is looked at to tell what it is. */
export const HEAD = 1 << 16;

/** A sentence of IEC 61162-1: `$` or `!`, talker, formatter, a field. Tag blocks and stamps may stand before it. */
const SENTENCE = /[$!][A-Za-z]{2}[A-Za-z]{3},[^\r\n]*/g;

/**
 * @throws UserError for what is no log, saying what it is instead and what to do.
 */
export function detect(head: Uint8Array, file: string): Detected {
  if (head.length === 0) throw new UserError(`${file}: the file is empty.`, { exitCode: 2 });
  refuseBinary(head, file);
  const encoding = detectEncoding(head);
  const text = encoding.startsWith('utf-16') ? new TextDecoder(encoding).decode(head) : latin1(head);
  const start = text.replace(/^(?:ï»¿|\uFEFF)/, '').trimStart();
  if (start.replaceAll('\0', '') === '') {
    throw new UserError(`${file}: holds nothing but blanks and zero bytes.`, { exitCode: 2 });
  }
  if (start.startsWith('<')) return { kind: detectXml(start, file), encoding };
  if (hasSentences(text)) return { kind: 'nmea', encoding };
  refuseGarbage(head, encoding, file);
  if (/^[{[]\s*(["{[\]}]|-?\d)/.test(start)) {
    throw new UserError(`${file}: this is JSON, not a log of a boat or the wind.`, {
      exitCode: 2,
      suggestion: 'Give the log itself: GPX, NMEA 0183 or a table (CSV).',
    });
  }
  return { kind: 'csv', encoding };
}

/** Sentences tell a log even among binary records, but not one lone resemblance in a table. */
function hasSentences(text: string): boolean {
  let sentences = 0;
  for (const [sentence] of text.matchAll(SENTENCE)) {
    if (/\*[0-9A-Fa-f]{2}\s*$/.test(sentence)) return true;
    if (++sentences >= 3) return true;
  }
  return sentences > 0 && /^\s*[$!]/.test(text);
}

function detectXml(text: string, file: string): LogKind {
  const root = /<(?![?!])(?:[\w.-]+:)?([\w.-]+)/.exec(text.replace(/<!--[\s\S]*?(?:-->|$)/g, ''))?.[1] ?? '';
  if (root.toLowerCase() === 'gpx' || /^(trk|trkseg|trkpt)$/i.test(root)) return 'gpx';
  throw new UserError(`${file}: this is XML, but not GPX (its root element is '${root.slice(0, 60)}').`, {
    exitCode: 2,
    suggestion: 'Export the track as GPX.',
  });
}

/** Binary recordings of watches and plotters carry four letters behind their header's size and version. */
function refuseBinary(head: Uint8Array, file: string): void {
  if (latin1(head.subarray(8, 12)) === '.FIT') {
    throw new UserError(`${file}: this is a binary watch recording.`, {
      exitCode: 2,
      suggestion: 'Export it as GPX, from the watch maker’s site or app, and give that.',
    });
  }
}

function refuseGarbage(head: Uint8Array, encoding: string, file: string): void {
  if (encoding.startsWith('utf-16')) return;
  let odd = 0;
  let seen = 0;
  for (const byte of head) {
    if (byte === 0) continue;
    seen++;
    if (byte < 9 || (byte > 13 && byte < 32 && byte !== 27) || byte === 127) odd++;
  }
  const zeros = head.length - seen;
  if (odd > 0.05 * seen || (odd > 0 && zeros > 0.2 * head.length)) {
    throw new UserError(`${file}: this is a binary file, none of the logs we read.`, {
      exitCode: 2,
      suggestion: 'Export it as GPX, NMEA 0183 text or a table (CSV).',
    });
  }
}
