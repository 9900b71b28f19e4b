import { type CodedColumn, leastNumber, textBase } from '../reading/plain/column-coder';
import { type NumberStyle, spell } from '../reading/plain/number-style';
import { deflateFrom, saysNothing } from './deflateFrom';

/**
 * Form 2 of a segment: what the fast reader codes, stored without making strings of it. Numbers whose spelling follows from their value
 * (number-style.ts) are whole numbers, packed by byte planes; other texts have a dictionary.
 *
 * Layout (little-endian), then raw deflate (RFC 1951): u8 form = 2; u8 least decimals (255 = no numbers), u8 most decimals, u8 decimal sign;
 * varint rows; varint count of texts, per text varint bytes and UTF-8; then, with numbers, u8 0 = by distance or 1 = by table.
 * By distance: zigzag varint smallest number, varint step: cell = texts + (number - smallest) / step.
 * By table: varint count, zigzag varint first number, varint distances, ascending: cell = texts + place in the table.
 * Cells below the count of texts are texts. u8 bits of a cell: 0 (all cells are 0), 1, 2, 4 (packed, low bits first) or 8, 16, 24, 32
 * (planes of single bytes, low bytes first); 255 = cell is the number of its row.
 */
export interface PackedColumn {
  readonly rows: number;
  /** Per row a whole number, or `textBase` plus the code of a text. */
  readonly cells: Int32Array;
  readonly style: NumberStyle | null;
  readonly texts: PackedTexts;
}

/** Distinct texts as UTF-8: text `code` lies from `places[code]` to `places[code + 1]`. */
export interface PackedTexts {
  readonly size: number;
  readonly bytes: Uint8Array;
  readonly places: Int32Array;
}

export const packedForm = 2;
const noNumbers = 255;
const rowNumbers = 255;
/** Numbers of a segment are kept in a table up to this many different ones. */
const mostInTable = 256;

/** Stored as it is, without loss, before planes that are. */
const mostHeaderStored = 512;

const byDistance = 0;
const byTable = 1;

/** Used again from segment to segment, because a new one for each would keep the garbage collector busy. */
let codesOfRows = new Uint32Array(0);

/** @returns bytes in memory of their own */
export function encodePacked(column: PackedColumn): Buffer {
  const { rows, cells, texts } = column;
  const range = rangeOf(cells, rows);
  const header = new Writer(64 + texts.size * 5 + (texts.size > 0 ? texts.places[texts.size] : 0) + mostInTable * 5 + rows * 4);
  header.byte(packedForm);
  const style = range === null ? null : column.style;
  header.byte(style?.least ?? noNumbers);
  header.byte(style?.most ?? 0);
  header.byte(style?.sign ?? 0);
  header.varint(rows);
  header.varint(texts.size);
  for (let code = 0; code < texts.size; code++) {
    const from = texts.places[code];
    const to = texts.places[code + 1];
    header.varint(to - from);
    header.raw(texts.bytes, from, to);
  }
  if (codesOfRows.length < rows) codesOfRows = new Uint32Array(rows);
  const codes = codesOfRows.subarray(0, rows);
  let count = texts.size;
  if (range === null) for (let row = 0; row < rows; row++) codes[row] = cells[row] - textBase;
  else {
    const table = tableOf(cells, rows, range, mostInTable - texts.size);
    header.byte(table === null ? byDistance : byTable);
    if (table === null) {
      const { smallest } = range;
      const step = stepOf(cells, rows, smallest);
      header.zigzag(smallest);
      header.varint(step);
      if (step === 1) {
        for (let row = 0; row < rows; row++) {
          const cell = cells[row];
          codes[row] = cell < leastNumber ? cell - textBase : count + cell - smallest;
        }
      } else {
        for (let row = 0; row < rows; row++) {
          const cell = cells[row];
          codes[row] = cell < leastNumber ? cell - textBase : count + (cell - smallest) / step;
        }
      }
      count += (range.largest - smallest) / step + 1;
    } else {
      const { numbers } = table;
      header.varint(numbers.length);
      header.zigzag(numbers[0]);
      for (let place = 1; place < numbers.length; place++) header.varint(numbers[place] - numbers[place - 1]);
      for (let row = 0; row < rows; row++) {
        const cell = cells[row];
        codes[row] = cell < leastNumber ? cell - textBase : count + table.placeOf(cell);
      }
      count += numbers.length;
    }
  }
  return deflate(header, codes, count);
}

function deflate(header: Writer, codes: Uint32Array, count: number): Buffer {
  const rows = codes.length;
  const bits = bitsFor(codes, count);
  const planes = bits === rowNumbers ? 0 : bits >= 8 ? bits / 8 : 0;
  const length = bits === rowNumbers || bits === 0 ? 0 : planes > 0 ? planes * rows : Math.ceil((rows * bits) / 8);
  header.byte(bits);
  const at = header.length;
  const out = header.bytes;
  if (planes > 0) {
    for (let plane = 0; plane < planes; plane++) {
      const from = at + plane * rows;
      const shift = plane * 8;
      for (let row = 0; row < rows; row++) out[from + row] = codes[row] >>> shift;
    }
  } else if (length > 0) {
    const perByte = 8 / bits;
    for (let row = 0, byte = at; row < rows; byte++) {
      let packed = 0;
      for (let place = 0; place < perByte && row < rows; place++, row++) packed |= codes[row] << (place * bits);
      out[byte] = packed;
    }
  }
  let stored = 0;
  if (at <= mostHeaderStored) for (; stored < planes && saysNothing(out, at + stored * rows, rows); stored++);
  return deflateFrom(out, stored === 0 ? 0 : at + stored * rows, at + length);
}

function bitsFor(codes: Uint32Array, count: number): number {
  if (count <= 1) return 0;
  if (count === codes.length && codes.every((code, row) => code === row)) return rowNumbers;
  if (count <= 2) return 1;
  if (count <= 4) return 2;
  if (count <= 16) return 4;
  return count <= 0x100 ? 8 : count <= 0x1_0000 ? 16 : count <= 0x100_0000 ? 24 : 32;
}

function rangeOf(cells: Int32Array, rows: number): { smallest: number; largest: number } | null {
  let smallest = Infinity;
  let largest = -Infinity;
  for (let row = 0; row < rows; row++) {
    const cell = cells[row];
    if (cell < leastNumber) continue;
    if (cell < smallest) smallest = cell;
    if (cell > largest) largest = cell;
  }
  return smallest > largest ? null : { smallest, largest };
}

/** Largest number that divides every distance: amounts in hundreds need no place for what is between. */
function stepOf(cells: Int32Array, rows: number, smallest: number): number {
  let step = 0;
  for (let row = 0; row < rows && step !== 1; row++) {
    if (cells[row] < leastNumber) continue;
    let rest = cells[row] - smallest;
    while (rest !== 0) {
      const next = step % rest;
      step = rest;
      rest = next;
    }
  }
  return Math.max(1, step);
}

/** The different numbers, ascending, and where each of them is among them. */
interface NumberTable {
  readonly numbers: ArrayLike<number>;
  placeOf(number: number): number;
}

/** Numbers that lie closer together than this are looked up in place. */
const inPlaceRange = 1 << 16;
const placeOfDistance = new Int16Array(inPlaceRange);

/** Null where there are more than `most`. */
function tableOf(
  cells: Int32Array,
  rows: number,
  { smallest, largest }: { smallest: number; largest: number },
  most: number,
): NumberTable | null {
  if (most <= 0) return null;
  if (largest - smallest < inPlaceRange) {
    placeOfDistance.fill(-1, 0, largest - smallest + 1);
    let different = 0;
    for (let row = 0; row < rows; row++) {
      if (cells[row] < leastNumber) continue;
      const distance = cells[row] - smallest;
      if (placeOfDistance[distance] === 0) continue;
      if (++different > most) return null;
      placeOfDistance[distance] = 0;
    }
    const numbers: number[] = [];
    for (let distance = 0; distance <= largest - smallest; distance++)
      if (placeOfDistance[distance] === 0) placeOfDistance[distance] = numbers.push(smallest + distance) - 1;
    return { numbers, placeOf: (number) => placeOfDistance[number - smallest] };
  }
  const slots = new Int32Array(1024).fill(textBase);
  const found: number[] = [];
  for (let row = 0; row < rows; row++) {
    const cell = cells[row];
    if (cell < leastNumber) continue;
    let slot = (Math.imul(cell, 0x9e37_79b1) >>> 22) & 1023;
    while (slots[slot] !== textBase && slots[slot] !== cell) slot = (slot + 1) & 1023;
    if (slots[slot] === cell) continue;
    if (found.length >= most) return null;
    slots[slot] = cell;
    found.push(cell);
  }
  const numbers = Int32Array.from(found).sort();
  const places = new Map(Array.from(numbers, (number, place) => [number, place]));
  return { numbers, placeOf: (number) => places.get(number) ?? 0 };
}

/** Texts and codes to be packed, whatever the texts are. */
export function packTexts({
  codes,
  texts,
}: {
  readonly codes: ArrayLike<number>;
  readonly texts: readonly string[];
}): PackedColumn {
  const cells = new Int32Array(codes.length);
  for (let row = 0; row < codes.length; row++) cells[row] = textBase + codes[row];
  const places = new Int32Array(texts.length + 1);
  const buffers = texts.map((text) => Buffer.from(text, 'utf8'));
  buffers.forEach((buffer, code) => (places[code + 1] = places[code] + buffer.length));
  return { rows: codes.length, cells, style: null, texts: { size: texts.length, bytes: Buffer.concat(buffers), places } };
}

/** What a segment of form 2 holds, before any text is made of a number. */
export interface UnpackedSegment {
  readonly rows: number;
  readonly cells: Int32Array;
  readonly style: NumberStyle | null;
  readonly texts: readonly string[];
}

/** @param bytes inflated, of form 2 */
export function unpack(bytes: Buffer): UnpackedSegment {
  const reader = new Reader(bytes);
  if (reader.byte() !== packedForm) throw new Error('This segment has a form that is not known here');
  const least = reader.byte();
  const most = reader.byte();
  const sign = reader.byte();
  const rows = reader.varint();
  const count = reader.varint();
  const texts: string[] = [];
  for (let code = 0; code < count; code++) texts.push(reader.text(reader.varint()));
  const style = least === noNumbers ? null : { least, most, sign };
  let smallest = 0;
  let step = 1;
  let table: Int32Array | null = null;
  if (style !== null) {
    if (reader.byte() === byTable) {
      table = new Int32Array(reader.varint());
      table[0] = reader.zigzag();
      for (let place = 1; place < table.length; place++) table[place] = table[place - 1] + reader.varint();
    } else {
      smallest = reader.zigzag();
      step = reader.varint();
    }
  }
  const cells = new Int32Array(rows);
  const bits = reader.byte();
  const { at } = reader;
  if (bytes.length < at + (bits === rowNumbers ? 0 : bits >= 8 ? (bits / 8) * rows : Math.ceil((rows * bits) / 8)))
    throw new Error('A segment is cut short');
  const cellOf = (code: number): number =>
    code < count ? textBase + code : table === null ? smallest + (code - count) * step : table[code - count];
  if (bits === rowNumbers) for (let row = 0; row < rows; row++) cells[row] = cellOf(row);
  else if (bits <= 8) {
    const byCode = Int32Array.from({ length: 1 << bits }, (_, code) => cellOf(code));
    unpackBits(bytes, at, bits, byCode, cells);
  } else if (bits === 16) {
    for (let row = 0, low = at, high = at + rows; row < rows; row++, low++, high++) {
      const code = bytes[low] | (bytes[high] << 8);
      cells[row] = code < count ? textBase + code : table === null ? smallest + (code - count) * step : table[code - count];
    }
  } else {
    const last = bits === 32 ? at + 3 * rows : -1;
    for (let row = 0, low = at, middle = at + rows, high = at + 2 * rows; row < rows; row++, low++, middle++, high++) {
      const three = bytes[low] | (bytes[middle] << 8) | (bytes[high] << 16);
      const code = last < 0 ? three : (three | (bytes[last + row] << 24)) >>> 0;
      cells[row] = code < count ? textBase + code : smallest + (code - count) * step;
    }
  }
  return { rows, cells, style, texts };
}

/** Codes of one byte or a part of one, low bits first. */
function unpackBits(bytes: Uint8Array, from: number, bits: number, byCode: Int32Array, cells: Int32Array): void {
  const rows = cells.length;
  if (bits === 0) {
    cells.fill(byCode[0]);
    return;
  }
  if (bits === 8) {
    for (let row = 0; row < rows; row++) cells[row] = byCode[bytes[from + row]];
    return;
  }
  const perByte = 8 / bits;
  const mask = (1 << bits) - 1;
  for (let row = 0, byte = from; row < rows; byte++) {
    let packed = bytes[byte];
    for (let place = 0; place < perByte && row < rows; place++, row++) {
      cells[row] = byCode[packed & mask];
      packed >>>= bits;
    }
  }
}

/** The texts of a column that has been coded and not stored yet. */
export function textsOfCoded({ rows, cells, style, texts }: CodedColumn): ReturnType<typeof textsOfUnpacked> {
  return textsOfUnpacked({ rows, cells: cells.subarray(0, rows), style, texts: texts.texts() });
}

/** As codes of texts: the numbers that there are ascending, then the other texts. */
export function textsOfUnpacked({ rows, cells, style, texts }: UnpackedSegment): {
  codes: Uint8Array | Uint16Array | Uint32Array;
  texts: string[];
} {
  const sorted = style === null ? new Int32Array(0) : cells.filter((cell) => cell >= leastNumber).sort();
  const numbers: number[] = [];
  for (let place = 0; place < sorted.length; place++)
    if (place === 0 || sorted[place] !== sorted[place - 1]) numbers.push(sorted[place]);
  const places = new Map(numbers.map((number, place) => [number, place]));
  const distinct = numbers.length + texts.length;
  const codes = distinct <= 0x100 ? new Uint8Array(rows) : distinct <= 0x1_0000 ? new Uint16Array(rows) : new Uint32Array(rows);
  for (let row = 0; row < rows; row++) {
    const cell = cells[row];
    codes[row] = cell < leastNumber ? numbers.length + (cell - textBase) : (places.get(cell) ?? 0);
  }
  return { codes, texts: [...(style === null ? [] : numbers.map((number) => spell(number, style))), ...texts] };
}

/** What one segment is written to before it is deflated: used again, like `codesOfRows`. */
let written = new Uint8Array(0);
const mostKept = 1 << 23;

class Writer {
  length = 0;
  readonly bytes: Uint8Array<ArrayBuffer>;
  /** @param size at least as many bytes as will be written */
  constructor(size: number) {
    if (written.length < size && size <= mostKept) written = new Uint8Array(size);
    this.bytes = size <= mostKept ? written : new Uint8Array(size);
  }
  byte(value: number): void {
    this.bytes[this.length++] = value;
  }
  varint(value: number): void {
    let rest = value;
    while (rest >= 0x80) {
      this.byte((rest % 0x80) | 0x80);
      rest = Math.floor(rest / 0x80);
    }
    this.byte(rest);
  }
  zigzag(value: number): void {
    this.varint(value < 0 ? -value * 2 - 1 : value * 2);
  }
  raw(source: Uint8Array, from: number, to: number): void {
    const { bytes } = this;
    let at = this.length;
    for (let place = from; place < to; place++) bytes[at++] = source[place];
    this.length = at;
  }
}

class Reader {
  at = 0;
  constructor(private readonly bytes: Buffer) {}
  byte(): number {
    return this.bytes[this.at++];
  }
  varint(): number {
    let value = 0;
    let factor = 1;
    for (;;) {
      const byte = this.byte();
      if (byte === undefined) throw new Error('A segment is cut short');
      value += (byte & 0x7f) * factor;
      if (byte < 0x80) return value;
      factor *= 0x80;
    }
  }
  zigzag(): number {
    const value = this.varint();
    return value % 2 === 1 ? -(value + 1) / 2 : value / 2;
  }
  text(length: number): string {
    this.at += length;
    return this.bytes.toString('utf8', this.at - length, this.at);
  }
}
