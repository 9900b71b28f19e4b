import { describe, expect, it } from 'vitest';
import { encodeSegment } from '../../storage/segmentCoding';
import { packTexts, encodePacked } from '../../storage/packedSegment';
import { codesFor } from '../../replay/source';
import { NO_MONTH } from '../../replay/row-months';
import { type RowFacts, measureColumn } from './measure';
import { type ColumnReading, MISSING, SPECIAL, UNREADABLE, VALUE, readValues } from './read-column';

const choices: ColumnReading['choices'] = {
  delimiter: ',',
  encoding: 'utf-8',
  decimal: '.',
  thousands: null,
  trim: true,
  missing: ['', 'NA'],
};

function segmentOf(texts: readonly string[]): Buffer {
  const distinct = [...new Set(texts)];
  const codes = codesFor(distinct.length, texts.length);
  texts.forEach((text, row) => (codes[row] = distinct.indexOf(text)));
  return encodeSegment({ codes, texts: distinct });
}

const nothing = (rows: number): RowFacts => ({
  outcome: new Uint8Array(rows).fill(255),
  month: null,
  months: 0,
  baselineMonths: 0,
});

describe('reading a column for the report', () => {
  const texts = ['12', 'NA', '-999', '7.5', '', 'about ten', '-998', '12'];
  const reading: ColumnReading = { needed: 'numbers', choices, special: [[-999], [-998]] };

  it('tells values, missing, special and unreadable apart, over several segments', () => {
    const values = readValues([segmentOf(texts.slice(0, 3)), segmentOf(texts.slice(3))], 8, reading);
    expect([...values.state]).toEqual([VALUE, MISSING, SPECIAL, VALUE, MISSING, UNREADABLE, SPECIAL + 1, VALUE]);
    expect([...(values.numbers ?? [])]).toEqual([12, NaN, NaN, 7.5, NaN, NaN, NaN, 12]);
  });

  it('says the same of a segment that is kept as numbers', () => {
    const numbers = ['-1', '250', '-999', '3', '-1', ''];
    const asTexts = readValues([segmentOf(numbers)], 6, { ...reading, choices: { ...choices, missing: ['', '-1'] } });
    const cells = Int32Array.from([-1, 250, -999, 3, -1, -0x8000_0000]);
    const one = packTexts({ codes: Uint8Array.of(0), texts: [''] });
    const packed = encodePacked({ rows: 6, cells, style: { least: 0, most: 0, sign: 46 }, texts: one.texts });
    const asNumbers = readValues([packed], 6, { ...reading, choices: { ...choices, missing: ['', '-1'] } });
    expect([...asNumbers.state]).toEqual([...asTexts.state]);
    expect([...(asNumbers.numbers ?? [])]).toEqual([...(asTexts.numbers ?? [])]);
    expect([...asNumbers.state]).toEqual([MISSING, VALUE, SPECIAL, VALUE, MISSING, MISSING]);
  });

  it('refuses a column that is not whole', () => {
    expect(() => readValues([segmentOf(texts)], 9, reading)).toThrow('8 of 9 rows');
  });
});

describe('measuring a column', () => {
  const numeric = (values: readonly number[]) => ({
    state: new Uint8Array(values.length),
    numbers: Float64Array.from(values),
    codes: null,
    texts: [],
  });

  it('takes quantiles of type 7 and the outer fences, as worked by hand', () => {
    // 1 to 9 and 100: quartiles at 3.25 and 7.75, range 4.5, fences at -10.25 and 21.25.
    const { outliers, furthest, quantiles } = measureColumn(numeric([1, 2, 3, 4, 5, 6, 7, 8, 9, 100]), nothing(10), []);
    expect(outliers).toEqual({ below: 0, above: 1, lower: -10.25, upper: 21.25 });
    expect(furthest).toEqual({ value: 100, ranges: (100 - 7.75) / 4.5 });
    expect(quantiles?.find(({ share }) => share === 0.5)?.value).toBe(5.5);
  });

  it('has no fences where half of the values are one', () => {
    expect(measureColumn(numeric([0, 0, 0, 0, 0, 0, 5]), nothing(7), []).outliers).toBeNull();
  });

  it('groups a few numbers by value and many by tenths of the first months, and counts outcomes and months in them', () => {
    const few = measureColumn(numeric([0, 1, 1, 2]), { ...nothing(4), outcome: Uint8Array.of(1, 0, 1, 255) }, []);
    expect(few.groups).toEqual([
      { label: '0', kind: 'values', rows: 1, goods: 1, bads: 0, unknown: 0 },
      { label: '1', kind: 'values', rows: 2, goods: 1, bads: 1, unknown: 0 },
      { label: '2', kind: 'values', rows: 1, goods: 0, bads: 0, unknown: 1 },
    ]);
    const values = Array.from({ length: 200 }, (_, row) => row);
    const month = Uint16Array.from(values, (row) => (row < 100 ? 0 : row === 199 ? NO_MONTH : 1));
    const many = measureColumn(numeric(values), { ...nothing(200), month, months: 2, baselineMonths: 1 }, []);
    expect(many.groups.map(({ label }) => label)).toEqual([
      'under 10', '10 to under 20', '20 to under 30', '30 to under 40', '40 to under 50', '50 to under 60', '60 to under 70',
      '70 to under 80', '80 to under 90', '90 and over',
    ]); // prettier-ignore
    expect(many.months).toEqual([Array<number>(10).fill(10), [0, 0, 0, 0, 0, 0, 0, 0, 0, 99]]);
    expect(many.groups[9].rows).toBe(110);
  });

  it('keeps the most frequent texts apart and the others together', () => {
    const texts = Array.from({ length: 25 }, (_, k) => `t${String(k).padStart(2, '0')}`);
    const codes = Uint32Array.from([...texts.keys(), ...texts.keys(), 24, 24]);
    const { groups } = measureColumn({ state: new Uint8Array(52), numbers: null, codes, texts }, nothing(52), []);
    expect(groups).toHaveLength(20);
    expect(groups[0]).toMatchObject({ label: 't24', rows: 4 });
    expect(groups[19]).toMatchObject({ label: 'all others', kind: 'other', rows: 12 });
  });
});
