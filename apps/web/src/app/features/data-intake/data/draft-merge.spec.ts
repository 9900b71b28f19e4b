import type { ColumnRole } from '@tallystone/contracts/samples/columns';
import type { DefinedColumn, DraftContent } from '@tallystone/contracts/samples/definition';
import { keepBoth } from './draft-merge';

const column = (name: string, role: ColumnRole = 'characteristic'): DefinedColumn => ({
  column: name,
  kind: 'categorical',
  role,
  protected: false,
  citation: null,
  special: [],
  reason: null,
});
const before: DraftContent = {
  columns: [column('home'), column('bad', 'outcome'), column('late'), column('part', 'partition'), column('w1'), column('w2')],
  outcome: { good: ['0'], bad: ['1'], indeterminate: [], excluded: [] },
  declined: null,
  exclusions: [],
  partition: { by: 'seed', seed: 1, holdOutShare: 0.3, outOfTime: null },
};
const staff = { reason: 'Staff', combine: 'all' as const, tests: [{ column: 'home', in: ['STAFF'] }] };
const role = (content: DraftContent, roles: Readonly<Record<string, ColumnRole>>): DraftContent => ({
  ...content,
  columns: content.columns.map((entry) => ({ ...entry, role: roles[entry.column] ?? entry.role })),
});
const seed = (content: DraftContent, value: number): DraftContent => ({
  ...content,
  partition: { by: 'seed', seed: value, holdOutShare: 0.3, outOfTime: null },
});

describe('two changes of one draft', () => {
  it('are kept together where they are of different columns and sections', () => {
    const theirs = role({ ...before, exclusions: [staff] }, { home: 'segment' });
    const mine = role(seed(before, 7), { late: 'not used' });
    expect(keepBoth(before, theirs, mine)).toEqual(
      role(seed({ ...before, exclusions: [staff] }, 7), { home: 'segment', late: 'not used' }),
    );
  });

  it('are kept together where both made the same one, in whatever order its keys stand', () => {
    const theirs: DraftContent = {
      ...before,
      partition: { holdOutShare: 0.3, outOfTime: null, seed: 7, by: 'seed' },
      exclusions: [staff],
    };
    expect(keepBoth(before, theirs, seed(before, 7))).toEqual({ ...seed(before, 7), exclusions: [staff] });
  });

  it('are not put together where both changed one section, or one column', () => {
    expect(keepBoth(before, seed(before, 2), seed(before, 3))).toBeNull();
    expect(keepBoth(before, role(before, { home: 'segment' }), role(before, { home: 'not used' }))).toBeNull();
  });

  it('are not put together where a role moved and its values were said of the column that had it', () => {
    const moved = role(before, { bad: 'not used', late: 'outcome' });
    const said = { ...before, outcome: { ...before.outcome, indeterminate: ['2'] } };
    expect(keepBoth(before, moved, said)).toBeNull();
    expect(keepBoth(before, said, moved)).toBeNull();
  });

  it('never give two columns a role that one can have', () => {
    expect(keepBoth(before, role(before, { w1: 'weight' }), role(before, { w2: 'weight' }))).toBeNull();
    expect(keepBoth(before, role(before, { w1: 'segment' }), role(before, { w2: 'segment' }))).not.toBeNull();
  });

  it('are not put together where the file was read again with other columns', () => {
    expect(keepBoth(before, { ...before, columns: before.columns.slice(1) }, seed(before, 3))).toBeNull();
  });
});
