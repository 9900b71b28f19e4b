import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { SegmentCoder } from '../reading/plain/segment-coder';
import { encodePacked, unpack } from './packedSegment';
import { decodeSegment, inflateSegment } from './segmentCoding';

/** The texts of one column as they come back after they were coded from bytes, stored and read. */
function roundTrip(
  values: readonly string[],
  { sign = '.', batches = 1 } = {},
): { texts: string[]; bytes: number; style: unknown } {
  const form = {
    delimiter: 59,
    trim: false,
    width: 1,
    mostBytes: 1_000_000,
    sign: sign.charCodeAt(0),
    seed: 7,
    mostRows: 65_536,
  };
  const coder = new SegmentCoder(form);
  coder.begin([], []);
  const size = Math.ceil(values.length / batches);
  for (let from = 0; from < values.length; from += size)
    coder.add(
      new Uint8Array(
        Buffer.from(
          values
            .slice(from, from + size)
            .map((text) => `${text}\n`)
            .join(''),
        ),
      ),
    );
  const stored = encodePacked(coder.columns[0]);
  const { codes, texts } = decodeSegment(stored);
  return { texts: Array.from(codes, (code) => texts[code]), bytes: stored.length, style: unpack(inflateSegment(stored)).style };
}

const spelling = fc.oneof(
  fc.integer().map(String),
  fc.integer({ min: -2000, max: 2000 }).map((cents) => (cents / 100).toFixed(2)),
  fc.integer({ min: -2000, max: 2000 }).map((cents) => String(cents / 100)),
  fc.constantFrom(
    '',
    'NA',
    '007',
    '-0',
    '-0.00',
    '0.0',
    '+7',
    '1e3',
    '.5',
    '5.',
    '00',
    '1.2.3',
    '-',
    '999999999',
    '1000000000',
    '12345678.9',
  ),
  fc.double().map(String),
);

describe('a packed segment', () => {
  it('brings every spelling back to the letter, whatever the batches', () => {
    fc.assert(
      fc.property(fc.array(spelling, { minLength: 1, maxLength: 400 }), fc.integer({ min: 1, max: 5 }), (values, batches) => {
        expect(roundTrip(values, { batches }).texts).toEqual(values);
      }),
      { numRuns: 500 },
    );
  });

  it('keeps numbers as numbers in the style that they are written in', () => {
    const cents = Array.from({ length: 5000 }, (_, row) => (row * 7.77 - 900).toFixed(2));
    expect(roundTrip(cents)).toMatchObject({ texts: cents, style: { least: 2, most: 2, sign: 46 } });
    const stripped = Array.from({ length: 5000 }, (_, row) => String(row / 8));
    expect(roundTrip(stripped)).toMatchObject({ texts: stripped, style: { least: 0, most: 3 } });
    const commas = cents.map((text) => text.replace('.', ','));
    expect(roundTrip(commas, { sign: ',' })).toMatchObject({ texts: commas, style: { least: 2, most: 2, sign: 44 } });
    expect(roundTrip(commas).style).toBeNull();
  });

  it('takes little room', () => {
    // By hand: 65,536 amounts of at most 200,000 different values need 18 bits, thus three bytes each before they are deflated.
    const amounts = Array.from({ length: 65_536 }, (_, row) => (((row * 7919) % 200_000) / 100).toFixed(2));
    expect(roundTrip(amounts).bytes).toBeLessThan(3 * 65_536 + 200);
    const flags = Array.from({ length: 65_536 }, (_, row) => (row % 3 === 0 ? '1' : '0'));
    expect(roundTrip(flags).bytes).toBeLessThan(65_536 / 8);
    const hundreds = Array.from({ length: 65_536 }, (_, row) => String(((row * 7919) % 5000) * 100));
    expect(roundTrip(hundreds).bytes).toBeLessThan(2 * 65_536);
    const rows = Array.from({ length: 65_536 }, (_, row) => `SM-${row}`);
    expect(roundTrip(rows).texts).toEqual(rows);
    expect(roundTrip(Array.from({ length: 65_536 }, () => 'same')).bytes).toBeLessThan(64);
  });

  it('is refused when it is cut short or of another form', () => {
    const coder = new SegmentCoder({ delimiter: 44, trim: false, width: 1, mostBytes: 100, sign: 46, seed: 7, mostRows: 10 });
    coder.begin([], []);
    coder.add(new Uint8Array(Buffer.from('1\n2\nx\n')));
    const bytes = inflateSegment(encodePacked(coder.columns[0]));
    expect(() => unpack(bytes.subarray(0, bytes.length - 1))).toThrow('cut short');
    expect(() => unpack(Buffer.from([3, 0, 0]))).toThrow('form');
  });
});
