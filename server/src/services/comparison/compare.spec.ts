import { describe, expect, it } from 'vitest';
import { comparedCharacteristics } from './compare';

type Side = Parameters<typeof comparedCharacteristics>[0][number];

const bins = [{ woe: -0.8 }, { woe: 0.1 }, { woe: 0.9 }];
const scaling = { baseScore: 600, baseOdds: 30, pointsToDouble: 20, spreadBase: true };

/** One fit: coefficient by column, and where its columns are cut. */
function side(coefficients: Record<string, number>, edges: number[] = [10, 20]): Side {
  const columns = Object.keys(coefficients);
  return {
    specification: {
      characteristics: columns.map((column) => ({
        column,
        kind: 'numeric',
        coding: 'woe',
        edges,
        closed: 'left',
        special: [],
        missing: 'bin',
      })),
    },
    path: {
      characteristics: columns.map((column) => ({ column, label: column.toUpperCase(), bins })),
      coefficients: [Object.values(coefficients)],
      intercepts: [2],
      scaling,
    },
    index: 0,
  } as unknown as Side;
}

describe('characteristics of fits side by side', () => {
  it('marks a sign that flips between fits that keep it, and only that', () => {
    const found = comparedCharacteristics([
      side({ income: 0.7, age: 0.4, term: 0, purpose: -0.2 }),
      side({ income: -0.1, age: 0, term: 0, purpose: -0.6 }),
    ]);
    expect(Object.fromEntries(found.map(({ column, signFlip }) => [column, signFlip]))).toEqual({
      income: true,
      age: false,
      term: false,
      purpose: false,
    });
  });

  it('tells shrunk to zero from not part of the fit, in the order of the first that has it', () => {
    const found = comparedCharacteristics([side({ income: 0.7 }), side({ age: 0.4, income: 0 }), side({ age: -0.4 })]);
    expect(found.map(({ column, label, coefficients, signFlip }) => ({ column, label, coefficients, signFlip }))).toEqual([
      { column: 'income', label: 'INCOME', coefficients: [0.7, 0, null], signFlip: false },
      { column: 'age', label: 'AGE', coefficients: [null, 0.4, -0.4], signFlip: true },
    ]);
  });

  it('gives points over the bins where it is kept: the coefficient times the range of WOE times the factor', () => {
    const [income] = comparedCharacteristics([side({ income: 0.7 }), side({ income: 0 })]);
    // 0.7 x 1.7 x 20 / ln 2 = 34.3, each end rounded.
    expect(income.pointsRange[0]).toBeGreaterThanOrEqual(33);
    expect(income.pointsRange[0]).toBeLessThanOrEqual(35);
    expect(income.pointsRange[1]).toBeNull();
  });

  it('says where bins differ, so that coefficients are not of the same WOE', () => {
    const [income] = comparedCharacteristics([side({ income: 0.7 }), side({ income: 0.6 }, [10, 25])]);
    expect(income.binsDiffer).toBe(true);
    const [same] = comparedCharacteristics([side({ income: 0.7 }), side({ income: 0.6 })]);
    expect(same.binsDiffer).toBe(false);
  });
});
