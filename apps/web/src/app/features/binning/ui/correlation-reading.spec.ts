import { changedWords, correlationFinding, readCorrelations } from './correlation-reading';

const one = (column: string, informationValue: number, inflation: number | null = 1) => ({
  id: column,
  column,
  informationValue,
  inflation,
  collinear: inflation === null,
});
const characteristics = [one('age', 0.1), one('utilisation', 0.4, 6.2), one('balance', 0.3, 6), one('home', 0.05)];
const matrix = [
  [1, 0.1, -0.2, 0.3],
  [0.1, 1, -0.85, 0.05],
  [-0.2, -0.85, 1, 0],
  [0.3, 0.05, 0, 1],
];

describe('correlations', () => {
  it('group what correlates in either direction, and name the strongest of a group', () => {
    const { groups, standings, pairs, order } = readCorrelations({ characteristics, matrix }, 0.7);
    expect(groups).toEqual([[1, 2]]);
    expect(standings.map(({ group }) => group)).toEqual([null, 1, 1, null]);
    expect(standings.map(({ strongest }) => strongest)).toEqual([false, true, false, false]);
    expect(standings[1]).toMatchObject({ nearest: 'balance', nearestCorrelation: -0.85 });
    expect(pairs[0]).toMatchObject({ first: 'utilisation', second: 'balance', flagged: true });
    expect(pairs.filter(({ flagged }) => flagged)).toHaveLength(1);
    expect([...order].sort()).toEqual([0, 1, 2, 3]);
    expect(Math.abs(order.indexOf(1) - order.indexOf(2))).toBe(1);
  });

  it('say so in one sentence', () => {
    const reading = readCorrelations({ characteristics, matrix }, 0.7);
    expect(correlationFinding(reading, 0.7)).toBe(
      '2 characteristics of 4 fall into 1 group that says nearly the same; 2 have a VIF above 5.',
    );
    const none = readCorrelations({ characteristics: characteristics.slice(0, 2), matrix: [[1, 0.1], [0.1, 1]] }, 0.7); // prettier-ignore
    expect(correlationFinding(none, 0.7)).toBe(
      'No two characteristics correlate by 0.70 or more; age and utilisation come nearest with 0.10; 1 has a VIF above 5.',
    );
    const nothing = readCorrelations({ characteristics: [], matrix: [] }, 0.7);
    expect(correlationFinding(nothing, 0.7)).toContain('nothing to compare');
  });

  it('have no pair where a column has no variance', () => {
    const { pairs, standings } = readCorrelations({ characteristics: characteristics.slice(0, 2), matrix: [[null, null], [null, 1]] }, 0.7); // prettier-ignore
    expect(pairs).toEqual([]);
    expect(standings[0].nearest).toBeNull();
  });

  it('name what they no longer speak of, three at most, and nothing before they were calculated', () => {
    const standing = { calculatedAt: '2026-03-01T10:00:00.000Z', runId: null };
    expect(changedWords({ ...standing, changed: [] })).toBeNull();
    expect(changedWords({ ...standing, changed: ['age'] })).toBe('age has changed');
    expect(changedWords({ ...standing, changed: ['age', 'balance', 'home'] })).toBe('age, balance, home have changed');
    expect(changedWords({ ...standing, changed: ['age', 'balance', 'home', 'region', 'utilisation'] })).toBe(
      'age, balance, home and 2 more have changed',
    );
    expect(changedWords({ calculatedAt: null, runId: null, changed: ['age'] })).toBeNull();
  });
});
