import type { ModelState } from '@tallystone/contracts/models/schema';
import type { Sequelize, Transaction } from 'sequelize';
import { rows } from '../../database/sql';

/** From the most advanced to the least: a version in use leads one that is being reviewed, and that one a newer draft. */
const order: readonly ModelState[] = [
  'In use',
  'Approved',
  'Approved with conditions',
  'In validation',
  'Submitted',
  'In development',
  'Rejected',
  'Retired',
];

/**
 * The state of each model's leading version: the most advanced, the latest among equals. A model without versions is not in the answer: it is
 * "In development".
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
       JOIN LATERAL (SELECT to_state FROM version_acts WHERE version_id = v.id ORDER BY sequence DESC LIMIT 1) a ON true
      WHERE v.model_id = ANY($1::uuid[])
      ORDER BY v.model_id, array_position($2::text[], a.to_state), v.number DESC`,
    [modelIds, order],
    tx,
  );
  return new Map(found.map(({ modelId, state }) => [modelId, state]));
}
