import type { PermissionAct } from '@tallystone/contracts/permissions/schema';
import type { ColumnPermission, Specification } from '@tallystone/contracts/specification/types';
import type { Sequelize, Transaction } from 'sequelize';
import { rows } from '../../database/sql';

/** Every act on the protected columns of a definition, in the order they were done. */
export async function permissionActs(sequelize: Sequelize, definitionId: string, tx: Transaction | null = null): Promise<PermissionAct[]> {
  const acts = await rows<Omit<PermissionAct, 'at'> & { at: Date }>(
    sequelize,
    `SELECT a.id, a.column_name AS "column", a.act, a.citation, a.reason, p.name AS by, a.acted_at AS at
       FROM protected_permissions a JOIN people p ON p.id = a.acted_by WHERE a.definition_id = $1 ORDER BY a.sequence`,
    [definitionId],
    tx,
  );
  return acts.map((entry) => ({ ...entry, at: entry.at.toISOString() }));
}

/** The permissions that hold, by column: the last act on a column counts. */
export function standing(acts: readonly PermissionAct[]): ReadonlyMap<string, PermissionAct> {
  const last = new Map(acts.map((entry) => [entry.column, entry]));
  return new Map([...last].filter(([, { act }]) => act === 'permitted'));
}

/**
 * The permissions that hold on a definition, by column. A citation in the definition itself is its author's proposal and none of them.
 *
 * @example
 * const barred = columns.filter((column) => column.protected && !permitted.has(column.column));
 */
export async function permittedOn(sequelize: Sequelize, definitionId: string, tx: Transaction | null = null): Promise<ReadonlyMap<string, PermissionAct>> {
  return standing(await permissionActs(sequelize, definitionId, tx));
}

/** As a specification names them: those of its characteristics that are permitted, in its order. */
export function permissionsIn({ characteristics }: Pick<Specification, 'characteristics'>, permitted: ReadonlyMap<string, PermissionAct>): ColumnPermission[] {
  return characteristics.flatMap(({ column }) => {
    const found = permitted.get(column);
    return found ? [{ column, citation: found.citation, by: found.by, at: found.at }] : [];
  });
}
