import { constants, deflateRawSync } from 'node:zlib';
import { type CodedColumn, leastNumber, textBase } from '../reading/plain/column-coder';
import { type NumberStyle, spell } from '../reading/plain/number-style';

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

const byDistance = 0;
const byTable = 1;

export function encodePacked(column: PackedColumn): Buffer {
  const { rows, cells, texts } = column;
  const range = rangeOf(cells, rows);
  const header = new Writer(64 + texts.size * 5 + (texts.size > 0 ? texts.places[texts.size] : 0) + mostInTable * 5);
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
  const codes = new Uint32Array(rows);
  let count = texts.size;
  if (range === null) for (let row = 0; row < rows; row++) codes[row] = cells[row] - textBase;
  else {
    const table = tableOf(cells, rows, mostInTable - texts.size);
    header.byte(table === null ? byDistance : byTable);
    if (table === null) {
      const step = stepOf(cells, rows, range.smallest);
      header.zigzag(range.smallest);
      header.varint(step);
      for (let row = 0; row < rows; row++) {
        const cell = cells[row];
        codes[row] = cell < leastNumber ? cell - textBase : count + (cell - range.smallest) / step;
      }
      count += (range.largest - range.smallest) / step + 1;
    } else {
      header.varint(table.length);
      header.zigzag(table[0]);
      for (let place = 1; place < table.length; place++) header.varint(table[place] - table[place - 1]);
      const places = new Map(Array.from(table, (number, place) => [number, count + place]));
      let last = NaN;
      let lastCode = 0;
      for (let row = 0; row < rows; row++) {
        const cell = cells[row];
        if (cell !== last) {
          last = cell;
          lastCode = cell < leastNumber ? cell - textBase : (places.get(cell) ?? 0);
        }
        codes[row] = lastCode;
      }
      count += table.length;
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
  const out = header.room(length);
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
  const whole = out.subarray(0, at + length);
  // Runs and frequencies are what there is to gain; a search for longer repetitions takes three times as long and finds little in planes.
  return deflateRawSync(whole, { level: 1, strategy: constants.Z_RLE, chunkSize: Math.max(64, whole.length + 1024) });
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

/** The different numbers, ascending, or null where there are more than `most`. */
function tableOf(cells: Int32Array, rows: number, most: number): Int32Array | null {
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
  return Int32Array.from(found).sort();
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

/** Used again from segment to segment: what is unpacked does not hold on to it. */
let unpacking = new Uint32Array(0);

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
  const bits = reader.byte();
  if (unpacking.length < rows) unpacking = new Uint32Array(rows);
  const codes = unpacking.fill(0, 0, rows);
  const at = reader.at;
  const planes = bits === rowNumbers ? 0 : bits >= 8 ? bits / 8 : 0;
  if (bits === rowNumbers) for (let row = 0; row < rows; row++) codes[row] = row;
  else if (planes > 0) {
    if (bytes.length < at + planes * rows) throw new Error('A segment is cut short');
    for (let plane = 0; plane < planes; plane++) {
      const from = at + plane * rows;
      const shift = plane * 8;
      for (let row = 0; row < rows; row++) codes[row] |= bytes[from + row] << shift;
    }
  } else if (bits > 0) {
    if (bytes.length < at + Math.ceil((rows * bits) / 8)) throw new Error('A segment is cut short');
    const perByte = 8 / bits;
    const mask = (1 << bits) - 1;
    for (let row = 0, byte = at; row < rows; byte++) {
      let packed = bytes[byte];
      for (let place = 0; place < perByte && row < rows; place++, row++) {
        codes[row] = packed & mask;
        packed >>>= bits;
      }
    }
  }
  const cells = new Int32Array(rows);
  if (table === null) {
    for (let row = 0; row < rows; row++) {
      const code = codes[row];
      cells[row] = code < count ? textBase + code : smallest + (code - count) * step;
    }
  } else {
    for (let row = 0; row < rows; row++) {
      const code = codes[row];
      cells[row] = code < count ? textBase + code : table[code - count];
    }
  }
  return { rows, cells, style, texts };
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

class Writer {
  length = 0;
  private bytes: Uint8Array;
  constructor(size: number) {
    this.bytes = new Uint8Array(size);
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
    this.bytes.set(source.subarray(from, to), this.length);
    this.length += to - from;
  }
  /** The bytes so far with room behind them. */
  room(length: number): Uint8Array {
    const longer = new Uint8Array(this.length + length);
    longer.set(this.bytes.subarray(0, this.length));
    return longer;
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
