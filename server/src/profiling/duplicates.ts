import type { ColumnSegment } from '../reading/index';

/**
 * Counts records that equal an earlier one in every column, from two 32-bit hashes (FNV-1a of the texts, folded over the columns) of each
 * row: 53 bits of them are compared. Among a million rows a false pair is expected once in 18,000 files.
 */
export class DuplicateRows {
  private keys = new Float64Array(1024);
  private rows = 0;

  add(columns: readonly ColumnSegment[], rows: number): void {
    const one = new Uint32Array(rows).fill(0x811c9dc5);
    const two = new Uint32Array(rows).fill(0x9e3779b9);
    for (const { codes, texts } of columns) {
      const first = Uint32Array.from(texts, (text) => fnv(text, 0x811c9dc5));
      const second = Uint32Array.from(texts, (text) => fnv(text, 0x1b873593));
      for (let row = 0; row < rows; row++) {
        const code = codes[row];
        one[row] = Math.imul(one[row] ^ first[code], 0x01000193);
        two[row] = Math.imul(((two[row] << 13) | (two[row] >>> 19)) ^ second[code], 0x85ebca6b);
      }
    }
    this.makeRoom(rows);
    for (let row = 0; row < rows; row++) this.keys[this.rows + row] = one[row] * 0x200000 + (two[row] >>> 11);
    this.rows += rows;
  }

  /** Adds rows whose hashes are known already, all of one file made in the same way (reading/plain). In any order. */
  addKeys(keys: Float64Array): void {
    this.makeRoom(keys.length);
    this.keys.set(keys, this.rows);
    this.rows += keys.length;
  }

  private makeRoom(rows: number): void {
    if (this.rows + rows <= this.keys.length) return;
    const grown = new Float64Array(Math.max(this.keys.length * 2, this.rows + rows));
    grown.set(this.keys.subarray(0, this.rows));
    this.keys = grown;
  }

  count(): number {
    const sorted = this.keys.subarray(0, this.rows).sort();
    let equal = 0;
    for (let place = 1; place < sorted.length; place++) if (sorted[place] === sorted[place - 1]) equal++;
    return equal;
  }
}

function fnv(text: string, seed: number): number {
  let hash = seed;
  for (let at = 0; at < text.length; at++) hash = Math.imul(hash ^ text.charCodeAt(at), 0x01000193);
  return hash >>> 0;
}
