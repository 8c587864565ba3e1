import { readFileSync } from 'node:fs';
import { basename } from 'node:path';
import { gzipSync, zipSync } from 'fflate';
import { expect } from 'vitest';
import { importLog } from '../../src/importers/index.js';
import type { ImportedLog, ImportOptions } from '../../src/importers/types.js';

/** Pieces of one size in one and the same memory, as the command reads a file. */
export function* pieces(bytes: Uint8Array, size = 1 << 16): Generator<Uint8Array> {
  const memory = Buffer.alloc(size);
  for (let at = 0; at < bytes.length; at += size) {
    const part = bytes.subarray(at, at + size);
    memory.set(part);
    yield memory.subarray(0, part.length);
    memory.fill(0x2a);
  }
}

export async function importBytes(bytes: Uint8Array, options: ImportOptions = {}, name = 'log'): Promise<ImportedLog> {
  return importLog({ name, chunks: pieces(bytes) }, options);
}

export async function importText(text: string, options: ImportOptions = {}): Promise<ImportedLog> {
  return importBytes(new TextEncoder().encode(text), options);
}

export const rejectedOf = (log: ImportedLog): number => log.rejected.reduce((sum, { count }) => sum + count, 0);

export const codesOf = (log: ImportedLog): string[] => log.issues.map(({ code }) => code);

/** rows = kept + ignored + rejected, and the other counts agree with the recording. */
export function checkBooks(log: ImportedLog): void {
  const { recording } = log;
  expect(log.kept + log.ignored + rejectedOf(log)).toBe(log.rows);
  expect(Object.values(log.ignoredTypes).reduce((sum, count) => sum + count, 0)).toBe(log.ignored);
  const has = (channels: string[]) => (row: number) =>
    channels.some((channel) => !Number.isNaN(recording.channels[channel as 'lat']?.[row] ?? NaN));
  const rows = [...recording.time.keys()];
  expect(rows.filter(has(['lat'])).length).toBe(log.fixes);
  expect(rows.filter(has(['awa', 'aws', 'twd', 'twdMagnetic', 'tws'])).length).toBe(log.samples);
  expect(log.kept).toBeGreaterThanOrEqual(recording.time.length);
  expect(rows.every((row) => row === 0 || recording.time[row] > recording.time[row - 1])).toBe(true);
}

/** A log as a page one can read and a difference can show. */
export function dump(log: ImportedLog): string {
  const { recording } = log;
  const channels = Object.entries(recording.channels);
  const number = (value: number): string => (Number.isNaN(value) ? '-' : String(Number(value.toFixed(6))));
  const lines = [
    `${log.kind} '${recording.name}'`,
    `rows ${log.rows} = kept ${log.kept} + ignored ${log.ignored} + rejected ${rejectedOf(log)}`,
    `fixes ${log.fixes}, samples ${log.samples}, breaks at [${recording.breaks.join(', ')}]`,
    ...Object.entries(log.ignoredTypes).map(([type, count]) => `ignored ${count} ${type}`),
    ...log.rejected.map(({ reason, count, first_line }) => `rejected ${count} from line ${first_line}: ${reason}`),
    ...log.columns.map(
      ({ header, means, unit }) => `column ${header} = ${means ?? 'not used'}${unit ? ` [${unit}]` : ''}`,
    ),
    ...log.issues.map(({ code, line, message }) => `issue ${code}${line ? ` at line ${line}` : ''}: ${message}`),
    ['time', ...channels.map(([channel]) => channel)].join('\t'),
    ...Array.from(recording.time, (time, row) =>
      [new Date(time * 1000).toISOString(), ...channels.map(([, column]) => number(column[row]))].join('\t'),
    ),
  ];
  return lines.join('\n') + '\n';
}

/** All that must not depend on how the bytes come or what the file is called. */
const essence = (log: ImportedLog): unknown => ({
  ...log,
  sha256: '',
  issues: log.issues.map(({ code, line }) => [code, line]),
});

function withCrlf(bytes: Uint8Array): Uint8Array | undefined {
  try {
    const text = new TextDecoder('utf-8', { fatal: true }).decode(bytes);
    if (text.includes('encoding="ISO') || text.includes('\0')) return undefined;
    return new TextEncoder().encode('\uFEFF' + text.replace(/\r?\n/g, '\r\n'));
  } catch {
    return undefined;
  }
}

/** The log with its last record cut in the middle. */
function cutInLastRecord(bytes: Uint8Array, kind: string): Uint8Array {
  const text = Buffer.from(bytes).toString('latin1');
  if (kind === 'gpx') return bytes.subarray(0, text.lastIndexOf('</trkpt>') - 4);
  const end = text.trimEnd().length;
  const start = text.lastIndexOf('\n', end - 1) + 1;
  return bytes.subarray(0, Math.floor((start + end) / 2));
}

/**
 * The whole check of an importer on one file: a snapshot one can read; recognised without its name; the same with
 * CRLF and a byte-order mark, in pieces of one byte, and in gzip and zip; a cut last record costs at most that record;
 * and the books balance.
 */
export async function checkImport(path: string, options: ImportOptions = {}): Promise<ImportedLog> {
  const bytes = new Uint8Array(readFileSync(path));
  const name = basename(path);
  const log = await importBytes(bytes, options, name);
  await expect(dump(log)).toMatchFileSnapshot(`snapshots/${name}.txt`);
  checkBooks(log);
  const same = async (other: Uint8Array, called = 'x', size = 1 << 16): Promise<void> => {
    expect(essence(await importLog({ name: called, chunks: pieces(other, size) }, options))).toEqual(essence(log));
  };
  await same(bytes, '');
  await same(bytes, name, 1);
  await same(bytes, name, 997);
  await same(gzipSync(bytes));
  await same(zipSync({ 'inner/log': bytes }));
  const crlf = withCrlf(bytes);
  if (crlf) await same(crlf);
  const cut = await importBytes(cutInLastRecord(bytes, log.kind), options, name);
  checkBooks(cut);
  expect(cut.kept).toBeGreaterThanOrEqual(log.kept - 1);
  return log;
}
