import { type DoubtfulLine, mostDoubtfulLines } from '@tallystone/contracts/samples/reading';
import type { Doubt } from '../../reading/index';

/** Most doubts that are told of one line: it can have a column of the file in each. */
const mostDoubts = 10;
/** Lines whose bits stand together in memory. */
const pageLines = 1 << 16;

/** A doubtful line without its text: nothing of what stands in the file. */
export type FoundLine = Pick<DoubtfulLine, 'line' | 'record' | 'doubts'>;

interface Kept {
  record: number | null;
  readonly doubts: string[];
  /** Doubts beyond those. */
  more: number;
}

/**
 * Gathers, while the reader goes through a file of any size, the first lines in which it finds anything wrong, with what it finds, and counts them
 * all.
 *
 * @example
 * const doubtful = new DoubtfulLines(true);
 * for await (const segment of readSegments(stream, choices, doubtful).segments) void segment;
 * doubtful.found() // { lines: [{ line: 3, record: 2, doubts: ['2 fields where …'] }], count: 1 }
 */
export class DoubtfulLines {
  private readonly kept = new Map<number, Kept>();
  private lastKept = 0;
  /** A bit for each line that is doubtful, in pages: a file can have millions, and some are found in two ways. */
  private readonly seen = new Map<number, Uint8Array>();
  private count = 0;
  /** The first kept line whose record is not known yet. */
  private withoutRecord = Infinity;
  private records = 0;

  /** @param whole the bytes are the whole file; else a quote that is open at their end says nothing */
  constructor(private readonly whole: boolean) {}

  readonly onDoubt = ({ code, line, record, what }: Doubt): void => {
    if (code === 'unclosed-quote' && !this.whole) return;
    this.countOnce(line);
    const known = this.kept.get(line);
    if (known) {
      known.record ??= record;
      if (known.doubts.length < mostDoubts) known.doubts.push(what);
      else known.more++;
      return;
    }
    if (this.kept.size === mostDoubtfulLines) {
      // Bytes are decoded ahead of the records, so that a later doubt can be of an earlier line.
      if (line > this.lastKept) return;
      this.kept.delete(this.lastKept);
    }
    this.kept.set(line, { record, doubts: [what], more: 0 });
    this.lastKept = Math.max(...this.kept.keys());
    if (record === null) this.withoutRecord = Math.min(this.withoutRecord, line);
  };

  /** A line belongs to the last record that begins on it or before it: that is known once one begins after it. */
  readonly onRecord = (line: number, record: number): void => {
    if (line > this.withoutRecord) {
      this.withoutRecord = Infinity;
      for (const [keptLine, kept] of this.kept) {
        if (kept.record !== null) continue;
        if (keptLine < line) kept.record = record - 1;
        else this.withoutRecord = Math.min(this.withoutRecord, keptLine);
      }
    }
    this.records = record;
  };

  /** Once the reader has come to the end. */
  found(): { lines: FoundLine[]; count: number } {
    const lines = [...this.kept]
      .sort(([a], [b]) => a - b)
      .map(([line, { record, doubts, more }]) => ({
        line,
        record: (record ?? this.records) || null,
        doubts: more > 0 ? [...doubts, `and ${more} more`] : doubts,
      }));
    return { lines, count: this.count };
  }

  private countOnce(line: number): void {
    const number = Math.floor(line / pageLines);
    let page = this.seen.get(number);
    if (!page) this.seen.set(number, (page = new Uint8Array(pageLines / 8)));
    const [place, bit] = [(line % pageLines) >> 3, 1 << (line & 7)];
    if ((page[place] & bit) !== 0) return;
    page[place] |= bit;
    this.count++;
  }
}
