import { describe, expect, expectTypeOf, it } from 'vitest';
import type { z } from 'zod';
import { jsonText, plainJson } from '../../src/result/json.js';
import { NotAResult, readResult } from '../../src/result/read.js';
import type { BoatResult, LegResult, ManoeuvreResult, PairResult, Result } from '../../src/result/result.js';
import { resultSchema } from '../../src/result/schema.js';
import { jsonSchemas } from '../../src/schemas.js';
import { inventedResult } from '../export/invented.js';

type DeepMutable<T> = { -readonly [K in keyof T]: T[K] extends object | null ? DeepMutable<T[K]> : T[K] };

describe('the schema of the result', () => {
  it('takes a result and refuses what it does not name', () => {
    expect(resultSchema.safeParse(inventedResult()).success).toBe(true);
    expect(resultSchema.safeParse({ ...inventedResult(), extra: 1 }).success).toBe(false);
    const nan = {
      ...inventedResult(),
      wind: { sources: [], twd_deg: { value: NaN, se: 0, basis: 'derived' }, tws_kn: null },
    };
    expect(resultSchema.safeParse(nan).success).toBe(false);
  });
  it('names the keys the types name', () => {
    type Written = z.output<typeof resultSchema>;
    type Keys<T> = keyof DeepMutable<T>;
    expectTypeOf<Keys<Written>>().toEqualTypeOf<Keys<Result>>();
    expectTypeOf<Keys<Written['boats'][number]>>().toEqualTypeOf<Keys<BoatResult>>();
    expectTypeOf<Keys<Written['boats'][number]['legs'][number]>>().toEqualTypeOf<Keys<LegResult>>();
    expectTypeOf<Keys<Written['boats'][number]['manoeuvres'][number]>>().toEqualTypeOf<Keys<ManoeuvreResult>>();
    expectTypeOf<Keys<NonNullable<Written['pairs']>[number]>>().toEqualTypeOf<Keys<PairResult>>();
  });
});

describe('numbers that are none', () => {
  it('are null in the file: a quantity as a whole, an error alone', () => {
    const q = { value: 1, se: NaN, sys: Infinity, basis: 'derived' };
    expect(plainJson({ a: { ...q, value: NaN }, b: q, c: NaN, d: undefined, e: [-0] })).toEqual({
      a: null,
      b: { value: 1, se: null, basis: 'derived' },
      c: null,
      e: [0],
    });
    expect(JSON.parse(jsonText(inventedResult()))).toEqual(inventedResult());
  });
});

describe('reading a result', () => {
  const read = (data: unknown) => readResult(JSON.stringify(data));
  it('gives it back', async () => expect(await read(inventedResult())).toEqual(inventedResult()));
  it('lets pass what a later program of the same version added', async () => {
    await expect(read({ ...inventedResult(), later: true })).resolves.toMatchObject({ later: true });
  });
  it('refuses a higher version, and says so', async () => {
    await expect(read({ ...inventedResult(), version: 2 })).rejects.toThrow(/version 2.*up to version 1.*newer/);
  });
  it.each<[string, string]>([
    ['{"format": "legwork-season"}', 'is not a result file'],
    ['{"format": "legwork-res', 'is not JSON'],
    ['[]', 'is not a result file'],
    [JSON.stringify({ ...inventedResult(), boats: [{ name: 'Ann' }] }), 'is damaged at `boats.0'],
  ])('refuses %s', async (text, message) => {
    await expect(readResult(text)).rejects.toThrow(NotAResult);
    await expect(readResult(text)).rejects.toThrow(message);
  });
});

describe('the JSON Schemas', () => {
  it('are there for every file, of draft 2020-12', async () => {
    const schemas = await jsonSchemas();
    expect([...schemas.keys()].sort()).toEqual(
      ['boat', 'inspect', 'optimum', 'race', 'result', 'season'].map((name) => `${name}.schema.json`),
    );
    for (const schema of schemas.values()) {
      expect(schema).toMatchObject({ $schema: 'https://json-schema.org/draft/2020-12/schema', type: 'object' });
    }
  });
  it('allow x- keys in a race file and nothing else unnamed', async () => {
    const race = (await jsonSchemas()).get('race.schema.json') as Record<string, unknown>;
    expect(race).toMatchObject({ additionalProperties: false, patternProperties: { '^x-': {} } });
  });
});
