import { describe, expect, it } from 'vitest';
import { SegmentCoder } from '../reading/plain/segment-coder';
import { encodePacked } from '../storage/packedSegment';
import { decodeSegment } from '../storage/segmentCoding';
import { hashColumn } from './hash-column';
import { hashText } from './personal';
import { KeyedHash } from './sha256/keyed-hash';

const key = Buffer.alloc(32, 9);
const values = ['SM-1', '', 'SM-2', '17', 'NA', 'SM-1', '4'.repeat(70), 'é@saltmarsh.example', '17', 'not known', '-999'];
const missing = new Set(['', 'NA', '-999', 'not known']);

describe('a column that identifies people', () => {
  // Kept as texts throughout, as it is once it has been judged, or with some as numbers, as in the segment on which it is.
  it.each([true, false])('is kept as keyed hashes, what is missing as it is (as texts: %s)', (asText) => {
    const coder = new SegmentCoder({ delimiter: 59, trim: false, width: 1, mostBytes: 100, sign: 46, seed: 3, mostRows: 2000 });
    coder.begin([], [asText]);
    // Numbers in the majority, so that there is a style of them.
    const all = [...Array.from({ length: 1000 }, (_, row) => String(row)), ...values];
    coder.add(new Uint8Array(Buffer.from(all.map((text) => `${text}\n`).join(''))));
    expect(coder.columns[0].style === null).toBe(asText);
    const { codes, texts } = decodeSegment(encodePacked(hashColumn(coder.columns[0], new KeyedHash(key), missing)));
    expect(Array.from(codes, (code) => texts[code])).toEqual(all.map((text) => (missing.has(text) ? text : hashText(key, text))));
  });
});
