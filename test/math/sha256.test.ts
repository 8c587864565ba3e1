import { createHash } from 'node:crypto';
import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { createSha256 } from '../../src/math/sha256.js';

const ascii = (text: string): Uint8Array => new TextEncoder().encode(text);

function sha256(...pieces: Uint8Array[]): string {
  const hash = createSha256();
  for (const piece of pieces) hash.update(piece);
  return hash.digest();
}

/** FIPS 180-2 appendix B.1 to B.3 (the worked examples that 180-4 refers to), and the empty message. */
describe('published vectors', () => {
  test.each([
    ['', 'e3b0c44298fc1c149afbf4c8996fb92427ae41e4649b934ca495991b7852b855'],
    ['abc', 'ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad'],
    [
      'abcdbcdecdefdefgefghfghighijhijkijkljklmklmnlmnomnopnopq',
      '248d6a61d20638b8e5c026930c3e6039a33ce45964ff2167f6ecedd419db06c1',
    ],
    ['a'.repeat(1_000_000), 'cdc76e5c9914fb9281a1c7e284d73e67f1809a48a497200e046d39ccc7112cd0'],
  ])('%.12s', (message, digest) => {
    expect(sha256(ascii(message))).toBe(digest);
  });
});

test('agrees with the host, in whatever pieces the bytes come', () => {
  fc.assert(
    fc.property(fc.array(fc.uint8Array({ maxLength: 200 }), { maxLength: 8 }), (pieces) => {
      const host = createHash('sha256');
      for (const piece of pieces) host.update(piece);
      expect(sha256(...pieces)).toBe(host.digest('hex'));
    }),
    { seed: 11, numRuns: 300 },
  );
});
