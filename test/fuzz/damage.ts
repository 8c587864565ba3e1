/**
 * What failing cards, bad lines, editors and hostile hands do to a log; the same for the same seed.
 */
import { gzipSync, zipSync } from 'fflate';

export type Draw = () => number;

/** Mulberry32, a 32-bit generator by T. Ettinger (public domain): numbers in [0, 1). */
export function drawFrom(seed: number): Draw {
  let state = seed >>> 0;
  return () => {
    state = (state + 0x6d2b79f5) | 0;
    let t = Math.imul(state ^ (state >>> 15), 1 | state);
    t = (t + Math.imul(t ^ (t >>> 7), 61 | t)) ^ t;
    return ((t ^ (t >>> 14)) >>> 0) / 4294967296;
  };
}

export const below = (draw: Draw, most: number): number => Math.floor(draw() * most);
export const pick = <T>(draw: Draw, choices: readonly T[]): T => choices[below(draw, choices.length)];

/** The bytes with those in [from, to) replaced. */
function replaced(bytes: Uint8Array, from: number, to: number, by: Uint8Array): Uint8Array {
  const out = new Uint8Array(from + by.length + Math.max(0, bytes.length - to));
  out.set(bytes.subarray(0, from));
  out.set(by, from);
  out.set(bytes.subarray(to), from + by.length);
  return out;
}

const ascii = (text: string): Uint8Array => new TextEncoder().encode(text);

/** Pieces that mean something to one reader or another. */
const TOKENS = [
  ...['<', '>', '&', '"', "'", '<!--', '-->', '<![CDATA[', ']]>', '<?x ?>', '<!DOCTYPE gpx [<!ENTITY a "b">]>', '&a;'],
  ...['</trkpt>', '<trkpt lat="1" lon="2">', '</trkseg><trkseg>', '<trk><name>A & B</name>', '</gpx>', '<time>', '\0'],
  ...['\n', '\r', '\r\n', ',', ';', '\t', '$GPRMC,', '$GPGGA,120000.00,', '*00', '\\s:a,c:1*00\\', '!AIVDM,', '\uFEFF'],
  ...['NaN', 'Infinity', '-0', '1e308', '1e999', '0x10', '9'.repeat(40), '1'.repeat(400), '-91', '181', '5,5', 'n/a'],
  ...['2026-02-30T25:61:61Z', '2026-12-31T23:59:60Z', '9999999999999', '1.7e9', '24:00:00', '+99:99', '240299'],
].map(ascii);

const LONG = [1 << 12, 1 << 14, 1 << 17];

function fill(draw: Draw): Uint8Array {
  const token = pick(draw, TOKENS);
  const times = Math.max(1, Math.floor(pick(draw, LONG) / token.length));
  const out = new Uint8Array(token.length * times);
  for (let k = 0; k < times; k++) out.set(token, k * token.length);
  return out;
}

type Damage = (bytes: Uint8Array, draw: Draw, others: readonly Uint8Array[]) => Uint8Array;

const none = new Uint8Array(0);
const at = (bytes: Uint8Array, draw: Draw): number => below(draw, bytes.length + 1);

const flip: Damage = (bytes, draw) => {
  const out = bytes.slice();
  for (let k = below(draw, 8); k >= 0 && out.length > 0; k--) out[below(draw, out.length)] ^= 1 << below(draw, 8);
  return out;
};
const cut: Damage = (bytes, draw) => {
  const from = at(bytes, draw);
  return replaced(bytes, from, from + below(draw, 300), none);
};
const cutEnd: Damage = (bytes, draw) => bytes.subarray(0, at(bytes, draw));
const insert: Damage = (bytes, draw) => {
  const from = at(bytes, draw);
  return replaced(bytes, from, from + below(draw, 3), pick(draw, TOKENS));
};
const repeat: Damage = (bytes, draw) => {
  const from = at(bytes, draw);
  return replaced(bytes, from, from, bytes.subarray(from, from + below(draw, 2000)));
};
const splice: Damage = (bytes, draw, others) => {
  const other = pick(draw, others);
  const from = at(other, draw);
  const place = at(bytes, draw);
  return replaced(bytes, place, place + below(draw, 500), other.subarray(from, from + below(draw, 2000)));
};
const zeros: Damage = (bytes, draw) => {
  const from = at(bytes, draw);
  return replaced(bytes, from, from + below(draw, 300), new Uint8Array(below(draw, 5000)));
};
const huge: Damage = (bytes, draw) => {
  const from = at(bytes, draw);
  return replaced(bytes, from, from, fill(draw));
};
/** A number somewhere becomes another one. */
const number: Damage = (bytes, draw) => {
  const out = bytes.slice();
  for (let k = 0; k < 6; k++) {
    const place = at(bytes, draw);
    for (let i = place; i < Math.min(out.length, place + 40); i++) {
      if (out[i] >= 48 && out[i] <= 57) out[i] = 48 + below(draw, 10);
    }
  }
  return out;
};
/** Lines, or what passes for them, change places. */
const shuffle: Damage = (bytes, draw) => {
  const [a, b] = [at(bytes, draw), at(bytes, draw)].sort((x, y) => x - y);
  const end = bytes.indexOf(10, b) + 1;
  const start = bytes.indexOf(10, a) + 1;
  if (start === 0 || end <= start) return bytes;
  const line = bytes.slice(start, Math.min(end, start + 400));
  return replaced(replaced(bytes, end, end, line), start, start + line.length, none);
};
const wide: Damage = (bytes, draw) => {
  const big = draw() < 0.5;
  const out = new Uint8Array(2 * bytes.length + 2);
  out.set(big ? [0xfe, 0xff] : [0xff, 0xfe]);
  bytes.forEach((byte, i) => (out[2 + 2 * i + (big ? 1 : 0)] = byte));
  return out;
};
const highBytes: Damage = (bytes, draw) => {
  const out = bytes.slice();
  for (let k = 0; k < 5 && out.length > 0; k++) out[below(draw, out.length)] = 128 + below(draw, 128);
  return out;
};
/** Archives hold the time they were made: always the same one. */
const PACKED = { level: 1, mtime: new Date(2026, 3, 18) } as const;
const packed: Damage = (bytes, draw) => {
  const out = draw() < 0.5 ? gzipSync(bytes, { level: 1, mtime: 1776470400 }) : zipSync({ 'log.gpx': [bytes, PACKED] });
  return draw() < 0.6 ? flip(draw() < 0.5 ? out.subarray(0, at(out, draw)) : out, draw, []) : out;
};
const nested: Damage = (bytes, draw) => {
  const from = at(bytes, draw);
  const depth = below(draw, 3000);
  return replaced(bytes, from, from, ascii('<a>'.repeat(depth)));
};

/** How often each is drawn. */
const DAMAGES: readonly Damage[] = [
  ...[flip, flip, cut, cut, cutEnd, insert, insert, insert, repeat, splice, splice, zeros, number, number, shuffle],
  ...[highBytes, huge, wide, packed, nested],
];

/** A log damaged in one to six ways. */
export function damaged(logs: readonly Uint8Array[], draw: Draw): Uint8Array {
  let bytes = pick(draw, logs);
  for (let k = below(draw, 6); k >= 0; k--) bytes = pick(draw, DAMAGES)(bytes, draw, logs);
  return bytes;
}
