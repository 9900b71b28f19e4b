import type { Specification } from '@tallystone/contracts/specification/types';
import type { Sequelize } from 'sequelize';
import { columnsRead } from '../../replay/replay';
import type { SourceColumn } from '../../replay/source';
import { openSample } from '../../storage/columnStore';

/** The columns that a specification reads, in a form that can be handed to a thread. */
export interface LoadedColumns {
  readonly rows: number;
  readonly columns: Map<string, SourceColumn>;
}

/**
 * @example
 * const { rows, columns } = await loadColumns(sequelize, definition.sampleId, specification);
 * await runInThread('fit.path', { specification, rows, columns, treatments });
 */
export async function loadColumns(sequelize: Sequelize, sampleId: string, specification: Specification): Promise<LoadedColumns> {
  const { all } = columnsRead(specification);
  const source = await openSample(sequelize, sampleId, all);
  const columns = new Map<string, SourceColumn>();
  for (const name of all) {
    const column = source.column(name);
    if (column) columns.set(name, column);
  }
  return { rows: source.rows, columns };
}
