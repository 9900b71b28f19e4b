import type { ComparedPartition } from '@tallystone/contracts/samples/balance';
import type { Sequelize, Transaction } from 'sequelize';
import { rows } from '../../database/sql';

interface Row extends Omit<ComparedPartition, 'comparedAt'> {
  readonly comparedAt: Date;
}

const presented = (list: readonly Row[]): ComparedPartition[] =>
  list.map((row) => ({ ...row, comparedAt: row.comparedAt.toISOString() }));

/** A partition that was compared more than once stands where it was compared last. */
const select = `
  SELECT partition, largest, "comparedAt", "comparedBy" FROM (
    SELECT DISTINCT ON (c.partition) c.partition, c.largest, c.sequence, c.compared_at AS "comparedAt", p.name AS "comparedBy"
      FROM sample_draft_comparisons c JOIN people p ON p.id = c.compared_by`;
const order = 'ORDER BY c.partition, c.sequence DESC) listed ORDER BY sequence';

/** Every partition of a sample's draft that was compared since this definition, or at all. */
export async function comparedSince(
  sequelize: Sequelize,
  sampleId: string,
  definitionId: string | null,
): Promise<ComparedPartition[]> {
  return presented(
    await rows<Row>(
      sequelize,
      `${select} WHERE c.sample_id = $1
         AND c.compared_at > coalesce((SELECT d.created_at FROM sample_definitions d WHERE d.id = $2), '-infinity') ${order}`,
      [sampleId, definitionId],
    ),
  );
}

/** Every partition that was compared before a definition was confirmed, since the definition before it. */
export async function comparedBefore(
  sequelize: Sequelize,
  definitionId: string,
  tx: Transaction | null = null,
): Promise<ComparedPartition[]> {
  return presented(
    await rows<Row>(
      sequelize,
      `${select} JOIN sample_definitions d ON d.id = $1
        WHERE c.sample_id = d.sample_id AND c.compared_at < d.created_at
          AND c.compared_at > coalesce((SELECT max(b.created_at) FROM sample_definitions b WHERE b.sample_id = d.sample_id AND b.number < d.number), '-infinity') ${order}`,
      [definitionId],
      tx,
    ),
  );
}
