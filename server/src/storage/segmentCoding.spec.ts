import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { decodeSegment, encodeSegment, type TextSegment } from './segmentCoding';

function segmentOf(values: readonly string[]): TextSegment {
  const places = new Map<string, number>();
  const codes = new Uint32Array(values.length);
  values.forEach((text, row) => {
    if (!places.has(text)) places.set(text, places.size);
    codes[row] = places.get(text) ?? 0;
  });
  return { codes, texts: [...places.keys()] };
}
const valuesOf = ({ codes, texts }: TextSegment): string[] => Array.from(codes, (code) => texts[code]);
const roundTrip = (values: readonly string[]): string[] => valuesOf(decodeSegment(encodeSegment(segmentOf(values))));

describe('a segment of a column', () => {
  it('brings every text back to the letter', () => {
    fc.assert(
      fc.property(
        fc.array(fc.oneof(fc.string({ unit: 'binary' }), fc.integer().map(String), fc.double().map(String)), { maxLength: 300 }),
        (values) => {
          // A file in any encoding holds whole characters only, never half a surrogate pair.
          const kept = values.map((text) => Buffer.from(text, 'utf8').toString('utf8'));
          expect(roundTrip(kept)).toEqual(kept);
        },
      ),
      { numRuns: 500 },
    );
  });

  it('keeps spellings that a number would lose', () => {
    const values = [
      '007',
      '7',
      '7.0',
      '7.00',
      '-0',
      '-0.00',
      '0',
      '+7',
      '1e3',
      '',
      ' 7',
      '-1.05',
      '-999',
      '90071992547409930',
      '0.1',
      '00',
      '.5',
      '5.',
    ];
    const many = [...values, ...Array.from({ length: 40 }, (_, k) => (k / 4 - 3).toFixed(2))];
    expect(roundTrip(many)).toEqual(many);
  });

  it('holds columns of many distinct amounts in little room', () => {
    const amounts = Array.from({ length: 65_536 }, (_, row) => (1000 + ((row * 7919) % 65_536) / 100).toFixed(2));
    const encoded = encodeSegment(segmentOf(amounts));
    expect(valuesOf(decodeSegment(encoded))).toEqual(amounts);
    expect(encoded.length).toBeLessThan(amounts.join('\n').length / 2);
  });

  it('holds a constant column in next to nothing', () => {
    expect(encodeSegment(segmentOf(Array.from({ length: 65_536 }, () => 'same'))).length).toBeLessThan(64);
  });

  it('refuses bytes of another form', () => {
    const encoded = encodeSegment(segmentOf(['a']));
    expect(() => decodeSegment(encoded.subarray(0, encoded.length - 3))).toThrow();
  });
});
