import type { NewPermissionAct } from '@tallystone/contracts/permissions/schema';
import type { Sequelize, Transaction } from 'sequelize';
import { rows } from '../../database/sql';
import type { Actor } from '../../models/person';
import { conflict, invalidField } from '../../problems/problem';
import { appendRecord } from '../record/append';
import { type ProtectingDefinition, protectionOf } from './protection';

/**
 * Permits a protected characteristic with a citation, or withdraws that. Recorded in the same transaction.
 *
 * @throws Problem 422 where the column is no protected characteristic of the definition, 409 where it is permitted already, or is not, or a
 * version was frozen with it
 */
export async function actOnProtected(sequelize: Sequelize, tx: Transaction, person: Actor, definition: ProtectingDefinition, asked: NewPermissionAct): Promise<void> {
  // A version is frozen under the same lock: a permission that is withdrawn and a version that rests on it cannot pass each other.
  await rows(sequelize, 'SELECT id FROM models WHERE id = $1 FOR UPDATE', [definition.model.id], tx);
  const { columns } = await protectionOf(sequelize, definition, tx);
  const column = columns.find((entry) => entry.column === asked.column);
  if (column?.role !== 'characteristic') {
    throw invalidField('column', 'not-protected', 'This definition has no such characteristic that is flagged protected: there is nothing to permit.');
  }
  const { permission, frozenIn } = column;
  if (asked.act === 'permitted') {
    if (permission)
      throw conflict('permitted-already', `${permission.by} permitted "${asked.column}" on ${permission.at.slice(0, 10)}. Withdraw that before another citation is entered.`);
    await store(sequelize, tx, person, definition.id, { ...asked });
    await appendRecord(tx, {
      ...about(person, definition),
      action: 'protected-column.permitted',
      after: { column: asked.column, citation: asked.citation },
      reason: asked.reason,
    });
    return;
  }
  if (!permission) throw conflict('not-permitted', `"${asked.column}" is not permitted: there is nothing to withdraw.`);
  if (frozenIn.length > 0) {
    throw conflict(
      'frozen-with-it',
      `Version ${frozenIn.join(', ')} was frozen with "${asked.column}", and a frozen version never changes. Return or refuse the version instead.`,
    );
  }
  await store(sequelize, tx, person, definition.id, { ...asked, citation: permission.citation });
  await appendRecord(tx, {
    ...about(person, definition),
    action: 'protected-column.withdrawn',
    before: { column: asked.column, citation: permission.citation },
    reason: asked.reason,
  });
}

const about = (person: Actor, definition: ProtectingDefinition) =>
  ({ actor: person, entity: 'sample-definition', entityId: definition.id, modelId: definition.model.id }) as const;

async function store(
  sequelize: Sequelize,
  tx: Transaction,
  person: Actor,
  definitionId: string,
  { column, act, citation, reason }: { column: string; act: NewPermissionAct['act']; citation: string; reason: string },
): Promise<void> {
  await rows(
    sequelize,
    `INSERT INTO protected_permissions (definition_id, column_name, act, citation, reason, acted_by) VALUES ($1, $2, $3, $4, $5, $6) RETURNING id`,
    [definitionId, column, act, citation, reason, person.id],
    tx,
  );
}
