import type { ColumnProfile } from '@tallystone/contracts/samples/columns';
import type { ReadingChoices } from '@tallystone/contracts/samples/reading';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { suspectLeakage } from '../profiling/leakage';
import { profileNumbers } from '../profiling/number-column';
import { type Personal, hashText } from '../profiling/personal';
import { profileColumn } from '../profiling/profile-column';
import { numberReader } from '../reading/index';
import { SegmentCoder } from '../reading/plain/segment-coder';
import { joinSegments } from '../storage/joinSegments';
import { encodePacked, packTexts, unpack } from '../storage/packedSegment';
import { decodeSegment, encodeSegment, inflateSegment } from '../storage/segmentCoding';
import { profileStored } from './profile-stored';
import type { TaskControl } from './task';

/** A profile made from packed numbers is the one that the texts give: `profileColumn` and `suspectLeakage` are the judges. */

const choices: ReadingChoices = {
  delimiter: ';',
  encoding: 'utf-8',
  decimal: '.',
  thousands: null,
  trim: false,
  missing: ['', 'NA', '-999'],
};
const control: TaskControl = { cancelled: () => false, progress: () => undefined, transfer: () => undefined };

function stored(values: readonly string[], segmentRows: number, sign = '.'): Uint8Array[] {
  const form = {
    delimiter: 59,
    trim: false,
    width: 1,
    mostBytes: 1000,
    sign: sign.charCodeAt(0),
    seed: 3,
    mostRows: segmentRows,
  };
  const coder = new SegmentCoder(form);
  const contents: Uint8Array[] = [];
  for (let from = 0; from < values.length; from += segmentRows) {
    coder.begin(contents.length === 0 ? [] : [coder.columns[0].style], []);
    coder.add(new Uint8Array(Buffer.from(values.slice(from, from + segmentRows).map((text) => `${text}\n`).join(''))));
    contents.push(encodePacked(coder.columns[0]));
  } // prettier-ignore
  return contents;
}

function byTexts(name: string, contents: readonly Uint8Array[], outcome: Uint8Array | null, chosen = choices): ColumnProfile {
  const column = joinSegments(contents.map(decodeSegment));
  const profile = profileColumn(name, 0, column, chosen, null);
  if (outcome === null || profile.suggestedRole !== 'characteristic') return profile;
  const missing = new Set(['', ...chosen.missing]);
  const reader = profile.kind === 'numeric' ? numberReader(chosen) : null;
  const flag = suspectLeakage(column, (text) => missing.has(text), outcome, reader);
  if (flag) profile.flags.push(flag);
  return profile;
}

const number = fc.oneof(
  { weight: 4, arbitrary: fc.integer({ min: -20, max: 60 }).map(String) },
  { weight: 4, arbitrary: fc.integer({ min: 0, max: 99_999_999 }).map(String) },
);
const columns = fc
  .record({
    decimals: fc.integer({ min: 0, max: 3 }),
    stripped: fc.boolean(),
    values: fc.array(number, { minLength: 1, maxLength: 300 }),
    odd: fc.array(fc.constantFrom('', 'NA', '-999', '-999', '9999', 'x', '1e3', '+5', 'Inf', '007', '0x1', ' '), {
      maxLength: 12,
    }),
    every: fc.integer({ min: 2, max: 40 }),
  })
  .map(({ decimals, stripped, values, odd, every }) =>
    values.map((text, row) => {
      if (odd.length > 0 && row % every === 0) return odd[row % odd.length];
      const value = Number(text) / 10 ** decimals;
      return stripped ? String(value) : value.toFixed(decimals);
    }),
  );

describe('the profile of a stored column', () => {
  it('is that of its texts, leakage included, whatever the segments', () => {
    let quick = 0;
    fc.assert(
      fc.property(columns, fc.integer({ min: 3, max: 120 }), fc.boolean(), fc.constantFrom('c', 'weight', 'age'), (values, segmentRows, known, name) => {
        const contents = stored(values, segmentRows);
        const outcome = known ? Uint8Array.from(values, (text, row) => (text.includes('1') ? 0 : row % 7 === 3 ? 255 : 1)) : null;
        const expected = byTexts(name, contents, outcome);
        const found = profileNumbers(name, 0, contents.map((content) => unpack(inflateSegment(content))), choices, outcome);
        if (found) {
          quick++;
          expect(found).toEqual(expected);
        }
        expect(profileStored({ name, position: 0, contents, choices, personal: null, writings: null, outcome }, control)).toEqual(expected);
      }),
      // Two missing tokens of one count, of which one is a number.
      { numRuns: 1000, examples: [[['', '0', '0', '0', '0', '-999'], 3, false, 'c']] },
    ); // prettier-ignore
    expect(quick).toBeGreaterThan(300);
  });

  it('asks alike about a decimal sign that may part thousands', () => {
    const thousandths = fc.integer({ min: 1000, max: 999_999 }).map((value) => (value / 1000).toFixed(3));
    const small = fc.integer({ min: -999, max: 999 }).map(String);
    const odd = fc.constantFrom('', 'NA', '-999', 'x', '1500', '0.123', '2.5', '+1.234', '007', '9999');
    const cases = fc.array(fc.oneof({ weight: 30, arbitrary: thousandths }, { weight: 10, arbitrary: small }, { weight: 3, arbitrary: odd }), { minLength: 5, maxLength: 40 });
    let asked = 0;
    let quick = 0;
    fc.assert(
      fc.property(cases, fc.integer({ min: 3, max: 60 }), (values, segmentRows) => {
        const contents = stored(values, segmentRows);
        const expected = byTexts('c', contents, null);
        const found = profileNumbers('c', 0, contents.map((content) => unpack(inflateSegment(content))), choices, null);
        if (found) {
          quick++;
          expect(found).toEqual(expected);
          if (found.flags.some(({ code }) => code === 'ambiguous-numbers')) asked++;
        }
      }),
      { numRuns: 500 },
    );
    expect(asked).toBeGreaterThan(50);
    expect(quick - asked).toBeGreaterThan(50);
  }); // prettier-ignore

  it('is the same where numbers lie far apart, and with a comma', () => {
    const amounts = Array.from({ length: 5000 }, (_, row) => (((row * 7_919_777) % 900_000_000) / 100).toFixed(2));
    expect(profileNumbers('c', 0, stored(amounts, 900).map((content) => unpack(inflateSegment(content))), choices, null)).toEqual(
      byTexts('c', stored(amounts, 900), null),
    );
    const commas = amounts.map((text) => text.replace('.', ','));
    const chosen = { ...choices, decimal: ',' as const, thousands: '.' as const };
    const contents = stored(commas, 900, ',');
    const found = profileNumbers('c', 0, contents.map((content) => unpack(inflateSegment(content))), chosen, null);
    expect(found).toEqual(byTexts('c', contents, null, chosen));
    // Under another decimal sign these are texts.
    expect(profileStored({ name: 'c', position: 0, contents, choices, personal: null, writings: null, outcome: null }, control)).toMatchObject({ kind: 'categorical' });
  }); // prettier-ignore

  it('counts hashes without a dictionary of them', () => {
    const key = Buffer.alloc(32, 5);
    const personal: Personal = { kind: 'identifier', finding: 'Made for a test.' };
    const values = Array.from({ length: 130_000 }, (_, row) => (row % 50 === 0 ? '' : hashText(key, String(row % 120_000))));
    const segments: Uint8Array[] = [];
    for (let from = 0; from < values.length; from += 65_536) {
      const texts = [...new Set(values.slice(from, from + 65_536))];
      const places = new Map(texts.map((text, place) => [text, place]));
      segments.push(encodePacked(packTexts({ texts, codes: values.slice(from, from + 65_536).map((text) => places.get(text) ?? 0) })));
    } // prettier-ignore
    const found = profileStored({ name: 'id', position: 0, contents: segments, choices, personal, writings: null, outcome: null }, control);
    expect(found).toEqual(profileColumn('id', 0, joinSegments(segments.map(decodeSegment)), choices, personal));
    expect(found).toMatchObject({ distinct: 117_600, missing: 2600 });
  });

  it('reads segments of the older form', () => {
    const texts = ['1', '2', '', '3.50'];
    const contents = [encodeSegment({ texts, codes: Uint8Array.from([0, 1, 2, 3, 3]) })];
    const found = profileStored({ name: 'c', position: 0, contents, choices, personal: null, writings: null, outcome: null }, control);
    expect(found).toMatchObject({ kind: 'numeric', rows: 5, distinct: 3, missing: 1 });
  });
});
