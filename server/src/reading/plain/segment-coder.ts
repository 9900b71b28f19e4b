import { type CodedColumn, ColumnCoder } from './column-coder';
import { FieldIndex, type FieldForm } from './field-index';
import type { DateOrder, DateTimes } from '@tallystone/contracts/specification/types';
import { dateRewriter } from './date-rewriter';
import type { NumberStyle } from './number-style';

export interface SegmentForm extends FieldForm {
  /** The decimal sign as a byte. */
  readonly sign: number;
  /** See ByteDictionary. */
  readonly seed: number;
  /** Most rows of a segment. */
  readonly mostRows: number;
  /** As in `ReadingChoices`. */
  readonly dateOrder?: DateOrder | undefined;
  readonly dateTimes?: DateTimes | undefined;
  readonly missing?: readonly string[];
  /** Of each column, whether its texts stay as they are, whatever form of a date they have; left out: of none. */
  readonly notDates?: readonly boolean[];
}

/**
 * Codes segment after segment of plain records, column by column within batches that fit the processor's cache. Its arrays are used again for
 * the next segment: take what `columns` holds before `begin`.
 */
export class SegmentCoder {
  readonly columns: readonly CodedColumn[];
  rows = 0;
  /** Per row 53 bits that stand for all its fields: equal rows have equal keys. */
  keys: Float64Array;
  private readonly coders: ColumnCoder[];
  private readonly index: FieldIndex;
  private readonly one: Int32Array;
  private readonly two: Int32Array;

  constructor(private readonly form: SegmentForm) {
    this.index = new FieldIndex(form);
    this.one = new Int32Array(this.index.mostRows);
    this.two = new Int32Array(this.index.mostRows);
    this.keys = new Float64Array(form.mostRows);
    const dates = dateRewriter(form.dateOrder, form.missing ?? [], form.dateTimes);
    this.coders = Array.from(
      { length: form.width },
      (_, position) =>
        new ColumnCoder(position, form.width, form.sign, form.mostRows, form.seed, form.notDates?.[position] ? null : dates),
    );
    this.columns = this.coders;
  }

  /** @param styles per column the style of earlier rows; @param asText columns whose every field is kept as text */
  begin(styles: readonly (NumberStyle | null)[], asText: readonly boolean[]): void {
    this.rows = 0;
    this.coders.forEach((coder, position) => coder.begin(styles[position] ?? null, asText[position] ?? false));
  }

  /**
   * Adds whole records, each ending with a line feed. The bytes may be rewritten.
   * @throws NotPlain
   */
  add(bytes: Uint8Array): void {
    const { index, one, two, form } = this;
    const words = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
    let at = 0;
    while (at < bytes.length) {
      at = index.fill(bytes, at, bytes.length, form.mostRows - this.rows);
      if (index.rows === 0) throw new Error('A segment was given more records than it holds');
      one.fill(0x11c9_dc5);
      two.fill(0x1e37_79b9);
      for (const coder of this.coders) coder.add(bytes, words, index, { one, two });
      for (let row = 0; row < index.rows; row++) this.keys[this.rows + row] = (one[row] >>> 0) * 0x20_0000 + (two[row] >>> 11);
      this.rows += index.rows;
    }
  }
}
