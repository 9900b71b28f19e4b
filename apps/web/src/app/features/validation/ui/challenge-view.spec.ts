import type { Challenge } from '@tallystone/contracts/validation/schema';
import { challengeFinding, challengeRows, foreignNote } from './challenge-view';

const challenge: Challenge = {
  varianceInflation: [
    { column: 'age', value: 1.24 },
    { column: 'home', value: 1.1 },
  ],
  conditionIndex: 1.62,
  foreign: {
    rows: 4000,
    of: 12000,
    intercept: { own: 1.5, foreign: 1.5002 },
    coefficients: [
      { column: 'age', own: 0.9, foreign: 0.9001 },
      { column: 'home', own: 0.8, foreign: 0.8 },
    ],
    largestDifference: 0.0002,
  },
};

describe('the challenger beside an independent replication', () => {
  it('puts both fits beside the inflation of each characteristic', () => {
    expect(challengeRows(challenge).map(({ column, inflation, own }) => [column, inflation, own])).toEqual([
      ['Intercept', null, 1.5],
      ['age', 1.24, 0.9],
      ['home', 1.1, 0.8],
    ]);
    expect(challengeFinding(challenge)).toBe(
      'No characteristic kept is nearly collinear: the largest VIF is 1.24 (age), the condition index 1.6. A foreign library finds the same unpenalised fit, to 0.0002.',
    );
    expect(foreignNote(challenge)).toContain('4\u202F000 of 12\u202F000');
  });

  it('flags inflation, names exact collinearity, and says why there is no foreign fit', () => {
    const without = { ...challenge, foreign: { unavailable: 'The foreign library takes no weights.' } };
    const flagged = { ...without, varianceInflation: [{ column: 'age', value: 7.31 }] };
    expect(challengeFinding(flagged)).toContain('Flagged for collinearity: age (VIF 7.3)');
    expect(challengeFinding(flagged)).toContain('takes no weights');
    const collinear = {
      ...without,
      varianceInflation: [
        { column: 'age', value: null },
        { column: 'years', value: null },
      ],
    };
    expect(challengeFinding(collinear)).toMatch(/^age, years are exactly collinear\./);
    expect(challengeRows(collinear)[0]).toMatchObject({ column: 'age', collinear: true, own: null });
    expect(challengeFinding({ ...without, varianceInflation: [] })).toContain('Nothing is kept');
  });
});
