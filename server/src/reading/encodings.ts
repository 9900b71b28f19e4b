import { isAscii, isUtf8 } from 'node:buffer';
import type { Encoding } from '@tallystone/contracts/specification/types';
import type { ReadingProblem } from './types';

const LF = 10;
const CR = 13;

/** Bytes to text, never with a replacement character: what does not belong to the encoding is reported with its line. */

/** Files that are not text at all, by their first bytes (the registered signatures of ZIP, OLE, PDF and gzip). */
export function signatureProblem(first: Buffer): ReadingProblem | null {
  const starts = (...bytes: number[]): boolean => bytes.every((byte, index) => first[index] === byte);
  if (starts(0x50, 0x4b, 0x03, 0x04)) {
    const spreadsheet =
      first.includes('[Content_Types].xml') || first.includes('xl/') || first.includes('opendocument.spreadsheet');
    return spreadsheet
      ? { code: 'spreadsheet', message: 'This is an Excel file; export it as CSV.', where: {} }
      : { code: 'archive', message: 'This is a ZIP archive; unpack it and bring in the CSV file inside.', where: {} };
  }
  if (starts(0xd0, 0xcf, 0x11, 0xe0))
    return { code: 'spreadsheet', message: 'This is an Excel file; export it as CSV.', where: {} };
  if (first.subarray(0, 1024).includes('%PDF-'))
    return { code: 'pdf', message: 'This is a PDF file; export the data as CSV.', where: {} };
  if (starts(0x1f, 0x8b)) return { code: 'archive', message: 'This is a gzip archive; unpack it first.', where: {} };
  return null;
}

/** The encoding a byte-order mark states, with the mark's length. */
export function byteOrderMark(first: Buffer): { encoding: Encoding; length: number } | null {
  if (first[0] === 0xef && first[1] === 0xbb && first[2] === 0xbf) return { encoding: 'utf-8', length: 3 };
  if (first[0] === 0xff && first[1] === 0xfe) return { encoding: 'utf-16le', length: 2 };
  if (first[0] === 0xfe && first[1] === 0xff) return { encoding: 'utf-16be', length: 2 };
  return null;
}

export const ENCODING_NAMES: Record<Encoding, string> = {
  'utf-8': 'UTF-8',
  'utf-16le': 'UTF-16 (little-endian)',
  'utf-16be': 'UTF-16 (big-endian)',
  'windows-1252': 'Windows-1252',
};

export interface Decoder {
  /**
   * `line` is the physical line on which the chunk starts; `onFault` gets each line with bytes that do not belong, `onLost` each on which the file itself
   * holds the sign for a lost character (U+FFFD).
   */
  decode(chunk: Buffer, line: number, onFault: (line: number) => void, onLost?: (line: number) => void): string;
  /** What is left over at the end of the file. */
  end(line: number, onFault: (line: number) => void): string;
}

/** A line may end with CR and LF in two chunks: it was counted at the CR, so the LF that begins the next chunk belongs to the line before. */
class FirstLine {
  private returned = false;

  /** @param line that on which the chunk starts for whoever counted the CR */
  of(line: number, first: number | undefined, last: number | undefined): number {
    if (first === undefined) return line;
    const from = this.returned && first === LF ? line - 1 : line;
    this.returned = last === CR;
    return from;
  }
}

export function decoderOf(encoding: Encoding): Decoder {
  if (encoding === 'utf-8') return new Utf8Decoder();
  return encoding === 'windows-1252' ? new Windows1252Decoder() : new Utf16Decoder(encoding === 'utf-16be');
}

const lostBytes = Buffer.from('\ufffd');

/** Whether UTF-8 holds the sign that stands for a character that was lost. */
export const holdsLost = (bytes: Buffer): boolean => bytes.includes(lostBytes);

function lostLines(text: string, sign: string, firstLine: number, onLost: (line: number) => void): void {
  let line = firstLine;
  let from = 0;
  let last = 0;
  for (let at = text.indexOf(sign); at !== -1; at = text.indexOf(sign, at + sign.length)) {
    line += lineEnds(text.slice(from, at), at - from);
    from = at;
    if (line !== last) onLost(line);
    last = line;
  }
}

/** How many bytes of a part of a file, from its beginning, are whole lines; all whole characters of it where no line ends. */
export function wholeLines(bytes: Buffer, encoding: Encoding): number {
  const unit = encoding.startsWith('utf-16') ? 2 : 1;
  const [low, high] = encoding === 'utf-16be' ? [1, 0] : [0, 1];
  const length = bytes.length - (bytes.length % unit);
  for (let at = length - unit; at >= 0; at -= unit) {
    const code = unit === 1 ? bytes[at] : bytes[at + low] | (bytes[at + high] << 8);
    if (code === 10 || code === 13) return at + unit;
  }
  if (encoding === 'utf-8') return completeUtf8(bytes);
  const lead = unit === 2 && length > 0 ? bytes[length - 2 + high] : 0;
  return lead >= 0xd8 && lead <= 0xdb ? length - 2 : length;
}

class Utf8Decoder implements Decoder {
  private rest: Buffer = Buffer.alloc(0);
  private readonly first = new FirstLine();

  decode(chunk: Buffer, startLine: number, onFault: (line: number) => void, onLost?: (line: number) => void): string {
    const bytes = this.rest.length > 0 ? Buffer.concat([this.rest, chunk]) : chunk;
    const cut = completeUtf8(bytes);
    this.rest = Buffer.from(bytes.subarray(cut));
    const whole = cut === bytes.length ? bytes : bytes.subarray(0, cut);
    const line = this.first.of(startLine, whole[0], whole.at(-1));
    if (isAscii(whole)) return whole.toString('latin1');
    if (!isUtf8(whole)) faultyLines(whole, line, onFault);
    if (onLost && holdsLost(whole))
      // Byte by byte: faults are written with the same sign once they are decoded, and a byte of Latin-1 is a character of its own.
      lostLines(whole.toString('latin1'), lostBytes.toString('latin1'), line, onLost);
    return whole.toString('utf8');
  }

  end(line: number, onFault: (line: number) => void): string {
    if (this.rest.length > 0) onFault(line);
    return '';
  }
}

/** The length without a last character whose bytes have not all come. */
function completeUtf8(bytes: Buffer): number {
  const { length } = bytes;
  for (let back = 1; back <= Math.min(3, length); back++) {
    const byte = bytes[length - back];
    if (byte < 0x80) return length;
    if (byte >= 0xc0) {
      const needed = byte >= 0xf0 ? 4 : byte >= 0xe0 ? 3 : 2;
      return needed > back ? length - back : length;
    }
  }
  return length;
}

function faultyLines(bytes: Buffer, firstLine: number, onFault: (line: number) => void): void {
  let line = firstLine;
  let from = 0;
  for (let i = 0; i <= bytes.length; i++) {
    const byte = bytes[i];
    const ends = i === bytes.length || byte === 10 || byte === 13;
    if (!ends) continue;
    if (!isUtf8(bytes.subarray(from, i))) onFault(line);
    if (byte === 13 && bytes[i + 1] === 10) i++;
    from = i + 1;
    line++;
  }
}

/** 0x80 to 0x9F of Windows-1252 (five of them are not assigned). */
const HIGH =
  '\u20ac\ufffd\u201a\u0192\u201e\u2026\u2020\u2021\u02c6\u2030\u0160\u2039\u0152\ufffd\u017d\ufffd' +
  '\ufffd\u2018\u2019\u201c\u201d\u2022\u2013\u2014\u02dc\u2122\u0161\u203a\u0153\ufffd\u017e\u0178';

class Windows1252Decoder implements Decoder {
  private readonly first = new FirstLine();

  decode(chunk: Buffer, startLine: number, onFault: (line: number) => void): string {
    const line = this.first.of(startLine, chunk[0], chunk.at(-1));
    const text = chunk.toString('latin1');
    if (isAscii(chunk)) return text;
    return text.replace(/[\u0080-\u009f]/g, (character: string, place: number) => {
      const replaced = HIGH[character.charCodeAt(0) - 0x80];
      if (replaced === '\ufffd') onFault(line + lineEnds(text, place));
      return replaced;
    });
  }

  end(): string {
    return '';
  }
}

class Utf16Decoder implements Decoder {
  private rest: Buffer = Buffer.alloc(0);
  private readonly first = new FirstLine();

  constructor(private readonly swap: boolean) {}

  decode(chunk: Buffer, startLine: number, onFault: (line: number) => void, onLost?: (line: number) => void): string {
    const bytes = Buffer.concat([this.rest, chunk]);
    let cut = bytes.length - (bytes.length % 2);
    // A leading surrogate waits for its partner.
    const high = cut >= 2 ? bytes[this.swap ? cut - 2 : cut - 1] : 0;
    if (high >= 0xd8 && high <= 0xdb) cut -= 2;
    this.rest = Buffer.from(bytes.subarray(cut));
    const whole = bytes.subarray(0, cut);
    if (this.swap) whole.swap16();
    const text = whole.toString('utf16le');
    const line = text === '' ? startLine : this.first.of(startLine, text.charCodeAt(0), text.charCodeAt(text.length - 1));
    for (const lone of text.matchAll(/\p{Surrogate}/gu)) onFault(line + lineEnds(text, lone.index));
    if (onLost) lostLines(text, '\ufffd', line, onLost);
    return text;
  }

  end(line: number, onFault: (line: number) => void): string {
    if (this.rest.length > 0) onFault(line);
    return '';
  }
}

/** Line ends (LF, CR or both) of a text before this place. */
export function lineEnds(text: string, place: number): number {
  let count = 0;
  for (let i = 0; i < place; i++) {
    const code = text.charCodeAt(i);
    if (code === 10 || (code === 13 && text.charCodeAt(i + 1) !== 10)) count++;
  }
  return count;
}
