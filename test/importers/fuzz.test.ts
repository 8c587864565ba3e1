import { readFileSync, readdirSync } from 'node:fs';
import { join } from 'node:path';
import fc from 'fast-check';
import { expect, test } from 'vitest';
import { UserError } from '../../src/recording/issues.js';
import { checkBooks, importBytes } from './check-import.js';

const LOGS = join(import.meta.dirname, '../../fixtures/logs');
const FILES = readdirSync(LOGS).map((file) => new Uint8Array(readFileSync(join(LOGS, file))));
const OPTIONS = { date: '2026-04-18', zone: 'Europe/Zurich' };

/** What a failing card, a bad line or a careless hand does to a file. */
type Damage =
  | { readonly what: 'flip'; readonly at: number; readonly bit: number }
  | { readonly what: 'cut'; readonly from: number; readonly length: number }
  | { readonly what: 'repeat'; readonly from: number; readonly length: number }
  | {
      readonly what: 'splice';
      readonly at: number;
      readonly other: number;
      readonly from: number;
      readonly length: number;
    }
  | { readonly what: 'zeros'; readonly at: number; readonly length: number };

const share = fc.double({ min: 0, max: 1, noNaN: true, maxExcluded: true });
const length = fc.nat(200);
const damage: fc.Arbitrary<Damage> = fc.oneof(
  fc.record({ what: fc.constant('flip' as const), at: share, bit: fc.nat(7) }),
  fc.record({ what: fc.constant('cut' as const), from: share, length }),
  fc.record({ what: fc.constant('repeat' as const), from: share, length }),
  fc.record({ what: fc.constant('splice' as const), at: share, other: fc.nat(FILES.length - 1), from: share, length }),
  fc.record({ what: fc.constant('zeros' as const), at: share, length }),
);

const splice = (bytes: Uint8Array, at: number, remove: number, insert: Uint8Array): Uint8Array =>
  Uint8Array.from([...bytes.subarray(0, at), ...insert, ...bytes.subarray(at + remove)]);

function damaged(bytes: Uint8Array, one: Damage): Uint8Array {
  const place = (part: number): number => Math.floor(part * bytes.length);
  switch (one.what) {
    case 'flip': {
      const copy = bytes.slice();
      copy[place(one.at)] ^= 1 << one.bit;
      return copy;
    }
    case 'cut':
      return splice(bytes, place(one.from), one.length, new Uint8Array(0));
    case 'repeat': {
      const from = place(one.from);
      return splice(bytes, from, 0, bytes.subarray(from, from + one.length));
    }
    case 'splice': {
      const other = FILES[one.other];
      const from = Math.floor(one.from * other.length);
      return splice(bytes, place(one.at), 0, other.subarray(from, from + one.length));
    }
    case 'zeros':
      return splice(bytes, place(one.at), 0, new Uint8Array(one.length));
  }
}

test('whatever is done to a log, it is read with balanced books or refused in words', async () => {
  await fc.assert(
    fc.asyncProperty(
      fc.nat(FILES.length - 1),
      fc.array(damage, { minLength: 1, maxLength: 8 }),
      async (file, damages) => {
        const bytes = damages.reduce(damaged, FILES[file]);
        try {
          checkBooks(await importBytes(bytes, OPTIONS));
        } catch (error) {
          if (!(error instanceof UserError)) throw error;
          expect(error.exitCode).toBe(2);
        }
      },
    ),
    { seed: 20260418, numRuns: Number(process.env['FUZZ_RUNS'] ?? 300) },
  );
});
