import { KeyedHash } from '../profiling/sha256/keyed-hash';
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

/** The segments of a column with a keyed hash in place of each text, as if they had been read so: the same hashes, to the letter. */
export const hideStored: Task<HidePayload, { rows: number; content: Uint8Array }[]> = ({ contents, missing, key }, control) => {
  const tokens = new Set(['', ...missing]);
  const hash = new KeyedHash(Buffer.from(key));
  return contents.map((content) => {
    if (control.cancelled()) throw new Error('cancelled');
    const bytes = inflateSegment(content);
    const { codes, texts } = bytes[0] === packedForm ? textsOfUnpacked(unpack(bytes)) : decodeTexts(bytes);
    const hidden = packTexts({ codes, texts: texts.map((text) => (tokens.has(text) ? text : hash.of(text))) });
    return { rows: codes.length, content: Uint8Array.from(encodePacked(hidden)) };
  });
};
