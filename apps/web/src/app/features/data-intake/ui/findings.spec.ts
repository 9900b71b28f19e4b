import type { DefinitionCounts } from '@tallystone/contracts/samples/definition';
import { describe, expect, it } from 'vitest';
import { badRateOut, countsFinding, plain, samplesFinding, waterfallFinding } from './findings';
import { conditionOf, testWith, valueOf } from './exclusion-test';

const counts: DefinitionCounts = {
  waterfall: [
    { kind: 'source', label: 'Rows of the file', out: 0, outGoods: null, outBads: null, left: 1000 },
    { kind: 'exclusion', label: 'staff loans', out: 20, outGoods: 15, outBads: 5, left: 980 },
    { kind: 'development', label: 'Development', out: 0, outGoods: null, outBads: null, left: 980 },
  ],
  partitions: {
    development: { rows: 980, goods: 900, bads: 80, indeterminates: 0, weight: 980, badRate: 80 / 980 },
    holdOut: { rows: 0, goods: 0, bads: 0, indeterminates: 0, weight: 0, badRate: null },
    outOfTime: { covered: false, rows: 0, goods: 0, bads: 0, indeterminates: 0, weight: 0, badRate: null },
  },
  declined: 0,
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
      ['notIn', 'web'],
      ['below', '21'],
      ['atLeast', '-5.5'],
      ['missing', ''],
      ['not missing', ''],
    ] as const) {
      const test = testWith('column', 'numeric', condition, value);
      expect([conditionOf(test), valueOf(test)]).toEqual([condition, value]);
    }
  });
  it('compares dates as dates and numbers as numbers', () => {
    expect(testWith('applied_on', 'date', 'below', '2025-01-01')).toEqual({ column: 'applied_on', below: '2025-01-01' });
    expect(testWith('age', 'numeric', 'below', '21,5')).toEqual({ column: 'age', below: 21.5 });
  });
});
