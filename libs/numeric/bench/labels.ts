import { layoutOf } from './slots';
import type { Bins, FineClasses } from './types';

/** A bin in words: "under 25", "25 to under 30", "55 and over"; right-closed: "up to 25", "over 25 to 30", "over 55". */
export function binLabels(fine: Pick<FineClasses, 'closed' | 'special'>, bins: Bins): string[] {
  return layoutOf(bins).map(({ kind, index }) => {
    if (kind === 'missing') return 'missing';
    if (kind === 'special') return fine.special[index];
    if (bins.kind === 'categorical') return bins.groups[index].join(', ');
    return rangeLabel(bins.edges, index, fine.closed);
  });
}

export function rangeLabel(edges: readonly number[], index: number, closed: 'left' | 'right'): string {
  if (edges.length === 0) return 'all values';
  const [from, to] = [edges[index - 1], edges[index]];
  if (closed === 'left') {
    if (index === 0) return `under ${to}`;
    return index === edges.length ? `${from} and over` : `${from} to under ${to}`;
  }
  if (index === 0) return `up to ${to}`;
  return index === edges.length ? `over ${from}` : `over ${from} to ${to}`;
}
