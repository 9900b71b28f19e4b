import type { ColumnRole } from '@tallystone/contracts/samples/columns';
import type { DefinedColumn, DraftContent } from '@tallystone/contracts/samples/definition';
import { sameValue } from '../../../core/same-value';

/** A part of the draft that is kept whole, and the roles that it speaks of: values of an outcome belong to the column that has the role. */
const sections = [
  { of: 'outcome', roles: ['outcome'] },
  { of: 'declined', roles: ['decision'] },
  { of: 'exclusions', roles: [] },
  { of: 'partition', roles: ['partition', 'application date'] },
] as const satisfies readonly { of: keyof DraftContent; roles: readonly ColumnRole[] }[];

/** Roles that no section speaks of, and that one column has at most: two people who give them to two columns contradict each other. */
const single: readonly ColumnRole[] = ['weight', 'group key'];

const holders = (content: DraftContent, role: ColumnRole): string[] =>
  content.columns.filter((entry) => entry.role === role).map(({ column }) => column);

/**
 * What two people made of one draft, put together: of each column and each section, what one of them changed. Null where both changed the same one
 * to different things, or where one moved a role to another column and the other changed what is said of it.
 */
export function keepBoth(base: DraftContent, theirs: DraftContent, mine: DraftContent): DraftContent | null {
  const named = (content: DraftContent): string[] => content.columns.map(({ column }) => column);
  // Read again meanwhile, the file has other columns: nothing says what a change means there.
  if (!sameValue(named(base), named(theirs)) || !sameValue(named(base), named(mine))) return null;
  const contradicts = (part: (content: DraftContent) => unknown): boolean => {
    const [was, there, here] = [part(base), part(theirs), part(mine)];
    return !sameValue(was, there) && !sameValue(was, here) && !sameValue(there, here);
  };
  const refused = [
    ...sections.map(({ of, roles }) => contradicts((content) => [content[of], roles.map((role) => holders(content, role))])),
    ...single.map((role) => contradicts((content) => holders(content, role))),
    ...base.columns.map((_, place) => contradicts(({ columns }) => columns[place])),
  ];
  if (refused.includes(true)) return null;
  const changed = <T>(part: (content: DraftContent) => T): T => (sameValue(part(base), part(mine)) ? part(theirs) : part(mine));
  return {
    columns: base.columns.map((_, place): DefinedColumn => changed(({ columns }) => columns[place])),
    outcome: changed(({ outcome }) => outcome),
    declined: changed(({ declined }) => declined),
    exclusions: changed(({ exclusions }) => exclusions),
    partition: changed(({ partition }) => partition),
  };
}
