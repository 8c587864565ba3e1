import fc from 'fast-check';
import { expect, test } from 'vitest';
import { readDecimal, readDecimalBytes, readPlainBytes, stoppedAt } from '../../src/importers/decimals.js';
import { MinuteClock } from '../../src/importers/minute-clock.js';
import { readIso } from '../../src/importers/times.js';

const bytesOf = (text: string): Uint8Array => new Uint8Array(Buffer.from(text, 'latin1'));

const runs = { seed: 11, numRuns: process.env['LEGWORK_LONG'] ? 200_000 : 2000 };

/** Numbers as written, and what could be taken for one. */
const numberText = fc.oneof(
  fc.double({ noDefaultInfinity: true, noNaN: true, min: -200, max: 200 }).map((x) => x.toFixed(7)),
  fc.double({ noDefaultInfinity: true, noNaN: true }).map(String),
  fc.stringMatching(/^[+-]?\d{0,17}\.?\d{0,9}$/),
  fc.stringMatching(/^[-+.,0-9eE x]{0,12}$/),
);

test('a number read in one pass is the number read otherwise, to the last bit', () => {
  let read = 0;
  fc.assert(
    fc.property(numberText, fc.string({ maxLength: 3 }), (text, before) => {
      const value = readPlainBytes(bytesOf(`${before}${text}<`), before.length, 60);
      if (Number.isNaN(value)) return;
      read++;
      expect(value).toBe(readDecimal(text));
      expect(stoppedAt()).toBe(before.length + text.length);
    }),
    runs,
  );
  expect(read).toBeGreaterThan(runs.numRuns / 4);
});

test('a number read from bytes is the number read from letters, to the last bit', () => {
  fc.assert(
    fc.property(fc.oneof(numberText, fc.string({ maxLength: 20 })), fc.string({ maxLength: 3 }), (text, before) => {
      const bytes = bytesOf(before + text);
      const letters = Buffer.from(bytes).toString('latin1');
      expect(readDecimalBytes(bytes, before.length, bytes.length)).toBe(readDecimal(letters.slice(before.length)));
    }),
    runs,
  );
});

test('times of one minute are those read otherwise, to the last bit', () => {
  const clock = new MinuteClock();
  let read = 0;
  fc.assert(
    fc.property(
      fc.constantFrom(
        '2026-04-18T14:05:',
        '2026-12-31T23:59:',
        '2026-04-18T24:00:',
        '2024-02-29 00:00:',
        '2026-04-18T1',
      ),
      fc.stringMatching(/^\d{2}(\.\d{0,11})?(Z|z|\+01:00|)$/),
      (minute, rest) => {
        const text = minute + rest;
        const expected = readIso(text);
        if (!Number.isNaN(expected)) clock.remember(text, 0);
        const inText = clock.readText(`,${text},`, 1, 1 + text.length);
        if (inText) expect(clock.seconds).toBe(expected);
        const end = clock.read(bytesOf(`${text}<`), 0);
        expect(inText).toBe(end === text.length);
        if (end < 0) return;
        read++;
        expect(text.charAt(end - 1)).toBe('Z');
        expect(clock.seconds).toBe(readIso(text.slice(0, end)));
      },
    ),
    runs,
  );
  expect(read).toBeGreaterThan(runs.numRuns / 20);
});
