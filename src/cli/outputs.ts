import { join, resolve } from 'node:path';
import { exporters, resultFiles } from '../index.js';
import type { RaceSeries, Result } from '../index.js';
import { forMessages, kindOf, unusable } from './files.js';
import type { OutputFlags } from './options.js';

/** Where one race's files go. */
export interface Places {
  readonly html: string | null;
  /** `-` is standard output. */
  readonly json: string | null;
  readonly csv: string | null;
  readonly geojson: string | null;
  readonly parquet: string | null;
}

/**
 * Places by the flags. An option that names a folder (it ends in a separator, or is one) takes a file named after the
 * race; several races need that.
 */
export async function placesFor(flags: OutputFlags, slug: string, suffix: string, several: boolean): Promise<Places> {
  const named = async (given: string | undefined, extension: string, option: string): Promise<string | null> => {
    if (given === undefined) return null;
    if (given === '-') {
      if (option !== '--json') throw unusable(`${option} -: only --json goes to standard output.`, 'Name a file.');
      if (several) throw unusable('--json -: more than one race.', 'Name a folder: --json results/.');
      return '-';
    }
    const isFolder = /[/\\]$/.test(given) || (await kindOf(given)) === 'folder';
    if (isFolder) return join(given, `${slug}${suffix}${extension}`);
    if (several)
      throw unusable(`${option} ${given}: one file, but more than one race.`, `Name a folder: ${option} ${given}/.`);
    return given;
  };
  const json = await named(flags.json, '.json', '--json');
  const out = await named(flags.out, '.html', '--out');
  return {
    json,
    html: out ?? (json === '-' ? null : join('reports', `${slug}${suffix}.html`)),
    csv: flags.csv === undefined ? null : several ? join(flags.csv, slug) : flags.csv,
    geojson: await named(flags.geojson, '.geojson', '--geojson'),
    parquet: await named(flags.parquet, '.parquet', '--parquet'),
  };
}

/** No output may take the place of an input, nor two outputs the same place. */
export function checkPlaces(places: Places, inputs: readonly string[]): void {
  const taken = new Map(inputs.filter((path) => path !== '-').map((path) => [resolve(path), 'an input']));
  for (const file of Object.values(outputFiles(places))) {
    const other = taken.get(resolve(file));
    if (other) throw unusable(`${forMessages(file)}: would be written over ${other}.`, 'Choose another name.');
    taken.set(resolve(file), 'another output');
  }
}

/** One file to be written. */
export interface Output {
  readonly role: OutputRole;
  readonly path: string;
  readonly bytes: Uint8Array;
}
export type OutputRole = 'legs' | 'seconds' | 'geojson' | 'parquet' | 'json' | 'html';

/** The files that go to places, in the order they are written. */
export function outputFiles(places: Places): Partial<Record<OutputRole, string>> {
  const { csv, geojson, parquet, json, html } = places;
  return {
    ...(csv === null ? {} : { legs: join(csv, 'legs.csv'), seconds: join(csv, 'seconds.csv') }),
    ...(geojson === null ? {} : { geojson }),
    ...(parquet === null ? {} : { parquet }),
    ...(json === null || json === '-' ? {} : { json }),
    ...(html === null ? {} : { html }),
  };
}

/** Everything is made before anything is written: a failure leaves no mixture of old and new. */
export async function makeOutputs(
  places: Places,
  result: Result,
  series: RaceSeries,
  page: () => Promise<string>,
): Promise<Output[]> {
  const make: Readonly<Record<OutputRole, () => Promise<string | Uint8Array>>> = {
    legs: async () => (await exporters()).legsCsv(result),
    seconds: async () => (await exporters()).secondsCsv(series),
    geojson: async () => (await exporters()).geoJsonText(result, series),
    parquet: async () => (await exporters()).parquetBytes(result, series),
    json: async () => (await resultFiles()).jsonText(result),
    html: page,
  };
  const outputs: Output[] = [];
  for (const [role, path] of Object.entries(outputFiles(places)) as [OutputRole, string][]) {
    const made = await make[role]();
    outputs.push({ role, path, bytes: typeof made === 'string' ? new TextEncoder().encode(made) : made });
  }
  return outputs;
}

/** Lines that say where the files are. */
export function placeLines(places: Places): string[] {
  const lines: string[] = [];
  if (places.html !== null) lines.push(`Report: ${forMessages(places.html)}`);
  const others = [places.json, places.csv, places.geojson, places.parquet].filter((p) => p !== null && p !== '-');
  if (others.length > 0) lines.push(`Also written: ${others.map((p) => forMessages(p!)).join(', ')}`);
  return lines;
}
