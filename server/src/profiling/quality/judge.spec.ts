import type { DefinedColumn } from '@tallystone/contracts/samples/definition';
import type { ReadingChoices } from '@tallystone/contracts/samples/reading';
import { describe, expect, it } from 'vitest';
import { type TextColumn, sourceOf } from '../../replay/source';
import { profileColumn } from '../profile-column';
import { type RaisedFlag, judgeColumn } from './judge';
import { type RowFacts, measureColumn } from './measure';
import { MISSING, VALUE } from './read-column';

const choices: ReadingChoices = { delimiter: ',', encoding: 'utf-8', decimal: '.', thousands: null, trim: true, missing: [''] };

interface Row {
  /** Null is missing. */
  readonly value: number | null;
  readonly good?: boolean;
  readonly month?: number;
}

const repeated = (count: number, row: Row): Row[] => Array.from({ length: count }, () => row);

/** Measures the rows as the report does, and judges what was counted. */
function flagsOf(rows: readonly Row[], asked: { role?: DefinedColumn['role']; months?: number; baselineMonths?: number } = {}): RaisedFlag[] {
  const { role = 'characteristic', months = 0, baselineMonths = 0 } = asked;
  const texts = rows.map(({ value }) => (value === null ? '' : String(value)));
  const profile = profileColumn('income', 0, sourceOf({ income: texts }).column('income') as TextColumn, choices, null);
  const defined: DefinedColumn = { column: 'income', kind: 'numeric', role, protected: false, citation: null, special: [], reason: null };
  const facts: RowFacts = {
    outcome: Uint8Array.from(rows, ({ good }) => (good === undefined ? 255 : good ? 1 : 0)),
    month: months === 0 ? null : Uint16Array.from(rows, ({ month = 0 }) => month),
    months,
    baselineMonths,
  };
  const values = {
    state: Uint8Array.from(rows, ({ value }) => (value === null ? MISSING : VALUE)),
    numbers: Float64Array.from(rows, ({ value }) => value ?? Number.NaN),
    codes: null,
    texts: [],
  };
  const listed = Array.from({ length: months }, (_, place) => ({
    month: `2024-${String(place + 1).padStart(2, '0')}`,
    rows: rows.filter(({ month }) => month === place).length,
  }));
  return judgeColumn(profile, defined, measureColumn(values, facts, []), listed, baselineMonths).flags;
}

describe('missing for one outcome alone', () => {
  // 100 goods and 100 bads, so that half of what is missing would be of the other outcome by chance.
  const rows = (missing: number, good: boolean): Row[] => [
    ...repeated(missing, { value: null, good }),
    ...repeated(100 - missing, { value: 1, good }),
    ...repeated(50, { value: 1, good: !good }),
    ...repeated(50, { value: 2, good: !good }),
  ];
  const found = (missing: number, good: boolean, role?: DefinedColumn['role']) => flagsOf(rows(missing, good), role && { role }).filter(({ code }) => code === 'missing-one-outcome');

  it('is told of bads and of goods, with what chance would have brought', () => {
    const flag = { column: 'income', code: 'missing-one-outcome', weight: 'look' };
    expect(found(30, false)).toEqual([{ ...flag, finding: 'Missing only for bads: 30 rows, of which 15 would be good if it were missing by chance.' }]);
    expect(found(30, true)).toEqual([{ ...flag, finding: 'Missing only for goods: 30 rows, of which 15 would be bad if it were missing by chance.' }]);
  });

  it('is left alone where fewer than ten of the other outcome would be expected, or one is there', () => {
    expect(found(20, false)).toHaveLength(1);
    expect(found(19, false)).toEqual([]);
    const one = [...rows(30, false), { value: null, good: true }];
    expect(flagsOf(one).filter(({ code }) => code === 'missing-one-outcome')).toEqual([]);
  });

  it('is worth knowing of what is not used, and nothing of an identifier', () => {
    expect(found(30, false, 'not used')).toMatchObject([{ weight: 'note' }]);
    expect(found(30, false, 'identifier')).toEqual([]);
  });
});

describe('missing more or less often than in the first months', () => {
  /** Months 0 and 1 are the first year here: 5 of 100 missing in each. */
  const rows = (last: number, missing: number): Row[] =>
    [0, 1].flatMap((month) => [...repeated(5, { value: null, month }), ...repeated(50, { value: 1, month }), ...repeated(45, { value: 2, month })]).concat(
      repeated(missing, { value: null, month: 2 }),
      repeated(last - missing, { value: 1, month: 2 }),
    );
  const found = (last: number, missing: number) => flagsOf(rows(last, missing), { months: 3, baselineMonths: 2 }).filter(({ code }) => code === 'missing-drift');

  it('is told with the month that is furthest away', () => {
    expect(found(100, 30)).toEqual([
      { column: 'income', code: 'missing-drift', weight: 'look', finding: 'Missing in 30.0 % of the rows of 2024-03, in 5.0 % of the first year.' },
    ]);
  });

  it('is left alone up to a tenth of the rows, and in months of few rows', () => {
    expect(found(1000, 151)).toHaveLength(1);
    expect(found(1000, 149)).toEqual([]);
    expect(found(99, 60)).toEqual([]);
  });

  it('is told of a column that stops being missing', () => {
    const turned = rows(100, 0).map((row, place) => (row.month !== 2 && place % 2 === 0 ? { ...row, value: null } : row));
    expect(flagsOf(turned, { months: 3, baselineMonths: 2 }).find(({ code }) => code === 'missing-drift')?.finding).toMatch(/^Missing in 0\.0 % of the rows of 2024-03, in 5\d\.\d % of the first year\.$/);
  });
});
