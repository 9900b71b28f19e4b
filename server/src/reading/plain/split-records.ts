import { isUtf8 } from 'node:buffer';
import { createHash } from 'node:crypto';
import { decoderOf } from '../encodings';
import { headerProblems } from '../header';
import { openFile, openingBytes } from '../opening';
import { Scanner } from '../scanner';
import type { FileFacts, ReadingChoices, ReadingOptions } from '../types';
import { NotPlain } from './field-index';

/** Whole records as UTF-8, each ending with a line feed: those of one segment, in pieces. */
export interface RecordsOfSegment {
  readonly rows: number;
  readonly pieces: readonly Uint8Array<ArrayBuffer>[];
}

export interface SplitFile {
  segments: AsyncGenerator<RecordsOfSegment, void, void>;
  /** The header, once the first segment has come; everything, once the last has. */
  facts(): FileFacts;
}

const LF = 10;
const CR = 13;
const QUOTE = 34;
const decodedPiece = 1 << 20;
/** An unfinished record of more bytes than this is not searched for its end again and again. */
const longestRecord = 8 << 20;
/** A segment is in memory as a whole, one for each thread: records that make it larger are left to the careful reader. */
const largestSegment = 160 << 20;

/**
 * Cuts a file into segments of whole records without looking into them more than quotes require: what a field holds is for the threads that
 * code the segments. Anything unusual (problems above all, which the careful reader names) is NotPlain.
 *
 * @throws NotPlain; what `options.signal` was aborted with; the stream's own error
 */
export function splitRecords(
  stream: AsyncIterable<Buffer>,
  reading: ReadingChoices,
  options: Pick<ReadingOptions, 'mostRows' | 'mostColumns' | 'segmentRows' | 'onProgress' | 'signal'> = {},
): SplitFile {
  const facts: FileFacts = { sha256: '', bytes: 0, rows: 0, header: [], problems: [] };
  return { segments: split(stream, reading, options, facts), facts: () => facts };
}

async function* split(
  stream: AsyncIterable<Buffer>,
  reading: ReadingChoices,
  options: Pick<ReadingOptions, 'mostRows' | 'mostColumns' | 'segmentRows' | 'onProgress' | 'signal'>,
  facts: FileFacts,
): AsyncGenerator<RecordsOfSegment, void, void> {
  const { mostRows = 1_000_000, mostColumns = 200, segmentRows = 65_536 } = options;
  const ends = new RecordEnds(reading);
  const hash = createHash('sha256');
  const toUtf8 = utf8Of(reading);
  let rest: Buffer = Buffer.alloc(0);
  let open = false;
  let pieces: Uint8Array<ArrayBuffer>[] = [];
  let rows = 0;
  let held = 0;

  const take = (): RecordsOfSegment => {
    const taken = { rows, pieces };
    facts.rows += rows;
    if (facts.rows > mostRows) throw new NotPlain('too many rows');
    pieces = [];
    rows = 0;
    held = 0;
    return taken;
  };
  const readHeader = (block: Buffer): number => {
    const { records, end } = ends.find(block, 0, 1);
    if (records === 0) return 0;
    facts.header = headerOf(block.subarray(0, end), reading);
    if (facts.header.length > mostColumns) throw new NotPlain('too many columns');
    return end;
  };
  /** What is left of a block after its whole records. */
  const use = function* (block: Buffer): Generator<RecordsOfSegment, Buffer> {
    let at = facts.header.length === 0 ? readHeader(block) : 0;
    while (facts.header.length > 0) {
      const { records, end } = ends.find(block, at, segmentRows - rows);
      if (records === 0) break;
      const part = block.subarray(at, end);
      if (!isUtf8(part)) throw new NotPlain('bytes that are not UTF-8');
      held += part.length;
      if (held > largestSegment) throw new NotPlain('very long records');
      pieces.push(new Uint8Array(part));
      rows += records;
      at = end;
      if (rows === segmentRows) yield take();
    }
    if (block.length - at > longestRecord) throw new NotPlain('a very long record');
    return Buffer.from(block.subarray(at));
  };

  for await (const chunk of stream) {
    options.signal?.throwIfAborted();
    hash.update(chunk);
    facts.bytes += chunk.length;
    let bytes: Buffer = chunk;
    if (!open) {
      rest = Buffer.concat([rest, chunk]);
      if (rest.length < openingBytes) continue;
      bytes = opened(rest, reading);
      rest = Buffer.alloc(0);
      open = true;
    }
    for (const block of toUtf8.pieces(bytes)) rest = yield* use(rest.length === 0 ? block : Buffer.concat([rest, block]));
    options.onProgress?.({ bytes: facts.bytes, rows: facts.rows + rows });
  }
  options.signal?.throwIfAborted();
  if (!open) {
    const bytes = opened(rest, reading);
    rest = Buffer.alloc(0);
    for (const block of toUtf8.pieces(bytes)) rest = yield* use(rest.length === 0 ? block : Buffer.concat([rest, block]));
  }
  toUtf8.end();
  if (rest.length > 0) {
    if (/^[ \t]*$/.test(rest.toString('latin1'))) throw new NotPlain('blanks at the end');
    rest = yield* use(Buffer.concat([rest, Buffer.from('\n')]));
    if (rest.length > 0) throw new NotPlain('an open quote');
  }
  if (facts.header.length > 1) rows -= dropBlankLines(pieces);
  if (rows > 0) yield take();
  if (facts.rows === 0) throw new NotPlain('no rows');
  facts.sha256 = hash.digest('hex');
}

/** Blank lines at the end of a file are harmless: removed, and counted. */
function dropBlankLines(pieces: Uint8Array<ArrayBuffer>[]): number {
  let dropped = 0;
  for (;;) {
    const last = pieces.at(-1);
    if (last === undefined) return dropped;
    let at = last.length - 1;
    if (at > 0 && last[at - 1] === CR) at--;
    if (at > 0 && last[at - 1] !== LF) return dropped;
    dropped++;
    if (at === 0) pieces.pop();
    else pieces[pieces.length - 1] = last.slice(0, at);
  }
}

function opened(first: Buffer, { encoding }: ReadingChoices): Buffer {
  const bytes = openFile(first, encoding);
  if (!Buffer.isBuffer(bytes)) throw new NotPlain(bytes.code);
  return bytes;
}

function headerOf(line: Buffer, { delimiter, trim }: ReadingChoices): string[] {
  if (!isUtf8(line)) throw new NotPlain('bytes that are not UTF-8');
  let header: string[] = [];
  const unusual = (): never => {
    throw new NotPlain('an unusual header');
  };
  const scanner = new Scanner(delimiter, trim, 1_000_000, {
    record: (fields) => {
      if (header.length > 0) unusual();
      header = [...fields];
    },
    strayQuote: unusual,
    cellTooLarge: unusual,
    nul: unusual,
    unclosedQuote: unusual,
  });
  scanner.push(line.toString('utf8'));
  scanner.end();
  if (header.length === 0 || (header.length === 1 && header[0] === '') || headerProblems(header, 1).length > 0) unusual();
  return header;
}

interface ToUtf8 {
  pieces(bytes: Buffer): Iterable<Buffer>;
  end(): void;
}

function utf8Of({ encoding }: ReadingChoices): ToUtf8 {
  // What is not UTF-8 is found record by record.
  if (encoding === 'utf-8') return { pieces: (bytes) => [bytes], end: () => undefined };
  const decoder = decoderOf(encoding);
  const refuse = (): never => {
    throw new NotPlain('bytes that do not belong to the encoding');
  };
  return {
    *pieces(bytes) {
      for (let from = 0; from < bytes.length; from += decodedPiece)
        yield Buffer.from(decoder.decode(Buffer.from(bytes.subarray(from, from + decodedPiece)), 1, refuse), 'utf8');
    },
    end: () => void decoder.end(1, refuse),
  };
}

/** Finds where records end: at line feeds outside quotes. A quote opens a field only where the field begins (RFC 4180). */
class RecordEnds {
  private readonly delimiter: number;

  constructor(private readonly reading: ReadingChoices) {
    this.delimiter = reading.delimiter.charCodeAt(0);
  }

  /** At most `most` records from `from`, which begins one: how many are whole, and where the last of them ends. */
  find(block: Buffer, from: number, most: number): { records: number; end: number } {
    if (this.lastBlock !== block) {
      this.lastBlock = block;
      this.quote = block.indexOf(QUOTE);
    }
    return this.quote === -1 ? withoutQuotes(block, from, most) : this.withQuotes(block, from, most);
  }
  private lastBlock: Buffer | null = null;
  private quote = -1;

  private withQuotes(block: Buffer, from: number, most: number): { records: number; end: number } {
    const { delimiter } = this;
    const { trim } = this.reading;
    let records = 0;
    let end = from;
    let begins = true;
    for (let at = from; at < block.length; at++) {
      const byte = block[at];
      if (byte === LF) {
        records++;
        end = at + 1;
        begins = true;
        if (records === most) break;
      } else if (byte === delimiter) begins = true;
      else if (begins) {
        if (byte === QUOTE) {
          do {
            at = block.indexOf(QUOTE, at + 1);
            if (at === -1) return { records, end };
            at++;
          } while (block[at] === QUOTE);
          at--;
          begins = false;
        } else if (!trim || (byte !== 32 && byte !== 9)) begins = false;
      }
    }
    return { records, end };
  }
}

function withoutQuotes(block: Buffer, from: number, most: number): { records: number; end: number } {
  let records = 0;
  let end = from;
  while (records < most) {
    const at = block.indexOf(LF, end);
    if (at === -1) break;
    records++;
    end = at + 1;
  }
  return { records, end };
}
