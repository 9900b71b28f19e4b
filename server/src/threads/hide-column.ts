import { KeyedHash } from '../profiling/sha256/keyed-hash';
import { Writings, writingsOfTexts } from '../profiling/writings';
import { encodePacked, packTexts, packedForm, textsOfUnpacked, unpack } from '../storage/packedSegment';
import { decodeTexts, inflateSegment } from '../storage/segmentCoding';
import type { Task } from './task';

export interface HidePayload {
  /** The segments of the column as they are stored, in clear. */
  readonly contents: readonly Uint8Array[];
  /** Texts that stand for missing, beside the empty one: they stay as they are. */
  readonly missing: readonly string[];
  /** Key of the hashes. */
  readonly key: Uint8Array;
}

export interface HideAnswer {
  readonly contents: readonly { readonly rows: number; readonly content: Uint8Array }[];
  /** How many different identifiers there are when it does not count how they are written. */
  readonly writings: number;
}

/** The segments of a column with a keyed hash in place of each text, as if they had been read so: the same hashes, to the letter. */
export const hideStored: Task<HidePayload, HideAnswer> = ({ contents, missing, key }, control) => {
  const tokens = new Set(['', ...missing]);
  const hash = new KeyedHash(Buffer.from(key));
  const writings = new Writings();
  const hidden = contents.map((content) => {
    if (control.cancelled()) throw new Error('cancelled');
    const bytes = inflateSegment(content);
    const { codes, texts } = bytes[0] === packedForm ? textsOfUnpacked(unpack(bytes)) : decodeTexts(bytes);
    writings.add(writingsOfTexts(texts, (text) => tokens.has(text)));
    const hashed = packTexts({ codes, texts: texts.map((text) => (tokens.has(text) ? text : hash.of(text))) });
    return { rows: codes.length, content: Uint8Array.from(encodePacked(hashed)) };
  });
  return { contents: hidden, writings: writings.distinct() };
};
