import type { Personal } from './personal';

/**
 * Identifiers that are one and the same but for how they are written: case, blanks and punctuation, and zeros before the first digit other than
 * zero. They are compared before they are hashed, by keys that stay in memory: a keyed hash says only whether two texts are equal to the letter.
 */

/** What stands for the texts of one segment, each text once. */
export interface SegmentWritings {
  /** 53 bits of each text without anything but its letters and digits. */
  readonly joined: Float64Array<ArrayBuffer>;
  /** The same with a mark where something stands between two digits. */
  readonly parted: Float64Array<ArrayBuffer>;
  /** Texts in which something stands between two digits. */
  readonly withParts: number;
}

/** Where nearly all identifiers are of several numbers (1-23, 12-3), what parts these says which is which. */
const nearlyAll = 0.99;
const mark = 0x2d;

/**
 * @param bytes texts as UTF-8, text `code` from `places[code]` to `places[code + 1]`; @param skip texts that stand for missing
 */
export function writingsOf(
  { size, bytes, places }: { readonly size: number; readonly bytes: Uint8Array; readonly places: Int32Array },
  skip: (code: number) => boolean,
): SegmentWritings {
  const joined = new Float64Array(size);
  const parted = new Float64Array(size);
  const key = new WritingKey();
  let length = 0;
  let withParts = 0;
  for (let code = 0; code < size; code++) {
    if (skip(code)) continue;
    key.read(bytes, places[code], places[code + 1]);
    joined[length] = key.joined;
    parted[length++] = key.parted;
    if (key.hasParts) withParts++;
  }
  return { joined: joined.slice(0, length), parted: parted.slice(0, length), withParts };
}

export function writingsOfTexts(texts: readonly string[], isMissing: (text: string) => boolean): SegmentWritings {
  const kept = texts.filter((text) => !isMissing(text)).map((text) => Buffer.from(text, 'utf8'));
  const places = new Int32Array(kept.length + 1);
  kept.forEach(({ length }, code) => (places[code + 1] = places[code] + length));
  return writingsOf({ size: kept.length, bytes: Buffer.concat(kept), places }, () => false);
}

/** The key of one text after another. */
class WritingKey {
  joined = 0;
  parted = 0;
  hasParts = false;

  read(bytes: Uint8Array, from: number, to: number): void {
    for (let at = from; at < to; at++)
      if (bytes[at] >= 0x80) {
        const plain = Buffer.from(likeAscii(Buffer.from(bytes.subarray(from, to)).toString('utf8')), 'utf8');
        this.fold(plain, 0, plain.length);
        return;
      }
    this.fold(bytes, from, to);
  }

  private fold(bytes: Uint8Array, from: number, to: number): void {
    let [one, two, three, four] = [0x11c9_dc5, 0x1e37_79b9, 0x11c9_dc5, 0x1e37_79b9];
    let lastDigit = false;
    let anyDigit = false;
    let gap = false;
    this.hasParts = false;
    for (let at = from; at < to; at++) {
      const byte = bytes[at];
      const letter = byte >= 0x41 && byte <= 0x5a ? byte | 0x20 : byte;
      const digit = isDigit(letter);
      if (!digit && letter < 0x80 && (letter < 0x61 || letter > 0x7a)) {
        gap = true;
        continue;
      }
      // Zeros before the first digit that is none, but not the last digit of all.
      if (letter === 0x30 && !anyDigit && at + 1 < to && isDigit(bytes[at + 1])) continue;
      if (gap && digit && lastDigit) {
        this.hasParts = true;
        three = foldOne(three, mark);
        four = foldTwo(four, mark);
      }
      one = foldOne(one, letter);
      two = foldTwo(two, letter);
      three = foldOne(three, letter);
      four = foldTwo(four, letter);
      lastDigit = digit;
      anyDigit ||= digit;
      gap = false;
    }
    this.joined = together(one, two);
    this.parted = together(three, four);
  }
}

const isDigit = (byte: number): boolean => byte >= 0x30 && byte <= 0x39;
const foldOne = (hash: number, byte: number): number => Math.imul(hash ^ byte, 0x0100_0193);
const foldTwo = (hash: number, byte: number): number => {
  const mixed = Math.imul(hash ^ byte, 0x85eb_ca6b);
  return mixed ^ (mixed >>> 13);
};
const together = (one: number, two: number): number => {
  const mixed = Math.imul(one ^ (one >>> 16), 0x7feb_352d);
  return ((mixed ^ (mixed >>> 15)) >>> 0) * 0x20_0000 + (two >>> 11);
};

/** Letters in the form in which like ones are equal (Unicode NFKC), small; digits of any script that NFKC knows; anything else a mark. */
const likeAscii = (text: string): string => text.normalize('NFKC').toLowerCase().replace(/[^\p{L}\p{M}\p{N}]/gu, '-');

/** The writings of one column, segment after segment in any order. */
export class Writings {
  private readonly parts: SegmentWritings[] = [];

  add(part: SegmentWritings): void {
    this.parts.push(part);
  }

  /** How many different identifiers there are when writing does not count. Among a million, one pair in 18,000 files is taken for equal by chance. */
  distinct(): number {
    const texts = this.parts.reduce((sum, { joined }) => sum + joined.length, 0);
    const withParts = this.parts.reduce((sum, part) => sum + part.withParts, 0);
    const keys = new Float64Array(texts);
    let at = 0;
    for (const { joined, parted } of this.parts) {
      keys.set(withParts >= nearlyAll * texts ? parted : joined, at);
      at += joined.length;
    }
    keys.sort();
    let different = 0;
    for (let place = 0; place < texts; place++) if (place === 0 || keys[place] !== keys[place - 1]) different++;
    return different;
  }
}

/** The writings of the columns of a file, by their positions. */
export class WritingsByColumn {
  private readonly columns = new Map<number, Writings>();

  add(position: number, part: SegmentWritings): void {
    const known = this.columns.get(position) ?? new Writings();
    this.columns.set(position, known);
    known.add(part);
  }

  distinct(): Map<number, number> {
    return new Map([...this.columns].map(([position, writings]) => [position, writings.distinct()]));
  }
}

/** Columns of a file whose writings are compared: 16 bytes an identifier are held for each until the file has been read. */
const mostWatched = 8;

/** Positions of the columns whose writings are compared: the first ones of identifiers and of e-mail addresses. Names are no identifiers. */
export const watchedColumns = (personal: readonly (Personal | null)[]): number[] =>
  personal.flatMap((one, position) => (one && one.kind !== 'name' ? [position] : [])).slice(0, mostWatched);
