import { codesFor } from '../replay/source';
import { numberReader, type NumberFormat } from './numbers';
import { readSegments } from './segments';
import type { ColumnSegment, RawColumn, ReadFile, ReadingChoices, ReadingOptions } from './types';

export interface ColumnOptions extends ReadingOptions {
  /**
   * Columns that are used as numbers and never as text. With more than 4,096 distinct texts such a column is kept as numbers
   * (8 bytes a row) in place of its texts; the others keep every distinct text.
   */
  numbers?: { columns: ReadonlySet<string>; format: NumberFormat };
}

/** A column of numbers with more distinct texts than this gains nothing from a dictionary. */
const MOST_DISTINCT = 4096;

/**
 * Reads a raw file into whole columns in memory, typed afterwards. For files whose columns do not all fit, read segments.
 *
 * @returns facts of the file and its columns by position; no columns if there is any problem
 * @throws what `options.signal` was aborted with, or the stream's own error
 * @example
 * const file = await readColumns(createReadStream('sample.csv'), { encoding: 'utf-8', delimiter: ',', trim: true });
 * if (file.problems.length > 0) throw new ReadingError(file.problems);
 */
export async function readColumns(
  stream: AsyncIterable<Buffer | Uint8Array>,
  reading: ReadingChoices,
  options: ColumnOptions = {},
): Promise<ReadFile> {
  const file = readSegments(stream, reading, options);
  const gatherers: Gatherer[] = [];
  for await (const segment of file.segments) {
    segment.columns.forEach((column, index) => {
      gatherers[index] ??= new Gatherer();
      const name = file.facts().header[index];
      gatherers[index].add(column, options.numbers?.columns.has(name) === true ? options.numbers.format : null);
    });
  }
  const facts = file.facts();
  const columns: RawColumn[] = [];
  if (facts.problems.length === 0) {
    const wanted = options.columns === undefined ? null : new Set(options.columns);
    facts.header.forEach((name, index) => {
      if (wanted === null || wanted.has(name)) columns.push({ name, position: index + 1, ...gatherers[index].column() });
    });
  }
  return { ...facts, columns };
}

type Gathered =
  | { kind: 'texts'; codes: Uint8Array | Uint16Array | Uint32Array; texts: string[] }
  | { kind: 'numbers'; values: Float64Array; exceptions: Map<number, string> };

/** Joins the segments of one column. Codes start narrow and widen as distinct texts come. */
class Gatherer {
  private rows = 0;
  private places = new Map<string, number>();
  private texts: string[] = [];
  private codes: Uint8Array | Uint16Array | Uint32Array = new Uint8Array(1024);
  private values: Float64Array | null = null;
  private exceptions = new Map<number, string>();

  add(segment: ColumnSegment, numbers: NumberFormat | null): void {
    const rows = segment.codes.length;
    if (this.values === null) {
      const mapped = Uint32Array.from(segment.texts, (text) => this.placeOf(text));
      if (numbers !== null && this.texts.length > MOST_DISTINCT) {
        // Only what earlier segments brought is coded so far; this segment follows below.
        this.toNumbers(numbers);
      } else {
        this.makeRoom(rows);
        const { codes } = this;
        for (let row = 0; row < rows; row++) codes[this.rows + row] = mapped[segment.codes[row]];
      }
    }
    if (this.values !== null && numbers !== null) this.addNumbers(segment, numbers);
    this.rows += rows;
  }

  column(): Gathered {
    this.places = new Map();
    if (this.values !== null) return { kind: 'numbers', values: this.values.slice(0, this.rows), exceptions: this.exceptions };
    return { kind: 'texts', codes: this.codes.slice(0, this.rows), texts: this.texts };
  }

  private placeOf(text: string): number {
    const known = this.places.get(text);
    if (known !== undefined) return known;
    this.places.set(text, this.texts.length);
    return this.texts.push(text) - 1;
  }

  private makeRoom(rows: number): void {
    const needed = this.rows + rows;
    const { codes } = this;
    const bytes = Math.max(codes.BYTES_PER_ELEMENT, codesFor(this.texts.length, 0).BYTES_PER_ELEMENT);
    if (needed <= codes.length && bytes === codes.BYTES_PER_ELEMENT) return;
    const length = needed <= codes.length ? codes.length : Math.max(needed, codes.length * 2);
    this.codes = bytes === 1 ? new Uint8Array(length) : bytes === 2 ? new Uint16Array(length) : new Uint32Array(length);
    this.codes.set(codes.subarray(0, this.rows));
  }

  private toNumbers(format: NumberFormat): void {
    const reader = numberReader(format);
    const read = Float64Array.from(this.texts, (text) => reader.read(text));
    this.values = new Float64Array(Math.max(1024, this.rows * 2));
    for (let row = 0; row < this.rows; row++) {
      const code = this.codes[row];
      this.values[row] = read[code];
      if (Number.isNaN(read[code]) && this.texts[code] !== '') this.exceptions.set(row, this.texts[code]);
    }
    this.texts = [];
    this.places = new Map();
    this.codes = new Uint8Array(0);
  }

  private addNumbers(segment: ColumnSegment, format: NumberFormat): void {
    let values = this.values ?? new Float64Array(0);
    const rows = segment.codes.length;
    if (this.rows + rows > values.length) {
      const longer = new Float64Array(Math.max(this.rows + rows, values.length * 2));
      longer.set(values.subarray(0, this.rows));
      values = longer;
      this.values = longer;
    }
    const reader = numberReader(format);
    const read = Float64Array.from(segment.texts, (text) => reader.read(text));
    for (let row = 0; row < rows; row++) {
      const code = segment.codes[row];
      values[this.rows + row] = read[code];
      if (Number.isNaN(read[code]) && segment.texts[code] !== '') this.exceptions.set(this.rows + row, segment.texts[code]);
    }
  }
}
