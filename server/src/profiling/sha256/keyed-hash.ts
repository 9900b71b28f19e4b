import { createHmac } from 'node:crypto';
import { SHA256 } from './bytes';

/** Characters of a hash as it is kept: 128 bits in base64url. */
export const hashBytes = 22;

const blockBytes = 64;
/** With the key's block before it, a text of so many bytes fills one block together with its length. */
const mostInOneBlock = 55;

const alphabet = Buffer.from('ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz0123456789-_', 'latin1');

// FIPS 180-4, 4.2.2 and 5.3.3: the first 32 bits of the fractional parts of cube roots, and of square roots, of the first primes.
const primes = firstPrimes(64);
const fraction = (root: number): number => Math.floor((root - Math.floor(root)) * 2 ** 32) | 0;
const CONSTANTS = Int32Array.from(primes, (prime) => fraction(Math.cbrt(prime)));
const START = Int32Array.from(primes.slice(0, 8), (prime) => fraction(Math.sqrt(prime)));

/** Messages that are worked through at once. */
const lanes = 4;

/** As much of WebAssembly as is used here: the server's types know it by name only. */
interface WebAssemblyHost {
  readonly Module: new (bytes: Uint8Array) => object;
  readonly Instance: new (module: object, imports: object) => { readonly exports: { readonly compress: () => void } };
  readonly Memory: new (limits: { initial: number }) => { readonly buffer: ArrayBuffer };
}
const host = (globalThis as unknown as { readonly WebAssembly: WebAssemblyHost }).WebAssembly;
let compiled: object | null = null;

/**
 * HMAC-SHA-256 (RFC 2104, FIPS 180-4) of many short texts under one key, four at once in WebAssembly (`sha256.assembly.ts`): the two blocks of the key are
 * worked through once, not for each text, and nothing is asked of another library text by text, which is what takes the time. Longer texts go to
 * node:crypto, and so does the test.
 */
export class KeyedHash {
  /** By word and lane. */
  private readonly state: Int32Array;
  private readonly words: Int32Array;
  private readonly compress: () => void;
  private readonly inner: Int32Array;
  private readonly outer: Int32Array;
  /** Where the hashes of the lanes in use go. */
  private readonly targets: { readonly into: Uint8Array; readonly at: number }[] = [];
  private readonly block = new Uint8Array(blockBytes);

  constructor(private readonly key: Buffer) {
    if (key.length > blockBytes) throw new Error('A key of more than 64 bytes would have to be hashed first');
    compiled ??= new host.Module(Buffer.from(SHA256, 'base64'));
    const memory = new host.Memory({ initial: 1 });
    this.compress = new host.Instance(compiled, { env: { memory } }).exports.compress;
    new Int32Array(memory.buffer, 0, 64).set(CONSTANTS);
    this.state = new Int32Array(memory.buffer, 512, 8 * lanes);
    this.words = new Int32Array(memory.buffer, 1024, 64 * lanes);
    const padded = (byte: number): Int32Array => {
      this.block.fill(byte);
      key.forEach((one, at) => (this.block[at] = one ^ byte));
      for (let lane = 0; lane < lanes; lane++) this.setWords(lane);
      this.state.set(Int32Array.from({ length: 8 * lanes }, (_, place) => START[Math.floor(place / lanes)]));
      this.compress();
      return this.state.slice();
    };
    this.inner = padded(0x36);
    this.outer = padded(0x5c);
  }

  /** The first 128 bits in base64url (RFC 4648, section 5). */
  of(text: string): string {
    const bytes = Buffer.from(text, 'utf8');
    const hash = Buffer.alloc(hashBytes);
    this.write(bytes, 0, bytes.length, hash, 0);
    this.finish();
    return hash.toString('latin1');
  }

  /** The same of the UTF-8 from `start` to `end`, as ASCII into `into` from `at` on: written at the latest by `finish`. */
  write(bytes: Uint8Array, start: number, end: number, into: Uint8Array, at: number): void {
    const { block } = this;
    const length = end - start;
    if (length > mostInOneBlock) {
      const digest = createHmac('sha256', this.key).update(bytes.subarray(start, end)).digest();
      into.set(Buffer.from(digest.subarray(0, 16).toString('base64url'), 'latin1'), at);
      return;
    }
    for (let k = 0; k < length; k++) block[k] = bytes[start + k];
    block.fill(0, length);
    block[length] = 0x80;
    // The block of the key went before; at most 119 bytes, whose bits two bytes count.
    const bits = (blockBytes + length) * 8;
    block[62] = bits >>> 8;
    block[63] = bits;
    this.setWords(this.targets.length);
    if (this.targets.push({ into, at }) === lanes) this.finish();
  }

  /** Writes the hashes that wait for others to be worked through with. */
  finish(): void {
    const { state, words, targets } = this;
    if (targets.length === 0) return;
    state.set(this.inner);
    this.compress();
    // The hash within is the message of the one without: 32 bytes, and the block of the key before them.
    words.set(state);
    words.fill(0, 8 * lanes, 16 * lanes);
    words.fill(-0x8000_0000, 8 * lanes, 9 * lanes);
    words.fill((blockBytes + 32) * 8, 15 * lanes, 16 * lanes);
    state.set(this.outer);
    this.compress();
    targets.forEach(({ into, at }, lane) => this.spell(lane, into, at));
    targets.length = 0;
  }

  private setWords(lane: number): void {
    const { block, words } = this;
    for (let t = 0; t < 16; t++)
      words[t * lanes + lane] = (block[t * 4] << 24) | (block[t * 4 + 1] << 16) | (block[t * 4 + 2] << 8) | block[t * 4 + 3];
  }

  /** Six bits a character, the first at the top of each word; the last character holds two bits. */
  private spell(lane: number, into: Uint8Array, at: number): void {
    const { state } = this;
    for (let k = 0, bit = 0; k < hashBytes; k++, bit += 6) {
      const place = (bit >>> 5) * lanes + lane;
      const shift = 26 - (bit & 31);
      const next = place + lanes < 4 * lanes ? state[place + lanes] : 0;
      const six = shift >= 0 ? state[place] >>> shift : (state[place] << -shift) | (next >>> (32 + shift));
      into[at + k] = alphabet[six & 63];
    }
  }
}

function firstPrimes(count: number): number[] {
  const found: number[] = [];
  for (let candidate = 2; found.length < count; candidate++)
    if (found.every((prime) => candidate % prime !== 0)) found.push(candidate);
  return found;
}
