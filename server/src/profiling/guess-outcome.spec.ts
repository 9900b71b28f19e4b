import type { ColumnProfile } from '@tallystone/contracts/samples/columns';
import { describe, expect, it } from 'vitest';
import { proposeOutcome } from './guess-outcome';

const proposed = (column: string, ...values: string[]) =>
  proposeOutcome({ column, mostFrequent: values.map((value) => ({ value, count: 10 })) } as unknown as ColumnProfile);

describe('the first mapping of an outcome', () => {
  it('takes 1 for what the heading says', () => {
    for (const column of ['bad', 'is_bad', 'default_12m', 'Bad flag', 'target'])
      expect(proposed(column, '0', '1'), column).toMatchObject({ good: ['0'], bad: ['1'] });
    expect(proposed('good', '0', '1')).toMatchObject({ good: ['1'], bad: ['0'] });
  });
  it('leaves 1 and 0 to the person where the heading denies, or says nothing', () => {
    for (const column of ['non_default', 'not bad', 'no-default', 'never_defaulted', 'is_non_default', 'repaid', 'outcome'])
      expect(proposed(column, '0', '1'), column).toEqual({ good: [], bad: [], indeterminate: [], excluded: [] });
  });
  it('takes values that are words for what they say, whatever the heading', () => {
    expect(proposed('non_default', 'good', 'bad', 'ind')).toEqual({ good: ['good'], bad: ['bad'], indeterminate: ['ind'], excluded: [] });
  });
});
