import { requireNumber, requireThat } from '../checks';

/** Two characteristics that correlate this much say nearly the same. Common practice; a limit is the lender's to set. */
export const nearlyTheSame = 0.7;

/** One step of the hierarchy: two clusters become one. */
export interface Merge {
  /** Columns of either side, ascending. */
  readonly left: readonly number[];
  readonly right: readonly number[];
  /** Largest 1 - |correlation| between a column of one side and one of the other. */
  readonly height: number;
}

/**
 * Hierarchical clusters of columns by distance 1 - |correlation|, complete linkage: at each step the two clusters become one whose farthest columns are
 * nearest. Cut at a height h, every two columns of a cluster correlate by at least 1 - h. Of equally near clusters those with the lowest columns go
 * first. A correlation that is not known (NaN: no variance) counts as 0.
 *
 * @param matrix p x p correlations, row by row
 * @returns the p - 1 steps, nearest first
 * @example hierarchy([1, 0.9, 0.1, 0.9, 1, 0.2, 0.1, 0.2, 1], 3)[0] // { left: [0], right: [1], height: 0.1 }
 * Source: S. C. Johnson, Hierarchical clustering schemes, Psychometrika 32, 1967.
 */
export function hierarchy(matrix: ArrayLike<number>, count: number): Merge[] {
  requireThat(matrix.length === count * count, 'matrix', `${matrix.length} numbers are no ${count} x ${count} matrix.`);
  const clusters = new Map<number, number[]>(Array.from({ length: count }, (_, j) => [j, [j]]));
  const far = Float64Array.from({ length: count * count }, (_, at) => 1 - Math.abs(Number.isNaN(matrix[at]) ? 0 : matrix[at]));
  const merges: Merge[] = [];
  while (clusters.size > 1) {
    const names = [...clusters.keys()];
    let [first, second, height] = [-1, -1, Infinity];
    for (const [place, a] of names.entries()) {
      for (const b of names.slice(place + 1)) {
        if (far[a * count + b] < height) [first, second, height] = [a, b, far[a * count + b]];
      }
    }
    const [left, right] = [clusters.get(first) ?? [], clusters.get(second) ?? []];
    merges.push({ left, right, height });
    // The cluster keeps the name of its lowest column; its distance to any other is the farther of the two.
    clusters.set(
      first,
      [...left, ...right].sort((a, b) => a - b),
    );
    clusters.delete(second);
    for (const other of clusters.keys()) {
      const distance = Math.max(far[first * count + other], far[second * count + other]);
      far[first * count + other] = distance;
      far[other * count + first] = distance;
    }
  }
  return merges;
}

/**
 * The clusters of a hierarchy in which every two columns correlate by at least `threshold`; a column alone is a cluster of one. In order of their
 * lowest column.
 * @example clustersAt(hierarchy([1, 0.9, 0.1, 0.9, 1, 0.2, 0.1, 0.2, 1], 3), 3, 0.7) // [[0, 1], [2]]
 */
export function clustersAt(merges: readonly Merge[], count: number, threshold: number): number[][] {
  requireNumber('threshold', threshold);
  const clusters = new Map<number, readonly number[]>(Array.from({ length: count }, (_, j) => [j, [j]]));
  // A correlation of exactly the threshold counts, whatever 1 - r rounds to.
  for (const { left, right, height } of merges) {
    if (height > 1 - threshold + 1e-12) continue;
    clusters.delete(right[0]);
    clusters.set(
      left[0],
      [...left, ...right].sort((a, b) => a - b),
    );
  }
  return [...clusters.values()].map((cluster) => [...cluster]).sort((a, b) => a[0] - b[0]);
}
