import type { ModelState } from '@tallystone/contracts/models/schema';
import type { Sequelize, Transaction } from 'sequelize';
import { rows } from '../../database/sql';

/**
 * The state of each model's leading version: the one in use; else the latest that is neither rejected nor retired; else the latest. A model
 * without versions is not in the answer: it is "In development".
 */
export async function leadingStates(
  sequelize: Sequelize,
  modelIds: readonly string[],
  tx: Transaction | null = null,
): Promise<ReadonlyMap<string, ModelState>> {
  if (modelIds.length === 0) return new Map();
  const found = await rows<{ modelId: string; state: ModelState }>(
    sequelize,
    `SELECT DISTINCT ON (v.model_id) v.model_id AS "modelId", a.to_state AS state
       FROM versions v
       CROSS JOIN LATERAL (SELECT to_state FROM version_acts WHERE version_id = v.id ORDER BY sequence DESC LIMIT 1) a
      WHERE v.model_id = ANY($1::uuid[])
      ORDER BY v.model_id, (a.to_state = 'In use') DESC, (a.to_state NOT IN ('Rejected', 'Retired')) DESC, v.number DESC`,
    [modelIds],
    tx,
  );
  return new Map(found.map(({ modelId, state }) => [modelId, state]));
}
