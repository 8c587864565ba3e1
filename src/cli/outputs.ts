import { join, resolve } from 'node:path';
import { exporters, resultFiles } from '../index.js';
import type { RaceSeries, Result } from '../index.js';
import { forMessages, kindOf, unusable, writeWhole } from './files.js';
import type { OutputFlags } from './options.js';
import { print } from './terminal.js';

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
  const files = [places.html, places.json, places.geojson, places.parquet];
  if (places.csv !== null) files.push(join(places.csv, 'legs.csv'), join(places.csv, 'seconds.csv'));
  for (const file of files) {
    if (file === null || file === '-') continue;
    const other = taken.get(resolve(file));
    if (other) throw unusable(`${forMessages(file)}: would be written over ${other}.`, 'Choose another name.');
    taken.set(resolve(file), 'another output');
  }
}

/** Makes everything first, then writes it: a failure leaves no mixture of old and new. */
export async function writeOutputs(places: Places, result: Result, series: RaceSeries, page: () => Promise<string>) {
  const { jsonText } = await resultFiles();
  const files: [string, string | Uint8Array][] = [];
  if (places.csv !== null) {
    const { legsCsv, secondsCsv } = await exporters();
    files.push([join(places.csv, 'legs.csv'), legsCsv(result)], [join(places.csv, 'seconds.csv'), secondsCsv(series)]);
  }
  if (places.geojson !== null) files.push([places.geojson, await (await exporters()).geoJsonText(result, series)]);
  if (places.parquet !== null) files.push([places.parquet, await (await exporters()).parquetBytes(result, series)]);
  if (places.json !== null && places.json !== '-') files.push([places.json, jsonText(result)]);
  if (places.html !== null) files.push([places.html, await page()]);
  for (const [path, content] of files) await writeWhole(path, content);
  if (places.json === '-') await print(jsonText(result));
}

/** Lines that say where the files are. */
export function placeLines(places: Places): string[] {
  const lines: string[] = [];
  if (places.html !== null) lines.push(`Report: ${forMessages(places.html)}`);
  const others = [places.json, places.csv, places.geojson, places.parquet].filter((p) => p !== null && p !== '-');
  if (others.length > 0) lines.push(`Also written: ${others.map((p) => forMessages(p!)).join(', ')}`);
  return lines;
}
