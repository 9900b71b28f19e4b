import { describe, expect, it } from 'vitest';
import { AGE, INCOME, specificationOf } from '../../replay/invented-sample';
import { reconciled } from './gates';
import { specialsMapped } from './special-codes';

describe('special codes are mapped', () => {
  const special = [{ label: 'no record', values: [-999] }];

  it('where every stated code of a characteristic has a bin', () => {
    expect(specialsMapped(specificationOf(), [{ column: 'age', special }])).toEqual({
      holds: true,
      detail: 'Each has a bin: age: no record.',
    });
    expect(specialsMapped(specificationOf(), [])).toEqual({ holds: true, detail: 'The sample states no special codes.' });
    // A column that is no characteristic may have codes of its own.
    expect(specialsMapped(specificationOf(), [{ column: 'branch', special }]).holds).toBe(true);
  });

  it('and not where one is missing, which is named', () => {
    const found = specialsMapped(specificationOf({ characteristics: [AGE, INCOME] }), [
      { column: 'age', special: [{ label: 'no record', values: [-999, -998] }] },
      { column: 'income', special: [{ label: 'not asked', values: [0] }] },
    ]);
    expect(found).toEqual({
      holds: false,
      detail: 'Stated and without a bin: age: no record (-998); income: not asked (0). Class these characteristics anew.',
    });
  });
});

describe('exclusions reconcile', () => {
  const counts = (rows: number): Parameters<typeof reconciled>[0] =>
    ({
      counts: {
        excluded: [
          { reason: 'Staff', rows: 3 },
          { reason: 'Test entries', rows: 2 },
        ],
        declined: 10,
        development: { rows: rows - 30 },
        holdOut: { rows: 20 },
        outOfTime: { rows: 10 },
      },
    }) as unknown as Parameters<typeof reconciled>[0];

  it('where every row of the file is somewhere, once', () => {
    expect(reconciled(counts(100), 115)).toEqual({
      holds: true,
      detail: '5 excluded + 10 declined + 100 in the partitions = 115 of 115 rows.',
    });
  });

  it('and not where rows are left over or counted twice', () => {
    expect(reconciled(counts(100), 118)).toMatchObject({
      holds: false,
      detail: expect.stringContaining('3 rows are not accounted for') as string,
    });
    expect(reconciled(counts(100), 114)).toMatchObject({
      holds: false,
      detail: expect.stringContaining('1 rows are not accounted for') as string,
    });
  });
});
