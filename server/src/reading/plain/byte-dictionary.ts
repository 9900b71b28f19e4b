import { notPlainNumber, numberHashOne, numberHashTwo, read, readPlain } from './plain-number';

/** Distinct texts of one column of one segment, as bytes, coded in order of first appearance. */
export class ByteDictionary {
  size = 0;
  /** Two hashes of each text that stand for it where rows are compared. Those of a plain number follow from its value. */
  rowOne = new Int32Array(64);
  rowTwo = new Int32Array(64);
  /** Where each text begins in `bytes`; one more than there are texts. */
  places = new Int32Array(65);
  bytes: Uint8Array<ArrayBuffer> = new Uint8Array(1024);
  private words = new DataView(this.bytes.buffer);
  private hashes = new Int32Array(64);
  private slots = new Int32Array(128);

  /**
   * @param seed differs from file to file, so that no file can be made whose texts all collide; equal for all segments of one file
   * @param sign the decimal sign as a byte
   */
  constructor(
    private readonly seed: number,
    private readonly sign: number,
  ) {}

  clear(): void {
    if (this.size > 0) this.slots.fill(0);
    this.size = 0;
  }

  /** Code of the text in `source` from `start` to `end`; `words` is a view on the whole of `source`. */
  codeOf(source: Uint8Array, words: DataView, start: number, end: number): number {
    // Four bytes at a time, the last four once more where they do not come out even.
    const length = end - start;
    let hash = this.seed ^ length;
    if (length >= 4) {
      const last = end - 4;
      for (let at = start; at < last; at += 4) {
        hash = Math.imul(hash ^ words.getInt32(at, true), 0x9e37_79b1);
        hash ^= hash >>> 15;
      }
      hash = Math.imul(hash ^ words.getInt32(last, true), 0x85eb_ca6b);
    } else for (let at = start; at < end; at++) hash = Math.imul(hash ^ source[at], 0x0100_0193);
    // The low bits of a multiplication know little of the high ones.
    hash ^= hash >>> 15;
    const { slots, hashes, places } = this;
    const mask = slots.length - 1;
    let slot = hash & mask;
    for (;;) {
      const code = slots[slot] - 1;
      if (code < 0) return this.add(source, start, end, hash, slot);
      if (hashes[code] === hash && places[code + 1] - places[code] === length && this.equals(code, source, words, start, end))
        return code;
      slot = (slot + 1) & mask;
    }
  }

  private equals(code: number, source: Uint8Array, words: DataView, start: number, end: number): boolean {
    let place = this.places[code];
    let at = start;
    if (end - start >= 4) {
      for (; at < end - 4; at += 4, place += 4) if (words.getInt32(at, true) !== this.words.getInt32(place, true)) return false;
      return words.getInt32(end - 4, true) === this.words.getInt32(this.places[code + 1] - 4, true);
    }
    for (; at < end; at++, place++) if (source[at] !== this.bytes[place]) return false;
    return true;
  }

  text(code: number): string {
    const { bytes, places } = this;
    return Buffer.from(bytes.buffer, bytes.byteOffset + places[code], places[code + 1] - places[code]).toString('utf8');
  }

  texts(): string[] {
    return Array.from({ length: this.size }, (_, code) => this.text(code));
  }

  private add(source: Uint8Array, start: number, end: number, hash: number, slot: number): number {
    const code = this.size++;
    const from = code === 0 ? 0 : this.places[code];
    const length = end - start;
    if (from + length > this.bytes.length) {
      const longer = new Uint8Array(Math.max(from + length, this.bytes.length * 2));
      longer.set(this.bytes.subarray(0, from));
      this.bytes = longer;
      this.words = new DataView(longer.buffer);
    }
    let second = this.seed ^ 0x1b87_3593;
    for (let at = 0; at < length; at++) {
      const byte = source[start + at];
      this.bytes[from + at] = byte;
      second = Math.imul(second ^ byte, 0x85eb_ca6b);
      second ^= second >>> 13;
    }
    this.places[0] = 0;
    this.places[code + 1] = from + length;
    this.hashes[code] = hash;
    this.slots[slot] = code + 1;
    const decimals = readPlain(source, start, end, this.sign);
    this.rowOne[code] = decimals === notPlainNumber ? hash : numberHashOne(read[0], decimals);
    this.rowTwo[code] = decimals === notPlainNumber ? second : numberHashTwo(read[0], decimals);
    if (this.size === this.hashes.length) this.grow();
    return code;
  }

  private grow(): void {
    const count = this.hashes.length * 2;
    this.hashes = longer(this.hashes, count);
    this.rowOne = longer(this.rowOne, count);
    this.rowTwo = longer(this.rowTwo, count);
    this.places = longer(this.places, count + 1);
    this.slots = new Int32Array(count * 2);
    const mask = this.slots.length - 1;
    for (let code = 0; code < this.size; code++) {
      let slot = this.hashes[code] & mask;
      while (this.slots[slot] !== 0) slot = (slot + 1) & mask;
      this.slots[slot] = code + 1;
    }
  }
}

function longer(array: Int32Array<ArrayBuffer>, length: number): Int32Array<ArrayBuffer> {
  const result = new Int32Array(length);
  result.set(array);
  return result;
}
