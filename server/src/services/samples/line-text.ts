import { isUtf8 } from 'node:buffer';
import type { DoubtfulLine } from '@tallystone/contracts/samples/reading';
import type { Encoding } from '@tallystone/contracts/specification/types';
import { decoderOf } from '../../reading/encodings';

/** Characters of a line that are shown. */
const shownCharacters = 200;

/** Bytes from the beginning of a line that are enough to show it: more than is shown, since marks and escapes take room. */
export const lookedOfLine = 8 * shownCharacters;

/**
 * A line as it stands, without its end, in which whatever is no printable character of the encoding is written as its code.
 *
 * @param bytes from the line's beginning on, as many as `lookedOfLine` or up to the end of the file
 * @example
 * shownLine(Buffer.from('M\xe9laga,1\nBath,0\n', 'latin1'), 'utf-8') // { text: 'M\\xE9laga,1', clipped: false }
 */
export function shownLine(bytes: Buffer, encoding: Encoding): Pick<DoubtfulLine, 'text' | 'clipped'> {
  const text = written(bytes.subarray(0, endOfLine(bytes, encoding)), encoding);
  const clipped = text.length > shownCharacters;
  return { text: clipped ? text.slice(0, shownCharacters) : text, clipped };
}

function endOfLine(bytes: Buffer, encoding: Encoding): number {
  const unit = encoding.startsWith('utf-16') ? 2 : 1;
  const [low, high] = encoding === 'utf-16be' ? [1, 0] : [0, 1];
  for (let at = 0; at + unit <= bytes.length; at += unit) {
    const code = unit === 1 ? bytes[at] : bytes[at + low] | (bytes[at + high] << 8);
    if (code === 10 || code === 13) return at;
  }
  return bytes.length;
}

const decoders: Record<Encoding, (bytes: Buffer) => string> = {
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

function written(bytes: Buffer, encoding: Encoding): string {
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
