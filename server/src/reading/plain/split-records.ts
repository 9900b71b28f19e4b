import { isUtf8 } from 'node:buffer';
import { createHash } from 'node:crypto';
import { mostCellCharacters } from '@tallystone/contracts/samples/reading';
import { decoderOf, holdsLost } from '../encodings';
import { headerProblems } from '../header';
import { openFile, openingBytes } from '../opening';
import { Scanner } from '../scanner';
import type { FileFacts, ReadingChoices, ReadingOptions } from '../types';
import { NotPlain } from './field-index';

/** Whole records as UTF-8, each ending with a line feed: those of one segment, in memory that threads share. */
export interface RecordsOfSegment {
  readonly rows: number;
  readonly bytes: Uint8Array<SharedArrayBuffer>;
}

export interface SplitFile {
  segments: AsyncGenerator<RecordsOfSegment, void, void>;
  /** Takes the memory of a segment back once nobody looks at it any more: another is gathered in it. */
  takeBack(records: RecordsOfSegment): void;
  /** The header, once the first segment has come; everything, once the last has. */
  facts(): FileFacts;
}

const LF = 10;
const CR = 13;
const QUOTE = 34;
const decodedPiece = 1 << 20;
/** The end of a record that a block leaves unfinished is looked for in so much of the next one, then in more. */
const firstLook = 1 << 16;
/** An unfinished record of more bytes than this is not searched for its end again and again. */
const longestRecord = 8 << 20;
/** What a segment is gathered in is larger than earlier records say by this. */
const reserve = 1.1;
/** A segment is in memory as a whole, one for each thread: records that make it larger are left to the careful reader. */
const largestSegment = 160 << 20;

/**
 * Cuts a file into segments of whole records without looking into them more than quotes require: what a field holds is for the threads that
 * code the segments. Anything unusual (problems above all, which the careful reader names) is NotPlain.
 *
 * @throws NotPlain; what `options.signal` was aborted with; the stream's own error
 */
export function splitRecords(stream: AsyncIterable<Buffer>, reading: ReadingChoices, options: SplitOptions = {}): SplitFile {
  const facts: FileFacts = { sha256: '', bytes: 0, rows: 0, header: [], problems: [] };
  const free: SharedArrayBuffer[] = [];
  return {
    segments: split(stream, reading, options, facts, free),
    takeBack: ({ bytes }) => void free.push(bytes.buffer),
    facts: () => facts,
  };
}

export interface SplitOptions extends Pick<ReadingOptions, 'mostRows' | 'mostColumns' | 'segmentRows' | 'onProgress' | 'signal'> {
  /** Most fields of a segment after the first: a wide file is cut into segments of fewer rows, so that each takes no more memory. */
  segmentFields?: number;
}

async function* split(
  stream: AsyncIterable<Buffer>,
  reading: ReadingChoices,
  options: SplitOptions,
  facts: FileFacts,
  free: SharedArrayBuffer[],
): AsyncGenerator<RecordsOfSegment, void, void> {
  const { mostRows = 1_000_000, mostColumns = 200, segmentRows = 65_536, segmentFields = Infinity } = options;
  const ends = new RecordEnds(reading);
  const hash = createHash('sha256');
  const toUtf8 = utf8Of(reading);
  const gathered = new Gathered(free);
  let rest: Buffer = Buffer.alloc(0);
  let open = false;

  /** What is judged on the first segment (columns that identify people) is judged on as many rows as the careful reader takes. */
  const mostInSegment = (): number =>
    facts.rows === 0 ? segmentRows : Math.min(segmentRows, Math.max(1, Math.floor(segmentFields / facts.header.length)));
  const take = (): RecordsOfSegment => {
    const taken = gathered.take();
    facts.rows += taken.rows;
    if (facts.rows > mostRows) throw new NotPlain('too many rows');
    return taken;
  };
  const readHeader = (block: Buffer): number => {
    const { records, end } = ends.find(block, 0, 1);
    if (records === 0) return 0;
    facts.header = headerOf(block.subarray(0, end), reading);
    if (facts.header.length > mostColumns) throw new NotPlain('too many columns');
    return end;
  };
  /** Takes the whole records of a block from there on; returns where what is left begins. */
  const useRecords = function* (block: Buffer, from: number): Generator<RecordsOfSegment, number> {
    let at = from;
    for (;;) {
      const most = mostInSegment();
      const { records, end } = ends.find(block, at, most - gathered.rows);
      if (records === 0) return at;
      const part = block.subarray(at, end);
      if (!isUtf8(part)) throw new NotPlain('bytes that are not UTF-8');
      if (holdsLost(part)) throw new NotPlain('a character that was lost');
      gathered.add(part, records, most);
      at = end;
      if (gathered.rows === most) yield take();
    }
  };
  /** What is left of a block, with what the one before left, after its whole records. */
  const use = function* (block: Buffer): Generator<RecordsOfSegment, Buffer> {
    let at = 0;
    if (facts.header.length === 0) {
      const whole = rest.length === 0 ? block : Buffer.concat([rest, block]);
      at = readHeader(whole);
      if (facts.header.length > 0) at = yield* useRecords(whole, at);
      return leftOf(whole, at);
    }
    if (rest.length > 0) {
      // Only as much of the block is copied as the record that was left unfinished takes.
      let size = firstLook;
      let joined = Buffer.concat([rest, block.subarray(0, size)]);
      while (ends.find(joined, 0, 1).records === 0) {
        if (size >= block.length) return leftOf(joined, 0);
        size *= 8;
        joined = Buffer.concat([rest, block.subarray(0, size)]);
      }
      const { end } = ends.find(joined, 0, 1);
      yield* useRecords(joined.subarray(0, end), 0);
      at = end - rest.length;
    }
    return leftOf(block, yield* useRecords(block, at));
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
    for (const block of toUtf8.pieces(bytes)) rest = yield* use(block);
    options.onProgress?.({ bytes: facts.bytes, rows: facts.rows + gathered.rows });
  }
  options.signal?.throwIfAborted();
  if (!open) {
    const bytes = opened(rest, reading);
    rest = Buffer.alloc(0);
    for (const block of toUtf8.pieces(bytes)) rest = yield* use(block);
  }
  toUtf8.end();
  if (rest.length > 0) {
    if (/^[ \t]*$/.test(rest.toString('latin1'))) throw new NotPlain('blanks at the end');
    rest = yield* use(Buffer.from('\n'));
    if (rest.length > 0) throw new NotPlain('an open quote');
  }
  if (facts.header.length > 1) gathered.dropBlankLines();
  if (gathered.rows > 0) yield take();
  if (facts.rows === 0) throw new NotPlain('no rows');
  facts.sha256 = hash.digest('hex');
}

function leftOf(block: Buffer, at: number): Buffer {
  if (block.length - at > longestRecord) throw new NotPlain('a very long record');
  return Buffer.from(block.subarray(at));
}

/** The records of one segment as they come, copied once into memory that is used again from segment to segment. */
class Gathered {
  rows = 0;
  private bytes = new Uint8Array(new SharedArrayBuffer(0));
  private length = 0;

  /** @param free memory of segments that nobody needs any more */
  constructor(private readonly free: SharedArrayBuffer[]) {}

  /** @param most rows of the segment, from which follows what memory it will take */
  add(part: Uint8Array, rows: number, most: number): void {
    const needed = this.length + part.length;
    if (needed > largestSegment) throw new NotPlain('very long records');
    if (needed > this.bytes.length) this.makeRoom(needed, Math.ceil((reserve * needed * most) / (this.rows + rows)));
    this.bytes.set(part, this.length);
    this.length = needed;
    this.rows += rows;
  }

  private makeRoom(needed: number, expected: number): void {
    const before = this.bytes.subarray(0, this.length);
    if (this.length === 0) {
      const found = this.free.findIndex(({ byteLength }) => byteLength >= expected);
      const [kept] = found === -1 ? [] : this.free.splice(found, 1);
      if (kept) {
        this.bytes = new Uint8Array(kept);
        return;
      }
      // Those that are too small are left to the garbage collector.
      this.free.length = 0;
    }
    // Pages that nothing is written to take no memory.
    this.bytes = new Uint8Array(new SharedArrayBuffer(Math.max(needed, Math.min(expected, largestSegment))));
    this.bytes.set(before);
  }

  take(): RecordsOfSegment {
    const taken = { rows: this.rows, bytes: this.bytes.subarray(0, this.length) };
    this.bytes = new Uint8Array(new SharedArrayBuffer(0));
    this.length = 0;
    this.rows = 0;
    return taken;
  }

  /** Blank lines at the end of a file are harmless. */
  dropBlankLines(): void {
    for (; this.length > 0; this.rows--) {
      const { bytes } = this;
      let at = this.length - 1;
      if (at > 0 && bytes[at - 1] === CR) at--;
      if (at > 0 && bytes[at - 1] !== LF) return;
      this.length = at;
    }
  }
}

function opened(first: Buffer, { encoding }: ReadingChoices): Buffer {
  const bytes = openFile(first, encoding);
  if (!Buffer.isBuffer(bytes)) throw new NotPlain(bytes.code);
  return bytes;
}

function headerOf(line: Buffer, { delimiter, trim }: ReadingChoices): string[] {
  if (!isUtf8(line)) throw new NotPlain('bytes that are not UTF-8');
  if (holdsLost(line)) throw new NotPlain('a character that was lost');
  let header: string[] = [];
  const unusual = (): never => {
    throw new NotPlain('an unusual header');
  };
  const scanner = new Scanner(delimiter, trim, mostCellCharacters, {
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
