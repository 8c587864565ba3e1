/**
 * The border between numbers and files: what is not a number becomes null here and nowhere else. A quantity whose
 * value is not a number is null as a whole, one whose error is not has `se: null` and no `sys`.
 */
export function plainJson(value: unknown): unknown {
  if (typeof value === 'number') return Number.isFinite(value) ? value + 0 : null;
  if (Array.isArray(value)) return value.map(plainJson);
  if (value === null || typeof value !== 'object') return value;
  if ('basis' in value && 'value' in value) return plainQuantity(value);
  const entries = Object.entries(value).filter(([, inner]) => inner !== undefined);
  return Object.fromEntries(entries.map(([key, inner]) => [key, plainJson(inner)]));
}

function plainQuantity({ value, se, sys, basis }: Record<string, unknown>): unknown {
  if (typeof value !== 'number' || !Number.isFinite(value)) return null;
  const shift = typeof sys === 'number' && Number.isFinite(sys) ? { sys } : {};
  return { value: value + 0, se: plainJson(se ?? null), ...shift, basis };
}

/** Text of a result file: keys in the order of the types, two spaces, a final newline. */
export function jsonText(value: unknown): string {
  return `${JSON.stringify(plainJson(value), null, 2)}\n`;
}
