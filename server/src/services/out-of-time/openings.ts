import type { Opening } from '@tallystone/contracts/out-of-time/schema';
import type { Sequelize, Transaction } from 'sequelize';
import { rows } from '../../database/sql';

/**
 * Every look at the out-of-time figures of the rows behind a definition, in the order they happened: under the definition itself, and under any other
 * definition of the model on the same sample or on another one made of the same file. Whoever has seen how these rows turned out has seen it under
 * whatever definition.
 */
export async function openingsOver(sequelize: Sequelize, definitionId: string, tx: Transaction | null = null): Promise<Opening[]> {
  const found = await rows<Omit<Opening, 'at'> & { at: Date }>(
    sequelize,
    `SELECT o.id, o.reason, p.name AS by, o.opened_at AS at, o.definition_id AS "definitionId", t.number AS sample, other.number AS definition,
            CASE WHEN other.id = d.id THEN 'this' WHEN other.created_at < d.created_at THEN 'earlier' ELSE 'later' END AS under
       FROM sample_definitions d
       JOIN samples s ON s.id = d.sample_id
       JOIN sample_definitions other ON other.model_id = d.model_id
       JOIN samples t ON t.id = other.sample_id AND t.sha256 = s.sha256
       JOIN out_of_time_openings o ON o.definition_id = other.id
       JOIN people p ON p.id = o.opened_by
      WHERE d.id = $1 ORDER BY o.opened_at, other.created_at, o.number`,
    [definitionId],
    tx,
  );
  return found.map((opening) => ({ ...opening, at: opening.at.toISOString() }));
}
