import { barredWords } from '@tallystone/contracts/permissions/permission-words';
import type { DefinedColumn } from '@tallystone/contracts/samples/definition';

export interface Barred {
  readonly column: string;
  readonly reason: string;
}

/** Which columns of a definition a binning classes, and which it leaves alone with the reason. `permitted`: protected columns that compliance has permitted. */
export function splitColumns(
  columns: readonly DefinedColumn[],
  permitted: { has(column: string): boolean },
): {
  taken: (DefinedColumn & { kind: 'numeric' | 'categorical' })[];
  barred: Barred[];
} {
  const taken: (DefinedColumn & { kind: 'numeric' | 'categorical' })[] = [];
  const barred: Barred[] = [];
  for (const column of columns) {
    if (column.role !== 'characteristic') continue;
    const { kind } = column;
    if (column.protected && !permitted.has(column.column)) {
      barred.push({ column: column.column, reason: barredWords(column.column) });
    } else if (kind === 'date') {
      barred.push({ column: column.column, reason: 'A date cannot be classed. Bring in an age or a duration in its place.' });
    } else taken.push({ ...column, kind });
  }
  return { taken, barred };
}
