import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { SegmentCoder } from '../reading/plain/segment-coder';
import { joinSegments } from './joinSegments';
import { joinStored } from './joinStored';
import { encodePacked } from './packedSegment';
import { decodeSegment, encodeSegment } from './segmentCoding';

function textForm(values: readonly string[]): Uint8Array {
  const texts = [...new Set(values)];
  const places = new Map(texts.map((text, place) => [text, place]));
  return encodeSegment({ texts, codes: Uint32Array.from(values, (text) => places.get(text) ?? 0) });
}

function numberForm(values: readonly string[]): Uint8Array {
  const coder = new SegmentCoder({ delimiter: 59, trim: false, width: 1, mostBytes: 1000, sign: 46, seed: 3, mostRows: 1000 });
  coder.begin([], []);
  coder.add(new Uint8Array(Buffer.from(values.map((text) => `${text}\n`).join(''))));
  return encodePacked(coder.columns[0]);
}

const spelling = fc.oneof(
  { weight: 6, arbitrary: fc.integer({ min: -3, max: 30 }).map(String) },
  { weight: 6, arbitrary: fc.integer({ min: -300, max: 3000 }).map((cents) => (cents / 100).toFixed(2)) },
  fc.integer({ min: -(10 ** 12), max: 10 ** 12 }).map(String),
  fc.constantFrom('', 'NA', '-0', '007', '0.123456789', '0.12345678', '999999999', '1000000000', '-999999999', '1.5', '1.50'),
);
/** A segment of one kind of spelling, as columns are, or of several. */
const segment = fc.oneof(
  fc.array(fc.integer({ min: 0, max: 40 }).map(String), { minLength: 1, maxLength: 80 }),
  fc.array(fc.integer({ min: -900, max: 900 }).map((cents) => (cents / 100).toFixed(2)), { minLength: 1, maxLength: 80 }),
  fc.array(fc.integer({ min: 0, max: 10 ** 9 }).map((whole) => (whole / 1e8).toFixed(8)), { minLength: 1, maxLength: 40 }),
  fc.array(fc.constantFrom('owner', 'tenant', '', '3', '2.50'), { minLength: 1, maxLength: 80 }),
  fc.array(spelling, { minLength: 1, maxLength: 80 }),
); // prettier-ignore

describe('a stored column as a whole', () => {
  it('has the dictionary and the codes that its texts give, whatever the forms of its segments', () => {
    fc.assert(
      fc.property(fc.array(fc.tuple(segment, fc.boolean()), { minLength: 1, maxLength: 6 }), (segments) => {
        const contents = segments.map(([values, packed]) => (packed ? numberForm(values) : textForm(values)));
        const column = joinStored(contents);
        expect(column).toEqual(joinSegments(contents.map(decodeSegment)));
        expect(Array.from(column.codes, (code) => column.texts[code])).toEqual(segments.flatMap(([values]) => values));
      }),
      { numRuns: 1500 },
    );
  });

  it('has them for numbers that lie anywhere, more than a byte or two can tell apart', () => {
    const values = Array.from({ length: 70_000 }, (_, row) => String(((row * 7_919_777) % 999_999_999) - 400_000_000));
    const contents = [0, 1, 2].map((k) => textForm(values.slice(k * 20_000, k * 20_000 + 30_000)));
    expect(joinStored(contents)).toEqual(joinSegments(contents.map(decodeSegment)));
  });
});
