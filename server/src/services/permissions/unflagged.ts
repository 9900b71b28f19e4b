import type { UnflaggedColumn } from '@tallystone/contracts/permissions/schema';
import type { Sequelize, Transaction } from 'sequelize';
import { rows } from '../../database/sql';

/**
 * Columns that a definition of the same model, confirmed before this one, flagged protected, and this one does not, each with the latest that did.
 * A column that this definition does not have is not among them.
 */
export function unflaggedBy(sequelize: Sequelize, definitionId: string, tx: Transaction | null = null): Promise<UnflaggedColumn[]> {
  return rows<UnflaggedColumn>(
    sequelize,
    `SELECT DISTINCT ON (here ->> 'column') here ->> 'column' AS "column", here ->> 'role' AS role, here ->> 'reason' AS reason,
            s.number AS sample, e.number AS definition
       FROM sample_definitions d
       CROSS JOIN LATERAL jsonb_array_elements(d.content -> 'columns') here
       JOIN sample_definitions e ON e.model_id = d.model_id AND e.created_at < d.created_at
       JOIN samples s ON s.id = e.sample_id
       CROSS JOIN LATERAL jsonb_array_elements(e.content -> 'columns') there
      WHERE d.id = $1 AND NOT (here ->> 'protected')::boolean AND there ->> 'column' = here ->> 'column' AND (there ->> 'protected')::boolean
      ORDER BY here ->> 'column', e.created_at DESC`,
    [definitionId],
    tx,
  );
}
