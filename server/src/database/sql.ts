import { QueryTypes, type Sequelize, type Transaction } from 'sequelize';

/**
 * Rows of one statement with `$1` parameters, as plain objects.
 *
 */
export function rows<Row extends object>(
  sequelize: Sequelize,
  text: string,
  values: readonly unknown[] = [],
  tx?: Transaction | null,
): Promise<Row[]> {
  return sequelize.query<Row>(text, { bind: [...values], type: QueryTypes.SELECT, transaction: tx ?? null });
}
