import type { ZodType } from 'zod';

/** JSON Schemas (draft 2020-12) of the files people write and of the files the program writes, by file name. */
export async function jsonSchemas(): Promise<Map<string, object>> {
  const { z } = await import('zod');
  const { raceFileSchema } = await import('./files/race-schema.js');
  const { boatFileSchema } = await import('./files/boat-schema.js');
  const results = await import('./result/schema.js');
  const output = (schema: ZodType): object => z.toJSONSchema(schema);
  return new Map<string, object>([
    ['race.schema.json', withExtensions(z.toJSONSchema(raceFileSchema, { io: 'input' }))],
    ['boat.schema.json', withExtensions(z.toJSONSchema(boatFileSchema, { io: 'input' }))],
    ['result.schema.json', output(results.resultSchema)],
    ['inspect.schema.json', output(results.inspectSchema)],
    ['optimum.schema.json', output(results.optimumSchema)],
    ['season.schema.json', output(results.seasonSchema)],
  ]);
}

/** Wherever keys are fixed, `x-…` keys are anyone's own. */
function withExtensions(schema: object): object {
  const visit = (value: unknown): unknown => {
    if (Array.isArray(value)) return value.map(visit);
    if (value === null || typeof value !== 'object') return value;
    const copy = Object.fromEntries(Object.entries(value).map(([key, inner]) => [key, visit(inner)]));
    return copy.additionalProperties === false ? { ...copy, patternProperties: { '^x-': {} } } : copy;
  };
  return visit(schema) as object;
}
