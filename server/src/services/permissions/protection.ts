import type { ProtectedColumn, ProtectedColumns, Protection } from '@tallystone/contracts/permissions/schema';
import type { SampleDefinitionContent } from '@tallystone/contracts/samples/definition';
import type { Sequelize, Transaction } from 'sequelize';
import { rows } from '../../database/sql';
import type { Actor } from '../../models/person';
import { type ProtectionStanding, canPermitProtected } from '../../policies/permissions';
import { tombstoneOf } from '../../storage/erasure';
import { type FoundModel, findModel } from '../models/find-model';
import { permissionActs, standing } from './permitted';
import { unflaggedBy } from './unflagged';

/** A confirmed definition as far as its protected columns need it. */
export interface ProtectingDefinition extends ProtectionStanding {
  readonly id: string;
  readonly columns: SampleDefinitionContent['columns'];
  readonly model: FoundModel;
}

/** The definition with its model, or null. */
export async function findProtecting(sequelize: Sequelize, definitionId: string, tx: Transaction | null = null): Promise<ProtectingDefinition | null> {
  const [found] = await rows<{ modelId: string; definedBy: string; columns: SampleDefinitionContent['columns']; erased: ProtectionStanding['erased'] }>(
    sequelize,
    `SELECT model_id AS "modelId", created_by AS "definedBy", content -> 'columns' AS columns, ${tombstoneOf('sample_definitions.sample_id')} AS erased
       FROM sample_definitions WHERE id = $1`,
    [definitionId],
    tx,
  );
  const model = found && (await findModel(sequelize, found.modelId, tx));
  return model ? { id: definitionId, model, definedBy: found.definedBy, columns: found.columns, erased: found.erased } : null;
}

/** What is protected in a definition, what of it is permitted, and what is flagged no longer. */
export async function protectionOf(sequelize: Sequelize, definition: Pick<ProtectingDefinition, 'id' | 'columns'>, tx: Transaction | null = null): Promise<Protection> {
  const acts = await permissionActs(sequelize, definition.id, tx);
  const permitted = standing(acts);
  const frozen = await frozenWith(sequelize, definition.id, tx);
  const columns = definition.columns
    .filter((column) => column.protected)
    .map(
      ({ column, role, citation }): ProtectedColumn => ({
        column,
        role,
        proposed: citation,
        permission: permitted.get(column) ?? null,
        frozenIn: frozen.filter((version) => version.columns.includes(column)).map(({ number }) => number),
      }),
    );
  return { columns, acts, unflagged: await unflaggedBy(sequelize, definition.id, tx) };
}

export async function readProtected(sequelize: Sequelize, person: Actor, definition: ProtectingDefinition, tx: Transaction | null = null): Promise<ProtectedColumns> {
  const protection = await protectionOf(sequelize, definition, tx);
  return { definitionId: definition.id, ...protection, abilities: canPermitProtected(person, definition).allowed ? ['permit'] : [] };
}

/** Versions on a definition, with the characteristics of each. */
function frozenWith(sequelize: Sequelize, definitionId: string, tx: Transaction | null): Promise<{ number: number; columns: string[] }[]> {
  return rows<{ number: number; columns: string[] }>(
    sequelize,
    `SELECT v.number, (SELECT coalesce(jsonb_agg(entry ->> 'column'), '[]') FROM jsonb_array_elements(v.specification::jsonb -> 'characteristics') entry) AS columns
       FROM versions v WHERE v.definition_id = $1 ORDER BY v.number`,
    [definitionId],
    tx,
  );
}
