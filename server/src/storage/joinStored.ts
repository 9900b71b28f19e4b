import { leastNumber, textBase } from '../reading/plain/column-coder';
import { type NumberStyle, spell, spelled, wholeOf } from '../reading/plain/number-style';
import { type TextColumn, codesFor } from '../replay/source';
import { joinSegments } from './joinSegments';
import { type UnpackedSegment, packedForm, textsOfUnpacked, unpack } from './packedSegment';
import { decodeTexts, inflateSegment, unpackTexts } from './segmentCoding';

/**
 * A whole column from its stored segments, of either form, with one dictionary: the same, in the same order, as `joinSegments` gives. Numbers are compared
 * as numbers and spelled once for the column, where a dictionary of texts would be asked for each of them in each segment.
 */
export function joinStored(contents: readonly Uint8Array[]): TextColumn {
  const segments = contents.map((content) => {
    const bytes = inflateSegment(content);
    return bytes[0] === packedForm ? unpack(bytes) : (unpackTexts(bytes) ?? decodeTexts(bytes));
  });
  const unpacked = segments.filter((segment) => 'cells' in segment);
  const style = unpacked.length === segments.length ? commonStyle(unpacked) : undefined;
  return style === undefined
    ? joinSegments(segments.map((segment) => ('cells' in segment ? textsOfUnpacked(segment) : segment)))
    : joinUnpacked(unpacked, style);
}

/** The one style of all numbers, null without numbers, undefined where there are several. */
function commonStyle(segments: readonly UnpackedSegment[]): NumberStyle | null | undefined {
  let common: NumberStyle | null = null;
  for (const { style } of segments) {
    if (style === null) continue;
    common ??= style;
    if (style.least !== common.least || style.most !== common.most || style.sign !== common.sign) return undefined;
  }
  return common;
}

function joinUnpacked(segments: readonly UnpackedSegment[], style: NumberStyle | null): TextColumn {
  const rows = segments.reduce((sum, segment) => sum + segment.rows, 0);
  const texts: string[] = [];
  const numbers = new NumberCodes(rangeOf(segments));
  const codeOfText = new Map<string, number>();
  const joined = new Uint32Array(rows);
  let row = 0;
  for (const segment of segments) {
    const { cells } = segment;
    numbers.meet(cells);
    for (const number of numbers.takeNew(texts.length)) texts.push(style === null ? '' : spell(number, style));
    const mapped = Uint32Array.from(segment.texts, (text) => {
      // A text of this segment may be a number of another.
      const number = style === null ? null : spelled(text, style.sign);
      const whole = number === null || style === null ? NaN : wholeOf(number, style);
      const isNumber = numbers.mayHave(whole);
      const known = isNumber ? numbers.of(whole) : (codeOfText.get(text) ?? -1);
      if (known >= 0) return known;
      if (isNumber) {
        numbers.meet(Int32Array.of(whole));
        numbers.takeNew(texts.length);
      } else codeOfText.set(text, texts.length);
      return texts.push(text) - 1;
    });
    for (let at = 0; at < cells.length; at++, row++) {
      const cell = cells[at];
      joined[row] = cell < leastNumber ? mapped[cell - textBase] : numbers.of(cell);
    }
  }
  const codes = codesFor(texts.length, rows);
  codes.set(joined);
  return { kind: 'texts', codes, texts };
}

interface Range {
  readonly smallest: number;
  readonly largest: number;
}

/** Of all numbers; the smallest is above the largest where there are none. */
function rangeOf(segments: readonly UnpackedSegment[]): Range {
  let smallest = Infinity;
  let largest = -Infinity;
  for (const { cells } of segments) {
    for (let at = 0; at < cells.length; at++) {
      const cell = cells[at];
      if (cell < leastNumber) continue;
      if (cell < smallest) smallest = cell;
      if (cell > largest) largest = cell;
    }
  }
  return { smallest, largest };
}

/** Numbers that lie closer together than this have a place each; others have one by their hash. */
const placedRange = 1 << 18;

/** Codes of whole numbers from a range: a table, with open addressing (Knuth, The Art of Computer Programming 3, 6.4) where they lie far apart. */
class NumberCodes {
  private readonly placed: boolean;
  private keys = new Int32Array(0);
  /** 0: the place is free; else one more than the code, or `unnumbered`. */
  private codes: Int32Array;
  private shift = 22;
  private size = 0;
  private fresh: number[] = [];

  constructor(private readonly range: Range) {
    const length = range.largest - range.smallest + 1;
    this.placed = length <= placedRange;
    if (!this.placed) this.keys = new Int32Array(1024);
    this.codes = new Int32Array(this.placed ? Math.max(0, length) : 1024);
  }

  mayHave(number: number): boolean {
    return number >= this.range.smallest && number <= this.range.largest;
  }

  /** Remembers the numbers among these cells that have no code yet. */
  meet(cells: Int32Array): void {
    for (let at = 0; at < cells.length; at++) {
      const number = cells[at];
      if (number < leastNumber) continue;
      const place = this.placeOf(number);
      if (this.codes[place] !== 0) continue;
      this.codes[place] = unnumbered;
      this.fresh.push(number);
      if (this.placed) continue;
      this.keys[place] = number;
      if (++this.size * 2 > this.keys.length) this.grow();
    }
  }

  /** Gives the numbers met since the last time codes from `first` on, in ascending order, in which they are returned. */
  takeNew(first: number): Int32Array {
    const sorted = Int32Array.from(this.fresh).sort();
    this.fresh = [];
    for (let index = 0; index < sorted.length; index++) this.codes[this.placeOf(sorted[index])] = first + index + 1;
    return sorted;
  }

  /** -1 where it has none. */
  of(number: number): number {
    return this.codes[this.placeOf(number)] - 1;
  }

  private placeOf(number: number): number {
    if (this.placed) return number - this.range.smallest;
    const { keys, codes } = this;
    const mask = keys.length - 1;
    let place = Math.imul(number, 0x9e37_79b1) >>> this.shift;
    while (codes[place] !== 0 && keys[place] !== number) place = (place + 1) & mask;
    return place;
  }

  private grow(): void {
    const { keys, codes } = this;
    this.keys = new Int32Array(keys.length * 2);
    this.codes = new Int32Array(keys.length * 2);
    this.shift--;
    for (let at = 0; at < keys.length; at++) {
      if (codes[at] === 0) continue;
      const place = this.placeOf(keys[at]);
      this.keys[place] = keys[at];
      this.codes[place] = codes[at];
    }
  }
}

const unnumbered = -1;
