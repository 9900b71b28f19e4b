import { isIsoDate } from '@tallystone/contracts/specification/schema';
import type { DataReading } from '@tallystone/contracts/specification/types';
import { numberReader, type NumberReader } from '../reading/numbers';
import type { ReplayProblem } from './problems';
import { textsOf, type ColumnSource, type SourceColumn, type TextColumn } from './source';

/** A column read as numbers: what each row holds, seen through the specification's missing texts. */
export interface NumberView {
  /** NaN if the row is missing or no number. */
  number(row: number): number;
  missing(row: number): boolean;
  /** For messages. */
  text(row: number): string;
}

/** The source's columns by name, typed on demand. A column that is not there is a problem, once. */
export class Columns {
  readonly rows: number;
  readonly problems: ReplayProblem[] = [];

  private readonly texts = new Map<string, TextColumn>();
  private readonly absent = new Set<string>();
  private readonly missingTexts: ReadonlySet<string>;
  private readonly reader: NumberReader;

  constructor(
    private readonly source: ColumnSource,
    data: DataReading,
  ) {
    this.rows = source.rows;
    this.missingTexts = new Set(data.missing);
    this.reader = numberReader(data);
  }

  isMissing(text: string): boolean {
    return this.missingTexts.has(text);
  }

  /** Whether a text of a numeric column is a number, as the file is read. */
  isNumber(text: string): boolean {
    return !Number.isNaN(this.reader.read(text));
  }

  raw(name: string): SourceColumn | null {
    const column = this.source.column(name);
    if (column !== undefined) return column;
    if (!this.absent.has(name)) {
      this.absent.add(name);
      this.problems.push({ code: 'missing-column', message: `The file has no column "${name}".`, where: { column: name } });
    }
    return null;
  }

  text(name: string): TextColumn | null {
    const known = this.texts.get(name);
    if (known !== undefined) return known;
    const column = this.raw(name);
    if (column === null) return null;
    const texts = textsOf(column, this.rows);
    if (column.kind === 'numbers') this.texts.set(name, texts);
    return texts;
  }

  numbers(name: string): NumberView | null {
    const column = this.raw(name);
    if (column === null) return null;
    // Missing texts that are numbers are compared as numbers where the spelling is not kept.
    const missingNumbers = new Set(
      [...this.missingTexts].map((text) => this.reader.read(text)).filter((value) => !Number.isNaN(value)),
    );
    const { size } = missingNumbers;
    if (column.kind === 'texts') {
      const { codes, texts } = column;
      const missing = new Uint8Array(texts.length);
      const numbers = new Float64Array(texts.length);
      for (let code = 0; code < texts.length; code++) {
        const value = this.reader.read(texts[code]);
        // A number is missing only where a missing text is one too: most texts need not be looked up.
        const isMissing = (size > 0 || Number.isNaN(value)) && this.missingTexts.has(texts[code]);
        missing[code] = isMissing ? 1 : 0;
        numbers[code] = isMissing ? NaN : value;
      }
      return {
        number: (row) => numbers[codes[row]],
        missing: (row) => missing[codes[row]] === 1,
        text: (row) => texts[codes[row]],
      };
    }
    const { values, exceptions } = column;
    const textAt = (row: number): string => (Number.isNaN(values[row]) ? (exceptions?.get(row) ?? '') : String(values[row]));
    const missingAt = (row: number): boolean =>
      Number.isNaN(values[row]) ? this.missingTexts.has(exceptions?.get(row) ?? '') : size > 0 && missingNumbers.has(values[row]);
    // What is no number is NaN already; only numbers that stand for a missing value have to be looked for.
    const numberAt = size === 0 ? (row: number) => values[row] : (row: number) => (missingNumbers.has(values[row]) ? NaN : values[row]);
    return { number: numberAt, missing: missingAt, text: textAt };
  }
}

/** The day of an ISO date or date-time, or null. */
export function isoDay(text: string): string | null {
  const day = text.slice(0, 10);
  if (text.length > 10 && text[10] !== 'T' && text[10] !== ' ') return null;
  return isIsoDate(day) ? day : null;
}
