import { isUtf8 } from 'node:buffer';
import { type DoubtfulLine, type ReadingChoices, mostDoubtfulLines } from '@tallystone/contracts/samples/reading';
import { decoderOf } from '../../reading/encodings';
import type { Doubt } from '../../reading/index';

/** Characters of a line that are shown. */
const shownCharacters = 200;

/**
 * Gathers, while the reader goes through a file, the first lines in which it finds anything wrong, with what it finds, and counts them all.
 *
 * @example
 * const doubtful = new DoubtfulLines(true);
 * for await (const segment of readSegments(stream, choices, doubtful).segments) void segment;
 * doubtful.of(bytes, 'utf-8') // { lines: [{ line: 3, record: 2, text: '1,2', clipped: false, doubts: ['2 fields where …'] }], count: 1 }
 */
export class DoubtfulLines {
  private readonly kept = new Map<number, { record: number | null; doubts: string[] }>();
  private lastKept = 0;
  /** 1 for each line that is doubtful: a file can have millions, and some are found in two ways. */
  private seen = new Uint8Array(1024);
  private count = 0;
  /** Where each record begins, ascending. */
  private readonly starts: number[] = [];

  /** @param whole the bytes are the whole file; else a quote that is open at their end says nothing */
  constructor(private readonly whole: boolean) {}

  readonly onDoubt = ({ code, line, record, what }: Doubt): void => {
    if (code === 'unclosed-quote' && !this.whole) return;
    this.countOnce(line);
    const known = this.kept.get(line);
    if (known) {
      known.record ??= record;
      known.doubts.push(what);
      return;
    }
    if (this.kept.size === mostDoubtfulLines) {
      // Bytes are decoded ahead of the records, so that a later doubt can be of an earlier line.
      if (line > this.lastKept) return;
      this.kept.delete(this.lastKept);
    }
    this.kept.set(line, { record, doubts: [what] });
    this.lastKept = Math.max(...this.kept.keys());
  };

  readonly onRecord = (line: number): void => {
    this.starts.push(line);
  };

  /** @param bytes what was read, from the beginning of the file */
  of(bytes: Buffer, encoding: ReadingChoices['encoding']): { lines: DoubtfulLine[]; count: number } {
    const texts = linesOf(bytes, encoding, new Set(this.kept.keys()));
    const lines = [...this.kept]
      .sort(([a], [b]) => a - b)
      .map(([line, { record, doubts }]) => {
        const text = texts.get(line) ?? '';
        const clipped = text.length > shownCharacters;
        return {
          line,
          record: (record ?? this.recordAt(line)) || null,
          text: clipped ? text.slice(0, shownCharacters) : text,
          clipped,
          doubts,
        };
      });
    return { lines, count: this.count };
  }

  private countOnce(line: number): void {
    if (line >= this.seen.length) {
      const longer = new Uint8Array(Math.max(line + 1, this.seen.length * 2));
      longer.set(this.seen);
      this.seen = longer;
    }
    if (this.seen[line] === 1) return;
    this.seen[line] = 1;
    this.count++;
  }

  /** The last record that begins at this line or before it; 0 for the header. */
  private recordAt(line: number): number {
    const { starts } = this;
    let [low, high] = [0, starts.length];
    while (low < high) {
      const middle = (low + high) >> 1;
      if (starts[middle] <= line) low = middle + 1;
      else high = middle;
    }
    return low;
  }
}

/** The wanted physical lines (from 1) as they stand, without their ends. Lines end with LF, CR or both, as the reader counts them. */
function linesOf(bytes: Buffer, encoding: ReadingChoices['encoding'], wanted: ReadonlySet<number>): Map<number, string> {
  const found = new Map<number, string>();
  const unit = encoding.startsWith('utf-16') ? 2 : 1;
  const low = encoding === 'utf-16be' ? 1 : 0;
  const unitAt = (at: number): number => (unit === 1 ? bytes[at] : bytes[at + low] | (bytes[at + 1 - low] << 8));
  const last = Math.max(0, ...wanted);
  let start = 0;
  for (let at = 0, line = 1; line <= last && at <= bytes.length; at += unit) {
    const ended = at + unit > bytes.length;
    const code = ended ? 10 : unitAt(at);
    if (code !== 10 && code !== 13) continue;
    // More than is shown: marks and escapes take no room that is missed.
    if (wanted.has(line)) found.set(line, shownText(bytes.subarray(start, Math.min(at, start + 8 * shownCharacters)), encoding));
    if (code === 13 && at + 2 * unit <= bytes.length && unitAt(at + unit) === 10) at += unit;
    start = at + unit;
    line++;
  }
  return found;
}

const decoders: Record<ReadingChoices['encoding'], (bytes: Buffer) => string> = {
  'utf-8': utf8WithEscapes,
  'utf-16le': (bytes) => bytes.subarray(0, bytes.length & ~1).toString('utf16le'),
  'utf-16be': (bytes) =>
    Buffer.from(bytes.subarray(0, bytes.length & ~1))
      .swap16()
      .toString('utf16le'),
  // Single bytes: a place in the text is one in the bytes.
  'windows-1252': (bytes) =>
    decoderOf('windows-1252')
      .decode(bytes, 1, () => undefined)
      .replace(/\ufffd/g, (_, place: number) => escaped(bytes[place])),
};

/** A line's text, in which whatever is no printable character of the encoding is written as its code. */
function shownText(bytes: Buffer, encoding: ReadingChoices['encoding']): string {
  return decoders[encoding](bytes)
    .replace(/^\ufeff/, '')
    .replaceAll('\0', '\\0')
    .replace(/[^\P{Cc}\t]/gu, (control) => escaped(control.charCodeAt(0)))
    .replace(/\p{Surrogate}/gu, (lone) => `\\u${lone.charCodeAt(0).toString(16).toUpperCase()}`);
}

const escaped = (code: number): string => `\\x${code.toString(16).toUpperCase().padStart(2, '0')}`;

/** UTF-8 with each byte that belongs to no character written \xE9. */
function utf8WithEscapes(bytes: Buffer): string {
  if (isUtf8(bytes)) return bytes.toString('utf8');
  let text = '';
  for (let at = 0; at < bytes.length;) {
    const length = [1, 2, 3, 4].find((count) => at + count <= bytes.length && isUtf8(bytes.subarray(at, at + count)));
    text += length === undefined ? escaped(bytes[at]) : bytes.toString('utf8', at, at + length);
    at += length ?? 1;
  }
  return text;
}
