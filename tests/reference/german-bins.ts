import { assignBins, countBins } from '@tallystone/numeric';
import type { Table } from './reference-files';

/** How the reference files state the bins of a characteristic. */
export type BinSpec =
  | { readonly type: 'categorical'; readonly groups: string[][] }
  | { readonly type: 'numeric'; readonly edges: number[]; readonly closed: 'left' | 'right' };

/** Bin of each row of a German credit characteristic. */
export function binsOf(table: Table, column: string, spec: BinSpec): Uint8Array {
  if (spec.type === 'numeric') return assignBins(table.numbers(column), spec.edges, spec.closed);
  return Uint8Array.from(table.text(column), (value) => {
    const bin = spec.groups.findIndex((group) => group.includes(value));
    if (bin < 0) throw new Error(`${column} has ${value}`);
    return bin;
  });
}

export function binCount(spec: BinSpec): number {
  return spec.type === 'numeric' ? spec.edges.length + 1 : spec.groups.length;
}

export function countsOf(table: Table, column: string, spec: BinSpec, outcome: Uint8Array, rows?: readonly number[]) {
  const bins = binsOf(table, column, spec);
  const list = rows ?? Array.from(outcome.keys());
  return countBins(
    list.map((i) => bins[i]),
    list.map((i) => outcome[i]),
    binCount(spec),
  );
}
