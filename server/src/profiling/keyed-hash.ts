import { createHmac } from 'node:crypto';

const blockBytes = 64;
/** With the key's block before it, a text of so many bytes fills one block together with its length. */
const mostInOneBlock = 55;

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
  private readonly block = Buffer.alloc(blockBytes);
  private readonly digest = Buffer.alloc(32);

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

  /** The first 128 bits in base64url. */
  of(text: string): string {
    const { block, state, digest } = this;
    const length = text.length > mostInOneBlock ? text.length : Buffer.byteLength(text, 'utf8');
    if (length > mostInOneBlock) {
      return createHmac('sha256', this.key).update(text, 'utf8').digest().subarray(0, 16).toString('base64url');
    }
    block.fill(0, length);
    block.write(text, 0, 'utf8');
    state.set(this.inner);
    this.finish(length);
    block.fill(0, 32);
    for (let k = 0; k < 8; k++) block.writeInt32BE(state[k], k * 4);
    state.set(this.outer);
    this.finish(32);
    for (let k = 0; k < 4; k++) digest.writeInt32BE(state[k], k * 4);
    return digest.toString('base64url', 0, 16);
  }

  /** Works through the last block, of which `length` bytes are the message's; the block of the key went before it. */
  private finish(length: number): void {
    this.block[length] = 0x80;
    this.block.writeUInt32BE((blockBytes + length) * 8, 60);
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
