import type { ColumnTest, DefinitionCounts } from '@tallystone/contracts/samples/definition';
import { describe, expect, it } from 'vitest';
import { badRateLeft, badRateOut, countsFinding, plain, ruleParts, samplesFinding, sensitivityFinding, waterfallFinding } from './findings';
import { readListed, writeListed } from './listed-values';
import { conditionOf, testWith, valueOf } from './exclusion-test';

const counts: DefinitionCounts = {
  waterfall: [
    { kind: 'source', label: 'Rows of the file', out: 0, outGoods: null, outBads: null, left: 1000, leftGoods: 800, leftBads: 150 },
    { kind: 'exclusion', label: 'staff loans', out: 20, outGoods: 15, outBads: 5, left: 980, leftGoods: 785, leftBads: 145 },
    { kind: 'development', label: 'Development', out: 0, outGoods: null, outBads: null, left: 980 },
  ],
  partitions: {
    development: { rows: 980, goods: 900, bads: 80, indeterminates: 0, weight: 980, badRate: 80 / 980 },
    holdOut: { rows: 0, goods: 0, bads: 0, indeterminates: 0, weight: 0, badRate: null },
    outOfTime: { covered: false, rows: 0, goods: 0, bads: 0, indeterminates: 0, weight: 0, badRate: null },
  },
  declined: 0,
  byRule: null,
  sensitivity: [],
};

describe('findings of the sample pages', () => {
  it('say what is left and how much of it is bad', () => {
    expect(countsFinding(counts)).toBe('980 of 1\u202f000 rows are development, 80 of them bad (8.2\u202f%).');
  });
  it('name the step that takes out most', () => {
    expect(waterfallFinding(counts)).toBe('20 rows take no part, most by “staff loans” (20).');
    expect(waterfallFinding({ ...counts, waterfall: [counts.waterfall[0]] })).toBe(
      'No row is left out: every row is in one of the partitions.',
    );
  });
  it('give a bad rate only where there is an outcome', () => {
    expect(badRateOut(counts.waterfall[1])).toBe(0.25);
    expect(badRateOut(counts.waterfall[0])).toBeNull();
    expect(badRateLeft(counts.waterfall[1])).toBe(145 / 930);
    expect(badRateLeft(counts.waterfall[2])).toBeNull();
  });
  it('write amounts without empty digits', () => {
    expect([0.5, 95, 1250, -999, 4.1, 12345.678, 0].map(plain)).toEqual([
      '0.5',
      '95',
      '1\u202f250',
      '\u2212999',
      '4.1',
      '12\u202f346',
      '0',
    ]);
  });
  it('say what the indeterminates can make of the bad rate', () => {
    const holdOut = { goods: 0, bads: 0, badRate: null };
    const cases: DefinitionCounts['sensitivity'] = [
      { indeterminates: 'as they are', development: { goods: 90, bads: 10, badRate: 0.1 }, holdOut },
      { indeterminates: 'as good', development: { goods: 115, bads: 10, badRate: 0.08 }, holdOut },
      { indeterminates: 'as bad', development: { goods: 90, bads: 35, badRate: 0.28 }, holdOut },
    ];
    const development = { ...counts.partitions.development, rows: 125, goods: 90, bads: 10, indeterminates: 25 };
    expect(sensitivityFinding({ ...counts, partitions: { ...counts.partitions, development }, sensitivity: cases })).toBe(
      'The bad rate of development is 10.0\u202f%; it would be 8.0\u202f% with every indeterminate good and 28.0\u202f% with every one bad (25 rows, 20.0\u202f% of development).',
    );
  });
  it('list the parts of an outcome by rule in the order they are asked', () => {
    const rule = { bad: 90, indeterminate: 30, missing: 'excluded', monthsOnBook: { column: 'months', least: 12 } } as const;
    const given = { tooFewMonths: 4, missing: 1, bads: 10, indeterminates: 5, goods: 80, badRate: 10 / 90 };
    expect(ruleParts(rule, 'dpd', given).map(({ label, means, rows }) => `${label}: ${means} ${rows}`)).toEqual([
      'Excluded: months below 12 4',
      'Excluded: missing 1',
      'Bad: dpd of 90 or more 10',
      'Indeterminate: dpd from 30 to below 90 5',
      'Good: dpd below 30 80',
    ]);
    const short = ruleParts({ bad: 60, indeterminate: null, missing: 'refuse', monthsOnBook: null }, 'dpd', null);
    expect(short.map(({ means, rows }) => [means, rows])).toEqual([
      ['dpd of 60 or more', null],
      ['dpd below 60', null],
    ]);
  });
  it('begin with what is to be done', () => {
    expect(samplesFinding({ samples: [], uploads: [], abilities: ['add'] })).toBe(
      'A CSV of past applicants with their outcome starts the work.',
    );
  });
});

describe('a test of an exclusion', () => {
  it('comes back as it was written', () => {
    for (const [condition, value] of [
      ['in', 'staff, trial'],
      ['in', '"staff, and their kin", " "'],
      ['notIn', 'web'],
      ['below', '21'],
      ['atLeast', '-5.5'],
      ['missing', ''],
      ['not missing', ''],
    ] as const) {
      const test = testWith('column', 'numeric', condition, value) as ColumnTest;
      expect([conditionOf(test), valueOf(test)]).toEqual([condition, value]);
    }
  });
  it('compares dates as dates and numbers as numbers', () => {
    expect(testWith('applied_on', 'date', 'below', '2025-01-01')).toEqual({ column: 'applied_on', below: '2025-01-01' });
    expect(testWith('age', 'numeric', 'below', '21,5')).toEqual({ column: 'age', below: 21.5 });
    expect(testWith('age', 'numeric', 'below', '\u22121234.5')).toEqual({ column: 'age', below: -1234.5 });
    expect(testWith('age', 'numeric', 'below', '0')).toEqual({ column: 'age', below: 0 });
  });
  it('takes nothing for a number that is none or could be two', () => {
    for (const typed of ['', '1 000', '1.234,5', '1,234', '0x10', '1e3', '01/02/2024', 'abc', '1\u202f000'])
      expect(testWith('age', 'numeric', 'below', typed), typed).toEqual({
        message: 'Type a number without thousands signs, such as 1000 or 1234.5.',
      });
    for (const typed of ['', '01/02/2024', '2024-02-30', '2024'])
      expect(testWith('applied_on', 'date', 'below', typed), typed).toEqual({ message: 'Type a day as 2024-12-31.' });
    expect(testWith('home', 'categorical', 'in', '"a, b')).toEqual({
      message: 'A quote is not closed. Write it as "a, b", "c".',
    });
  });
});

describe('values in one field', () => {
  it('stand in quotes where a comma or a blank belongs to one of them', () => {
    expect(readListed('NA, "a, b", " ", "say ""no""", NA,')).toEqual(['NA', 'a, b', ' ', 'say "no"']);
    for (const values of [['NA', 'a, b', ' '], ['say "no"'], ['', 'x'], []])
      expect(readListed(writeListed(values))).toEqual(values);
    for (const text of ['"a', 'x, "a" b', '"a"b']) expect(readListed(text), text).toBeNull();
  });
});
