import { groupCells, moveFinding, widestMove } from './group-cells';

const group = (label: string) => ({ label, kind: 'values' as const, rows: 0, goods: 0, bads: 0, unknown: 0 });
const month = (name: string, ...groups: number[]) => ({
  month: name,
  rows: groups.reduce((sum, rows) => sum + rows, 0),
  missing: 0,
  psi: null,
  groups,
});

describe('values by month', () => {
  const detail = {
    groups: [group('under 10'), group('10 and over'), group('missing')],
    months: [month('2023-01', 50, 40, 10), month('2023-02', 0, 0, 0), month('2023-03', 20, 70, 10), month('2023-04', 1, 0, 28)],
  };

  it('are shares of each month’s rows, which add up to it', () => {
    const cells = groupCells(detail);
    expect(cells).toHaveLength(12);
    expect(cells.filter(({ place }) => place === 0).map(({ share }) => share)).toEqual([0.5, 0, 0.2, 1 / 29]);
    for (const name of ['2023-01', '2023-03', '2023-04']) {
      const sum = cells.filter((cell) => cell.month === name).reduce((total, { share }) => total + share, 0);
      expect(sum).toBeCloseTo(1, 12);
    }
  });

  it('tell the group that moves most, months of few rows left out', () => {
    const move = widestMove(groupCells(detail));
    expect(move).toMatchObject({
      group: 'under 10',
      least: { month: '2023-03', share: 0.2 },
      most: { month: '2023-01', share: 0.5 },
    });
  });

  it('tell nothing from a single month', () => {
    expect(widestMove(groupCells({ ...detail, months: detail.months.slice(0, 2) }))).toBeNull();
    expect(widestMove([])).toBeNull();
    expect(moveFinding([])).toContain('Too few rows');
  });

  it('tell in a sentence which group moves, and of none that it does', () => {
    expect(moveFinding(groupCells(detail))).toBe(
      'under 10 moves most: from 20.0\u202f% of the rows (2023-03) to 50.0\u202f% (2023-01).',
    );
    const single = { groups: [group('a value')], months: [month('2023-01', 50), month('2023-02', 70)] };
    expect(moveFinding(groupCells(single))).toBe('The shares of the values are the same in every month.');
  });
});
