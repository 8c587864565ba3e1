import fc from 'fast-check';
import { expect, test } from 'vitest';
import { lengthOf } from '../../src/math/length.js';

test('the length of any vector, to the last bit or the one before', () => {
  const part = fc.oneof(
    fc.double(),
    fc.double({ min: -50, max: 50 }),
    fc.constantFrom(0, -0, NaN, Infinity, -Infinity),
  );
  fc.assert(
    fc.property(part, part, (x, y) => {
      const [found, wanted] = [lengthOf(x, y), Math.hypot(x, y)];
      if (Number.isFinite(wanted) && wanted > 1e-300) expect(Math.abs(found / wanted - 1)).toBeLessThan(3e-16);
      else expect(found).toBe(wanted);
    }),
    { numRuns: 3000, seed: 7 },
  );
});

test.each([
  [3, 4, 5],
  [-5, 12, 13],
  [0, -2, 2],
])('%d, %d: %d', (x, y, length) => {
  expect(lengthOf(x, y)).toBe(length);
});
