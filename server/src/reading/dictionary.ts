import type { ColumnSegment } from './types';

/** Codes one column's texts by a dictionary that starts anew with every segment. */

/**
 * A start of the hash that differs from process to process, so that no file can be made whose texts all collide.
 * (It decides where a text is looked for, never what comes out.)
 */
const SEED = Math.floor(Math.random() * 0x7fff_ffff) | 1;

/**
 * An open-addressing table over the characters: a general map spent most of the reading time on columns whose texts are nearly all
 * different. Arrays are kept from segment to segment.
 */
export class ColumnBuilder {
  /** Code + 1 of the text in each slot, 0 = free. Twice as many slots as texts, at least. */
  private slots = new Int32Array(256);
  private hashes = new Int32Array(128);
  private texts: string[] = [];
  private codes: Uint32Array;

  constructor(private readonly capacity: number) {
    this.codes = new Uint32Array(Math.min(capacity, 1024));
  }

  set(row: number, text: string): void {
    if (row >= this.codes.length) {
      const wider = new Uint32Array(Math.min(this.capacity, this.codes.length * 4));
      wider.set(this.codes);
      this.codes = wider;
    }
    this.codes[row] = this.codeOf(text);
  }

  take(rows: number): ColumnSegment {
    const { texts } = this;
    const from = this.codes.subarray(0, rows);
    const codes =
      texts.length <= 0x100 ? Uint8Array.from(from) : texts.length <= 0x1_0000 ? Uint16Array.from(from) : from.slice();
    this.slots.fill(0);
    this.texts = [];
    return { codes, texts };
  }

  private codeOf(text: string): number {
    let hash = SEED;
    for (let i = 0; i < text.length; i++) hash = Math.imul(hash ^ text.charCodeAt(i), 0x0100_0193);
    // The low bits of a multiplication know little of the high ones.
    hash ^= hash >>> 15;
    const mask = this.slots.length - 1;
    let slot = hash & mask;
    for (;;) {
      const found = this.slots[slot] - 1;
      if (found < 0) break;
      if (this.hashes[found] === hash && this.texts[found] === text) return found;
      slot = (slot + 1) & mask;
    }
    const code = this.texts.length;
    this.texts.push(detached(text));
    this.slots[slot] = code + 1;
    this.hashes[code] = hash;
    if (this.texts.length === this.hashes.length) this.grow();
    return code;
  }

  private grow(): void {
    const hashes = new Int32Array(this.hashes.length * 2);
    hashes.set(this.hashes);
    this.hashes = hashes;
    this.slots = new Int32Array(hashes.length * 2);
    const mask = this.slots.length - 1;
    for (let code = 0; code < this.texts.length; code++) {
      let slot = hashes[code] & mask;
      while (this.slots[slot] !== 0) slot = (slot + 1) & mask;
      this.slots[slot] = code + 1;
    }
  }
}

/** A copy that does not hold on to the chunk it was cut from. (Engines copy short pieces anyway.) */
export function detached(text: string): string {
  return text.length < 13 ? text : Buffer.from(text, 'utf16le').toString('utf16le');
}
