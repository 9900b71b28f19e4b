import type { FitBasis } from '@tallystone/contracts/fits/schema';
import type { ColumnRole } from '@tallystone/contracts/samples/columns';
import type { Sequelize } from 'sequelize';
import { findDefinition } from '../samples/definitions';

/** What a fit on a sample's definition can draw on beside the characteristics; null where there is no such definition. */
export async function readFitBasis(sequelize: Sequelize, definitionId: string): Promise<FitBasis | null> {
  const definition = await findDefinition(sequelize, definitionId);
  if (!definition) return null;
  const { content, counts } = definition;
  const { goods, bads } = counts.development;
  const holder = (role: ColumnRole): string | null => content.columns.find((column) => column.role === role)?.column ?? null;
  return {
    definitionId,
    weight: content.weight?.column ?? null,
    groupKey: holder('group key'),
    declined: content.declined && { column: content.declined.column, values: content.declined.values, rows: counts.declined },
    badRate: goods + bads === 0 ? null : bads / (goods + bads),
  };
}
