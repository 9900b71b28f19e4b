import { createHmac } from 'node:crypto';

/** Characters of a hash as it is kept: 128 bits in base64url. */
export const hashBytes = 22;

const blockBytes = 64;
/** With the key's block before it, a text of so many bytes fills one block together with its length. */
const mostInOneBlock = 55;

const alphabet = Buffer.from('ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz0123456789-_', 'latin1');

// FIPS 180-4, 4.2.2 and 5.3.3: the first 32 bits of the fractional parts of cube roots, and of square roots, of the first primes.
const primes = firstPrimes(64);
const fraction = (root: number): number => Math.floor((root - Math.floor(root)) * 2 ** 32) | 0;
const K = Int32Array.from(primes, (prime) => fraction(Math.cbrt(prime)));
const START = Int32Array.from(primes.slice(0, 8), (prime) => fraction(Math.sqrt(prime)));

/**
 * HMAC-SHA-256 (RFC 2104, FIPS 180-4) of many short texts under one key: the two blocks of the key are worked through once, not for each text, and
 * nothing is asked of another library text by text, which is what takes the time. Longer texts go to node:crypto, and so does the test.
 */
export class KeyedHash {
  private readonly inner: Int32Array;
  private readonly outer: Int32Array;
  private readonly state = new Int32Array(8);
  private readonly schedule = new Int32Array(64);
  private readonly block = new Uint8Array(blockBytes);

  constructor(private readonly key: Buffer) {
    if (key.length > blockBytes) throw new Error('A key of more than 64 bytes would have to be hashed first');
    const padded = (byte: number): Int32Array => {
      this.block.fill(byte);
      key.forEach((one, at) => (this.block[at] = one ^ byte));
      const state = START.slice();
      this.compress(state);
      return state;
    };
    this.inner = padded(0x36);
    this.outer = padded(0x5c);
  }

  /** The first 128 bits in base64url (RFC 4648, section 5). */
  of(text: string): string {
    const bytes = Buffer.from(text, 'utf8');
    const hash = Buffer.alloc(hashBytes);
    this.write(bytes, 0, bytes.length, hash, 0);
    return hash.toString('latin1');
  }

  /** The same of the UTF-8 from `start` to `end`, written as ASCII into `into` from `at` on. */
  write(bytes: Uint8Array, start: number, end: number, into: Uint8Array, at: number): void {
    const { block, state } = this;
    const length = end - start;
    if (length > mostInOneBlock) {
      const digest = createHmac('sha256', this.key).update(bytes.subarray(start, end)).digest();
      into.set(Buffer.from(digest.subarray(0, 16).toString('base64url'), 'latin1'), at);
      return;
    }
    for (let k = 0; k < length; k++) block[k] = bytes[start + k];
    block.fill(0, length);
    state.set(this.inner);
    this.finish(length);
    for (let k = 0; k < 8; k++) {
      const word = state[k];
      block[k * 4] = word >>> 24;
      block[k * 4 + 1] = word >>> 16;
      block[k * 4 + 2] = word >>> 8;
      block[k * 4 + 3] = word;
    }
    block.fill(0, 32);
    state.set(this.outer);
    this.finish(32);
    // Six bits a character, the first at the top of each word; the last character holds two bits.
    for (let k = 0, bit = 0; k < hashBytes; k++, bit += 6) {
      const word = bit >>> 5;
      const shift = 26 - (bit & 31);
      const next = word < 3 ? state[word + 1] : 0;
      const six = shift >= 0 ? state[word] >>> shift : (state[word] << -shift) | (next >>> (32 + shift));
      into[at + k] = alphabet[six & 63];
    }
  }

  /** Works through the last block, of which `length` bytes are the message's; the block of the key went before it. */
  private finish(length: number): void {
    this.block[length] = 0x80;
    // At most 119 bytes, whose bits two bytes count.
    const bits = (blockBytes + length) * 8;
    this.block[62] = bits >>> 8;
    this.block[63] = bits;
    this.compress(this.state);
  }

  /** FIPS 180-4, 6.2.2. */
  private compress(state: Int32Array): void {
    const { schedule: w, block } = this;
    for (let t = 0; t < 16; t++)
      w[t] = (block[t * 4] << 24) | (block[t * 4 + 1] << 16) | (block[t * 4 + 2] << 8) | block[t * 4 + 3];
    for (let t = 16; t < 64; t++) {
      const x = w[t - 15];
      const y = w[t - 2];
      const s0 = ((x >>> 7) | (x << 25)) ^ ((x >>> 18) | (x << 14)) ^ (x >>> 3);
      const s1 = ((y >>> 17) | (y << 15)) ^ ((y >>> 19) | (y << 13)) ^ (y >>> 10);
      w[t] = (w[t - 16] + s0 + w[t - 7] + s1) | 0;
    }
    let [a, b, c, d] = [state[0], state[1], state[2], state[3]];
    let [e, f, g, h] = [state[4], state[5], state[6], state[7]];
    for (let t = 0; t < 64; t++) {
      const s1 = ((e >>> 6) | (e << 26)) ^ ((e >>> 11) | (e << 21)) ^ ((e >>> 25) | (e << 7));
      const one = (h + s1 + ((e & f) ^ (~e & g)) + K[t] + w[t]) | 0;
      const s0 = ((a >>> 2) | (a << 30)) ^ ((a >>> 13) | (a << 19)) ^ ((a >>> 22) | (a << 10));
      const two = (s0 + ((a & b) ^ (a & c) ^ (b & c))) | 0;
      h = g;
      g = f;
      f = e;
      e = (d + one) | 0;
      d = c;
      c = b;
      b = a;
      a = (one + two) | 0;
    }
    state[0] += a;
    state[1] += b;
    state[2] += c;
    state[3] += d;
    state[4] += e;
    state[5] += f;
    state[6] += g;
    state[7] += h;
  }
}

function firstPrimes(count: number): number[] {
  const found: number[] = [];
  for (let candidate = 2; found.length < count; candidate++)
    if (found.every((prime) => candidate % prime !== 0)) found.push(candidate);
  return found;
}
