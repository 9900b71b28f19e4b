import { type Column, cellText, headerText, sorted } from './column';

interface Row {
  readonly name: string;
  readonly auc: number | null;
}

const auc: Column<Row> = { key: 'auc', label: 'AUC', kind: 'metric', value: (row) => row.auc };
const name: Column<Row> = { key: 'name', label: 'Name', value: (row) => row.name };
const rows: Row[] = [
  { name: 'bin 10', auc: 0.7 },
  { name: 'bin 9', auc: null },
  { name: 'Bin 1', auc: 0.9 },
];

describe('columns', () => {
  it('write values by kind, a dash for missing', () => {
    expect(rows.map((row) => cellText(auc, row))).toEqual(['0.700', '\u2013', '0.900']);
    expect(cellText({ key: 'b', label: 'B', value: () => true }, rows[0])).toBe('yes');
    expect(cellText({ key: 'p', label: 'P', kind: 'share', value: () => 0.5 }, rows[0])).toBe('50.0\u202F%');
  });

  it('sort numbers as numbers and missing last, whichever way', () => {
    expect(sorted(rows, auc, true).map((row) => row.auc)).toEqual([0.9, 0.7, null]);
    expect(sorted(rows, auc, false).map((row) => row.auc)).toEqual([0.7, 0.9, null]);
    expect(sorted(rows, name, false).map((row) => row.name)).toEqual(['Bin 1', 'bin 9', 'bin 10']);
  });

  it('carry the unit in the header', () => {
    expect(headerText({ label: 'Loan term', unit: 'months' })).toBe('Loan term (months)');
  });
});
