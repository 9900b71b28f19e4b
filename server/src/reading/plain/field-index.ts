/** Finds the fields of whole records in bytes, in the plain case; whatever is not plain is left to the careful scanner. */

/** This file, or piece, is not for the fast reader: says why, in words for a log. Nothing of what it gave may be used. */
export class NotPlain extends Error {
  constructor(reason: string) {
    super(reason);
    this.name = 'NotPlain';
  }
}

const LF = 10;
const CR = 13;
const QUOTE = 34;
const BLANK = 32;
const TAB = 9;

export interface FieldForm {
  /** The delimiter as a byte. */
  readonly delimiter: number;
  /** Blanks and tabs around unquoted fields are no part of them. */
  readonly trim: boolean;
  /** Fields of every record. */
  readonly width: number;
  /** Most bytes of a field; the careful scanner decides by characters. */
  readonly mostBytes: number;
  /** Most rows that there will be, where it is known. */
  readonly mostRows?: number;
}

/**
 * Places of the fields of some records, row by row. The bytes of quoted fields with doubled quotes are rewritten in place, where they stand.
 * Reused from batch to batch, because a batch fits the processor's cache and new arrays would not.
 */
export class FieldIndex {
  readonly starts: Int32Array;
  readonly ends: Int32Array;
  readonly mostRows: number;
  /** Rows found by the last `fill`. */
  rows = 0;
  /** 1 for the bytes at which an unquoted field ends, or must be looked at. */
  private readonly special = new Uint8Array(256);

  constructor(private readonly form: FieldForm) {
    // About 32,768 fields: their places and their text stay near the processor.
    this.mostRows = Math.min(4096, Math.max(8, Math.floor(32_768 / form.width)), form.mostRows ?? Infinity);
    this.starts = new Int32Array(this.mostRows * form.width);
    this.ends = new Int32Array(this.mostRows * form.width);
    for (const byte of [0, LF, CR, form.delimiter]) this.special[byte] = 1;
  }

  /**
   * Fills the index with the records that begin at `from`, at most `most` of them. Every record in the bytes ends with a line feed.
   * @returns where the next record begins
   * @throws NotPlain
   */
  fill(bytes: Uint8Array, from: number, to: number, most: number): number {
    const { starts, ends, special } = this;
    const { delimiter, trim, width, mostBytes } = this.form;
    const rows = Math.min(most, this.mostRows);
    let at = from;
    let row = 0;
    let field = 0;
    let rowEnd = width;
    // Bytes above this end no field: most of a text is told by one comparison.
    const ordinary = Math.max(delimiter, CR);
    while (row < rows && at < to) {
      let start = at;
      if (trim) while (isBlank(bytes[start], delimiter)) start++;
      let end: number;
      if (bytes[start] === QUOTE) {
        at = this.quoted(bytes, start + 1, to, field);
        start = this.starts[field];
        end = this.ends[field];
        if (end - start > mostBytes) throw new NotPlain('a long field');
        if (trim) while (isBlank(bytes[at], delimiter)) at++;
        if (special[bytes[at]] !== 1) throw new NotPlain('text after a closing quote');
      } else {
        at = start;
        let byte = bytes[at];
        while (byte > ordinary || special[byte] === 0) byte = bytes[++at];
        end = at;
        // With the blanks after it, as the careful scanner counts.
        if (end - start > mostBytes) throw new NotPlain('a long field');
        if (trim) while (end > start && isBlank(bytes[end - 1], delimiter)) end--;
      }
      if (field === rowEnd) throw new NotPlain('too many fields');
      starts[field] = start;
      ends[field] = end;
      field++;
      const byte = bytes[at++];
      if (byte === delimiter) continue;
      if (byte === CR && bytes[at] === LF) at++;
      else if (byte !== LF) throw new NotPlain(byte === CR ? 'a line that ends with a carriage return' : 'a NUL byte');
      if (field !== rowEnd) throw new NotPlain('too few fields');
      row++;
      rowEnd += width;
    }
    if (field !== row * width) throw new NotPlain('an unfinished record');
    this.rows = row;
    return at;
  }

  /** Sets the place of a quoted field's text; returns where the byte after its closing quote is. */
  private quoted(bytes: Uint8Array, from: number, to: number, field: number): number {
    let at = from;
    let kept = from;
    for (;;) {
      if (at >= to) throw new NotPlain('an open quote');
      const byte = bytes[at++];
      if (byte === 0) throw new NotPlain('a NUL byte');
      if (byte === QUOTE) {
        if (bytes[at] !== QUOTE) break;
        at++;
      }
      bytes[kept++] = byte;
    }
    this.starts[field] = from;
    this.ends[field] = kept;
    return at;
  }
}

const isBlank = (byte: number, delimiter: number): boolean => (byte === BLANK || byte === TAB) && byte !== delimiter;
