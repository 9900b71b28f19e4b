import { createHash } from 'node:crypto';
import { mostCellCharacters } from '@tallystone/contracts/samples/reading';
import { ColumnBuilder, detached } from './dictionary';
import { type DateReader, dateReader, noSuchDate } from './dates';
import { decoderOf, lineEnds } from './encodings';
import { headerProblems } from './header';
import { openFile, openingBytes } from './opening';
import { ProblemBook } from './problem-book';
import { Scanner, type RecordSink } from './scanner';
import type { FileFacts, ReadingChoices, ReadingOptions, ReadingProblem, Segment } from './types';

/** Pieces of a large chunk are decoded one at a time, so that no string is ever longer than this many bytes. */
const PIECE = 1 << 20;

export interface SegmentedFile {
  /** Segments in order. None comes any more once there is a problem. */
  segments: AsyncGenerator<Segment, void, void>;
  /** Known once `segments` has ended. */
  facts(): FileFacts;
}

/**
 * Reads a raw file as a stream into segments of dictionary-coded texts: memory is bounded by one segment whatever the file's size.
 *
 * All problems of the file are collected (`facts().problems`), not the first alone; reading goes on to the end to find them, except
 * for files that are not text at all.
 *
 * @param stream the file's bytes in order
 * @throws whatever `options.signal` was aborted with, or the stream's own error
 * @example
 * const file = readSegments(createReadStream(path), { encoding: 'utf-8', delimiter: ',', trim: true });
 * for await (const segment of file.segments) await store(segment);
 * const facts = file.facts();
 * if (facts.problems.length > 0) await discard();
 */
export function readSegments(
  stream: AsyncIterable<Buffer | Uint8Array>,
  reading: ReadingChoices,
  options: ReadingOptions = {},
): SegmentedFile {
  const facts: FileFacts = { sha256: '', bytes: 0, rows: 0, header: [], problems: [] };
  return { segments: read(stream, reading, options, facts), facts: () => facts };
}

async function* read(
  stream: AsyncIterable<Buffer | Uint8Array>,
  reading: ReadingChoices,
  options: ReadingOptions,
  facts: FileFacts,
): AsyncGenerator<Segment, void, void> {
  const book = new ProblemBook(options.onDoubt);
  const builder = new SegmentBuilder(reading, options, book);
  const scanner = new Scanner(reading.delimiter, reading.trim, options.mostCharacters ?? mostCellCharacters, builder);
  const decoder = decoderOf(reading.encoding);
  const hash = createHash('sha256');
  const finish = (): void => {
    facts.rows = builder.rows;
    facts.header = builder.header;
    facts.problems = book.problems();
  };
  const onFault = (line: number): void => book.notInEncoding(line, reading.encoding);
  const onLost = options.keepLost === true ? undefined : (line: number): void => book.lostCharacters(line);

  let first: Buffer | null = Buffer.alloc(0);
  const pieces = function* (chunk: Buffer): Generator<string> {
    for (let from = 0; from < chunk.length; from += PIECE)
      yield decoder.decode(chunk.subarray(from, from + PIECE), scanner.line, onFault, onLost);
  };
  for await (const incoming of stream) {
    options.signal?.throwIfAborted();
    let chunk = Buffer.isBuffer(incoming) ? incoming : Buffer.from(incoming.buffer, incoming.byteOffset, incoming.byteLength);
    hash.update(chunk);
    facts.bytes += chunk.length;
    if (first !== null) {
      first = Buffer.concat([first, chunk]);
      if (first.length < openingBytes) continue;
      const opened = openFile(first, reading.encoding);
      first = null;
      if (!Buffer.isBuffer(opened)) return giveUp(opened);
      chunk = opened;
    }
    for (const text of pieces(chunk)) {
      scanner.push(text);
      facts.header = builder.header;
      yield* builder.take();
    }
    options.onProgress?.({ bytes: facts.bytes, rows: builder.rows });
  }
  options.signal?.throwIfAborted();
  if (first !== null) {
    const opened = openFile(first, reading.encoding);
    if (!Buffer.isBuffer(opened)) return giveUp(opened);
    for (const text of pieces(opened)) scanner.push(text);
  }
  scanner.push(decoder.end(scanner.line, onFault));
  scanner.end();
  builder.end();
  facts.sha256 = hash.digest('hex');
  finish();
  if (facts.problems.length === 0) yield* builder.take();
  options.onProgress?.({ bytes: facts.bytes, rows: builder.rows });

  function giveUp(problem: ReadingProblem): void {
    book.add(problem);
    finish();
  }
}

class SegmentBuilder implements RecordSink {
  header: string[] = [];
  rows = 0;

  private hasHeader = false;
  private readonly columns: (ColumnBuilder | null)[] = [];
  private readonly ready: Segment[] = [];
  private inSegment = 0;
  /** Blank lines since the last record: each is one line, so that they follow one another. */
  private blanks = 0;
  private firstBlank = 0;
  private readonly segmentRows: number;
  private readonly mostRows: number;
  private readonly mostColumns: number;

  private readonly readDate: DateReader | null;
  /** Of each column, whether its texts stay as they are. */
  private notDates: readonly boolean[] = [];

  constructor(
    private readonly reading: ReadingChoices,
    private readonly options: ReadingOptions,
    private readonly book: ProblemBook,
  ) {
    this.readDate = dateReader(reading.dateOrder, reading.missing ?? [], reading.dateTimes);
    this.segmentRows = options.segmentRows ?? 65_536;
    this.mostRows = options.mostRows ?? 1_000_000;
    this.mostColumns = options.mostColumns ?? 200;
  }

  record(fields: string[], line: number, blank: boolean): void {
    if (!this.hasHeader) {
      this.readHeader(fields, line);
      return;
    }
    if (blank && this.header.length > 1) {
      // Blank lines at the very end are harmless; before another record they are ragged.
      if (this.blanks++ === 0) this.firstBlank = line;
      return;
    }
    if (this.blanks > 0) this.raggedBlanks();
    const row = this.rows++;
    this.options.onRecord?.(line, this.rows);
    if (fields.length !== this.header.length) {
      this.book.ragged(line, this.rows, fields.length, this.header.length);
      return;
    }
    if (this.readDate !== null) this.readDates(fields, line, this.readDate);
    if (row >= this.mostRows) {
      this.book.tooManyRows = this.mostRows;
      this.book.any = true;
    }
    if (this.book.any) return;
    const at = this.inSegment++;
    for (let index = 0; index < fields.length; index++) this.columns[index]?.set(at, fields[index]);
    if (this.inSegment === this.segmentRows) this.close();
  }

  strayQuote(line: number): void {
    this.book.strayQuote(line, this.recordNumber);
  }

  cellTooLarge(line: number, field: number): void {
    this.book.cellTooLarge(
      line,
      this.recordNumber,
      field + 1,
      this.header[field],
      this.options.mostCharacters ?? mostCellCharacters,
    );
  }

  nul(line: number, field: number): void {
    this.book.nul(line, this.recordNumber, field + 1, this.header[field]);
  }

  unclosedQuote(openingLine: number): void {
    this.book.unclosedQuote(openingLine, this.recordNumber);
  }

  end(): void {
    this.book.rowsFound = this.rows;
    if (!this.hasHeader) {
      this.book.add({ code: 'no-rows', message: 'No rows: the file is empty.', where: {} });
    } else if (this.rows === 0 && !this.book.any) {
      this.book.add({ code: 'no-rows', message: 'No rows: the file has a header and nothing below it.', where: { line: 1 } });
    }
    if (this.inSegment > 0) this.close();
  }

  *take(): Generator<Segment, void, void> {
    const segments = this.ready.splice(0);
    if (!this.book.any) yield* segments;
  }

  /** The record being read; 0 while it is the header. */
  private get recordNumber(): number {
    return this.hasHeader ? this.rows + this.blanks + 1 : 0;
  }

  private readHeader(fields: string[], line: number): void {
    if (fields.length === 1 && fields[0] === '') return;
    this.hasHeader = true;
    this.header = fields.map(detached);
    this.notDates = this.header.map((name) => this.reading.notDates?.includes(name) ?? false);
    for (const problem of headerProblems(this.header, line)) this.book.add(problem);
    if (fields.length > this.mostColumns) {
      this.book.add({
        code: 'too-many-columns',
        message: `The file has ${fields.length} columns; at most ${this.mostColumns} can be brought in.`,
        where: { line, count: fields.length },
      });
    }
    const wanted = this.options.columns === undefined ? null : new Set(this.options.columns);
    for (const name of wanted ?? []) {
      if (!this.header.includes(name)) {
        this.book.add({ code: 'missing-column', message: `The file has no column "${name}".`, where: { line, column: name } });
      }
    }
    for (const name of this.header) {
      this.columns.push(wanted === null || wanted.has(name) ? new ColumnBuilder(this.segmentRows) : null);
    }
  }

  /** Puts ISO dates in the place of those in the stated order. */
  private readDates(fields: string[], line: number, read: DateReader): void {
    for (let index = 0; index < fields.length; index++) {
      if (this.notDates[index]) continue;
      const iso = read(fields[index]);
      if (iso === null) continue;
      if (iso !== noSuchDate) fields[index] = iso;
      else {
        const breaks = fields.slice(0, index).reduce((sum, text) => sum + lineEnds(text, text.length), 0);
        this.book.noSuchDate(line + breaks, this.rows, index + 1, this.header[index], this.reading.dateOrder ?? 'year-month-day');
      }
    }
  }

  private raggedBlanks(): void {
    for (let index = 0; index < this.blanks; index++) {
      this.rows++;
      this.options.onRecord?.(this.firstBlank + index, this.rows);
      this.book.ragged(this.firstBlank + index, this.rows, 1, this.header.length);
    }
    this.blanks = 0;
  }

  private close(): void {
    const rows = this.inSegment;
    const firstRow = Math.min(this.rows, this.mostRows) - rows;
    const columns = this.columns.map((column) => column?.take(rows) ?? { codes: new Uint8Array(0), texts: [] });
    this.ready.push({ firstRow, rows, columns });
    this.inSegment = 0;
  }
}
