import type { DateOrder, DateTimes, Encoding } from '@tallystone/contracts/specification/types';

/** What reading a raw file needs to know, what it gives, and how it says what is wrong. See index.ts for how to use it. */

/** How the bytes become records and fields (the part of `specification.data` that does not concern types). */
export interface ReadingChoices {
  encoding: Encoding;
  /** One character. */
  delimiter: string;
  /** Remove blanks and tabs around unquoted fields. */
  trim: boolean;
  /** Fields in the form of a date in this order become ISO dates; left out, or year first: none is touched. */
  dateOrder?: DateOrder | undefined;
  /** Whether dates with a time become their day; left out: none is touched. */
  dateTimes?: DateTimes | undefined;
  /** Names of columns in which no field is touched; left out: none. */
  notDates?: readonly string[] | undefined;
  /** Texts that mean "missing" and are therefore no dates, whatever their form. */
  missing?: readonly string[];
}

/**
 * One thing that is wrong with a file. `line` is the physical line (from 1, the header's first line is 1), `record` the data record
 * (from 1, the header not counted); `position` the column's place (from 1), `column` its name.
 */
export interface ReadingProblem {
  code: ReadingProblemCode;
  message: string;
  where: {
    line?: number;
    record?: number;
    column?: string;
    position?: number;
    /** The first 20 lines, where the same thing is wrong on many. */
    lines?: number[];
    /** On how many lines or in how many cells. */
    count?: number;
    /** Characters of a heading that is too long. */
    length?: number;
  };
}

export type ReadingProblemCode =
  | 'no-rows'
  | 'spreadsheet'
  | 'archive'
  | 'pdf'
  | 'binary'
  | 'wrong-encoding'
  | 'not-in-encoding'
  | 'lost-characters'
  | 'nul-byte'
  | 'cell-too-large'
  | 'ragged'
  | 'unclosed-quote'
  | 'stray-quote'
  | 'blank-header'
  | 'duplicate-header'
  | 'reserved-header'
  | 'header-too-long'
  | 'too-many-columns'
  | 'too-many-rows'
  | 'missing-column'
  | 'no-such-date';

/** Texts of up to `segmentRows` consecutive records of one column, coded by a dictionary of their own. */
export interface ColumnSegment {
  /** One per row: index into `texts`. */
  codes: Uint8Array | Uint16Array | Uint32Array;
  /** Distinct texts in order of first appearance; "" is the empty (missing) field, quoted or not. */
  texts: string[];
}

/** Consecutive records, all columns. `firstRow` counts from 0. */
export interface Segment {
  firstRow: number;
  rows: number;
  columns: ColumnSegment[];
}

/** A whole column in memory. Columns of few distinct texts are coded by a dictionary; others are numbers or loose texts. */
export type RawColumn = { name: string; position: number } & (
  | {
      kind: 'texts';
      codes: Uint8Array | Uint16Array | Uint32Array;
      texts: string[];
    }
  | {
      /** A column used as numbers only, with more than 4,096 distinct texts; `exceptions` are the texts that are no numbers. */
      kind: 'numbers';
      /** NaN where `exceptions` has the text, or where the field is empty. */
      values: Float64Array;
      exceptions: Map<number, string>;
    }
);

export interface ReadingProgress {
  bytes: number;
  rows: number;
}

export interface ReadingOptions {
  /** Most rows and columns that are kept; beyond them is a problem that states what was found. Default: 1,000,000 and 200. */
  mostRows?: number;
  mostColumns?: number;
  /** Most characters of one field. Default `mostCellCharacters`. */
  mostCharacters?: number;
  /** Rows per segment. Default 65,536. */
  segmentRows?: number;
  /**
   * Take the sign that stands for a lost character (U+FFFD) as text. Replay does, because a sample may have been read before this was asked; what
   * comes in is refused for it.
   */
  keepLost?: boolean;
  /** Only these columns are kept (all are checked). A name that the header lacks is a problem. */
  columns?: readonly string[];
  onProgress?: (progress: ReadingProgress) => void;
  /** Told of each thing that is wrong with a line as it is found, however many there are; `problems` names the first of a kind only. */
  onDoubt?: (doubt: Doubt) => void;
  /** Told where each data record begins: its first line and its number, both from 1. */
  onRecord?: (line: number, record: number) => void;
  signal?: AbortSignal;
}

/** One thing that is wrong with one line. Lines that do not belong to the encoding are found before records are told apart: no record. */
export interface Doubt {
  code: ReadingProblemCode;
  line: number;
  /** 0 for the header. */
  record: number | null;
  /** In a few words, without the line's number: "2 fields where the header has 3". */
  what: string;
}

/** What is known of the whole file once it has been read. `problems` is empty exactly if the file can be used. */
export interface FileFacts {
  /** Of the raw bytes, lower-case hexadecimal; "" for a file that is not text and was not read to its end. */
  sha256: string;
  bytes: number;
  /** Data records, the header not counted. */
  rows: number;
  /** The header's names, by position. */
  header: string[];
  problems: ReadingProblem[];
}

/** What `readColumns` gives. */
export interface ReadFile extends FileFacts {
  /** Empty if there is any problem. */
  columns: RawColumn[];
}

/** Thrown by the segment reader's `facts()` consumers that cannot go on; carries every problem found. */
export class ReadingError extends Error {
  constructor(readonly problems: ReadingProblem[]) {
    super(problems.map((problem) => problem.message).join(' '));
    this.name = 'ReadingError';
  }
}
