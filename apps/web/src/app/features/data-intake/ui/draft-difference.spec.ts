import type { DraftContent } from '@tallystone/contracts/samples/definition';
import { draftDifferences } from './draft-difference';

const before: DraftContent = {
  columns: [
    { column: 'home', kind: 'categorical', role: 'characteristic', protected: false, citation: null, special: [], reason: null },
    { column: 'dpd', kind: 'numeric', role: 'outcome', protected: false, citation: null, special: [], reason: null },
  ],
  outcome: { good: ['0'], bad: ['1'], indeterminate: [], excluded: [] },
  declined: null,
  exclusions: [],
  partition: { by: 'seed', seed: 1, holdOutShare: 0.3, outOfTime: null },
};

describe('what differs between two drafts', () => {
  it('is nothing where they say the same, a key without a value or in another order', () => {
    const [{ column, ...rest }, ...others] = before.columns;
    expect(
      draftDifferences(before, { ...before, columns: [{ ...rest, amounts: undefined, column }, ...others] }, before),
    ).toEqual([]);
  });

  it('is told by column and section, with who changed it, and what both changed first', () => {
    const theirs: DraftContent = {
      ...before,
      exclusions: [
        {
          reason: 'Staff',
          combine: 'any',
          tests: [
            { column: 'home', in: ['STAFF', 'A, B'] },
            { column: 'dpd', below: 0 },
          ],
        },
      ],
      partition: { by: 'seed', seed: 5, holdOutShare: 0.25, outOfTime: { from: '2024-10-01', to: null } },
    };
    const mine: DraftContent = {
      ...before,
      columns: [{ ...before.columns[0], role: 'not used', reason: 'Not known then' }, before.columns[1]],
      declined: { values: ['D'] },
      partition: { by: 'seed', seed: 9, holdOutShare: 0.3, outOfTime: null },
    };
    expect(draftDifferences(before, theirs, mine)).toEqual([
      {
        what: 'Partition',
        theirs: 'hold-out 25.0\u202f% by seed 5, out-of-time from 2024-10-01',
        mine: 'hold-out 30.0\u202f% by seed 9, nothing out-of-time',
        by: 'both',
      },
      { what: 'Exclusions', theirs: '1. Staff: home is one of STAFF, "A, B" or dpd is below 0', mine: 'none', by: 'theirs' },
      { what: 'home: role', theirs: 'characteristic', mine: 'not used', by: 'mine' },
      { what: 'home: reason', theirs: 'none', mine: 'Not known then', by: 'mine' },
      { what: 'Declined', theirs: 'not stated', mine: 'D', by: 'mine' },
    ]);
  });

  it('says an outcome by rule, and cuts long lists of values', () => {
    const rule = { bad: 90, indeterminate: 30, missing: 'excluded' as const, monthsOnBook: { column: 'home', least: 12 } };
    const theirs: DraftContent = { ...before, outcome: { ...before.outcome, rule } };
    const mine: DraftContent = { ...before, outcome: { ...before.outcome, good: [...'abcdefghij'] } };
    expect(draftDifferences(before, theirs, mine)).toEqual([
      {
        what: 'Outcome: rule',
        theirs: 'bad from 90 of dpd, indeterminate from 30, excluded below 12 of home, missing excluded',
        mine: 'by the values of a column',
        by: 'theirs',
      },
      { what: 'Outcome: good', theirs: '0', mine: 'a, b, c, d, e, f, g, h and 2 more', by: 'mine' },
    ]);
  });

  it('says once of a column that only one of them has', () => {
    expect(draftDifferences(before, { ...before, columns: before.columns.slice(1) }, before)).toEqual([
      { what: 'home', theirs: 'no such column', mine: 'characteristic', by: 'theirs' },
    ]);
  });
});
