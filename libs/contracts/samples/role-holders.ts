import type { ColumnRole } from './columns';
import type { DefinedColumn, DraftContent } from './definition';

/** Which columns have a role: one at most where a draft is in order. */
const holdersOf = (columns: readonly DefinedColumn[], role: ColumnRole): string =>
  JSON.stringify(columns.flatMap((column) => (column.role === role ? [column.column] : [])));

/**
 * The draft with these columns in place of its own. What values of the outcome, the decision or the partition mean is said of one column: once
 * another has the role it says nothing, and 1 may be good where it was bad. So it is taken out with the role, and has to be said anew.
 *
 * @example withColumns(draft, columns).outcome // without values or a rule where another column is the outcome in `columns`
 */
export function withColumns(draft: DraftContent, columns: readonly DefinedColumn[]): DraftContent {
  const moves = (role: ColumnRole): boolean => holdersOf(draft.columns, role) !== holdersOf(columns, role);
  return {
    ...draft,
    columns: [...columns],
    ...(moves('outcome') && { outcome: { good: [], bad: [], indeterminate: [], excluded: [] } }),
    ...(moves('decision') && { declined: null }),
    ...(moves('partition') &&
      draft.partition.by === 'column' && { partition: { by: 'column', development: [], holdOut: [], outOfTime: [] } }),
  };
}
