import type { DefinedColumn } from '@tallystone/contracts/samples/definition';

export interface Barred {
  readonly column: string;
  readonly reason: string;
}

/** Which columns of a definition a binning classes, and which it leaves alone with the reason. */
export function splitColumns(columns: readonly DefinedColumn[]): {
  taken: (DefinedColumn & { kind: 'numeric' | 'categorical' })[];
  barred: Barred[];
} {
  const taken: (DefinedColumn & { kind: 'numeric' | 'categorical' })[] = [];
  const barred: Barred[] = [];
  for (const column of columns) {
    if (column.role !== 'characteristic') continue;
    const { kind } = column;
    if (column.protected && !column.citation) {
      barred.push({ column: column.column, reason: 'Protected: kept apart from classing and from every fit.' });
    } else if (kind === 'date') {
      barred.push({ column: column.column, reason: 'A date cannot be classed. Bring in an age or a duration in its place.' });
    } else taken.push({ ...column, kind });
  }
  return { taken, barred };
}
