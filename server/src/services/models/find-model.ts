import type { Sequelize, Transaction } from 'sequelize';
import { rows } from '../../database/sql';
import type { ModelMembership } from '../../policies/models';
import type { MaterialityTier } from '@tallystone/contracts/models/schema';

/** One row of the inventory with who works on it: what every policy about a model needs. */
export interface FoundModel extends ModelMembership {
  readonly id: string;
  readonly inventoryNumber: string;
  readonly name: string;
  readonly purpose: string;
  readonly product: string;
  readonly population: string;
  readonly jurisdiction: string;
  readonly owner: string;
  readonly materialityTier: MaterialityTier;
  readonly intendedUse: string;
  readonly prohibitedUse: string;
  readonly revision: number;
  readonly createdAt: Date;
  readonly createdBy: string;
  readonly createdByName: string;
  readonly updatedAt: Date;
  readonly memberIds: readonly string[];
}

/**
 * The model, or null. `lock` holds its row until the transaction ends: for what counts within a model (a sample's number) or edits it.
 *
 * @example
 * find: ({ context, params, tx }) => findModel(context.sequelize, params.modelId, tx),
 * authorise: ({ person, subject }) => canReadModel(person, subject),
 */
export async function findModel(
  sequelize: Sequelize,
  modelId: string,
  tx: Transaction | null = null,
  lock = false,
): Promise<FoundModel | null> {
  const [found] = await rows<FoundModel>(
    sequelize,
    `SELECT m.id, m.inventory_number AS "inventoryNumber", m.name, m.purpose, m.product, m.population, m.jurisdiction, m.owner,
            m.materiality_tier AS "materialityTier", m.intended_use AS "intendedUse", m.prohibited_use AS "prohibitedUse", m.revision,
            m.created_at AS "createdAt", m.created_by AS "createdBy", p.name AS "createdByName", m.updated_at AS "updatedAt",
            ARRAY(SELECT person_id::text FROM model_members WHERE model_id = m.id) AS "memberIds"
       FROM models m JOIN people p ON p.id = m.created_by
      WHERE m.id = $1 ${lock ? 'FOR UPDATE OF m' : ''}`,
    [modelId],
    tx,
  );
  return found ?? null;
}
