import { ByteDictionary } from './byte-dictionary';
import { type DateRewriter, isoLength } from './date-rewriter';
import type { FieldIndex } from './field-index';
import { type NumberStyle, StyleVotes, mostDecimals, mostWhole } from './number-style';
import { notPlainNumber, numberHashOne, numberHashTwo, readPlain } from './plain-number';

/**
 * One column of one segment: a 32-bit integer per row. Numbers spelled in the column's style are their whole number; any other text is
 * `textBase` plus its code in the dictionary, far below every number. No text is made a string on the way.
 */
export interface CodedColumn {
  readonly rows: number;
  readonly cells: Int32Array;
  /** Null: no number is kept as one. */
  readonly style: NumberStyle | null;
  readonly texts: ByteDictionary;
}

export const textBase = -0x8000_0000;
/** Cells below this are texts. A segment has at most 65,536 rows, thus texts. */
export const leastNumber = textBase + 0x1_0000;

const powers = Int32Array.from({ length: mostDecimals + 1 }, (_, k) => 10 ** k);

/** Hashes of the rows of a batch, carried from column to column. */
export interface RowHashes {
  readonly one: Int32Array;
  readonly two: Int32Array;
}

export class ColumnCoder implements CodedColumn {
  rows = 0;
  cells: Int32Array;
  style: NumberStyle | null = null;
  readonly texts: ByteDictionary;
  private known: NumberStyle | null = null;
  private decided = false;

  constructor(
    private readonly position: number,
    private readonly width: number,
    private readonly sign: number,
    capacity: number,
    seed: number,
    private readonly dates: DateRewriter | null = null,
  ) {
    this.cells = new Int32Array(capacity);
    this.texts = new ByteDictionary(seed, sign);
  }

  /** Begins a segment. `known` is the style of earlier rows, a hint; `asText`: every field is kept as text. */
  begin(known: NumberStyle | null, asText: boolean): void {
    this.rows = 0;
    this.style = null;
    this.known = known;
    this.decided = asText;
    this.texts.clear();
  }

  /** Adds this column's fields of a batch (`words` is a view on the whole of `bytes`) and folds them into the hashes of the rows. */
  add(bytes: Uint8Array, words: DataView, index: FieldIndex, hashes: RowHashes): void {
    if (!this.decided) this.decide(bytes, index);
    if (this.style === null) this.addTexts(bytes, words, index, hashes);
    else this.addNumbers(bytes, words, index, this.style, hashes);
    this.rows += index.rows;
  }

  /** By the first batch that has any number: until then no number has become a text, so that each text is kept in one way only. */
  private decide(bytes: Uint8Array, index: FieldIndex): void {
    const votes = new StyleVotes();
    for (let row = 0, field = this.position; row < index.rows; row++, field += this.width) {
      const start = index.starts[field];
      const end = index.ends[field];
      if (start === end) continue;
      const decimals = readPlain(bytes, start, end, this.sign);
      if (decimals === notPlainNumber) votes.others++;
      else {
        votes.count[decimals]++;
        if (bytes[end - 1] === 48) votes.zero[decimals]++;
      }
    }
    if (votes.count.every((one) => one === 0)) return;
    this.style = votes.best(this.sign, this.known);
    this.decided = true;
  }

  private addNumbers(bytes: Uint8Array, words: DataView, index: FieldIndex, style: NumberStyle, hashes: RowHashes): void {
    const { cells, texts, width } = this;
    const { starts, ends, rows } = index;
    const { one, two } = hashes;
    const { least, most, sign } = style;
    const first = this.rows;
    for (let row = 0, field = this.position; row < rows; row++, field += width) {
      const start = starts[field];
      const end = ends[field];
      // As `readPlain` does; written out, because this is where most of the time goes.
      const minus = bytes[start] === 45 ? 1 : 0;
      const begin = start + minus;
      const length = end - begin;
      let whole = 0;
      let decimals = notPlainNumber;
      if (length > 0 && length <= 10) {
        let point = -1;
        let at = begin;
        for (; at < end; at++) {
          const digit = bytes[at] - 48;
          if (digit >= 0 && digit <= 9) whole = (Math.imul(whole, 10) + digit) | 0;
          else if (digit === sign - 48 && point < 0 && at > begin) point = at;
          else break;
        }
        const before = point < 0 ? length : point - begin;
        const proper = at === end && before !== 10 && point !== end - 1 && (before === 1 || bytes[begin] !== 48);
        if (proper && (minus === 0 || whole !== 0)) {
          decimals = point < 0 ? 0 : end - point - 1;
          if (minus === 1) whole = -whole;
        }
      }
      let cell = whole;
      let isNumber = false;
      if (decimals === most) isNumber = most === least || bytes[end - 1] !== 48;
      else if (decimals >= least && decimals < most && (decimals === least || bytes[end - 1] !== 48)) {
        const scaled = whole * powers[most - decimals];
        isNumber = scaled > -mostWhole && scaled < mostWhole;
        cell = scaled | 0;
      }
      let a: number;
      let b: number;
      if (isNumber) {
        a = numberHashOne(whole, decimals);
        b = numberHashTwo(whole, decimals);
      } else {
        const code = this.codeOf(bytes, words, start, end);
        cell = textBase + code;
        a = texts.rowOne[code];
        b = texts.rowTwo[code];
      }
      cells[first + row] = cell;
      one[row] = Math.imul(one[row] ^ a, 0x0100_0193);
      const turned = two[row];
      two[row] = Math.imul(((turned << 13) | (turned >>> 19)) ^ b, 0x85eb_ca6b);
    }
  }

  private addTexts(bytes: Uint8Array, words: DataView, index: FieldIndex, hashes: RowHashes): void {
    const { cells, texts, width } = this;
    const { starts, ends, rows } = index;
    const { one, two } = hashes;
    const first = this.rows;
    for (let row = 0, field = this.position; row < rows; row++, field += width) {
      const code = this.codeOf(bytes, words, starts[field], ends[field]);
      cells[first + row] = textBase + code;
      one[row] = Math.imul(one[row] ^ texts.rowOne[code], 0x0100_0193);
      const turned = two[row];
      two[row] = Math.imul(((turned << 13) | (turned >>> 19)) ^ texts.rowTwo[code], 0x85eb_ca6b);
    }
  }

  /** Code of a text; a date in the stated order is the text of its ISO date. */
  private codeOf(bytes: Uint8Array, words: DataView, start: number, end: number): number {
    const { dates, texts } = this;
    if (dates === null || !dates.rewrite(bytes, start, end)) return texts.codeOf(bytes, words, start, end);
    return texts.codeOf(dates.bytes, dates.words, 0, isoLength);
  }
}
