import { clustersAt, hierarchy } from '@tallystone/numeric';
import { describe, expect, it } from 'vitest';
import { expectAllRead, expected } from './reference-files';

interface Case {
  readonly size: number;
  readonly matrix: number[][];
  readonly heights: number[];
  readonly clusters: Record<string, number[]>;
}

// Source: expected/clusters.json, scipy.cluster.hierarchy (linkage "complete", fcluster by distance), generators/clusters.py.
describe('clusters by complete linkage are those of SciPy', () => {
  const { cases } = expected<{ cases: Case[] }>('clusters.json');

  it.each([...cases.keys()])('case %i', (index) => {
    const { size, matrix, heights, clusters } = cases[index];
    expect(matrix).toHaveLength(size);
    const merges = hierarchy(matrix.flat(), size);
    expect(merges).toHaveLength(size - 1);
    // Distances are differences of doubles below 1: the last digit at most.
    [...heights].forEach((height, step) => expect(Math.abs(merges[step].height - height)).toBeLessThan(1e-14));
    for (const [threshold, names] of Object.entries(clusters)) {
      const own = clustersAt(merges, size, Number(threshold));
      const theirs = [...new Set(names)].map((name) => [...names.keys()].filter((place) => names[place] === name));
      expect(own).toEqual(theirs.sort((a, b) => a[0] - b[0]));
    }
  });

  it('every figure of the file has been read', () => expectAllRead('clusters.json'));
});
