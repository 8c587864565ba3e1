import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, describe, expect, it } from 'vitest';
import { resultReader } from '../../src/cli/many-files.js';
import { jsonText } from '../../src/result/json.js';
import { readResult, seasonResult } from '../../src/result/read.js';
import { season } from '../../src/season.js';
import { inventedSeason } from '../season/invented-season.js';

const folder = mkdtempSync(join(tmpdir(), 'legwork-many-'));
afterAll(() => rmSync(folder, { recursive: true, force: true }));

const read = resultReader();
function readBack(content: string | Uint8Array): unknown {
  const path = join(folder, 'result.json');
  writeFileSync(path, content);
  return read(path);
}

const sailors = ['Corrie', 'Linnet', 'Maren'].map((name) => ({ name }));
const results = inventedSeason({ seed: 2, races: 6, every: 7, sailors });
const [first] = results;
const named = (name: string) => ({ ...first, boats: first.boats.map((boat) => ({ ...boat, name, sailor: name })) });

describe('a result file read as one of thousands', () => {
  it('is what a parser makes of it, as the program lays it out and in any other way', () => {
    const layouts: ((data: unknown) => string)[] = [
      (data) => jsonText(data),
      (data) => JSON.stringify(data),
      (data) => JSON.stringify(data, null, 1),
      (data) => JSON.stringify(data, null, '\t'),
      (data) => jsonText(data).replace(/\n/g, '\r\n'),
      (data) => jsonText(data).replace(/\n {6}/g, '\n    '),
      (data) => jsonText(data).replace(/^ +/gm, ''),
      (data) => jsonText(data).replace(/\n {4}\}/g, '}'),
    ];
    for (const data of [...results, { ...first, boats: [] }, { ...first, boats: first.boats.slice(0, 1) }]) {
      for (const layout of layouts) {
        const text = layout(data);
        expect(readBack(text)).toEqual(JSON.parse(text));
      }
    }
  });
  it('keeps every character', () => {
    const names = [
      'Åsa’s “Béla” ±2°',
      '風 😀 \u2028',
      '\n    },\n    {\n',
      '"boats": [',
      '\\u00e9 \\',
      '\u0080\u07ff\u0800\uffff',
    ];
    for (const name of names) expect(readBack(jsonText(named(name)))).toEqual(named(name));
    // Wherever the wide character stands among the four bytes looked at together.
    for (let k = 0; k < 9; k++) {
      const shifted = named(`${'x'.repeat(k)}é${'y'.repeat(9 - k)}ß`);
      expect(readBack(jsonText(shifted))).toEqual(shifted);
    }
  });
  it('long and short files in turn do not run into each other', () => {
    const long = { ...first, warnings: [{ code: 'long', message: 'x'.repeat(700_000) }] };
    for (const data of [first, long, { ...first, boats: [] }, long, first]) {
      expect(readBack(jsonText(data))).toEqual(data);
    }
  });
  it('is left to others where it is strange: cut off, with a mark of the byte order, gone, empty', () => {
    const text = jsonText(first);
    for (let k = 1; k < 40; k++) expect(readBack(text.slice(0, Math.floor((k * text.length) / 40)))).toBeUndefined();
    for (const content of ['', `\uFEFF${text}`, Buffer.from(`\uFEFF${text}`, 'utf16le'), `${text},`, text + text]) {
      expect(readBack(content)).toBeUndefined();
    }
    expect(read(join(folder, 'none.json'))).toBeUndefined();
    expect(read(folder)).toBeUndefined();
  });
});

describe('what a season looks at', () => {
  it('is enough for the same season, and refuses what readers refuse in what it looks at', async () => {
    const whole = season(await Promise.all(results.map((result) => readResult(jsonText(result)))));
    const looked = await Promise.all(results.map((result) => seasonResult(readBack(jsonText(result)))));
    expect(season(looked.map((one) => one!))).toEqual(whole);
    const [boat] = first.boats;
    const [leg] = boat.legs;
    const wrong: unknown[] = [
      undefined,
      [],
      { ...first, format: 'legwork-season' },
      { ...first, version: 2 },
      { ...first, boats: null },
      { ...first, boats: [{ ...boat, sailor: 3 }] },
      { ...first, boats: [{ ...boat, legs: [{ ...leg, efficiency: { value: '0.9', se: null } }] }] },
      { ...first, boats: [{ ...boat, legs: [{ ...leg, steady: undefined }] }] },
      { ...first, boats: [{ ...boat, manoeuvres: [{ kind: 'tack' }] }] },
    ];
    for (const data of wrong) {
      expect(await seasonResult(data)).toBeNull();
      await expect(readResult(JSON.stringify(data ?? null))).rejects.toThrow();
    }
  });
});
