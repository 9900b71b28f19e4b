import { z } from 'zod';
import { ColumnRole } from '../samples/columns';

/** Given or taken back. Both stay: the later one counts. */
export const PermissionAct = z.object({
  id: z.uuid(),
  column: z.string(),
  act: z.enum(['permitted', 'withdrawn']),
  /** The legal basis that compliance entered; of a withdrawal, the one that it withdraws. */
  citation: z.string(),
  reason: z.string(),
  by: z.string(),
  at: z.string(),
});
export type PermissionAct = z.infer<typeof PermissionAct>;

export const ProtectedColumn = z.object({
  column: z.string(),
  role: ColumnRole,
  /** What the definition's author proposes as the legal basis. It permits nothing. */
  proposed: z.string().nullable(),
  /** The permission that holds; null where the column is barred. */
  permission: PermissionAct.nullable(),
  /** Numbers of the versions that were frozen with it: the permission can be withdrawn no longer. */
  frozenIn: z.array(z.int()),
});
export type ProtectedColumn = z.infer<typeof ProtectedColumn>;

/** A column that an earlier confirmed definition of the model flagged protected, and this one does not. */
export const UnflaggedColumn = z.object({
  column: z.string(),
  role: ColumnRole,
  /** What the definition's author says of the column; null where nothing was said. */
  reason: z.string().nullable(),
  /** The latest definition that flagged it: number of its sample, and its own within the sample. */
  sample: z.int(),
  definition: z.int(),
});
export type UnflaggedColumn = z.infer<typeof UnflaggedColumn>;

/** What of a confirmed definition is protected, who permitted what with which citation, and what is flagged no longer. */
export const Protection = z.object({
  columns: z.array(ProtectedColumn),
  /** In the order they were done. */
  acts: z.array(PermissionAct),
  unflagged: z.array(UnflaggedColumn),
});
export type Protection = z.infer<typeof Protection>;

export const ProtectedColumns = Protection.extend({
  definitionId: z.uuid(),
  abilities: z.array(z.enum(['permit'])),
}).meta({ id: 'ProtectedColumns' });
export type ProtectedColumns = z.infer<typeof ProtectedColumns>;

const column = z.string().min(1).max(1000);
const reason = z.string().trim().min(10, 'Say in a sentence why').max(2000);

export const NewPermissionAct = z.discriminatedUnion('act', [
  z.strictObject({
    act: z.literal('permitted'),
    column,
    citation: z.string().trim().min(3, 'Cite the legal basis that permits it').max(1000),
    reason,
  }),
  z.strictObject({ act: z.literal('withdrawn'), column, reason }),
]);
export type NewPermissionAct = z.infer<typeof NewPermissionAct>;
