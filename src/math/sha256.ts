/**
 * SHA-256 over bytes that come in pieces: what identifies a log in a result file. Written here so that it works
 * where neither files nor a host's cryptography exist.
 *
 * [1] FIPS PUB 180-4, Secure Hash Standard, 2015, sections 4.1.2, 4.2.2, 5.1.1, 5.3.3, 6.2.2.
 */

/** A digest in the making. A host may put its own, faster one in its place. */
export interface StreamHash {
  update(bytes: Uint8Array): void;
  /** Lower-case hexadecimal. Nothing may be added after it. */
  digest(): string;
}

const BLOCK = 64;

/** First 32 bits of the fractional parts of the `power`-th roots of the first primes [1, 4.2.2 and 5.3.3]. */
function rootsOfPrimes(count: number, power: 2 | 3): Int32Array {
  const words = new Int32Array(count);
  for (let n = 0, candidate = 2; n < count; candidate++) {
    let divisor = 2;
    while (divisor * divisor <= candidate && candidate % divisor !== 0) divisor++;
    if (divisor * divisor <= candidate) continue;
    const root = power === 2 ? Math.sqrt(candidate) : Math.cbrt(candidate);
    words[n++] = Math.floor((root - Math.floor(root)) * 2 ** 32) | 0;
  }
  return words;
}

const K = rootsOfPrimes(64, 3);

/** Works whole 64-byte blocks of `bytes` in [from, to) into the state `h` [1, 6.2.2]. `w` is scratch. */
function compress(h: Int32Array, w: Int32Array, bytes: Uint8Array, from: number, to: number): void {
  for (let at = from; at < to; at += BLOCK) {
    for (let t = 0, i = at; t < 16; t++, i += 4) {
      w[t] = (bytes[i] << 24) | (bytes[i + 1] << 16) | (bytes[i + 2] << 8) | bytes[i + 3];
    }
    for (let t = 16; t < 64; t++) {
      const x = w[t - 15];
      const y = w[t - 2];
      const σ0 = ((x >>> 7) | (x << 25)) ^ ((x >>> 18) | (x << 14)) ^ (x >>> 3);
      const σ1 = ((y >>> 17) | (y << 15)) ^ ((y >>> 19) | (y << 13)) ^ (y >>> 10);
      w[t] = (w[t - 16] + σ0 + w[t - 7] + σ1) | 0;
    }
    rounds(h, w);
  }
}

/** The 64 rounds of one block. */
function rounds(h: Int32Array, w: Int32Array): void {
  let a = h[0];
  let b = h[1];
  let c = h[2];
  let d = h[3];
  let e = h[4];
  let f = h[5];
  let g = h[6];
  let k = h[7];
  for (let t = 0; t < 64; t++) {
    const Σ1 = ((e >>> 6) | (e << 26)) ^ ((e >>> 11) | (e << 21)) ^ ((e >>> 25) | (e << 7));
    const t1 = (k + Σ1 + (g ^ (e & (f ^ g))) + K[t] + w[t]) | 0;
    const Σ0 = ((a >>> 2) | (a << 30)) ^ ((a >>> 13) | (a << 19)) ^ ((a >>> 22) | (a << 10));
    const t2 = (Σ0 + ((a & b) | (c & (a | b)))) | 0;
    k = g;
    g = f;
    f = e;
    e = (d + t1) | 0;
    d = c;
    c = b;
    b = a;
    a = (t1 + t2) | 0;
  }
  h[0] = h[0] + a;
  h[1] = h[1] + b;
  h[2] = h[2] + c;
  h[3] = h[3] + d;
  h[4] = h[4] + e;
  h[5] = h[5] + f;
  h[6] = h[6] + g;
  h[7] = h[7] + k;
}

/** The message's end: a one bit, zeros, and the length in bits as 64 bits [1, 5.1.1]. */
function padding(pending: Uint8Array, length: number): Uint8Array {
  const padded = new Uint8Array(pending.length + 9 <= BLOCK ? BLOCK : 2 * BLOCK);
  padded.set(pending);
  padded[pending.length] = 0x80;
  const view = new DataView(padded.buffer);
  view.setUint32(padded.length - 8, Math.floor(length / 0x20000000));
  view.setUint32(padded.length - 4, (length << 3) >>> 0);
  return padded;
}

/**
 * A new SHA-256.
 *
 * @returns A digest that takes bytes in pieces of any size.
 * @example
 * createSha256().digest().slice(0, 8); // => 'e3b0c442'
 */
export function createSha256(): StreamHash {
  const h = rootsOfPrimes(8, 2);
  const w = new Int32Array(64);
  const pending = new Uint8Array(BLOCK);
  let held = 0;
  let length = 0;
  return {
    update(bytes) {
      length += bytes.length;
      let at = 0;
      if (held > 0) {
        at = Math.min(BLOCK - held, bytes.length);
        pending.set(bytes.subarray(0, at), held);
        held += at;
        if (held < BLOCK) return;
        compress(h, w, pending, 0, BLOCK);
      }
      const end = at + BLOCK * Math.floor((bytes.length - at) / BLOCK);
      compress(h, w, bytes, at, end);
      pending.set(bytes.subarray(end));
      held = bytes.length - end;
    },
    digest() {
      const tail = padding(pending.subarray(0, held), length);
      compress(h, w, tail, 0, tail.length);
      return Array.from(h, (word) => (word >>> 0).toString(16).padStart(8, '0')).join('');
    },
  };
}
