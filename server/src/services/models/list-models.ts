import type { ModelList, ModelSummary } from '@tallystone/contracts/models/schema';
import type { Sequelize } from 'sequelize';
import { rows } from '../../database/sql';
import type { Actor } from '../../models/person';
import { seesAllModels } from '../../policies/models';
import { leadingStates } from './leading-state';

interface Row extends Omit<ModelSummary, 'updatedAt' | 'state'> {
  readonly updatedAt: Date;
}

/** Models that a person may see, the latest change first. */
export async function listModels(
  sequelize: Sequelize,
  person: Actor,
  asked: { search?: string; state?: string },
): Promise<ModelList> {
  const found = await rows<Row>(
    sequelize,
    `SELECT m.id, m.inventory_number AS "inventoryNumber", m.name, m.product, m.population, m.jurisdiction, m.owner,
            m.materiality_tier AS "materialityTier", m.updated_at AS "updatedAt",
            ARRAY(SELECT p.name FROM model_members mm JOIN people p ON p.id = mm.person_id WHERE mm.model_id = m.id ORDER BY p.name) AS members
       FROM models m
      WHERE ($1 OR EXISTS (SELECT 1 FROM model_members mm WHERE mm.model_id = m.id AND mm.person_id = $2))
        AND ($3::text IS NULL OR strpos(lower(concat_ws(' ', m.name, m.product, m.inventory_number, m.owner)), lower($3)) > 0)
      ORDER BY m.updated_at DESC, m.number DESC`,
    [seesAllModels(person), person.roles.includes('modeller') ? person.id : null, asked.search || null],
  );
  const states = await leadingStates(
    sequelize,
    found.map(({ id }) => id),
  );
  const models = found.map((row) => ({
    ...row,
    updatedAt: row.updatedAt.toISOString(),
    state: states.get(row.id) ?? ('In development' as const),
  }));
  return { models: asked.state ? models.filter(({ state }) => state === asked.state) : models };
}
