import { constants, deflateRawSync, inflateRawSync } from 'node:zlib';
import { textBase } from '../reading/plain/column-coder';
import { mostWhole } from '../reading/plain/number-style';
import { type UnpackedSegment, packedForm, textsOfUnpacked, unpack } from './packedSegment';

/**
 * One segment of a column, up to 65,536 texts, as bytes. Distinct texts form a dictionary and each row holds the narrowest index into it. A
 * dictionary of numbers written with one fixed number of decimals is kept as ascending whole numbers, each as its distance from the one
 * before, because that is most of what a sample holds; any other text is kept as it is. What was written comes back to the letter.
 *
 * Layout (little-endian), then raw deflate (RFC 1951): u8 form = 1; u8 width of an index (0, 1, 2, 4); u8 decimals (255 = no numbers);
 * varint rows; varint count of numbers; zigzag varint first number, varint distances; varint count of texts; per text varint bytes and
 * UTF-8; the indexes. Index i < numbers means the i-th number, else text i - numbers.
 */
export interface TextSegment {
  codes: Uint8Array | Uint16Array | Uint32Array;
  texts: readonly string[];
}

const plainNumber = /^-?(?:0|[1-9]\d{0,13})(?:\.(\d{1,9}))?$/;

/** The whole number that a text stands for at its decimals, or null where the text could not be written back to the letter. */
function scaled(text: string): { value: number; decimals: number } | null {
  const match = plainNumber.exec(text);
  if (!match) return null;
  const decimals = match[1]?.length ?? 0;
  const value = Number(decimals === 0 ? text : text.replace('.', ''));
  // "-0" and "-0.00" have no whole number of their own.
  return Number.isSafeInteger(value) && !(value === 0 && text.startsWith('-')) ? { value, decimals } : null;
}

function unscaled(value: number, decimals: number): string {
  if (decimals === 0) return String(value);
  const digits = String(Math.abs(value)).padStart(decimals + 1, '0');
  return `${value < 0 ? '-' : ''}${digits.slice(0, -decimals)}.${digits.slice(-decimals)}`;
}

class Writer {
  private readonly bytes: number[] = [];
  byte(value: number): void {
    this.bytes.push(value);
  }
  varint(value: number): void {
    let rest = value;
    while (rest >= 0x80) {
      this.bytes.push((rest % 0x80) | 0x80);
      rest = Math.floor(rest / 0x80);
    }
    this.bytes.push(rest);
  }
  raw(buffer: Uint8Array): void {
    for (const byte of buffer) this.bytes.push(byte);
  }
  done(): Buffer {
    return Buffer.from(this.bytes);
  }
}

/** Most frequent number of decimals among the texts, or null if most are no numbers. */
function commonDecimals(forms: readonly ({ value: number; decimals: number } | null)[]): number | null {
  const counts = new Map<number, number>();
  for (const form of forms) if (form) counts.set(form.decimals, (counts.get(form.decimals) ?? 0) + 1);
  const [best] = [...counts].sort((a, b) => b[1] - a[1]);
  return best && best[1] >= 8 && best[1] * 2 > forms.length ? best[0] : null;
}

export function encodeSegment(segment: TextSegment): Buffer {
  const { texts } = segment;
  const forms = texts.map(scaled);
  const decimals = commonDecimals(forms);
  const isNumber = (place: number): boolean => decimals !== null && forms[place]?.decimals === decimals;
  const numbers = texts
    .map((_, place) => place)
    .filter(isNumber)
    .sort((a, b) => (forms[a]?.value ?? 0) - (forms[b]?.value ?? 0));
  const others = texts.map((_, place) => place).filter((place) => !isNumber(place));
  const order = new Uint32Array(texts.length);
  [...numbers, ...others].forEach((place, index) => (order[place] = index));

  const writer = new Writer();
  const width = texts.length <= 1 ? 0 : texts.length <= 0x100 ? 1 : texts.length <= 0x1_0000 ? 2 : 4;
  writer.byte(1);
  writer.byte(width);
  writer.byte(decimals ?? 255);
  writer.varint(segment.codes.length);
  writer.varint(numbers.length);
  numbers.forEach((place, index) => {
    const value = forms[place]?.value ?? 0;
    if (index === 0) writer.varint(value < 0 ? -value * 2 - 1 : value * 2);
    else writer.varint(value - (forms[numbers[index - 1]]?.value ?? 0));
  });
  writer.varint(others.length);
  for (const place of others) {
    const bytes = Buffer.from(texts[place], 'utf8');
    writer.varint(bytes.length);
    writer.raw(bytes);
  }
  const indexes = Buffer.alloc(segment.codes.length * width);
  for (let row = 0; row < segment.codes.length && width > 0; row++) {
    const index = order[segment.codes[row]];
    if (width === 1) indexes[row] = index;
    else if (width === 2) indexes.writeUInt16LE(index, row * 2);
    else indexes.writeUInt32LE(index, row * 4);
  }
  return deflateRawSync(Buffer.concat([writer.done(), indexes]), { level: 4, strategy: constants.Z_DEFAULT_STRATEGY });
}

/** Of either form: this one, or that of packedSegment.ts. */
export function decodeSegment(content: Uint8Array): TextSegment {
  const bytes = inflateSegment(content);
  return bytes[0] === packedForm ? textsOfUnpacked(unpack(bytes)) : decodeTexts(bytes);
}

/** The bytes of a stored segment; the first is its form. */
export const inflateSegment = (content: Uint8Array): Buffer =>
  // A small segment is not given a large buffer, which would be held as long as a view on it.
  inflateRawSync(content, { chunkSize: Math.min(1 << 18, Math.max(1 << 12, 16 * content.length)) });

/** Of form 1, inflated. */
export function decodeTexts(bytes: Buffer): TextSegment {
  const { indexes, numbers, decimals, texts } = readTexts(bytes);
  return { codes: indexes, texts: [...Array.from(numbers, (value) => unscaled(value, decimals)), ...texts] };
}

/**
 * The same with its numbers as numbers, in the way of form 2; null where they have more digits than those may have.
 */
export function unpackTexts(bytes: Buffer): UnpackedSegment | null {
  const { indexes, numbers, decimals, texts } = readTexts(bytes);
  const count = numbers.length;
  // Nine digits with a sign between them are what the style of form 2 can spell.
  if (count > 0 && (decimals > 8 || numbers[0] <= -mostWhole || numbers[count - 1] >= mostWhole)) return null;
  const cells = new Int32Array(indexes.length);
  const cellOf = new Int32Array(count + texts.length);
  for (let index = 0; index < cellOf.length; index++) cellOf[index] = index < count ? numbers[index] : textBase + index - count;
  for (let row = 0; row < cells.length; row++) cells[row] = cellOf[indexes[row]];
  return { rows: cells.length, cells, style: count > 0 ? { least: decimals, most: decimals, sign: 46 } : null, texts };
}

/** What lies in a segment of form 1: its numbers ascending, its other texts, and per row the place of one of them, numbers first. */
function readTexts(bytes: Buffer): {
  indexes: Uint8Array | Uint16Array | Uint32Array;
  numbers: Float64Array;
  decimals: number;
  texts: string[];
} {
  let at = 0;
  const varint = (): number => {
    let value = 0;
    let factor = 1;
    for (;;) {
      const byte = bytes[at++];
      value += (byte & 0x7f) * factor;
      if (byte < 0x80) return value;
      factor *= 0x80;
    }
  };
  if (bytes[at++] !== 1) throw new Error('This segment has a form that is not known here');
  const width = bytes[at++];
  const decimals = bytes[at++];
  const rows = varint();
  const numbers = new Float64Array(varint());
  let value = 0;
  for (let index = 0; index < numbers.length; index++) {
    const step = varint();
    value = index === 0 ? (step % 2 === 1 ? -(step + 1) / 2 : step / 2) : value + step;
    numbers[index] = value;
  }
  const texts: string[] = [];
  const others = varint();
  for (let index = 0; index < others; index++) {
    const length = varint();
    texts.push(bytes.toString('utf8', at, at + length));
    at += length;
  }
  if (width <= 1) {
    const indexes = new Uint8Array(rows);
    if (width === 1) indexes.set(bytes.subarray(at, at + rows));
    return { indexes, numbers, decimals, texts };
  }
  const indexes = width === 2 ? new Uint16Array(rows) : new Uint32Array(rows);
  for (let row = 0; row < rows; row++)
    indexes[row] = width === 2 ? bytes.readUInt16LE(at + row * 2) : bytes.readUInt32LE(at + row * 4);
  return { indexes, numbers, decimals, texts };
}
